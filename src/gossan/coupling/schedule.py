"""When something happens: at times, or whenever so many pore volumes have entered."""

from __future__ import annotations

import math
from bisect import bisect_right
from dataclasses import dataclass
from functools import cached_property

import numpy as np

# An event nearer than this share of the schedule's own unit has come: clocks add up steps.
SAME = 1e-12


@dataclass(frozen=True, eq=False)
class Schedule:
    """Rising marks on a clock that counts seconds, or pore volumes where by_volume."""

    marks: np.ndarray
    by_volume: bool = False

    @cached_property
    def _listed(self) -> list[float]:
        return self.marks.tolist()

    def clock(self, time: float, pore_volumes: float) -> float:
        """What this schedule's clock shows."""
        return pore_volumes if self.by_volume else time

    def passed(self, now: float) -> int:
        """How many marks have been reached when the clock shows now."""
        return bisect_right(self._listed, now + SAME * max(1.0, abs(now)))

    def ahead(self, now: float) -> float:
        """How far the next mark is, infinite after the last."""
        index = self.passed(now)
        return self._listed[index] - now if index < len(self._listed) else math.inf


def every(interval: float, end: float, by_volume: bool = False) -> Schedule:
    """Marks at every multiple of an interval and at the end; the first is 0."""
    count = math.floor(end / interval * (1.0 + 1e-12))
    marks = interval * np.arange(count + 1)
    if marks[-1] < end * (1.0 - 1e-12):
        marks = np.append(marks, end)
    else:
        marks[-1] = end
    return Schedule(marks, by_volume)
