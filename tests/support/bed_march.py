"""A bed that a prescribed rate closes: the program's laws and heads, stepped by the midpoint rule."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from gossan.transport.clogging import Clogging, conductivity_left
from gossan.transport.flow import flow_of_flux, flow_of_head
from gossan.transport.grid import Grid


@dataclass
class ClosingBed:
    """Pores that close at a rate (cell,) s-1 of the Darcy flux (m s-1) that runs; one law in all cells.

    drive  ("flux", m s-1) or ("head", m)
    """

    grid: Grid
    porosity: np.ndarray
    clean: float  # m s-1
    law: Clogging
    drive: tuple[str, float]
    rate: Callable[[float], np.ndarray]
    time: float = 0.0

    def __post_init__(self) -> None:
        self.first = self.porosity.copy()

    def flow(self, porosity: np.ndarray) -> tuple[float, float]:
        """The Darcy flux, m s-1, and the loss of head, m."""
        left = conductivity_left([self.law], np.zeros(len(porosity), int), porosity, self.first)
        kind, value = self.drive
        solve = flow_of_flux if kind == "flux" else flow_of_head
        still = np.zeros(len(porosity) + 1)
        flux, head = solve(value, self.clean * left, self.grid.width, still)
        return float(flux[0]), float(head[0])

    def run_to(self, time: float, dt: float) -> tuple[float, float]:
        """Even steps of at most dt to a time; returns the flow there."""
        steps = max(1, int(np.ceil((time - self.time) / dt - 1e-9)))
        length = (time - self.time) / steps
        for _ in range(steps):
            halfway = self.porosity - 0.5 * length * self.rate(self.flow(self.porosity)[0])
            self.porosity = self.porosity - length * self.rate(self.flow(halfway)[0])
        self.time = time
        return self.flow(self.porosity)
