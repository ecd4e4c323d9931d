"""The battery's waters as the benchmark uses them: solved cold, and again after a change of one per cent."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np
from tests.support.battery import battery, scaled
from tools.battery.mixes import mine_system

from gossan.chemistry.equilibrium import Equilibrium, Solver
from gossan.chemistry.system import System

COPIES = 64  # of one water in a block, so that what a call costs in Python does not count


@dataclass(frozen=True)
class OneWater:
    """Many copies of one water, its equilibrium, and its totals a little changed."""

    solver: Solver
    total: np.ndarray  # (component,) mol/kg, minerals included
    changed: np.ndarray  # (component,) the same, scaled
    found: Equilibrium  # of total, COPIES cells

    def cold(self) -> Equilibrium:
        """Solve the copies from nothing."""
        return self.solver.cold(np.ones(COPIES), _copies(self.total), np.zeros_like(self.found.solid))

    def warm(self) -> Equilibrium:
        """Solve the changed copies from the earlier answer."""
        dissolved = self.changed - self.found.system.mineral_stoichiometry.T @ self.found.solid[:, 0]
        return self.solver.settled(self.found, np.ones(COPIES), _copies(dissolved), self.found.solid)

    def minerals(self) -> int:
        """How many are present."""
        return int(np.count_nonzero(self.found.presence[:, 0]))


def some_waters(count: int, seed: int = 20261201) -> tuple[System, list[OneWater]]:
    """The first waters of the battery."""
    system = mine_system("davies")
    solver = Solver(system)
    totals = battery(seed, count)
    made = []
    for total, changed in zip(totals, scaled(totals, seed), strict=True):
        empty = np.zeros((len(system.minerals), COPIES))
        made.append(OneWater(solver, total, changed, solver.cold(np.ones(COPIES), _copies(total), empty)))
    return system, made


def _copies(amount: np.ndarray) -> np.ndarray:
    return np.repeat(amount[:, None], COPIES, axis=1)
