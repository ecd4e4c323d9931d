"""How long the next step may be."""

from __future__ import annotations

from dataclasses import dataclass

LEAST_FACTOR, MOST_FACTOR = 0.3, 2.0
CAREFUL = 0.9  # aims a little below the tolerance, so that few steps are tried twice
PORES_FINE, PORES_BAD = 0.01, 0.05  # relative change of a cell's pores aimed at, and refused


@dataclass(frozen=True, slots=True)
class Pace:
    """The length of step to try next, s."""

    dt: float

    def after(self, dt: float, error: float, pore_change: float, accuracy: float, longest: float) -> Pace:
        """The pace after a trial of length dt, its error estimated (equations.md, 38).

        longest  the stability limit, s
        The estimate is that of a first-order scheme, whose error in one step grows with dt^2.
        """
        factor = MOST_FACTOR
        if error > 0.0:
            factor = min(factor, CAREFUL * (accuracy / error) ** 0.5)
        if pore_change > 0.0:
            factor = min(factor, CAREFUL * PORES_FINE / pore_change)
        return Pace(min(dt * max(factor, LEAST_FACTOR), longest))


def acceptable(error: float, pore_change: float, accuracy: float) -> bool:
    """Whether a trial may stand."""
    return error <= accuracy and pore_change <= PORES_BAD
