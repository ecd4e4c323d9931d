"""Where the march meets a file: the only place that knows both."""

from __future__ import annotations

import json
import os
import signal
import sys
import threading
import time as wall
from collections.abc import Callable, Iterator
from contextlib import contextmanager
from dataclasses import dataclass
from pathlib import Path
from typing import Any

import numpy as np

from gossan.base.errors import SolveError
from gossan.case.bounds import PH
from gossan.case.build import build, first_pace
from gossan.case.model import Case
from gossan.case.read import case_from_text
from gossan.chemistry.certificate import Certificate
from gossan.chemistry.equilibrium import Solver
from gossan.coupling.beyond import Beyond, watched
from gossan.coupling.certify import certify_state, diluted_since
from gossan.coupling.drive import Drive, pore_volumes, settled
from gossan.coupling.follower import Follower
from gossan.coupling.ledger import Books
from gossan.coupling.march import Clogged, Stride, march
from gossan.coupling.pace import Pace
from gossan.coupling.problem import Problem
from gossan.coupling.shadow import Shadow, apart, shadow_from, shadow_of
from gossan.coupling.state import State, StillWater, state_of
from gossan.coupling.watching import OFF, WHEN, nothing_seen, seen
from gossan.observing import axes_of, frame_of, ports_of
from gossan.store.read import Crossing, Result, open_result
from gossan.store.write import ResultWriter, last_parts

CHECKPOINT_EVERY = 2.0  # s of wall clock between two checkpoints
MOST_THREADS = 8  # of a run by default
COMMIT_EVERY = 0.2  # s of wall clock after which others see what was recorded; each time costs some ms
CAUTION = (
    "A one-dimensional aid for screening and design; no substitute for licensed practice, local codes and "
    "permits. Sulfide-bearing beds give off hydrogen sulfide, which dulls the sense of smell and kills: "
    "wells, vaults and trenches over them are confined spaces. Acid drainage returns when alkali is spent "
    "or bypassed, and sulfides that dry out or meet air release the metals they held."
)

Progress = Callable[[float, State], None]


@dataclass(frozen=True)
class Ending:
    """How a run ended."""

    status: str  # "finished", "stopped" or "failed"
    reason: str  # "clogged" where a closed cell was the end
    detail: str = ""  # the reason in a sentence
    error: SolveError | None = None


def run_case(
    case: Case, path: Path, *, overwrite: bool = False, progress: Progress | None = None,
    coarse: dict[str, dict[str, float]] | None = None, threads: int | None = None,
) -> Ending:
    """Run a case into a new result file.

    progress is called after every step with the share of the run done and the state.
    threads  over which the cells are spread; by default half the processors, never more than MOST_THREADS
    coarse   when limits were first exceeded in half the cells, see `study.grid`; kept in the file
    Raises   InputError before anything is written; ResultError where the file exists or cannot be written
    """
    problem = build(case)
    state, pace = problem.initial, first_pace(problem)
    shadow = shadow_of(problem, state) if problem.errors_carried else None
    writer = ResultWriter(
        path, axes_of(problem), case.title, case.text, CAUTION, overwrite, case.constants_text, case.files,
        json.dumps(coarse) if coarse is not None else "",
    )
    with writer, _Run(problem, writer, progress, shadow, threads) as run:
        run.beyond = watched(problem, state, run.beyond)
        run.frame(state)
        run.records(state)
        writer.checkpoint(run.parts(state, pace))
        return run.walk(state, pace)


def resume(path: Path, *, progress: Progress | None = None, threads: int | None = None) -> Ending:
    """Go on with a result file from its last checkpoint, to the same bits as a run never stopped.

    threads  as in `run_case`

    Raises   ResultError where there is nothing to go on with
    """
    problem = build(case_of(open_result(path)))
    writer, parts = ResultWriter.resume(path)
    shadow = shadow_from(parts["shadow"]) if parts["shadow"] else None
    with writer, _Run(problem, writer, progress, shadow, threads) as run:
        state = state_of(parts["state"])
        run.seen, run.limits = parts["seen"], parts["limits"]
        run.beyond = Beyond(**parts["beyond"])
        return run.walk(state, Pace(**parts["pace"]))


def case_of(result: Result) -> Case:
    """The case that a result file holds, with the user's constants it was run with."""
    return case_from_text(
        result.case, str(result.path), constants=result.constants or None, files=result.files
    )


