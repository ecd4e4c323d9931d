"""What recording costs: five hundred frames, their packing at the end included, in a run of five seconds."""

from __future__ import annotations

import tempfile
from pathlib import Path

import numpy as np
from tools.bench.column import case_of
from tools.bench.timing import TURNS, Goal
from tools.bench.whole_run import Stopwatch

from gossan.recording import run_case
from gossan.store.write import ResultWriter

FRAMES = 500
RUN = 5.0  # s; how long the measured run takes is no matter
CELLS, VOLUMES = 200, 1.0

GOALS = (Goal(f"recording {FRAMES} frames, share of a run of 5 s", 15, 5, "%", more_is_better=False),)


def measure() -> list[tuple[float, str]]:
    """(value, note) of the goal: time in the writer, over RUN."""
    case = case_of(CELLS, "two-stage", VOLUMES, VOLUMES / FRAMES)
    during, after = [], []
    for _ in range(TURNS):
        writing, packing = Stopwatch(), Stopwatch()
        with (
            tempfile.TemporaryDirectory() as folder,
            writing.on(ResultWriter, "frame", "port", "ledger", "steps", "checkpoint", "flush"),
            packing.on(ResultWriter, "finish"),
        ):
            run_case(case, Path(folder, "out.h5"))
        during.append(writing.seconds)
        after.append(packing.seconds)
    while_running, at_end = float(np.median(during)), float(np.median(after))
    note = f"{while_running:.2f} s while it runs, {at_end:.2f} s at its end"
    return [(100.0 * (while_running + at_end) / RUN, note)]
