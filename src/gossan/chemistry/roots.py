"""Where a residual of one number vanishes."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np

DOUBLINGS = 30  # of the first guess of a total, in search of one that is too much


def root_of_total(residual: Callable[[float], float], start: float, guess: float) -> float | None:
    """Where a residual, nearly linear in one total (>= 0), vanishes; None where it keeps its sign.

    The bracket runs from start over guess, and twice as far each time, until the sign has changed.
    """
    from scipy.optimize import brentq

    first = residual(start)
    if first == 0.0:
        return start
    reach = guess - start
    for _ in range(DOUBLINGS):
        end = max(start + reach, 0.0)
        if residual(end) * first <= 0.0:
            return float(brentq(residual, start, end, xtol=1e-30, rtol=4.0 * np.finfo(float).eps))
        if end == 0.0:
            return None
        reach *= 2.0
    return None


def root_between(residual: Callable[[float], float], low: float, high: float) -> float | None:
    """Where a residual vanishes between two bounds; None where it has the same sign at both."""
    from scipy.optimize import brentq

    if residual(low) * residual(high) > 0.0:
        return None
    return float(brentq(residual, low, high, xtol=1e-13, rtol=4.0 * np.finfo(float).eps))
