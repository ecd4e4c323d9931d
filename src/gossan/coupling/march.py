"""The walk through time: steps that land on what is to be recorded, yielded one by one."""

from __future__ import annotations

import math
from collections.abc import Iterator
from dataclasses import dataclass, replace

import numpy as np

from gossan.base.errors import SolveError
from gossan.chemistry.equilibrium import Solver
from gossan.coupling.attempt import Trial, attempt, settled_anew
from gossan.coupling.drive import Drive, pore_volumes, settled, time_to_pass
from gossan.coupling.feedback import fed_back
from gossan.coupling.pace import Pace, acceptable
from gossan.coupling.pores import LANDING, pore_room, share_to_close
from gossan.coupling.problem import Problem
from gossan.coupling.schedule import Schedule
from gossan.coupling.splitting import SCHEMES, Turn
from gossan.coupling.state import State
from gossan.transport.faces import Faces

SHORTEST = 1e-9  # of the run: a step below this has no chance left
# Explicit transport may cost so many times the steps; beyond, it is implicit, which is as good for tracers
# but only first order beside a front of what solids hold.
GAIN_OF_TRACERS, GAIN_OF_RETENTION = 3.0, 10.0
GAIN_OF_SHORT_CELLS = 10.0  # implicit advection smears what crosses them: measured in docs/decisions.md
TURNED_BACK = "the flow has turned back at the inlet: solids push out more water than the head drives through"


@dataclass(frozen=True, eq=False)
class Stride:
    """An accepted step: where it led, how, and which records fall due there."""

    state: State
    pace: Pace
    trial: Trial
    turn: Turn
    jump: Turn | None  # what it began with where the temperature had jumped
    head: np.ndarray  # (face,) m
    frame_due: bool
    record_due: bool
    rejected: int


class Clogged(Exception):
    """A cell has closed; not a fault: the run has come to its end, and says so."""

    def __init__(self, cell: int, time: float):
        super().__init__(cell, time)
        self.cell, self.time = cell, time


def march(problem: Problem, state: State, pace: Pace, solver: Solver | None = None) -> Iterator[Stride]:
    """Walk from state.time to the end. To resume is this same call, with a stored state and pace.

    Raises   Clogged when a cell closes; SolveError, naming cell and time, when no step length helps
    """
    solvers = Solvers(solver or Solver(problem.system))
    while not _ended(problem, state):
        stride = _step(problem, solvers, state, pace)
        state, pace = stride.state, stride.pace
        yield stride


class Solvers:
    """The solver of the system in force; a new one where the temperature has changed."""

    def __init__(self, solver: Solver):
        self._solver = solver

    def of(self, problem: Problem) -> Solver:
        """The solver of a problem as it is at one moment."""
        if self._solver.system is not problem.system:
            self._solver = Solver(problem.system, self._solver.threads)
        return self._solver