@dataclass(frozen=True)
class Certified:
    """The certificates of one of a column's waters at its last checkpoint."""

    water: str  # "flowing" or "immobile"
    time: float  # s
    cells: np.ndarray  # (water's cell,) int: which cells of the column
    certificate: Certificate
    diluted: np.ndarray  # (water's cell,) relative: by water that solids freed or bound after the solve


def certified(result: Result) -> list[Certified]:
    """How well every cell at a result's last checkpoint meets its equations, worked out with 32 digits.

    Raises   ResultError where the file has no whole checkpoint
    """
    problem = build(case_of(result))
    state = state_of(last_parts(result.path)["state"])
    moment = settled(problem, state)
    waters: list[tuple[str, State | StillWater, np.ndarray]] = [
        ("flowing", state, np.arange(len(state.water)))
    ]
    if state.still is not None and problem.stagnant is not None:
        waters.append(("immobile", state.still, problem.stagnant.cells))
    return [
        Certified(name, state.time, cells, certify_state(moment, water), diluted_since(moment, water))
        for name, water, cells in waters
    ]


def run(case: Case, out: str | Path | None = None, progress: bool = False, overwrite: bool = False) -> Result:
    """Run a column and open its result.

    case     from `load_case`
    out      the result file; default the case's stem + ".h5" in the current folder
    progress print the share done to standard error
    Raises   InputError, ResultError; SolveError where the numerics gave up (the file is kept and resumable)
    """
    path = Path(out) if out is not None else Path(Path(case.file).stem + ".h5")
    shown = _print_share if progress else None
    ending = run_case(case, path, overwrite=overwrite, progress=shown)
    if ending.error is not None:
        raise ending.error
    return open_result(path)


def _print_share(share: float, state: State) -> None:
    end = "\n" if share >= 1.0 else ""
    print(f"\r{100.0 * share:5.1f} %  day {state.time / 86400.0:.6g}", end=end, file=sys.stderr)


