"""A march of dissolved solutes alone, without chemistry: the two-stage step, nothing else."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass

import numpy as np

from gossan.transport.faces import Faces, Transport, faces_of
from gossan.transport.step import DAMPING, corrected, passages


@dataclass
class Column:
    """A column on its way, and what has passed each face so far."""

    transport: Transport
    water: np.ndarray
    darcy_flux: np.ndarray
    dissolved: np.ndarray
    time: float = 0.0
    passed: np.ndarray | None = None

    @property
    def faces(self) -> Faces:
        """At this moment."""
        return faces_of(self.transport, self.water, self.darcy_flux)

    @property
    def explicit_limit(self) -> float:
        """The longest explicit step, s."""
        return self.faces.explicit_limit

    def at_courant(self, number: float) -> float:
        """The step, s, that has this Courant number."""
        return number / self.faces.fastest

    def step(self, inflow: np.ndarray, dt: float, theta: float | None) -> None:
        """One two-stage step."""
        width = self.transport.grid.width
        amount = self.water * self.dissolved
        first = passages(self.faces, self.dissolved, inflow, dt, theta)
        predicted = (amount + net(first.passed) / width) / self.water
        passed = corrected(first, self.dissolved, predicted)
        self.dissolved = (amount + net(passed) / width) / self.water
        self.passed = passed if self.passed is None else self.passed + passed
        self.time += dt

    def flux_averaged(self, inflow: np.ndarray) -> np.ndarray:
        """What a port at each face would meet at this moment, (solute, face) mol m-3."""
        return passages(self.faces, self.dissolved, inflow, 1.0).passed / self.darcy_flux

    def resident(self, inflow: np.ndarray, face: int) -> np.ndarray:
        """What stands in the pores at a face, (solute,) mol m-3."""
        through = passages(self.faces, self.dissolved, inflow, 1.0).passed[:, face]
        return self.faces.resident(self.dissolved, inflow, through, face)

    def run_to(self, time: float, inflow: np.ndarray, dt: float, implicit: bool = False) -> None:
        """Even steps of at most dt to a time."""
        steps = max(1, int(np.ceil((time - self.time) / dt - 1e-9)))
        length = (time - self.time) / steps
        for _ in range(steps):
            self.step(inflow, length, DAMPING if implicit else None)


def net(passed: np.ndarray) -> np.ndarray:
    """In less out, (solute, cell) mol m-2."""
    return passed[:, :-1] - passed[:, 1:]


def started(
    transport: Transport,
    darcy_flux: float,
    water: float | np.ndarray,
    solutes: int = 1,
    initial: Callable[[np.ndarray], np.ndarray] = np.zeros_like,
) -> Column:
    """An empty column, or one that starts from `initial` at the cell centres, under one Darcy flux."""
    grid = transport.grid
    cells = grid.width.size
    dissolved = np.tile(initial(grid.centres), (solutes, 1))
    return Column(transport, water * np.ones(cells), np.full(cells + 1, darcy_flux), dissolved)
