"""How transport and reactions take turns within a step: four schemes behind one call."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace

import numpy as np

from gossan.base.errors import SolveError
from gossan.chemistry.equilibrium import Solver
from gossan.coupling.problem import Problem
from gossan.coupling.state import State
from gossan.coupling.waters import Stage, Waters, net
from gossan.transport.faces import LIMITERS, Faces
from gossan.transport.step import DAMPING, Passages, corrected, kept_positive, passages

AT_REST = 1e-8  # of a solute's largest passage or stock: what another round of `iterated` may still change
ROUNDS = 100  # explicit steps within their limits take about twenty


@dataclass(frozen=True, eq=False)
class Turn:
    """A column at the start of a step, and what drives it through."""

    problem: Problem
    solver: Solver
    state: State
    faces: Faces
    inflow: np.ndarray  # (solute,) mol m-3
    dt: float  # s
    theta: float | None  # None: explicit; else the weight of the end in an implicit step

    def waters(self) -> Waters:
        """The waters before the step, whose rates go on while it does."""
        return Waters(self.problem, self.solver, self.state, self.faces.darcy_flux, self.dt)

    def first(self, waters: Waters) -> Passages:
        """What passes by the concentrations of the start."""
        made = waters.foreseen() if self.theta is not None else None
        return passages(self.faces, waters.state.dissolved, self.inflow, self.dt, self.theta, made)

    def held_back(
        self, first: Passages, waters: Waters, passed: np.ndarray, doubted: bool = False
    ) -> np.ndarray:
        """Passages that take no more from a cell than it holds.

        Explicit, limited ones never do, unless something has been added to them: then they are doubted.
        Without a limiter tracers may fall below nothing: to show that is what it is for.
        """
        problem, state = self.problem, waters.state
        unlimited = problem.transport.limiter == LIMITERS["none"]
        if first.elimination is None and not unlimited and not doubted:
            return passed
        total = waters.amount.copy()
        total[problem.sorbates] += state.sorbed
        # a solid that takes a component up when it dissolves has none of it to give
        total[: problem.chemical] += np.maximum(problem.system.mineral_stoichiometry, 0.0).T @ state.solid
        positive = ~np.isin(np.arange(len(total)), problem.system.signed)
        if unlimited:
            positive[problem.chemical :] = False
        return kept_positive(first, state.dissolved, total, passed, positive)


@dataclass(frozen=True, eq=False)
class Taken:
    """Where a step led."""

    waters: Waters  # at its start, or as rates ahead of transport left them
    stage: Stage  # at its end
    passed: np.ndarray  # (solute, face) mol m-2
    missed: np.ndarray  # (solute, face) mol m-2: what more passes by the mean of both ends
    difference: np.ndarray  # (solute, cells of both waters) mol m-2: what that would put elsewhere
    first: np.ndarray  # (solute, face) mol m-2, by the concentrations of the start alone
    begun: Stage  # where that alone leads
    rounds: int = 1  # how often chemistry was solved
    ahead: tuple[Waters, Stage] | None = None  # what rates did ahead of transport

    @property
    def legs(self) -> list[tuple[Waters, Stage]]:
        """Waters and where they came to, ahead of transport and with it."""
        ahead = [] if self.ahead is None else [self.ahead]
        return [*ahead, (self.waters, self.stage)]


def lie(turn: Turn) -> Taken:
    """Transport, then reactions (equations.md, 35)."""
    return _lie(turn)[0]


def two_stage(turn: Turn) -> Taken:
    """Transport and reactions; then both anew, by what passes at the mean of both ends (equations.md, 36)."""
    one, first = _lie(turn)
    passed = turn.held_back(first, one.waters, one.passed + one.missed)
    return replace(one, passed=passed, stage=one.waters.stage(passed, one.stage), rounds=2)


def iterated(turn: Turn) -> Taken:
    """The same until both ends agree: transport and reactions are not split at all (equations.md, 87).

    Raises   SolveError where they come to no agreement
    """
    one, first = _lie(turn)
    waters, passed, stage = one.waters, one.passed, one.stage
    size = turn.problem.stock + np.abs(passed).max(axis=1)
    for rounds in range(2, ROUNDS + 1):
        wished = corrected(first, turn.state.dissolved, stage.flowing.dissolved, passed)
        wished = turn.held_back(first, waters, wished)
        change = np.abs(wished - passed)
        passed, stage = wished, waters.stage(wished, stage)
        if (change.max(axis=1) <= AT_REST * size).all():
            return replace(one, passed=passed, stage=stage, rounds=rounds)
    face = int(change.max(axis=0).argmax())
    raise SolveError(f"transport and reactions still disagree after {ROUNDS} rounds", cell=max(face - 1, 0))


def strang(turn: Turn) -> Taken:
    """Rates for half the step, transport alone, rates for the other half, equilibrium (equations.md, 88)."""
    problem, state, dt = turn.problem, turn.state, turn.dt
    plain = turn.first(turn.waters())
    ahead, begun, kept = None, state, None
    if problem.decay is not None or state.still is not None:
        resting = Waters(problem, turn.solver, state, np.zeros_like(turn.faces.darcy_flux), 0.0, 0.5 * dt)
        half = resting.stage(np.zeros_like(plain.passed))
        ahead = resting, half
        begun = resting.after(half)
    if problem.decay is not None:
        kept = problem.decay.over(0.5 * dt).arrived()
    waters = Waters(problem, turn.solver, begun, turn.faces.darcy_flux, dt, 0.5 * dt, kept)
    first = passages(turn.faces, begun.dissolved, turn.inflow, dt, turn.theta)
    alone = (waters.amount + net(first.passed) / problem.grid.width) / waters.water
    passed = turn.held_back(first, waters, corrected(first, begun.dissolved, alone))
    stage = waters.stage(passed)
    missed = corrected(plain, state.dissolved, stage.flowing.dissolved) - passed
    difference = waters.difference(stage, passed + missed, missed)
    return Taken(waters, stage, passed, missed, difference, first.passed, stage, 1, ahead)


def _lie(turn: Turn) -> tuple[Taken, Passages]:
    waters = turn.waters()
    first = turn.first(waters)
    passed = turn.held_back(first, waters, first.passed)
    stage = waters.stage(passed)
    whole = corrected(first, turn.state.dissolved, stage.flowing.dissolved)
    difference = waters.difference(stage, whole, whole - passed)
    return Taken(waters, stage, passed, whole - passed, difference, first.passed, stage), first


@dataclass(frozen=True, slots=True)
class Scheme:
    """A way to take turns.

    weight   of the end in an implicit step
    share    of the difference between orders one and two: what an explicit step is taken to err by
    order    in time where nothing is sharp
    missed   what passes too little in a step: so much of that difference, or where the order is the second of
             how it changes from step to step (equations.md, 90)
    """

    take: Callable[[Turn], Taken]
    weight: float
    share: float
    order: int
    missed: float


# The one-step scheme errs by the difference. Two stages were at least 30 times nearer to the truth while
# dispersion was explicit, and lost their second order beside mineral fronts while it was not
# (docs/decisions.md).
SCHEMES = {
    "two-stage": Scheme(two_stage, DAMPING, 1.0 / 30.0, 2, 1.0 / 3.0),
    "lie": Scheme(lie, 1.0, 1.0, 1, 1.0),
    "strang": Scheme(strang, DAMPING, 1.0, 1, 1.0),
    "iterated": Scheme(iterated, DAMPING, 1.0 / 30.0, 2, -1.0 / 6.0),
}
