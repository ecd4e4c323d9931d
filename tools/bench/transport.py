"""What the transport kernels cost, as ratios inside one process: python tools/bench/transport.py

Explicit transport against a copy of the concentrations, between equal cells and growing ones; implicit steps
against scipy's banded solver with one right-hand side per solute. The least of many turns, each kernel next
to its yardstick, so that a busy machine disturbs both alike. Then a whole march against the method of lines
with scipy's stiff integrator, at equal error. With --cold, also how long the kernels take to compile.
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
from tools.bench.lines import print_lines

from gossan.transport.faces import faces_of, transport_of
from gossan.transport.grid import Layer, grid_of
from gossan.transport.kernel.advect import BLOCK, ROWS, carry
from gossan.transport.kernel.disperse import LANES, factor, spread, sweep, sweep_back
from gossan.transport.step import DAMPING, Passages, passages

SOLUTES = 11
FLUX = 1e-6  # m/s
SIZES = (100, 300, 1_000, 3_000, 10_000, 30_000, 100_000)


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


def column(cells: int, growth: float = 1.0) -> tuple[np.ndarray, Passages]:
    """Eleven solutes of one group, somewhere in the middle of a run, and a first stage of them."""
    grid = grid_of([Layer("sand", 1.0, cells, dispersivity=0.02, growth=growth)])
    transport = transport_of(grid, np.zeros(SOLUTES, dtype=np.int64))
    dissolved = np.random.default_rng(1).random((SOLUTES, cells))
    faces = faces_of(transport, np.full(cells, 0.4), np.full(cells + 1, FLUX))
    return dissolved, passages(faces, dissolved, np.ones(SOLUTES), 0.5 / faces.fastest, DAMPING)


def explicit_against_copy(cells: int, growth: float = 1.0) -> tuple[float, float]:
    """Seconds of one explicit evaluation, and of a copy."""
    dissolved, at = column(cells, growth)
    faces, bounds = at.faces, at.faces.transport.bounds
    out, copy, scratch = np.empty_like(at.passed), np.empty_like(dissolved), np.empty((ROWS, BLOCK + 1))
    kernel_time, copy_time = least(
        lambda: carry(dissolved, at.inflow, bounds, faces.darcy_flux, faces.conductance, at.slopes, at.outlet,
                      at.dt, scratch, out),
        lambda: np.copyto(copy, dissolved),
    )
    return kernel_time, copy_time


def implicit_against_banded(cells: int) -> tuple[float, float, float, float]:
    """Seconds of the solve with its passages, its substitutions alone, of factoring, and of scipy's solve."""
    dissolved, at = column(cells)
    faces, made, still = at.faces, at.elimination, np.zeros(cells)
    assert made is not None
    surplus, out = at.explicit.copy(), at.passed.copy()
    bands = np.zeros((3, cells))
    bands[0, 1:], bands[2, :-1] = -made.up[1:-1], -made.down[1:-1]
    bands[1] = faces.storage + made.up[:-1] + made.down[1:]
    right = np.ascontiguousarray((surplus[:, :-1] - surplus[:, 1:]).T)
    rows = np.zeros((LANES, cells))
    solve, alone, prepare, banded = least(
        lambda: spread(dissolved, still, surplus, made.down, made.up, made.inverse, made.lower, made.upper,
                       rows, out),
        lambda: (sweep(rows, made.lower, 0, cells), sweep_back(rows, made.upper, 0, cells)),
        lambda: factor(faces.storage, faces.conductance, np.zeros(cells + 1), at.dt, made.down, made.up,
                       made.inverse, made.lower, made.upper),
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
    parser.add_argument("--lines", action="store_true", help="only the march against the method of lines")
    asked = parser.parse_args()
    if not asked.lines:
        print(f"explicit, {SOLUTES} solutes of one group   ns per cell and solute")
        print(f"{'cells':>8} {'kernel':>8} {'growing':>8} {'copy':>8}   times copy: equal cells, growing")
        for cells in SIZES:
            here, copy = explicit_against_copy(cells)
            growing, _ = explicit_against_copy(cells, 10.0 ** (1.0 / cells))
            unit = 1e9 / (cells * SOLUTES)
            print(f"{cells:8} {here * unit:8.2f} {growing * unit:8.2f} {copy * unit:8.2f}"
                  f" {here / copy:21.2f} {growing / copy:8.2f}")
        print(f"\nimplicit, {SOLUTES} solutes   ns per cell and solute; factored once for both stages")
        head = f"{'cells':>8} {'solve':>8} {'sweeps':>8} {'factor':>8} {'banded':>8}"
        print(head + "   times faster: sweeps, solve, all")
        for cells in SIZES:
            solve, alone, prepare, banded = implicit_against_banded(cells)
            unit = 1e9 / (cells * SOLUTES)
            print(
                f"{cells:8} {solve * unit:8.2f} {alone * unit:8.2f} {prepare * unit:8.2f}"
                f" {banded * unit:8.2f} {banded / alone:24.1f} {banded / solve:6.1f}"
                f" {banded / (solve + prepare):4.1f}"
            )
    print_lines()
    if asked.cold:
        print(f"\ncompiled and stepped in {cold():.1f} s, nothing cached")


if __name__ == "__main__":
    main()
