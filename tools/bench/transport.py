"""What the transport kernels cost, as ratios inside one process: python tools/bench/transport.py

Explicit transport against a copy of the concentrations; implicit dispersion against scipy's banded solver
with one right-hand side per solute. The least of many turns, each kernel next to its yardstick, so that a
busy machine disturbs both alike. With --cold, also how long the kernels take to compile.
"""

from __future__ import annotations

import argparse
import os
import subprocess
import sys
import tempfile
import time
from collections.abc import Callable

import numpy as np
from scipy.linalg import solve_banded

from gossan.transport.grid import Layer, grid_of
from gossan.transport.kernel.advect import BLOCK, carry
from gossan.transport.kernel.disperse import LANES, factor, spread, sweep
from gossan.transport.step import Passages, Transport, passages, transport_of

SOLUTES = 11
FLUX = 1e-6  # m/s


def least(*calls: Callable[[], object], turns: int = 60, work: float = 0.01) -> list[float]:
    """The least seconds of each call, the calls taking turns."""
    for call in calls:
        call()
    begin = time.perf_counter()
    for call in calls:
        call()
    repeats = max(1, int(work / (time.perf_counter() - begin)))
    best = [float("inf")] * len(calls)
    for _ in range(turns):
        for number, call in enumerate(calls):
            begin = time.perf_counter()
            for _ in range(repeats):
                call()
            best[number] = min(best[number], (time.perf_counter() - begin) / repeats)
    return best


def column(cells: int) -> tuple[Transport, np.ndarray, np.ndarray, np.ndarray, Passages]:
    """A column with eleven solutes of one group, somewhere in the middle of a run."""
    grid = grid_of([Layer("sand", 1.0, cells, dispersivity=0.02)])
    transport = transport_of(grid, np.zeros(SOLUTES, dtype=np.int64))
    dissolved = np.random.default_rng(1).random((SOLUTES, cells))
    water, darcy_flux, inflow = np.full(cells, 0.4), np.full(cells + 1, FLUX), np.ones(SOLUTES)
    dt = 0.5 * 0.4 / cells / FLUX
    first = passages(transport, dissolved, water, darcy_flux, inflow, dt, 0.5)
    return transport, dissolved, water, darcy_flux, first


def explicit_against_copy(cells: int) -> tuple[float, float]:
    """Seconds of one explicit evaluation, and of a copy."""
    transport, dissolved, _, darcy_flux, at = column(cells)
    out, copy, scratch = np.empty_like(at.passed), np.empty_like(dissolved), np.empty((6, BLOCK + 1))
    kernel_time, copy_time = least(
        lambda: carry(dissolved, at.inflow, transport.bounds, darcy_flux, at.conductance, at.bias, at.slopes,
                      at.dt, scratch, out),
        lambda: np.copyto(copy, dissolved),
    )
    return kernel_time, copy_time


def implicit_against_banded(cells: int) -> tuple[float, float, float, float]:
    """Seconds of the solve with its passages, its substitutions alone, of factoring, and of scipy's solve."""
    transport, dissolved, water, _, at = column(cells)
    assert at.elimination is not None
    made, still, storage = at.elimination, np.zeros(cells), water * transport.grid.width
    surplus, out = at.explicit.copy(), at.passed.copy()
    bands = np.zeros((3, cells))
    bands[0, 1:] = bands[2, :-1] = -made.hold[1:-1]
    bands[1] = storage + made.hold[:-1] + made.hold[1:]
    right = np.ascontiguousarray((surplus[:, :-1] - surplus[:, 1:]).T)
    rows = np.zeros((LANES, cells))
    solve, alone, prepare, banded = least(
        lambda: spread(dissolved, still, surplus, made.hold, made.inverse, made.lower, made.upper, rows, out),
        lambda: sweep(rows, made.lower, made.upper),
        lambda: factor(storage, at.conductance, at.dt, made.hold, made.inverse, made.lower, made.upper),
        lambda: solve_banded((1, 1), bands, right),
        turns=20,
    )
    return solve, alone * -(-SOLUTES // LANES), prepare, banded


def cold() -> float:
    """Seconds from importing the modules to the end of a first step, with an empty cache of kernels."""
    code = (
        "import time; begin = time.perf_counter(); import runpy; "
        f"name = runpy.run_path({__file__!r}); name['column'](8); print(time.perf_counter() - begin)"
    )
    environment = {key: value for key, value in os.environ.items() if key != "NUMBA_CACHE_DIR"}
    with tempfile.TemporaryDirectory() as folder:
        done = subprocess.run([sys.executable, "-c", code], env=environment | {"XDG_CACHE_HOME": folder},
                              capture_output=True, text=True, check=True)
    return float(done.stdout)


def main() -> None:
    """Print the tables."""
    parser = argparse.ArgumentParser(description=__doc__.splitlines()[0])
    parser.add_argument("--cold", action="store_true", help="time the first compilation too")
    asked = parser.parse_args()
    print(f"explicit, {SOLUTES} solutes of one group   ns per cell and solute")
    print(f"{'cells':>8} {'kernel':>8} {'copy':>8} {'times copy':>11}")
    for cells in (200, 1_000, 10_000, 100_000):
        here, copy = explicit_against_copy(cells)
        unit = 1e9 / (cells * SOLUTES)
        print(f"{cells:8} {here * unit:8.2f} {copy * unit:8.2f} {here / copy:11.2f}")
    print(f"\nimplicit, {SOLUTES} solutes   ns per cell and solute; factoring is done once for both stages")
    head = f"{'cells':>8} {'solve':>8} {'sweeps':>8} {'factor':>8} {'banded':>8}"
    print(head + "   times faster: sweeps, solve, all")
    for cells in (200, 1_000, 10_000, 100_000):
        solve, alone, prepare, banded = implicit_against_banded(cells)
        unit = 1e9 / (cells * SOLUTES)
        print(
            f"{cells:8} {solve * unit:8.2f} {alone * unit:8.2f} {prepare * unit:8.2f} {banded * unit:8.2f}"
            f" {banded / alone:24.1f} {banded / solve:6.1f} {banded / (solve + prepare):4.1f}"
        )
    if asked.cold:
        print(f"\ncompiled and stepped in {cold():.1f} s, nothing cached")


if __name__ == "__main__":
    main()
