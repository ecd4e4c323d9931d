"""Columns for tests: a case from a few words, and a march whose books are closed at every step."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from gossan.case.build import build, first_pace
from gossan.case.model import Case
from gossan.case.read import case_from_text
from gossan.chemistry.equilibrium import mineral_saturation
from gossan.coupling.drive import settled
from gossan.coupling.ledger import Books
from gossan.coupling.march import Stride, march, pore_volumes
from gossan.coupling.problem import Problem
from gossan.coupling.state import State

# What may be missing of the largest amount that ever was: rounding of some 1e5 compensated steps.
CLOSED = 1e-12
# Above the solver's own tolerance for a mineral's index, far below anything a chemist could tell.
SATURATED = 1e-9


def column(
    waters: str,
    *,
    minerals: str = "",
    forms: str | None = None,
    duration: str = "2 PV",
    cells: int = 20,
    length: str = "1 m",
    porosity: float = 0.4,
    grain_density: str = "2650 kg/m3",
    dispersivity: str = "0 m",
    diffusion: str = "0 m2/s",
    layer: str = "",
    flow: str = 'darcy_flux = "0.1 m/d"',
    feed: str = '{from = "0 d", water = "feed"}',
    chemistry: str = "",
    run: str = "",
    more: str = "",
) -> str:
    """A case of one layer; `waters` defines `feed` and `pore`, forms is the list of minerals as TOML."""
    if forms is not None:
        chemistry += f"\nminerals = {forms}"
    return f"""
{waters}
[[layers]]
name = "bed"
length = "{length}"
cells = {cells}
porosity = {porosity}
grain_density = "{grain_density}"
dispersivity = "{dispersivity}"
diffusion = "{diffusion}"
water = "pore"
{layer}
minerals = {{{minerals}}}
[flow]
{flow}
feed = [{feed}]
[chemistry]
{chemistry}
[run]
duration = "{duration}"
{run}
{more}
"""


@dataclass(frozen=True, eq=False)
class Walk:
    """A march that has ended: its state at the start, at every record and at every frame."""

    problem: Problem
    records: list[State]
    frames: list[State]
    strides: int
    largest_error: float  # of the steps' own estimates
    rejected: int

    @property
    def last(self) -> State:
        return self.records[-1]

    @property
    def pore_volumes(self) -> np.ndarray:
        """(record,)"""
        return np.array([pore_volumes(self.problem, state) for state in self.records])

    def left(self, solute: str) -> np.ndarray:
        """(record,) mol m-2 through the outlet since the start."""
        k = self.problem.solutes.index(solute)
        return np.array([state.passed[1, k].sum() for state in self.records])

    def outflow(self, solute: str) -> np.ndarray:
        """(record,) mol m-3: mean of what left since the record before, NaN for the first."""
        out = np.array([state.water_passed[1].sum() for state in self.records])
        with np.errstate(invalid="ignore", divide="ignore"):
            return np.concatenate([[np.nan], np.diff(self.left(solute)) / np.diff(out)])

    def solid(self, mineral: str, state: State | None = None) -> np.ndarray:
        """(cell,) mol m-3 of bulk, at the end or in a state."""
        return (state or self.last).solid[self.problem.system.minerals.index(mineral)]

    def dissolved(self, solute: str, state: State | None = None) -> np.ndarray:
        """(cell,) mol m-3 of water, at the end or in a state."""
        return (state or self.last).dissolved[self.problem.solutes.index(solute)]

    def inventory(self, mineral: str, state: State | None = None) -> float:
        """mol m-2 of cross-section."""
        return float(self.solid(mineral, state) @ self.problem.grid.width)


def case_of(text: str, folder: str | Path = ".") -> Case:
    """Read a case given as text."""
    return case_from_text(text, "case.toml", folder)


def started(text: str, folder: str | Path = ".") -> tuple[Problem, State]:
    """A case's problem and the state it begins in."""
    problem = build(case_of(text, folder))
    return problem, problem.initial


def watched(problem: Problem) -> Iterator[Stride]:
    """March from the start, and close the books after every step."""
    books = Books(problem)
    for stride in march(problem, problem.initial, first_pace(problem)):
        assert_books_closed(books, stride.state)
        yield stride


def walk(column: str | Problem, folder: str | Path = ".") -> Walk:
    """March a case, or what was built from it, to its end in memory, the books closed after every step."""
    problem = started(column, folder)[0] if isinstance(column, str) else column
    state = problem.initial
    assert_at_equilibrium(problem, state)
    records, frames, count, largest, rejected = [state], [state], 0, 0.0, 0
    for stride in watched(problem):
        count += 1
        rejected += stride.rejected
        largest = max(largest, stride.trial.error)
        if stride.record_due:
            records.append(stride.state)
        if stride.frame_due:
            frames.append(stride.state)
    assert_at_equilibrium(problem, records[-1])
    return Walk(problem, records, frames, count, largest, rejected)


def assert_books_closed(books: Books, state: State) -> None:
    """Entered - left - stored + made is nothing: for every solute, for charge and for water."""
    ledger = books.closed(state)
    assert np.abs(ledger.error).max() < CLOSED, (state.step, books.problem.solutes, ledger.error)
    assert abs(ledger.charge_error) < CLOSED, (state.step, ledger.charge_error)
    assert abs(ledger.water_error) < CLOSED, (state.step, ledger.water_error)


def assert_at_equilibrium(problem: Problem, state: State) -> None:
    """No mineral that may form is supersaturated, none is less than nothing, none there is undersaturated."""
    system = settled(problem, state).system
    index = mineral_saturation(system, state.ln_activity)
    assert state.solid.min(initial=0.0) >= 0.0
    if system.may_form.any():
        assert np.nanmax(index[system.may_form], initial=-np.inf) <= SATURATED, system.minerals
    there = state.solid > 0.0
    assert (index[there] >= -SATURATED).all(), "a mineral that water has not dissolved though it could"