class _Run:
    """One run into one file."""

    def __init__(
        self, problem: Problem, writer: ResultWriter, progress: Progress | None, shadow: Shadow | None,
        threads: int | None = None,
    ):  # fmt: skip
        self.problem, self.writer, self.progress = problem, writer, progress
        default = max(1, min(MOST_THREADS, (os.cpu_count() or 1) // 2))
        self.solver = Solver(problem.system, threads or default)
        self.follower = Follower(shadow, problem.system) if shadow else None
        self.books = Books(problem)
        self.steps: list[dict[str, float]] = []
        self.seen = {"frame": -1.0, "records": -1.0}  # times of the last ones, s
        self.limits = nothing_seen(len(problem.watched))
        self.beyond = Beyond()
        self.asked_to_stop = False

    def __enter__(self) -> _Run:
        return self

    def __exit__(self, *_: Any) -> None:
        if self.follower:
            self.follower.close()

    def walk(self, state: State, pace: Pace) -> Ending:
        """March to the end, recording; an interrupt is heard between two steps, never within one."""
        with _interrupts(self.stop):
            return self._walk(state, pace)

    def stop(self, *_: Any) -> None:
        """Ask the run to stop after the step it is in."""
        self.asked_to_stop = True

    def _walk(self, state: State, pace: Pace) -> Ending:
        began = kept = committed = last = wall.monotonic()
        ending = Ending("finished", "")
        try:
            for stride in march(self.problem, state, pace, self.solver):
                now = wall.monotonic()
                self.step(stride, now - last)
                last = now
                self.limits = seen(
                    stride.turn.problem, self.limits, state, stride.state, stride.turn.faces.darcy_flux
                )
                if self.follower:
                    self.follower.follow(stride)
                self.beyond = watched(self.problem, stride.state, self.beyond)
                if stride.frame_due:
                    self.frame(stride.state)
                if stride.record_due:
                    self.records(stride.state)
                state, pace = stride.state, stride.pace
                if self.progress:
                    self.progress(self.share(state), state)
                if now - kept > CHECKPOINT_EVERY:
                    self.keep(state, pace)
                    kept = committed = now
                elif now - committed > COMMIT_EVERY:
                    self.writer.flush()
                    committed = now
                if self.asked_to_stop:
                    ending = Ending("stopped", "interrupted")
                    break
        except Clogged as clogged:
            grid = self.problem.grid
            layer, x = grid.layers[grid.layer[clogged.cell]].name, grid.centres[clogged.cell]
            detail = f"clogged in layer {layer}, x = {x:.4g} m, after {clogged.time / 86400:.6g} d"
            ending = Ending("finished", "clogged", detail)
            self.last(state)
        except SolveError as error:
            error.kept = str(self.writer.path)
            ending = Ending("failed", str(error), str(error), error)
        self.writer.steps(self.steps)
        self.writer.flush()
        counts, parts = dict(self.writer.counts), self.parts(state, pace)
        if ending.status != "finished":
            self.last(state)  # to be seen, but a run never stopped has none here: who goes on drops it
        said = [self.beyond.told(self.problem), self.follower.shadow().told() if self.follower else ""]
        figures = {
            "wall_clock_seconds": wall.monotonic() - began,
            "warnings": "\n".join(filter(None, said)),
            "crossings": self.crossings(),
        }
        self.writer.finish(ending.status, parts, ending.reason, figures, counts)
        return ending

    def crossings(self) -> str:
        """When each limit was first exceeded, by port and quantity, as JSON (docs/result-file.md)."""
        shadows = self.follower.shadow().seen if self.follower else np.full_like(self.limits, np.nan)
        found: dict[str, dict[str, Crossing]] = {}
        for limit, own, other in zip(self.problem.watched, self.limits, shadows, strict=True):
            if own[WHEN] == own[WHEN]:
                quantity = self.problem.solutes[limit.solute] if limit.solute >= 0 else PH
                beside = float(other[WHEN]) if other[WHEN] == other[WHEN] else None
                when = float(own[WHEN]), float(own[OFF]), beside
                found.setdefault(self.problem.ports[limit.port].name, {})[quantity] = when
        return json.dumps(found)

    def last(self, state: State) -> None:
        """Record a state at which no record falls due."""
        if state.time > self.seen["records"]:
            self.records(state)
        if state.time > self.seen["frame"]:
            self.frame(state)

    def share(self, state: State) -> float:
        """The share of the run that is done."""
        end = self.problem.end
        return min(1.0, end.clock(state.time, pore_volumes(self.problem, state)) / float(end.marks[-1]))

    def keep(self, state: State, pace: Pace) -> None:
        self.writer.steps(self.steps)
        self.steps = []
        self.writer.checkpoint(self.parts(state, pace))

    def parts(self, state: State, pace: Pace) -> dict[str, Any]:
        """All that the run needs to go on from here."""
        shadow = self.follower.shadow() if self.follower else None
        return {
            "state": state, "pace": pace, "seen": dict(self.seen), "beyond": self.beyond, "shadow": shadow,
            "limits": self.limits,
        }  # fmt: skip

    def step(self, stride: Stride, seconds: float) -> None:
        self.steps.append(
            {
                "time": stride.state.time,
                "dt": stride.trial.dt,
                "courant": stride.trial.courant,
                "iterations": float(stride.trial.taken.rounds),
                "splitting_error": stride.trial.error,
                "seconds": seconds,
            }
        )

    def frame(self, state: State) -> None:
        self.seen["frame"] = state.time
        self.writer.frame(state.time, frame_of(self.problem, state), commit=False)

    def records(self, state: State) -> None:
        self.seen["records"] = state.time
        problem, values = self.problem, ports_of(self.problem, state)
        ledger = self.books.closed(state)
        names = ("entered", "left", "stored", "made", "error", "water_error", "charge_error")
        row = {name: getattr(ledger, name) for name in names}
        if self.follower:
            shadow = self.follower.shadow().state
            row["splitting_error"] = apart(problem, state, shadow, Drive(problem, state).inflow)
            for here, beside in zip(values, ports_of(problem, shadow), strict=True):
                here["dissolved_error"] = here["dissolved"] - beside["dissolved"]
                here["pH_error"] = here["pH"] - beside["pH"]
        for port, shown in zip(problem.ports, values, strict=True):
            self.writer.port(port.name, state.time, shown)
        self.writer.ledger(state.time, row)


@contextmanager
def _interrupts(handler: Callable[..., None]) -> Iterator[None]:
    """Hand Ctrl-C to a handler for a while; elsewhere than in the main thread it cannot come."""
    if threading.current_thread() is not threading.main_thread():
        yield
        return
    before = signal.signal(signal.SIGINT, handler)
    try:
        yield
    finally:
        signal.signal(signal.SIGINT, before)
