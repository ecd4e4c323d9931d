"""A chemical system of plain arrays laid out as the kernels read it, and one water to solve on it."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from numpy.typing import ArrayLike
from tests.oracles.activity_laws import LnGamma, davies, extended_debye_hueckel
from tests.support.small_systems import PlainSystem

from gossan.base.outcome import SENTENCES, SOLVED
from gossan.chemistry.kernel.complement import settle
from gossan.chemistry.kernel.matrices import Bench, Matrices, bench, padded

LN10 = np.log(10.0)
A_LOG10, B_PER_M = 0.5085, 3.281e9  # at 25 degC: (kg/mol)^0.5, m^-1 (kg/mol)^0.5; Freeze & Cherry (1979)
IDEAL, DAVIES, DEBYE_HUECKEL = 0, 1, 2
NONE = -1e6  # ln K of species that only fill up


def matrices_of(plain: PlainSystem, model: int = IDEAL) -> Matrices:
    """The kernels' form of a system; H^+ may be negative where it is the first component."""
    species = len(plain.species)

    def filled(values: np.ndarray, filling: float = 0.0) -> np.ndarray:
        out = np.full(padded(species), filling)
        out[:species] = values
        return out

    stoichiometry = np.zeros((len(plain.components), padded(species)))
    stoichiometry[:, :species] = plain.formation.T
    solid = np.ascontiguousarray(plain.dissolution)
    return Matrices(
        stoichiometry=stoichiometry,
        ln_k=filled(plain.ln_k, NONE),
        conserved=stoichiometry,
        conserved_ln_k=filled(plain.ln_k, NONE),
        charge_squared=filled(plain.charge**2),
        neutral=filled(plain.charge == 0.0),
        size=filled(np.where(plain.charge == 0.0, 0.0, B_PER_M * plain.ion_size)),
        model=model,
        debye_hueckel=A_LOG10 * LN10,
        solid=solid,
        solid_ln_k=plain.mineral_ln_k.copy(),
        supplied=solid,
        supplied_ln_k=plain.mineral_ln_k.copy(),
        minerals=len(plain.minerals),
        first=np.zeros(0, np.int64),
        carrier=np.zeros(0, np.int64),
        signed=0 if plain.components[0] == "H^+" else -1,
        electron=-1,
        given=0,
        interaction=np.zeros((0, 0)),
        reach=np.zeros(0),
    )


def bench_of(plain: PlainSystem) -> Bench:
    """Working space for this system."""
    return bench(matrices_of(plain))


def law_of(plain: PlainSystem, model: int) -> LnGamma | None:
    """The oracle's activity law for a kernel's model; None is ideal."""
    if model == IDEAL:
        return None
    if model == DAVIES:
        return davies(plain.charge, A_LOG10)
    return extended_debye_hueckel(plain.charge, np.nan_to_num(plain.ion_size), A_LOG10, B_PER_M)


@dataclass(frozen=True)
class Water:
    """What `settle` found."""

    outcome: int
    ln_activity: np.ndarray  # (component,)
    solid: np.ndarray  # (mineral,) mol/kg there now
    presence: np.ndarray  # (mineral,)
    ionic_strength: float
    steps: int

    @property
    def told(self) -> str:
        return SENTENCES[self.outcome]


def settled(
    plain: PlainSystem,
    dissolved: ArrayLike,
    solid: ArrayLike | None = None,
    upper: ArrayLike | None = None,
    presence: ArrayLike | None = None,
    ln_activity: ArrayLike | None = None,
    model: int = IDEAL,
) -> Water:
    """Settle one water: cold, or from these marks and ln activities."""
    matrices, space = matrices_of(plain, model), bench_of(plain)
    dissolved = np.array(dissolved, dtype=float)
    count = len(plain.minerals)
    solid = np.zeros(count) if solid is None else np.array(solid, dtype=float)
    upper = np.full(count, np.inf) if upper is None else np.array(upper, dtype=float)
    marks = np.zeros(count, dtype=np.int8) if presence is None else np.array(presence, dtype=np.int8)
    cold = presence is None
    if not cold:
        space.ln_activity[:] = np.log(np.maximum(dissolved, 1e-9)) if ln_activity is None else ln_activity
        space.abundance[:] = np.abs(dissolved)
    space.solid[:], space.upper[:], space.dissolved[:] = solid, upper, dissolved
    outcome, strength, steps = settle(matrices, space, dissolved, solid, upper, marks, 0.1, cold)
    gained = space.gained[:count].copy()
    now = np.where(marks == 1, solid + gained, np.where(marks == 2, upper, 0.0))
    return Water(outcome, space.ln_activity.copy(), now, marks, strength, steps)


def must_settle(*arguments, **options) -> Water:
    """As `settled`, for a water that has an answer."""
    found = settled(*arguments, **options)
    assert found.outcome == SOLVED, found.told
    return found
