"""Sums that keep what rounding would lose of them."""

from __future__ import annotations

import numpy as np


def added(running: np.ndarray, more: np.ndarray | float) -> np.ndarray:
    """A running sum with more added to it: pairs (..., 2) of the sum and what rounding has lost.

    Source: the error-free transformation of a sum, Knuth (1969), The Art of Computer Programming 2, 4.2.2.

    >>> total = np.array([1.0, 0.0])
    >>> for _ in range(3):
    ...     total = added(total, 1e-17)
    >>> float(total.sum() - 1.0), float(total[1])
    (0.0, 3e-17)
    """
    value, lost = running[..., 0], running[..., 1]
    total = value + more
    part = total - value
    error = (value - (total - part)) + (more - part)
    return np.stack([total, lost + error], axis=-1)
