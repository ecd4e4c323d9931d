"""One trial step: where its scheme leads, how far that may be wrong, what passed meanwhile."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from gossan.base.sums import added
from gossan.coupling.drive import at_once
from gossan.coupling.pores import pore_space, still_pore_space
from gossan.coupling.problem import Problem
from gossan.coupling.splitting import SCHEMES, Taken, Turn
from gossan.coupling.state import State
from gossan.coupling.waters import Stage, Waters
from gossan.transport.faces import faces_of

ROUNDING = 1e-12  # of the most there is of any solute
INSTANT = 1e-9  # s: while nothing flows and this goes by, no solute gets anywhere


@dataclass(frozen=True, eq=False)
class Trial:
    """A step that was tried."""

    state: State
    dt: float
    error: float  # estimated relative error in time and splitting
    pore_change: float  # largest relative change of a cell's pores
    courant: float
    taken: Taken


def attempt(turn: Turn) -> Trial:
    """March one step by the scheme of its problem, and estimate its error (equations.md, 37).

    Raises   SolveError where a cell finds no equilibrium, or the scheme no agreement
    """
    problem, scheme = turn.problem, SCHEMES[turn.problem.coupling]
    taken = scheme.take(turn)
    size = relative(taken.difference, scale_of(problem, turn.state, turn.inflow))
    error = size * (scheme.share if turn.theta is None else 1.0)
    after = stepped(turn, taken.legs, taken.passed)
    after = replace(after, splitting_error=turn.state.splitting_error + error)
    return Trial(after, turn.dt, error, _pore_change(turn, after), turn.faces.fastest * turn.dt, taken)


def settled_anew(turn: Turn) -> State:
    """A state after its temperature has jumped: the same amounts in equilibrium anew, in no time.

    Raises   SolveError where a cell finds no equilibrium
    """
    at_rest = faces_of(turn.problem.transport, turn.state.water, np.zeros_like(turn.faces.darcy_flux))
    instant = replace(turn, faces=at_rest, dt=INSTANT, theta=None)
    taken = SCHEMES[turn.problem.coupling].take(instant)
    return at_once(stepped(instant, taken.legs, taken.passed), turn.state)


def stepped(turn: Turn, legs: list[tuple[Waters, Stage]], passed: np.ndarray) -> State:
    """The state after a step, with all its sums.

    legs    waters and where they came to, one after the other; passed (solute, face) mol m-2
    """
    problem, state, dt, darcy_flux = turn.problem, turn.state, turn.dt, turn.faces.darcy_flux
    waters, stage = legs[-1]
    after = waters.after(stage)
    made = np.sum([waters.made(stage) for waters, stage in legs], axis=0)
    flowing_freed = np.sum([stage.flowing.freed for _, stage in legs], axis=0)
    lost = pore_space(problem, state.solid) - pore_space(problem, after.solid)
    freed, still = flowing_freed, after.still
    if still is not None and state.still is not None:
        still_freed = np.sum([stage.still.freed for _, stage in legs if stage.still], axis=0)
        still_lost = still_pore_space(problem, state.still.solid) - still_pore_space(problem, still.solid)
        still = replace(still, swelling=(still_lost + still_freed) / dt)
        freed = problem.whole(flowing_freed, still_freed)
    came = dt * np.array([*darcy_flux[[0, -1]], float(freed @ problem.grid.width) / dt])
    return replace(
        after,
        time=state.time + dt,
        step=state.step + 1,
        swelling=(lost + flowing_freed) / dt,
        still=still,
        passed=added(state.passed, passed[:, problem.gates].T),
        made=added(state.made, made),
        water_passed=added(state.water_passed, came),
    )


def _pore_change(turn: Turn, after: State) -> float:
    """The largest relative change of a cell's flowing or immobile pores."""
    problem, state = turn.problem, turn.state
    lost = pore_space(problem, state.solid) - pore_space(problem, after.solid)
    change = float(np.max(np.abs(lost) / state.water))
    if state.still is not None and after.still is not None:
        lost = still_pore_space(problem, state.still.solid) - still_pore_space(problem, after.still.solid)
        change = max(change, float(np.max(np.abs(lost) / state.still.water, initial=0.0)))
    return change


def scale_of(problem: Problem, state: State, inflow: np.ndarray) -> np.ndarray:
    """(solute,) mol m-2: what an error is measured against, the most that was ever there to be wrong.

    What can decay into a solute counts with it. What is rounding beside the other solutes, such as the excess
    of H+ in salts of strong acids and bases, counts no less than that rounding.
    """
    came = np.abs(state.passed[0, :, 0]) + np.maximum(-state.passed[1, :, 0], 0.0)  # and back, by diffusion
    near = np.abs(inflow) + np.abs(problem.transport.beyond[0])
    scale = problem.stock + came + near * problem.pore_volume
    if problem.decay is not None:
        members = problem.decay.solutes
        scale[members] += problem.decay.descent @ scale[members]
    return np.maximum(scale, ROUNDING * scale.max(initial=0.0))


def relative(difference: np.ndarray, scale: np.ndarray) -> float:
    """The largest L1 norm of a difference (solute, cell) mol m-2, relative to each solute's scale."""
    size = np.abs(difference).sum(axis=1)
    known = scale > 0.0
    return float(np.max(size[known] / scale[known])) if known.any() else 0.0
