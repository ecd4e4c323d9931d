"""Local equilibrium between what is dissolved and what is sorbed, by a law of one concentration."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

NOT_SORBED, LINEAR, FREUNDLICH, LANGMUIR = range(4)
LAWS = {"linear": LINEAR, "freundlich": FREUNDLICH, "langmuir": LANGMUIR}
ROUNDS = 60  # of Newton at most: its function is convex and its slope between the exponent and 1, so few do
ROUND_OFF = 4e-16
NO_ATOM = 1e-45  # mol m-3 of bulk: less dissolved than this, ahead of a front whose law is steep, is none


@dataclass(frozen=True, eq=False)
class Isotherms:
    """The laws of all solutes that sorb, in every cell (equations.md, 55); each row is one solute's.

    solutes   (sorbate,) int, rows of the solutes
    law       (sorbate, cell) int8: NOT_SORBED, LINEAR, FREUNDLICH or LANGMUIR
    strength  (sorbate, cell) what is sorbed at 1 mol m-3 by a linear or Freundlich law, mol m-3 of bulk;
              by Langmuir's the slope at nothing, m3 of water per m3 of bulk
    bend      (sorbate, cell) Freundlich's exponent, 1, > 0; Langmuir's affinity, m3 mol-1, >= 0
    """

    solutes: np.ndarray
    law: np.ndarray
    strength: np.ndarray
    bend: np.ndarray

    def at(self, cells: np.ndarray) -> Isotherms:
        """The laws in some of the cells."""
        return replace(
            self, law=self.law[:, cells], strength=self.strength[:, cells], bend=self.bend[:, cells]
        )

    def shared(self, share: np.ndarray) -> Isotherms:
        """The laws of a share (cell,) of the solid."""
        return replace(self, strength=self.strength * share)

    def of(self, rows: np.ndarray) -> Isotherms:
        """The laws of some of the sorbates."""
        return Isotherms(self.solutes[rows], self.law[rows], self.strength[rows], self.bend[rows])


def sorbed_at(laws: Isotherms, concentration: np.ndarray) -> np.ndarray:
    """(sorbate, cell) mol m-3 of bulk, sorbed at a concentration (sorbate, cell), mol m-3 of water, >= 0."""
    found = laws.strength * concentration
    curved = laws.law == FREUNDLICH
    if curved.any():
        found[curved] = laws.strength[curved] * concentration[curved] ** laws.bend[curved]
    bounded = laws.law == LANGMUIR
    if bounded.any():
        found[bounded] /= 1.0 + laws.bend[bounded] * concentration[bounded]
    return found


def shared_out(laws: Isotherms, total: np.ndarray, water: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """Dissolved and sorbed parts of a total, both mol m-3 of bulk (equations.md, 56).

    total   (sorbate, cell) mol m-3 of bulk, dissolved and sorbed together
    water   (cell,) m3 of water per m3 of bulk, > 0
    Returns dissolved, sorbed (sorbate, cell): the lesser from the law, the greater what that leaves of the
            total, so that both keep their digits; where the total is below nothing all of it counts as
            dissolved
    """
    water = np.broadcast_to(water, total.shape)
    positive = total > 0.0
    concentration = np.where(positive, total, 0.0) / (water + laws.strength)  # the linear law's
    curved = (laws.law == FREUNDLICH) & positive & (laws.strength > 0.0)
    if curved.any():
        concentration[curved] = _freundlich(
            laws.strength[curved], laws.bend[curved], total[curved], water[curved]
        )
    bounded = (laws.law == LANGMUIR) & positive
    if bounded.any():
        concentration[bounded] = _langmuir(
            laws.strength[bounded], laws.bend[bounded], total[bounded], water[bounded]
        )
    sorbed = np.minimum(sorbed_at(laws, concentration), np.where(positive, total, 0.0))
    dissolved = np.where(positive, np.minimum(water * concentration, total), total)
    mostly_sorbed = positive & (sorbed > dissolved)
    dissolved[mostly_sorbed & (dissolved < NO_ATOM)] = 0.0
    return (
        np.where(mostly_sorbed, dissolved, total - sorbed),
        np.where(mostly_sorbed, total - dissolved, np.where(positive, sorbed, 0.0)),
    )


def _langmuir(strength: np.ndarray, affinity: np.ndarray, total: np.ndarray, water: np.ndarray) -> np.ndarray:
    """The root of  water affinity c^2 + (water + strength - total affinity) c = total, without cancelling."""
    square, linear = water * affinity, water + strength - total * affinity
    root = np.sqrt(linear * linear + 4.0 * square * total)
    rising = linear >= 0.0
    return np.where(
        rising,
        2.0 * total / np.where(rising, linear + root, 1.0),
        (root - linear) / np.where(rising, 1.0, 2.0 * square),
    )


def _freundlich(
    strength: np.ndarray, exponent: np.ndarray, total: np.ndarray, water: np.ndarray
) -> np.ndarray:
    """The root of  water c + strength c^exponent = total, by Newton on logarithms.

    ln of the left side is a convex function of ln c, whose slope lies between the exponent and 1: Newton
    comes home from anywhere, however steep the law is at nothing.
    """
    ln_water, ln_strength, ln_total = np.log(water), np.log(strength), np.log(total)
    ln = np.minimum(ln_total - ln_water, (ln_total - ln_strength) / exponent)  # an upper bound, nearly it
    for _ in range(ROUNDS):
        free, held = ln_water + ln, ln_strength + exponent * ln
        top = np.maximum(free, held)
        a, b = np.exp(free - top), np.exp(held - top)
        step = (ln_total - top - np.log(a + b)) * (a + b) / (a + exponent * b)
        ln = ln + step
        if (np.abs(step) <= ROUND_OFF * np.maximum(1.0, np.abs(ln))).all():
            break
    c = np.exp(ln)
    for _ in range(2):  # the logarithm's own rounding, taken away
        held = strength * c**exponent
        slope = water * c + exponent * held
        c = c + c * np.divide(total - water * c - held, slope, out=np.zeros_like(c), where=slope > 0.0)
    return c