def _step(problem: Problem, solvers: Solvers, state: State, pace: Pace) -> Stride:
    drive = Drive(problem, state)
    entered = pore_volumes(problem, state)
    before = settled(problem, state)
    room = pore_room(problem, state, drive.push)
    if room.min() <= LANDING:
        raise Clogged(int(room.argmin()), state.time)
    shortest = SHORTEST * max(state.time, pace.dt)
    failure: SolveError | None = None
    rejected = 0
    while True:
        darcy_flux, head = drive.flow(pace.dt, 0.0)
        if darcy_flux[0] < 0.0 < head[0]:
            raise SolveError(TURNED_BACK, 0, problem.grid.layers[0].name, 0.0, state.time)
        inlet = float(darcy_flux[0]), drive.rise(pace.dt)
        if drive.ramps:
            wish, _ = _fitted(problem, state, entered, inlet, pace.dt)
            darcy_flux, head = drive.flow(pace.dt, wish)
        faces = drive.faces(darcy_flux)
        longest, implicit = longest_step(problem, faces)
        theta = SCHEMES[problem.coupling].weight if implicit else None
        dt, lands = _fitted(problem, state, entered, inlet, min(pace.dt, longest))
        if drive.ramps:
            darcy_flux, head = drive.flow(pace.dt, dt)
            faces = drive.faces(darcy_flux, dt)
        try:
            begun, jump = state, None
            start = problem.at(drive.temperature, before)
            if start.system is not before.system:
                jump = Turn(start, solvers.of(start), state, faces, drive.inflow, dt, None)
                begun = settled_anew(jump)
            moment = problem.at(drive.temperature_after(dt, inlet), start)
            inflow = drive.mean_inflow(dt, inlet)
            turn = Turn(moment, solvers.of(moment), begun, faces, inflow, dt, theta)
            trial = attempt(turn)
            if problem.coupling == "iterated" and trial.pore_change > 0.0:
                turn, trial, head = fed_back(drive, turn, trial)
        except SolveError as error:
            failure, trial = error, None
        if trial is not None:
            following = pace.after(dt, trial.error, trial.pore_change, problem.accuracy, longest)
            if acceptable(trial.error, trial.pore_change, problem.accuracy):
                beyond = pore_room(problem, trial.state, drive.push)
                if beyond.min() >= 0.0:
                    break
                pace = replace(pace, dt=dt * share_to_close(room, beyond))
            else:
                pace = replace(following, dt=min(following.dt, 0.5 * dt))
        else:
            pace = replace(pace, dt=0.25 * dt)
        rejected += 1
        if pace.dt < shortest:
            raise _given_up(problem, state, failure)
    if lands and following.dt >= dt:
        following = replace(following, dt=max(following.dt, pace.dt))  # a record cut it short, not its error
    now = pore_volumes(problem, trial.state)
    ended = _ended(problem, trial.state)
    return Stride(
        state=trial.state,
        pace=following,
        trial=trial,
        turn=turn,
        jump=jump,
        head=head,
        frame_due=ended or _due(problem.frames, state, trial.state, entered, now),
        record_due=ended or _due(problem.records, state, trial.state, entered, now),
        rejected=rejected,
    )


def _ended(problem: Problem, state: State) -> bool:
    return problem.end.passed(problem.end.clock(state.time, pore_volumes(problem, state))) > 0


def _due(schedule: Schedule, before: State, after: State, entered: float, now: float) -> bool:
    return schedule.passed(schedule.clock(after.time, now)) > schedule.passed(
        schedule.clock(before.time, entered)
    )


def longest_step(problem: Problem, faces: Faces) -> tuple[float, bool]:
    """The longest step that stability and Courant's number allow, and whether it must be implicit.

    Explicit wherever that does not cost GAIN times the steps (equations.md, 38). Where a few short cells
    would ask for GAIN_OF_SHORT_CELLS times the steps, water may cross those, and an average cell counts.
    """
    by_courant = problem.max_courant / faces.fastest if faces.fastest > 0.0 else math.inf
    explicit = min(by_courant, faces.explicit_limit)
    still = faces.speed.min() == 0.0
    average = math.inf if still else problem.max_courant * float(np.mean(1.0 / faces.speed))
    implicit = average if average > GAIN_OF_SHORT_CELLS * by_courant else by_courant
    retained = bool(problem.system.minerals) or problem.isotherms is not None
    gain = GAIN_OF_RETENTION if retained else GAIN_OF_TRACERS
    if explicit * gain >= implicit:
        return explicit, False
    return implicit, True


def _fitted(
    problem: Problem, state: State, entered: float, inlet: tuple[float, float], dt: float
) -> tuple[float, bool]:
    """A step no longer than dt that ends on the next event, or leaves a decent step before it."""
    nearest = math.inf
    for schedule in (problem.frames, problem.records, problem.feeds.begins, problem.end):
        ahead = schedule.ahead(schedule.clock(state.time, entered))
        if schedule.by_volume and ahead < math.inf:
            ahead = time_to_pass(ahead * problem.pore_volume, inlet)
        nearest = min(nearest, ahead)
    if nearest <= dt * (1.0 + 1e-9):
        return nearest, True
    if nearest < 2.0 * dt:
        return 0.5 * nearest, True
    return dt, False


def _given_up(problem: Problem, state: State, failure: SolveError | None) -> SolveError:
    if failure is None:
        return SolveError("steps became too short for the accuracy asked for", time=state.time)
    cell = failure.cell
    layer = problem.grid.layers[problem.grid.layer[cell]].name
    return SolveError(failure.reason, cell, layer, float(problem.grid.centres[cell]), state.time)
