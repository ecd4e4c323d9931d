"""Everything that must hold before a change is done: lint, types, tests, kernels with bounds checked.

    python tools/check.py

All parts are tried, whatever becomes of the others; leaves with 1 where one of them fails.
"""

from __future__ import annotations

import os
import subprocess
import sys
import time
from pathlib import Path

ROOT = Path(__file__).resolve().parents[1]
PYTEST = ("pytest", "-n", "2", "--dist", "loadfile")
KERNEL_TESTS = ("tests/chemistry/kernel", "tests/chemistry/test_equilibrium.py", "tests/transport")
PARTS: dict[str, tuple[tuple[str, ...], dict[str, str]]] = {
    "lint": (("ruff", "check"), {}),
    "types": (("mypy",), {}),
    "tests": (PYTEST, {}),
    "kernels with bounds checked": ((*PYTEST, *KERNEL_TESTS), {"NUMBA_BOUNDSCHECK": "1"}),
}


def main() -> int:
    """Try every part; returns 1 where one of them fails."""
    told = []
    for name, (words, switches) in PARTS.items():
        print(f"--- {name}: {' '.join(words)}", flush=True)
        started = time.perf_counter()
        ended = subprocess.run([sys.executable, "-m", *words], cwd=ROOT, env=os.environ | switches)
        told.append((name, ended.returncode == 0, time.perf_counter() - started))
    print("---")
    for name, good, seconds in told:
        print(f"{'ok    ' if good else 'FAILED'} {seconds:5.0f} s  {name}")
    return 0 if all(good for _, good, _ in told) else 1


if __name__ == "__main__":
    sys.exit(main())
