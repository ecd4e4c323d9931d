"""How many cells, growing from one length to another, fill a layer."""

from __future__ import annotations

import math


def growing(length: float, first: float, last: float) -> tuple[int, float]:
    """The fewest cells from a first to a last length that fill a layer, and their growth (equations.md, 76).

    length, first, last  m, > 0
    Returns   cells, growth: `grid_of` makes the first and the last cell at most as long as asked, and in
              the ratio asked

    >>> growing(0.07, 0.01, 0.04)
    (3, 2.0)
    """
    ratio = last / first
    if abs(ratio - 1.0) < 1e-9:
        return max(1, math.ceil(length / first * (1 - 1e-9))), 1.0

    def filled(cells: int) -> float:
        if cells == 1:
            return min(first, last)
        growth = ratio ** (1.0 / (cells - 1))
        return first * (growth**cells - 1.0) / (growth - 1.0)

    fewest, most = 1, 1
    while filled(most) < length * (1 - 1e-9):
        fewest, most = most, 2 * most
    while most - fewest > 1:
        middle = (fewest + most) // 2
        if filled(middle) < length * (1 - 1e-9):
            fewest = middle
        else:
            most = middle
    return most, 1.0 if most == 1 else ratio ** (1.0 / (most - 1))
