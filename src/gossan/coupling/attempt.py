"""One trial step: transport, then chemistry, once or twice (equations.md, 35-37)."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gossan.base.sums import added
from gossan.chemistry.equilibrium import Solver
from gossan.coupling.pores import pore_space
from gossan.coupling.problem import Problem
from gossan.coupling.state import State
from gossan.coupling.waters import Waters
from gossan.transport.faces import LIMITERS, Faces
from gossan.transport.step import Passages, corrected, kept_positive, passages

# What is measured is how far first and second order are apart.  That is the error of the one-step scheme;
# the two-stage one was at least 30 times nearer to the truth while dispersion was explicit, and lost its
# second order beside mineral fronts while it was not (docs/decisions.md).
SHARE_OF_DIFFERENCE = {"lie": 1.0, "two-stage": 1.0 / 30.0}


@dataclass(frozen=True, eq=False)
class Trial:
    """A step that was tried."""

    state: State
    dt: float
    error: float  # estimated relative error in time and splitting
    pore_change: float  # largest relative change of a cell's pores
    courant: float


def attempt(
    problem: Problem, solver: Solver, state: State, faces: Faces, inflow: np.ndarray, dt: float,
    theta: float | None,
) -> Trial:
    """March one step of dt from a state.

    faces      during the step; inflow (solute,) mol m-3
    theta      None: explicit; else the weight of the end in an implicit step
    Raises     SolveError where a cell finds no equilibrium
    """
    width = problem.grid.width
    waters = Waters(problem, solver, state, faces.darcy_flux, dt)
    made = waters.foreseen() if theta is not None else None
    first = passages(faces, state.dissolved, inflow, dt, theta, made)
    passed = _held_back(problem, state, first, waters.amount, first.passed)
    stage = waters.stage(passed)
    whole = corrected(first, state.dissolved, stage.flowing.dissolved)
    size = _relative(waters.difference(stage, whole, whole - passed), _scale(problem, state, inflow))
    if problem.coupling == "two-stage":
        passed = _held_back(problem, state, first, waters.amount, whole)
        stage = waters.stage(passed, stage)
    error = size * (SHARE_OF_DIFFERENCE[problem.coupling] if theta is None else 1.0)
    flowing, found = stage.flowing, stage.flowing.found
    freed = problem.whole(flowing.freed, stage.still.freed if stage.still else None)
    lost = pore_space(problem, state.solid) - pore_space(problem, found.solid)
    after = State(
        time=state.time + dt,
        step=state.step + 1,
        dissolved=flowing.dissolved,
        solid=found.solid,
        sorbed=flowing.sorbed,
        water=flowing.water,
        swelling=(lost + flowing.freed) / dt,
        ln_activity=found.ln_activity,
        ionic_strength=found.ionic_strength,
        presence=found.presence,
        solved=found.solved,
        seen=found.seen,
        still=waters.still_after(stage),
        passed=added(state.passed, passed[:, problem.gates].T),
        made=added(state.made, waters.made(stage)),
        water_passed=added(
            state.water_passed, dt * np.array([*faces.darcy_flux[[0, -1]], float(freed @ width) / dt])
        ),
        splitting_error=state.splitting_error + error,
    )
    change = float(np.max(np.abs(lost) / state.water)) if len(lost) else 0.0
    change = max(change, waters.still_pores_changed(stage))
    return Trial(after, dt, error, change, faces.fastest * dt)


def _held_back(
    problem: Problem, state: State, first: Passages, amount: np.ndarray, passed: np.ndarray
) -> np.ndarray:
    """Passages that take no more from a cell than it holds; explicit, limited ones never do.

    Without a limiter tracers may fall below nothing: to show that is what it is for.
    """
    unlimited = problem.transport.limiter == LIMITERS["none"]
    if first.elimination is None and not unlimited:
        return passed
    total = amount.copy()
    total[problem.sorbates] += state.sorbed
    total[: problem.chemical] += problem.system.mineral_stoichiometry.T @ state.solid
    positive = ~np.isin(np.arange(len(amount)), problem.system.signed)
    if unlimited:
        positive[problem.chemical :] = False
    return kept_positive(first, state.dissolved, total, passed, positive)


def _scale(problem: Problem, state: State, inflow: np.ndarray) -> np.ndarray:
    """(solute,) mol m-2: what an error is measured against, the most that was ever there to be wrong.

    What can decay into a solute counts with it.
    """
    came = np.abs(state.passed[0, :, 0]) + np.maximum(-state.passed[1, :, 0], 0.0)  # and back, by diffusion
    near = np.abs(inflow) + np.abs(problem.transport.beyond[0])
    scale = problem.stock + came + near * problem.pore_volume
    if problem.decay is not None:
        members = problem.decay.solutes
        scale[members] += problem.decay.descent @ scale[members]
    return scale


def _relative(difference: np.ndarray, scale: np.ndarray) -> float:
    """The largest L1 norm of a difference (solute, cell) mol m-2, relative to each solute's scale."""
    size = np.abs(difference).sum(axis=1)
    known = scale > 0.0
    return float(np.max(size[known] / scale[known])) if known.any() else 0.0
