"""A whole column: cells times steps per second of wall clock, and who takes the time."""

from __future__ import annotations

import time
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from itertools import islice

import numpy as np
from tools.bench.column import problem_of
from tools.bench.timing import TURNS, Goal

from gossan.case.build import first_pace
from gossan.chemistry.kernel import cells as chemistry
from gossan.coupling.march import march
from gossan.transport import step as transport

STRETCH = {200: 250, 2000: 60}  # steps of one turn, by cells
STEPS = 13  # among the arguments of settle_cells: Newton steps by cell, 0 where it was left alone
FIRST = 100  # steps before the clock starts: the front has formed

GOALS = tuple(
    Goal(f"whole run, {cells:,} cells, {coupling}, thousand cell-steps/s", must, aim, "k/s")
    for cells, must, aim in ((200, 300, 1000), (2000, 1000, 3000))
    for coupling in ("two-stage", "lie")
)


class Stopwatch:
    """Seconds spent inside functions that stand in modules under their names."""

    def __init__(self, look: Callable[[tuple], None] | None = None) -> None:
        """look is shown the arguments of every call afterwards, off the clock."""
        self.seconds = 0.0
        self.look = look

    @contextmanager
    def on(self, module, *names: str) -> Iterator[None]:
        """Time these functions for a while."""
        kept = {name: getattr(module, name) for name in names}
        for name, function in kept.items():
            setattr(module, name, self._timed(function))
        try:
            yield
        finally:
            for name, function in kept.items():
                setattr(module, name, function)

    def _timed(self, function):
        def call(*arguments, **named):
            begin, within = time.perf_counter(), self.seconds
            try:
                return function(*arguments, **named)
            finally:
                self.seconds = within + time.perf_counter() - begin  # what it called is in it, once
                if self.look:
                    self.look(arguments)

        return call


def measure() -> list[tuple[float, str]]:
    """(value, note) of each goal."""
    return [_run(cells, coupling) for cells in STRETCH for coupling in ("two-stage", "lie")]


def _run(cells: int, coupling: str) -> tuple[float, str]:
    problem = problem_of(cells, coupling)
    strides = march(problem, problem.initial, first_pace(problem))
    for _ in islice(strides, FIRST):
        pass
    reacting, carrying, whole = [], [], []
    solved: list[int] = []
    for _ in range(TURNS):
        react = Stopwatch(lambda given: solved.append(int(np.count_nonzero(given[STEPS]))))
        carry = Stopwatch()
        with react.on(chemistry, "settle_cells"), carry.on(transport, "carry", "conduct", "factor", "spread"):
            begin = time.perf_counter()
            for _ in islice(strides, STRETCH[cells]):
                pass
            whole.append(time.perf_counter() - begin)
        reacting.append(react.seconds)
        carrying.append(carry.seconds)
    seconds = float(np.median(whole))
    chemical, moving = np.median(reacting) / seconds, np.median(carrying) / seconds
    solves, step = sum(solved) / TURNS / STRETCH[cells] / cells, 1e3 * seconds / STRETCH[cells]
    note = (
        f"chemistry {chemical:.0%}, transport {moving:.0%}, Python {1 - chemical - moving:.0%}; "
        f"{solves:.2f} solves a cell and step, {step:.3g} ms a step"
    )
    return 1e-3 * cells * STRETCH[cells] / seconds, note
