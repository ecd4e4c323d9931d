"""A second column beside the first that carries on what each step has missed.

How far the two are apart is the error of the first in time and splitting (equations.md, 90).
"""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from gossan.base.errors import SolveError
from gossan.coupling.attempt import scale_of, settled_anew, stepped
from gossan.coupling.march import Solvers, Stride
from gossan.coupling.problem import Problem
from gossan.coupling.splitting import SCHEMES, Taken, Turn
from gossan.coupling.state import State, state_of
from gossan.coupling.watching import nothing_seen, seen
from gossan.transport.step import passages

DAY = 86400.0
HALVES = 2  # steps instead of one where a mineral comes or goes


@dataclass(frozen=True, eq=False)
class Shadow:
    """The column as it would be had its steps missed nothing, as far as they tell."""

    state: State
    missed: np.ndarray  # (solute, face) mol m-2: what the mean of both ends added to the last step
    dt: float  # s, of the last step
    turned: bool  # whether minerals came or went in it
    lost: float  # s, when it last had to start anew from the column; -1: never
    seen: np.ndarray  # (limit, 6) of its own limits, see `watching`

    def told(self) -> str:
        """A sentence for people where an estimate was lost, else none."""
        if self.lost < 0.0:
            return ""
        return (
            f"the estimate of the error of stepping was lost at {self.lost / DAY:.6g} d and began anew: "
            "later errors may be larger than stated"
        )


def shadow_of(problem: Problem, state: State) -> Shadow:
    """The shadow of a column at the start of its run."""
    return Shadow(state, np.zeros((len(problem.solutes), len(problem.grid.edges))), 1.0, True, -1.0,
                  nothing_seen(len(problem.watched)))


def shadow_from(parts: dict[str, Any]) -> Shadow:
    """The shadow that a checkpoint kept as a dict of its fields."""
    return Shadow(**{**parts, "state": state_of(parts["state"])})


def followed(shadow: Shadow, stride: Stride, solvers: Solvers) -> Shadow:
    """The shadow after the column's next step.

    While nothing turns, it takes the step with what passed by its own concentrations, by the column's second
    order, and by what that missed. Where a mineral comes or goes, what a step misses cannot be told from the
    step; then it takes two of half the length.
    """
    turned = _turned(stride.turn.state, stride.state)
    missed, dt = stride.trial.taken.missed, stride.trial.dt
    try:
        state = _walked(shadow, stride, solvers, turned or shadow.turned)
    except SolveError:
        return Shadow(stride.state, missed, dt, True, stride.state.time, shadow.seen)
    state = replace(state, time=stride.state.time, step=stride.state.step)
    limits = seen(stride.turn.problem, shadow.seen, shadow.state, state, stride.turn.faces.darcy_flux)
    return Shadow(state, missed, dt, turned, shadow.lost, limits)


def apart(problem: Problem, state: State, shadow: State, inflow: np.ndarray) -> np.ndarray:
    """(solute,) relative: all that is elsewhere in the shadow, over the most there ever was."""
    difference = problem.amounts(state) - problem.amounts(shadow)
    scale = scale_of(problem, state, inflow)
    size = np.abs(difference) @ problem.grid.width
    return np.divide(size, scale, out=np.zeros_like(size), where=scale > 0.0)


def _turned(before: State, after: State) -> bool:
    """Whether a mineral has come or gone in any cell."""
    if not np.array_equal(before.presence, after.presence):
        return True
    if before.still is None or after.still is None:
        return False
    return not np.array_equal(before.still.presence, after.still.presence)


def _walked(shadow: Shadow, stride: Stride, solvers: Solvers, turning: bool) -> State:
    """Where the shadow goes in a step.

    In halves where minerals turn, where dispersion is implicit or rates went ahead of transport, and where
    a whole step finds no equilibrium.
    """
    turn, state = stride.turn, shadow.state
    if stride.jump is not None:
        jump = stride.jump
        state = settled_anew(replace(jump, state=state, solver=solvers.of(jump.problem)))
    turn = replace(turn, state=state, solver=solvers.of(turn.problem))
    taken = stride.trial.taken
    if not turning and turn.theta is None and taken.ahead is None:
        try:
            return _carried(turn, taken, _missed(shadow, stride))
        except SolveError:
            pass  # what was missed may be more than there is: halves tell it another way
    half = replace(turn, dt=turn.dt / HALVES)
    for _ in range(HALVES):
        half = replace(half, state=state)
        found = SCHEMES[turn.problem.coupling].take(half)
        state = stepped(half, found.legs, found.passed)
    return state


def _missed(shadow: Shadow, stride: Stride) -> np.ndarray:
    """(solute, face) mol m-2 that passed too little in the column's step (equations.md, 90)."""
    scheme, missed = SCHEMES[stride.turn.problem.coupling], stride.trial.taken.missed
    if scheme.order == 2:
        missed = missed - (stride.trial.dt / shadow.dt) ** 2 * shadow.missed
    return scheme.missed * missed


def _carried(turn: Turn, taken: Taken, missed: np.ndarray) -> State:
    """The column's explicit step, taken by the shadow's own concentrations, and what it missed besides.

    Slopes are those of a short step: their part in the error of a long one is carried with the rest.
    """
    waters = turn.waters()
    first = passages(turn.faces, turn.state.dissolved, turn.inflow, turn.dt, shaped=0.0)
    passed = first.passed + (taken.passed - taken.first) + missed
    passed = turn.held_back(first, waters, passed, doubted=True)
    more = None
    if taken.stage.exchange is not None and taken.begun.exchange is not None:
        more = taken.stage.exchange - taken.begun.exchange
    stage = waters.stage(passed, more=more)
    return stepped(turn, [(waters, stage)], passed)
