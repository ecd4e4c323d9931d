"""A march that is no physics but as strict: every number follows from the state.

As a program it writes a result file in a process of its own, to be killed or watched:
`python -m tests.support.pretend FILE [--resume] [--steps N] [--pause S]` prints the count of frames.
"""

from __future__ import annotations

import argparse
import time
from dataclasses import dataclass
from pathlib import Path

import numpy as np

from gossan.store.file import Axes
from gossan.store.layout import PARTS
from gossan.store.write import ResultWriter

CELLS = 12
STEPS = 60
CASE = 'title = "pretend"\n'
FRAME_EVERY, PORT_EVERY, CHECKPOINT_EVERY = 3, 2, 7


@dataclass(frozen=True, slots=True)
class Pretended:
    """All that changes in the pretended march."""

    time: float
    step: int
    dissolved: np.ndarray
    presence: np.ndarray  # int8


@dataclass(frozen=True, slots=True)
class PretendedPace:
    """Its pace."""

    dt: float
    error: float = float("nan")


def axes() -> Axes:
    faces = np.linspace(0.0, 1.2, CELLS + 1)
    names = ("Zn^2+", "SO4^2-", "H^+", "bromide")
    return Axes(names, ("sphalerite", "fresh zinc sulfide, a name of more than thirty-two letters"),
                ("Zn^2+", "ZnSO4", "OH^-"), (faces[1:] + faces[:-1]) / 2, faces,
                ("sand",) * 5 + ("Sülfid-Gitter №1",) * 7, {"outlet": 1.2, "Brunnen östlich": 0.4},
                frozenset(PARTS))


def start() -> tuple[Pretended, PretendedPace]:
    dissolved = np.linspace(0.1, 1.0, 4 * CELLS).reshape(4, CELLS)
    return Pretended(0.0, 0, dissolved, np.zeros((2, CELLS), np.int8)), PretendedPace(0.7)


def stepped(state: Pretended, pace: PretendedPace) -> tuple[Pretended, PretendedPace]:
    """A chaotic map: one wrong bit in a checkpoint is everywhere some steps later."""
    dissolved = 3.9 * state.dissolved * (1 - state.dissolved * 0.999) % 1.0
    presence = (dissolved[:2] > 0.5).astype(np.int8)
    dt = 0.5 + float(dissolved[0, 0])
    return Pretended(state.time + pace.dt, state.step + 1, dissolved, presence), PretendedPace(dt, dt / 3)


def profile(state: Pretended) -> dict[str, np.ndarray]:
    c = state.dissolved
    along = {name: c[i % 4] * (i + 1) for i, name in
             enumerate(("porosity", "conductivity", "pH", "ionic_strength"))}
    faces = np.append(c[0], c[1, 0])
    return {"dissolved": c, "solid": state.presence * c[:2], "saturation": np.log10(c[:2]),
            "activity": np.log10(c[1:]), **along, "pe": np.full(CELLS, np.nan), "darcy_flux": faces,
            "head": -faces, "temperature": 285.0 + state.time,
            "immobile_dissolved": 0.5 * c, "sorbed": 2.0 * c}


def record(writer: ResultWriter, state: Pretended, pace: PretendedPace) -> None:
    """What a recording does behind every step."""
    sums = state.dissolved.sum(axis=1)
    if state.step > 0:
        writer.steps([{"time": state.time, "dt": pace.dt, "courant": 0.5, "iterations": 1,
                       "splitting_error": pace.error, "seconds": time.perf_counter()}])
    if state.step % PORT_EVERY == 0:
        for name, x in writer.axes.ports.items():
            writer.port(name, state.time, {"pore_volumes": state.time / x, "darcy_flux": x, "pH": sums[2],
                                           "pe": 4.0, "dissolved": sums, "resident": sums / 2,
                                           "passed": sums * x, "dissolved_error": 1e-3 * sums,
                                           "pH_error": -1e-3})
        writer.ledger(state.time, {"entered": sums, "left": sums / 3, "stored": sums / 5, "made": 0 * sums,
                                   "error": sums * 1e-16, "splitting_error": sums * 1e-3, "water_error": 0.0,
                                   "charge_error": 1e-17})
    if state.step % FRAME_EVERY == 0:
        writer.frame(state.time, profile(state))
    if state.step % CHECKPOINT_EVERY == 0:
        writer.checkpoint({"state": state, "pace": pace})


def march(path: Path, resume: bool = False, steps: int = STEPS, pause: float = 0.0, tell=lambda frames: None,
          overwrite: bool = False) -> None:
    """Write, or go on with, a whole result file."""
    if resume:
        writer, parts = ResultWriter.resume(path)
        state, pace = Pretended(**parts["state"]), PretendedPace(**parts["pace"])
    else:
        writer, (state, pace) = ResultWriter(path, axes(), "pretend", CASE, "no physics", overwrite), start()
    with writer:
        if not resume:
            record(writer, state, pace)
        while state.step < steps:
            state, pace = stepped(state, pace)
            record(writer, state, pace)
            tell(writer.counts["profiles"])
            time.sleep(pause)
        writer.finish("finished", {"state": state, "pace": pace}, figures={"seconds": time.perf_counter()})


def main() -> None:
    parser = argparse.ArgumentParser()
    parser.add_argument("file", type=Path)
    parser.add_argument("--resume", action="store_true")
    parser.add_argument("--steps", type=int, default=STEPS)
    parser.add_argument("--pause", type=float, default=0.0)
    wanted = parser.parse_args()
    march(wanted.file, wanted.resume, wanted.steps, wanted.pause, lambda frames: print(frames, flush=True))


if __name__ == "__main__":
    main()
