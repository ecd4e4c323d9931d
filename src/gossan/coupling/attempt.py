"""One trial step: transport, then chemistry, once or twice (equations.md, 35-37)."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from gossan.base.sums import added
from gossan.chemistry.equilibrium import UNBOUNDED, Equilibrium, Solver
from gossan.coupling.pores import pore_space
from gossan.coupling.problem import Problem
from gossan.coupling.state import State
from gossan.transport.faces import LIMITERS, Faces
from gossan.transport.step import Passages, corrected, kept_positive, passages

# A cell is left alone while its dissolved amounts stand within this of its last solve: far below any
# accuracy that a case may ask for, far above rounding.
SKIP = 1e-12
# mol m-3 of bulk: what is washed out decays for ever, and numbers near the end of their range are slow
NO_ATOM = 1e-45
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
    width, darcy_flux = problem.grid.width, faces.darcy_flux
    amount = state.dissolved * state.water
    water = state.water + dt * (darcy_flux[:-1] - darcy_flux[1:]) / width
    before = _equilibrium(problem, state)

    first = passages(faces, state.dissolved, inflow, dt, theta)
    passed = _held_back(problem, state, first, amount, first.passed)
    moved = _moved(amount, passed, width)
    found = _react(problem, solver, before, moved, state.solid, water)
    predicted = moved.copy()
    predicted[: problem.chemical] = found.amount
    predicted /= water + _freed(problem, found.solid - state.solid)
    whole = corrected(first, state.dissolved, predicted)
    difference = whole - passed
    size = _relative(difference[:, :-1] - difference[:, 1:], _scale(problem, state, inflow))
    if problem.coupling == "two-stage":
        passed = _held_back(problem, state, first, amount, whole)
        moved = _moved(amount, passed, width)
        found = _react(problem, solver, found, moved, state.solid, water)
    error = size * (SHARE_OF_DIFFERENCE[problem.coupling] if theta is None else 1.0)
    moved[: problem.chemical] = found.amount
    gained = found.solid - state.solid
    freed = _freed(problem, gained)
    filled = water + freed
    lost = pore_space(problem, state.solid) - pore_space(problem, found.solid)
    after = replace(
        state,
        time=state.time + dt,
        step=state.step + 1,
        dissolved=moved / filled,
        solid=found.solid,
        water=filled,
        swelling=(lost + freed) / dt,
        ln_activity=found.ln_activity,
        ionic_strength=found.ionic_strength,
        presence=found.presence,
        solved=found.solved,
        passed=added(state.passed, passed[:, problem.gates].T),
        made=added(state.made, _made(problem, found)),
        water_passed=added(
            state.water_passed, dt * np.array([darcy_flux[0], darcy_flux[-1], float(freed @ width) / dt])
        ),
        splitting_error=state.splitting_error + error,
    )
    change = float(np.max(np.abs(lost) / state.water)) if len(lost) else 0.0
    return Trial(after, dt, error, change, faces.fastest * dt)


def _moved(amount: np.ndarray, passed: np.ndarray, width: np.ndarray) -> np.ndarray:
    """(solute, cell) mol m-3 of bulk after passages (solute, face) mol m-2; less than an atom is none."""
    after = amount + (passed[:, :-1] - passed[:, 1:]) / width
    after[np.abs(after) < NO_ATOM] = 0.0
    return after


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
    total[: problem.chemical] += problem.system.mineral_stoichiometry.T @ state.solid
    positive = ~np.isin(np.arange(len(amount)), problem.system.signed)
    if unlimited:
        positive[problem.chemical :] = False
    return kept_positive(first, state.dissolved, total, passed, positive)


def _equilibrium(problem: Problem, state: State) -> Equilibrium:
    """The equilibrium that a state was left in, where the next solve starts."""
    return Equilibrium(
        system=problem.system,
        amount=state.dissolved[: problem.chemical],
        solid=state.solid,
        presence=state.presence,
        ln_activity=state.ln_activity,
        ionic_strength=state.ionic_strength,
        solved=state.solved,
        steps=np.zeros(len(state.water), np.int64),
        given=np.zeros((len(problem.system.open_gases), len(state.water))),
    )


def _react(
    problem: Problem, solver: Solver, start: Equilibrium, moved: np.ndarray, solid: np.ndarray,
    water: np.ndarray,
) -> Equilibrium:
    """Equilibrate what transport left in every cell; amounts are per bulk."""
    upper = np.where(problem.system.may_form[:, None], UNBOUNDED, solid)
    kilograms = water * problem.system.water_density
    return solver.settled(start, kilograms, moved[: problem.chemical], solid, upper, skip=SKIP)


def _made(problem: Problem, found: Equilibrium) -> np.ndarray:
    """(solute,) mol m-2 that the open gases gave to the whole column."""
    made = np.zeros(len(problem.solutes))
    made[: problem.chemical] = problem.system.gas_supply.T @ (found.given @ problem.grid.width)
    return made


def _freed(problem: Problem, gained: np.ndarray) -> np.ndarray:
    """(cell,) m3 of water per m3 of bulk that solids freed, having gained (mineral, cell) mol m-3 of bulk."""
    return -problem.volume_of_water * (problem.system.mineral_water @ gained)


def _scale(problem: Problem, state: State, inflow: np.ndarray) -> np.ndarray:
    """(solute,) mol m-2: what an error is measured against, the most that was ever there to be wrong."""
    return problem.stock + np.abs(state.passed[0, :, 0]) + np.abs(inflow) * problem.pore_volume


def _relative(difference: np.ndarray, scale: np.ndarray) -> float:
    """The largest L1 norm of a difference (solute, cell) mol m-2, relative to each solute's scale."""
    size = np.abs(difference).sum(axis=1)
    known = scale > 0.0
    return float(np.max(size[known] / scale[known])) if known.any() else 0.0
