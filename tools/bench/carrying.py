"""Transport against a copy of its input, and against scipy's banded solver."""

from __future__ import annotations

from tools.bench.timing import Goal
from tools.bench.transport import explicit_against_copy, implicit_against_banded

SIZES = (1_000, 10_000, 100_000)

GOALS = (
    Goal("explicit transport against a copy, worst of 1e3 to 1e5 cells", 6, 4, "x", more_is_better=False),
    Goal("implicit dispersion against scipy.linalg.solve_banded", 8, 13, "x"),
)


def measure() -> list[tuple[float, str]]:
    """(value, note) of each goal."""
    copies = [here / copy for here, copy in map(explicit_against_copy, SIZES)]
    faster = [banded / solve for solve, _, _, banded in map(implicit_against_banded, SIZES)]
    return [(max(copies), _each(copies)), (min(faster), _each(faster))]


def _each(ratios: list[float]) -> str:
    return ", ".join(f"{ratio:.2g}" for ratio in ratios)
