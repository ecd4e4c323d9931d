"""Microseconds of an equilibrium by size of the system, held and coupled, cold and warm.

    python tools/bench/sizes.py

Random waters of the wide battery, solved in one block from nothing, and again after a change of one per cent.
"""

from __future__ import annotations

import os
import sys
import time
from pathlib import Path

import numpy as np

ROOT = Path(__file__).resolve().parents[2]
if str(ROOT) not in sys.path:
    sys.path.insert(0, str(ROOT))

from tests.support.battery import scaled, wide_battery  # noqa: E402  (needs the path)

from gossan.chemistry.equilibrium import Solver  # noqa: E402
from gossan.chemistry.system import System, build_system  # noqa: E402
from gossan.constants.load import load_table  # noqa: E402

ELEVEN = ["H^+", "Na^+", "Ca^2+", "Mg^2+", "Fe^2+", "Cu^2+", "Zn^2+", "Cl^-", "SO4^2-", "CO3^2-", "HS^-"]
TWENTY = [*ELEVEN, "K^+", "Mn^2+", "Co^2+", "Ni^2+", "Cd^2+", "Pb^2+", "Al^3+", "H4SiO4", "NO3^-"]
THIRTY = [*TWENTY, "PO4^3-", "C2O4^2-", "B(OH)3", "Fe^3+", "Cu^+", "NH4^+", "CH3COO^-", "O2", "NO2^-", "N2"]
WATERS, SEED, TURNS = 400, 20261201, 3


def main() -> None:
    """Print a line for each size and kind of redox."""
    table = load_table()
    couples = [name for name, component in table.components.items() if component.couple]
    print("ions redox    components  basis  species  minerals  cold (us)  warm (us)  steps cold, warm")
    for ions in (ELEVEN, TWENTY, THIRTY):
        held = build_system(table, ions)
        place = [held.components.index(name) for name in ions]
        totals = wide_battery(SEED, WATERS, ions, held.mineral_stoichiometry[:, place])
        for redox, coupled in (("held", []), ("coupled", couples)):
            system = build_system(table, ions, coupled=coupled)
            print(line(len(ions), redox, system, ions, totals), flush=True)
    print(f"load of the last minute {os.getloadavg()[0]:.1f} on {os.cpu_count()} processors")


def line(count: int, redox: str, system: System, ions: list[str], totals: np.ndarray) -> str:
    """Solve the waters cold and warm, several times; the best time counts."""
    solver, ones = Solver(system), np.ones(len(totals))
    counted = totals @ system.conserved[[system.basis.index(name) for name in ions]]
    changed = scaled(counted, SEED)
    none = np.zeros((len(system.minerals), len(totals)))
    cold_seconds, warm_seconds = [], []
    for _ in range(TURNS + 1):  # the first loads what was compiled
        started = time.perf_counter()
        found = solver.cold(ones, counted.T, none)
        cold_seconds.append(time.perf_counter() - started)
        left = changed.T - system.mineral_stoichiometry.T @ found.solid
        started = time.perf_counter()
        warm = solver.settled(found, ones, left, found.solid)
        warm_seconds.append(time.perf_counter() - started)
    us = [1e6 * min(seconds[1:]) / len(totals) for seconds in (cold_seconds, warm_seconds)]
    sizes = (len(system.components), len(system.basis), len(system.species), len(system.minerals))
    steps = f"{np.median(found.steps):.0f}, {np.median(warm.steps):.0f}"
    columns = "".join(f"{size:{width}}" for size, width in zip(sizes, (11, 7, 9, 10), strict=True))
    return f"{count:4} {redox:8}{columns} {us[0]:10.0f} {us[1]:10.0f}  {steps}"


if __name__ == "__main__":
    main()
