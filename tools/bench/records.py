"""What recording costs: a run of a few seconds with five hundred frames."""

from __future__ import annotations

import tempfile
import time
from pathlib import Path

from tools.bench.column import case_of
from tools.bench.timing import Goal
from tools.bench.whole_run import Stopwatch

from gossan.recording import run_case
from gossan.store.write import ResultWriter

FRAMES = 500
CELLS, VOLUMES = 200, 5.0

GOALS = (Goal(f"recording {FRAMES} frames, share of the run", 15, 5, "%", more_is_better=False),)


def measure() -> list[tuple[float, str]]:
    """(value, note) of the goal: time in the writer, over the time of the whole run."""
    case = case_of(CELLS, "two-stage", VOLUMES, VOLUMES / FRAMES)
    shares, seconds = [], []
    for _ in range(3):
        writing = Stopwatch()
        with tempfile.TemporaryDirectory() as folder, writing.on(
            ResultWriter, "frame", "port", "ledger", "steps", "checkpoint", "finish"
        ):
            begin = time.perf_counter()
            run_case(case, Path(folder, "out.h5"))
            seconds.append(time.perf_counter() - begin)
        shares.append(100.0 * writing.seconds / seconds[-1])
    middle = sorted(range(3), key=shares.__getitem__)[1]
    return [(shares[middle], f"of {seconds[middle]:.1f} s")]
