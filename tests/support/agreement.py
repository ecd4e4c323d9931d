"""A number of a publication beside the program's own, as tests judge it and the page prints it."""

from __future__ import annotations

import math
from collections.abc import Callable
from dataclasses import dataclass


@dataclass(frozen=True)
class Within:
    """A published value and how far from it the program may be, in its own unit or as a share of it."""

    value: float
    tolerance: float = 0.0
    share: float = 0.0

    @property
    def width(self) -> float:
        return self.tolerance + self.share * abs(self.value)

    def holds(self, found: float) -> bool:
        return abs(found - self.value) <= self.width

    def __str__(self) -> str:
        return f"{self.value:g} ± {self.width:.2g}"


@dataclass(frozen=True)
class Between:
    """A published range; one end may be open."""

    low: float = -math.inf
    high: float = math.inf

    def holds(self, found: float) -> bool:
        return self.low <= found <= self.high

    def __str__(self) -> str:
        if math.isinf(self.low):
            return f"at most {self.high:.4g}"
        return f"at least {self.low:.4g}" if math.isinf(self.high) else f"{self.low:.4g} to {self.high:.4g}"


@dataclass(frozen=True)
class Check:
    """One comparison.

    found   calculates what the program says
    source  key of the citation in the docstring of the file; seen: the value was read, not recalled
    why     the reason of the tolerance
    logarithmic  the value is a pH, a log10 or an index: digits are those of what it stands for
    """

    name: str
    found: Callable[[], float]
    published: Within | Between
    source: str
    seen: bool
    why: str
    logarithmic: bool = False

    def __str__(self) -> str:
        return self.name

    def judge(self) -> None:
        """Raise AssertionError, with everything a reader needs, where the program disagrees."""
        found = self.found()
        told = f"{self.name}: found {found:.5g}, published {self.published} ({self.source}; {self.why})"
        assert self.published.holds(found), told


MOST_DIGITS = 6.0  # no published value here has more


def digits(found: float, published: Within, logarithmic: bool = False) -> float:
    """Agreement in decimal digits: -log10 of the relative difference, from 0 to MOST_DIGITS.

    >>> digits(0.0153, Within(0.0152)), digits(7.01, Within(7.0), logarithmic=True)
    (2.2, 1.6)
    """
    off = abs(found - published.value)
    relative = math.expm1(min(off, 9.0) * math.log(10.0)) if logarithmic else off / abs(published.value)
    return MOST_DIGITS if relative < 10**-MOST_DIGITS else round(max(-math.log10(relative), 0.0), 1)
