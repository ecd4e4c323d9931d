"""All that is fixed while a column runs."""

from __future__ import annotations

from dataclasses import dataclass
from functools import cached_property

import numpy as np

from gossan.chemistry.system import System
from gossan.coupling.schedule import Schedule
from gossan.coupling.state import State
from gossan.transport.clogging import Clogging
from gossan.transport.faces import Transport
from gossan.transport.grid import Grid

CLOGGED = 1e-3  # porosity at which any cell counts as closed
MOLAR_MASS_OF_WATER = 0.018015  # kg/mol; IUPAC standard atomic weights (2021)


@dataclass(frozen=True, slots=True)
class Port:
    """Where the water is sampled: at a face of the grid."""

    name: str
    face: int
    x: float  # m, of that face


@dataclass(frozen=True, eq=False)
class Problem:
    """A column, its chemistry, what flows in and when things are recorded."""

    system: System
    tracers: tuple[str, ...]
    transport: Transport
    inflow: np.ndarray  # (feed, solute) mol m-3 of water
    feeds: Schedule  # when each begins
    inlet_flux: float | None  # m s-1, or
    head_drop: float | None  # m
    conductivity: np.ndarray  # (cell,) m s-1 of the clean bed, NaN where it is not known
    clogging: tuple[Clogging, ...]  # of each layer
    porosity: np.ndarray  # (cell,) water-filled fraction at the start
    initial: State
    end: Schedule
    frames: Schedule
    records: Schedule
    ports: tuple[Port, ...]
    coupling: str  # "two-stage" or "lie"
    accuracy: float
    max_courant: float

    @property
    def grid(self) -> Grid:
        """The cells."""
        return self.transport.grid

    @property
    def solutes(self) -> tuple[str, ...]:
        """What is carried: components, then tracers."""
        return (*self.system.components, *self.tracers)

    @property
    def chemical(self) -> int:
        """How many of the solutes are components of the chemistry."""
        return len(self.system.components)

    @cached_property
    def gates(self) -> np.ndarray:
        """Faces whose passages are summed: inlet, outlet, then each port."""
        return np.array([0, len(self.grid.width), *(port.face for port in self.ports)])

    def stored(self, state: State) -> np.ndarray:
        """(solute,) mol m-2 of cross-section: dissolved and solid in the whole column."""
        held = state.dissolved * state.water
        held[: self.chemical] += self.system.mineral_stoichiometry.T @ state.solid
        return held @ self.grid.width

    @cached_property
    def stock(self) -> np.ndarray:
        """(solute,) mol m-2: what the column held at the start, every mole counted without its sign."""
        held = np.abs(self.initial.dissolved) * self.initial.water
        held[: self.chemical] += np.abs(self.system.mineral_stoichiometry).T @ self.initial.solid
        return held @ self.grid.width

    @cached_property
    def closing(self) -> np.ndarray:
        """(cell,) porosity at which a cell counts as closed: next to none, or its law's critical one."""
        critical = np.array([c.critical_porosity if c.law == "threshold" else 0.0 for c in self.clogging])
        return np.maximum(CLOGGED, critical[self.grid.layer] * (1.0 + 1e-9))

    @cached_property
    def pore_volume(self) -> float:
        """Water in the column at the start, m3 per m2 of cross-section."""
        return float(np.sum(self.porosity * self.grid.width))

    @cached_property
    def volume_of_water(self) -> float:
        """m3 per mol of H2O."""
        return MOLAR_MASS_OF_WATER / self.system.water_density
