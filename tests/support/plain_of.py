"""The program's system as the oracles read it: conserved components, exact sums of its own constants."""

from __future__ import annotations

from dataclasses import dataclass
from fractions import Fraction

import mpmath as mp
import numpy as np
from tests.oracles.activity_laws import LnGamma, davies, extended_debye_hueckel
from tests.oracles.newton60 import settle
from tests.support.redox_waters import ELECTRON
from tests.support.small_systems import PlainSystem

from gossan.chemistry.equilibrium import Equilibrium
from gossan.chemistry.system import System
from gossan.constants.load import load_table
from gossan.constants.water import debye_huckel

NOT_THERE = -1e5  # ln activity below which a component is absent


def plain_of(system: System) -> PlainSystem:
    """Every species and solid in conserved components; open gases are the last minerals.

    What a constant in conserved components loses to rounding is kept beside it, so that the oracle solves
    the program's very problem. Species that the program keeps without a name (oxygen and hydrogen that water
    makes of itself) come last.
    """
    matrices = system.matrices
    there = [s for s in range(len(matrices.ln_k)) if matrices.ln_k[s] > NOT_THERE]
    unnamed = [s for s in there if s >= len(system.species)]
    conserved, couples = system.conserved, len(system.basis) - len(system.components)
    first_couple = len(system.minerals)
    valence_ln_k = [Fraction(k) for k in matrices.solid_ln_k[first_couple : first_couple + couples].tolist()]
    solids = [*range(first_couple), *range(first_couple + couples, len(matrices.solid))]

    def split(ln_k: float, row: np.ndarray, sign: int) -> tuple[float, float]:
        """A constant with its valences taken apart, as the double nearest to it and the rest."""
        of_valences = row[len(system.components) :].tolist()
        exact = Fraction(ln_k) + sign * sum(
            Fraction(times) * constant for times, constant in zip(of_valences, valence_ln_k, strict=True)
        )
        return float(exact), float(exact - Fraction(float(exact)))

    formed = np.array([split(matrices.ln_k[s], matrices.stoichiometry[:, s], 1) for s in there])
    dissolved = np.array([split(matrices.solid_ln_k[r], matrices.solid[r], -1) for r in solids])
    dissolved = dissolved.reshape(len(solids), 2)
    names = [*system.species, *(f"unnamed {s}" for s in unnamed)]
    return PlainSystem(
        components=system.components,
        species=tuple(name for name in names if name != ELECTRON),
        minerals=(*system.minerals, *(f"{gas} held" for gas in system.open_gases)),
        formation=matrices.stoichiometry[:, there].T @ conserved,
        ln_k=formed[:, 0],
        charge=np.array([*system.species_charge, *(0.0 for _ in unnamed)])[
            [name != ELECTRON for name in names]
        ],
        ion_size=_ion_sizes([name for name in names if name != ELECTRON]),
        dissolution=matrices.solid[solids] @ conserved,
        mineral_ln_k=dissolved[:, 0],
        endless=len(system.open_gases),
        ln_k_rest=formed[:, 1],
        mineral_ln_k_rest=dissolved[:, 1],
    )


def _ion_sizes(names: list[str]) -> np.ndarray:
    table = load_table()
    records = [table.components.get(name) or table.species.get(name) for name in names]
    return np.array([record.ion_size.value if record and record.ion_size else np.nan for record in records])


def law_of(system: System, plain: PlainSystem) -> LnGamma | None:
    """The system's activity law from its published formula, at the system's temperature."""
    a, b = debye_huckel(system.temperature)
    if system.activity.name == "davies":
        return davies(plain.charge, a)
    if system.activity.name == "debye-hueckel":
        return extended_debye_hueckel(plain.charge, plain.ion_size, a, b)
    return None


def solids_of(found: Equilibrium) -> tuple[np.ndarray, np.ndarray]:
    """Amounts and marks (mineral, cell) with open gases last: what they took, and present."""
    given = found.given
    return (
        np.vstack([found.solid, -given]),
        np.vstack([found.presence, np.ones(given.shape, found.presence.dtype)]),
    )


@dataclass(frozen=True)
class Judged:
    """An answer of the program beside many digits; arrays as the program has them, by component alone."""

    error: float  # the largest error of a ln activity of a component
    errors: np.ndarray  # (component,) of each; 0 where it is absent
    amount_error: float  # of solids and open gases, over the largest total
    changes: tuple[str, ...]  # what was wrong with the marks of the minerals


def judged(
    found: Equilibrium,
    cell: int,
    totals: np.ndarray,
    upper: np.ndarray | None = None,
    plain: PlainSystem | None = None,
    digits: int | None = None,
) -> Judged:
    """Settle one water of an equilibrium at many digits; absent components are left out of the problem.

    totals  (component,) mol per kg of water before the solve, solids included; upper (mineral,) bounds
    plain   of the same system, where it is at hand
    digits  default: 60, and 120 where electrons are counted
    Raises  NoAnswer
    """
    system = found.system
    plain = plain or plain_of(system)
    count = len(system.components)
    x = found.ln_activity[:count, cell]
    kept = x > NOT_THERE
    amount, presence = (each[:, cell] for each in solids_of(found))
    upper = np.full(len(system.minerals), np.inf) if upper is None else upper
    upper = np.concatenate([upper, np.full(plain.endless, np.inf)])
    solid = np.all(plain.dissolution[:, ~kept] == 0, axis=1)
    part = plain.with_only(kept)
    exact = settle(
        part, totals[kept], x[kept], amount[solid], presence[solid], upper[solid],
        ln_gamma=law_of(system, part), digits=digits or (120 if system.electron >= 0 else 60),
    )  # fmt: skip
    errors = np.zeros(count)
    with mp.workdps(digits or 120):
        errors[kept] = [
            abs(float(a - mp.mpf(float(b)))) for a, b in zip(exact.ln_activity, x[kept], strict=True)
        ]
    return Judged(exact.error, errors, exact.amount_error, exact.changes)
