"""Clocks that tell when they cannot be trusted."""

from __future__ import annotations

import time
from collections.abc import Callable, Sequence
from dataclasses import dataclass

import numpy as np

TURNS = 7  # of every measurement; the median stands
STEADY = 0.2  # a fixed piece of work may vary by so much of its median; beyond, the machine is not ours


@dataclass(frozen=True)
class Goal:
    """A line of the table: what is measured, how far it must come and what it aims at."""

    what: str
    must: float
    aim: float
    unit: str
    more_is_better: bool = True

    def verdict(self, value: float) -> str:
        """One word for a measured value."""
        sign = 1.0 if self.more_is_better else -1.0
        if sign * value >= sign * self.aim:
            return "aim reached"
        return "must reached" if sign * value >= sign * self.must else "short of must"


@dataclass(frozen=True)
class Line:
    """A goal, and the value reached or the reason why there is none."""

    goal: Goal
    value: float | None
    note: str = ""

    def __str__(self) -> str:
        goal = self.goal
        head = f"{goal.what:58} {goal.must:>9,.4g} {goal.aim:>9,.4g}"
        if self.value is None:
            return f"{head} {'-':>11}        skipped: {self.note}"
        return f"{head} {self.value:>11,.4g} {goal.unit:6} {goal.verdict(self.value):13} {self.note}"


def spin_spread(turns: int = TURNS) -> float:
    """How much the time of a fixed piece of work varies, (most - least) / median."""
    values = np.arange(20_000.0)
    seconds = []
    for _ in range(turns):
        begin = time.perf_counter()
        for _ in range(300):
            np.sqrt(values, out=values)
        seconds.append(time.perf_counter() - begin)
    return (max(seconds) - min(seconds)) / float(np.median(seconds))


def medians(*calls: Callable[[], object], turns: int = TURNS, work: float = 0.0) -> list[float]:
    """Median seconds of each call, the calls taking turns; each turn repeats it for `work` seconds."""
    repeats = []
    for call in calls:
        call()
        begin = time.perf_counter()
        call()
        repeats.append(max(1, int(work / (time.perf_counter() - begin))))
    seconds: list[list[float]] = [[] for _ in calls]
    for _ in range(turns):
        for number, call in enumerate(calls):
            begin = time.perf_counter()
            for _ in range(repeats[number]):
                call()
            seconds[number].append((time.perf_counter() - begin) / repeats[number])
    return [float(np.median(one)) for one in seconds]


def steadily(
    goals: Sequence[Goal], measure: Callable[[], Sequence[tuple[float, str]]], anyway: bool = False
) -> list[Line]:
    """Measure one (value, note) for each goal, or say that the machine varied too much for it."""
    spread = 0.0 if anyway else spin_spread()
    if spread <= STEADY:
        found = measure()
        spread = 0.0 if anyway else spin_spread()
        if spread <= STEADY:
            return [Line(goal, value, note) for goal, (value, note) in zip(goals, found, strict=True)]
    why = f"a fixed piece of work varied by {100 * spread:.0f} %, more than {100 * STEADY:.0f} %"
    return [Line(goal, None, why) for goal in goals]
