"""Orders of convergence from errors on finer and finer grids."""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np


def observed_order(cells: Sequence[int], errors: Sequence[float]) -> float:
    """The power of the cell size by which the error falls: least squares in logarithms over all grids.

    >>> round(observed_order([10, 20, 40], [1.0, 0.25, 0.0625]), 6)
    2.0
    """
    return float(-np.polyfit(np.log(np.asarray(cells, float)), np.log(np.asarray(errors, float)), 1)[0])
