"""How long a user waits: the first run after the installation, and the start of every later one."""

from __future__ import annotations

import os
import subprocess
import sys
import tempfile
import time
from pathlib import Path

import numpy as np
from tools.bench.column import case_of
from tools.bench.timing import TURNS, Goal

GOALS = (
    Goal("first run after install, nothing cached", 30, 12, "s", more_is_better=False),
    Goal("start to first step, cached", 1.2, 0.8, "s", more_is_better=False),
)
# a whole process that ends at its first step
FIRST_STEP = """\
import os, sys
from pathlib import Path
from gossan.case.read import read_case
from gossan.base.jit import is_compiled
case = read_case("case.toml")
is_compiled()
from gossan.recording import run_case
run_case(case, Path("out.h5"), overwrite=True, progress=lambda share, state: os._exit(0))
"""


def measure() -> list[tuple[float, str]]:
    """(value, note) of each goal."""
    with tempfile.TemporaryDirectory() as folder:
        environment = {key: value for key, value in os.environ.items() if not key.startswith("NUMBA")}
        environment["XDG_CACHE_HOME"] = folder
        Path(folder, "case.toml").write_text(case_of(20, "two-stage", 0.05, 0.05).text)
        command = [sys.executable, "-m", "gossan", "run", "case.toml", "--quiet"]
        first = _seconds(command, folder, environment)
        again = [_seconds([sys.executable, "-c", FIRST_STEP], folder, environment) for _ in range(TURNS)]
    return [(first, "one trial, the whole process"), (float(np.median(again)), f"least {min(again):.2f} s")]


def _seconds(command: list[str], folder: str, environment: dict[str, str]) -> float:
    begin = time.perf_counter()
    subprocess.run(command, cwd=folder, env=environment, check=True, capture_output=True)
    return time.perf_counter() - begin
