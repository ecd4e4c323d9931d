"""Every answer put back into the equations, in plain numpy and conserved components."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from tests.oracles.activity_laws import LnGamma
from tests.support.plain_of import law_of, plain_of, solids_of
from tests.support.small_systems import PlainSystem
from tools.battery.answers import Answers

# relative mass balance that counts as met; the sum of all terms' sizes is 1. A component that is a billionth
# of the totals beside it shows their rounding in its own balance
WITHIN = 1e-9
LN_SLACK = 1e-6  # of ln saturation: the sign of a mineral's condition
STRENGTH_SLACK = 1e-7  # relative, of the ionic strength
LIMITS = {
    "mass balance": WITHIN,
    "absent, yet supersaturated (ln)": LN_SLACK,
    "full, yet undersaturated (ln)": LN_SLACK,
    "present, yet not saturated (ln)": LN_SLACK,
    "open gas off its pressure (ln)": LN_SLACK,
    "couple off its constant (ln)": LN_SLACK,
    "negative amount": 0.0,
    "above its bound": 0.0,
    "ionic strength": STRENGTH_SLACK,
}


@dataclass(frozen=True, eq=False)
class Conditions:
    """How far every water is from meeting each condition."""

    answers: Answers
    plain: PlainSystem
    molality: np.ndarray  # (species, water)
    off: dict[str, np.ndarray]  # condition -> (water,), to be held against LIMITS

    def broken(self) -> np.ndarray:
        """(water,) bool: any condition is."""
        return np.any([~(value <= LIMITS[name]) for name, value in self.off.items()], axis=0)


def molalities(plain: PlainSystem, law: LnGamma | None, x: np.ndarray, strength: np.ndarray) -> np.ndarray:
    """(species, water) mol/kg, from ln activities (component, water) and ionic strength alone."""
    logs = np.zeros((len(plain.species), 1))
    if law is not None:
        logs = np.array([law(value) for value in strength.tolist()], dtype=float).T
    exponent = plain.ln_k[:, None] + plain.formation @ x - logs
    return np.where(exponent > -700.0, np.exp(np.maximum(exponent, -700.0)), 0.0)


def conditions(answers: Answers) -> Conditions:
    """Balances, complementarity, signs, ionic strength and pressures of every water."""
    batch, found = answers.batch, answers.found
    plain = plain_of(batch.system)
    x = found.ln_activity[: len(plain.components)]
    molality = molalities(plain, law_of(batch.system, plain), x, found.ionic_strength)
    solid, _ = solids_of(found)
    ends = len(batch.system.minerals)
    saturation = plain.dissolution @ x - plain.mineral_ln_k[:, None]
    gone = (plain.dissolution != 0.0).astype(float) @ (x < -1e5) > 0.0
    saturation = np.where(gone, np.where(solid != 0.0, np.inf, -np.inf), saturation)
    left = plain.formation.T @ molality + plain.dissolution.T @ solid - batch.totals.T
    size = np.abs(plain.formation).T @ molality + np.abs(plain.dissolution).T @ np.abs(solid)
    size += np.abs(batch.totals.T)
    balance = np.where(size > 0.0, np.abs(left) / np.where(size > 0.0, size, 1.0), 0.0)
    made = 0.5 * plain.charge**2 @ molality
    there, most, amount, own = solid[:ends] > 0.0, batch.upper.T, solid[:ends], saturation[:ends]
    full = there & (amount >= most)
    pressure = np.where(gone, 0.0, np.abs(saturation))[ends:]

    def worst(values: np.ndarray) -> np.ndarray:
        return np.maximum(values, 0.0).max(axis=0, initial=0.0)

    off = {
        "mass balance": balance.max(axis=0),
        "absent, yet supersaturated (ln)": worst(np.where(~there & (most > 0), own, 0)),
        "full, yet undersaturated (ln)": worst(np.where(full, -own, 0)),
        "present, yet not saturated (ln)": worst(np.where(there & ~full, np.abs(own), 0)),
        "open gas off its pressure (ln)": worst(pressure),
        "couple off its constant (ln)": worst(_couples_off(answers)),
        "negative amount": worst(-amount),
        "above its bound": worst(amount - most),
        "ionic strength": np.abs(made / found.ionic_strength - 1),
    }
    return Conditions(answers, plain, molality, off)


def _couples_off(answers: Answers) -> np.ndarray:
    """(couple, water): |ln| by which each valence is off what its first ion and electrons make of it."""
    system, x = answers.batch.system, answers.found.ln_activity
    ends, count = len(system.minerals), len(system.components)
    ties = slice(ends, ends + len(system.basis) - count)
    off = np.abs(system.matrices.solid[ties] @ x - system.matrices.solid_ln_k[ties, None])
    return np.where((x[count:] > -1e5) & (off < 1e5), off, 0.0)
