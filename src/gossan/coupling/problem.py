"""All that is fixed while a column runs."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from gossan.chemistry.decay import Decay
from gossan.chemistry.isotherm import Isotherms
from gossan.chemistry.system import System
from gossan.coupling.feeds import Feeds
from gossan.coupling.schedule import Schedule
from gossan.coupling.state import State
from gossan.transport.clogging import Clogging
from gossan.transport.faces import Transport
from gossan.transport.grid import Grid

CLOGGED = 1e-3  # porosity at which any cell counts as full
MOLAR_MASS_OF_WATER = 0.018015  # kg/mol; IUPAC standard atomic weights (2021)


@dataclass(frozen=True, slots=True)
class Port:
    """Where the water is sampled: at a face of the grid."""

    name: str
    face: int
    x: float  # m, of that face


@dataclass(frozen=True, slots=True)
class Watched:
    """A limit at a port: of the flux-averaged concentration of a solute, or of pH."""

    port: int  # which of the ports
    solute: int  # -1: pH
    low: float  # mol m-3; of pH 1
    high: float


@dataclass(frozen=True, eq=False)
class Stagnant:
    """The immobile water of a column."""

    cells: np.ndarray  # (still,) int, rising: the cells that have some
    fraction: np.ndarray  # (still,) of the pores
    solids: np.ndarray  # (still,) of the solids that water reaches
    transfer: np.ndarray  # (still,) s-1, exchange per bulk volume and difference of concentration


@dataclass(frozen=True, eq=False)
class Problem:
    """A column, its chemistry, what flows in and when things are recorded."""

    system: System  # at the temperature of the moment, see `at`
    tracers: tuple[str, ...]
    transport: Transport
    feeds: Feeds
    system_at: Callable[[float], System]  # the same substances at another temperature, K
    reference_temperature: float  # K, at which conductivity and diffusion in the water are as given
    conductivity: np.ndarray  # (cell,) m s-1 of the clean bed, NaN where it is not known
    clogging: tuple[Clogging, ...]  # of each layer
    porosity: np.ndarray  # (cell,) water-filled fraction at the start, immobile water included
    initial: State
    end: Schedule
    frames: Schedule
    records: Schedule
    ports: tuple[Port, ...]
    coupling: str  # one of `splitting.SCHEMES`
    accuracy: float
    max_courant: float
    watched: tuple[Watched, ...] = ()
    errors_carried: bool = True  # whether a shadow walks beside the column
    decay: Decay | None = None
    isotherms: Isotherms | None = None  # of the whole solid
    stagnant: Stagnant | None = None
    settled_in: System | None = None  # in which a step's first state was, where that is not `system`

    def at(self, temperature: float, before: Problem | None = None) -> Problem:
        """The same problem with its chemistry at a temperature, K.

        before  how it was for the state that a step begins with; without, as it will be
        """
        system = self.system if temperature == self.system.temperature else self.system_at(temperature)
        settled_in = before.system if before is not None and before.system is not system else None
        if system is self.system and settled_in is self.settled_in:
            return self
        return replace(self, system=system, settled_in=settled_in)

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

    @property
    def sorbates(self) -> np.ndarray:
        """(sorbate,) int: the solutes that sorb by an isotherm."""
        return self.isotherms.solutes if self.isotherms else np.zeros(0, int)

    @cached_property
    def flowing_isotherms(self) -> Isotherms | None:
        """The laws of what flowing water reaches."""
        if self.stagnant is None or self.isotherms is None:
            return self.isotherms
        return self.isotherms.shared(1.0 - self._share(self.stagnant.solids))

    @cached_property
    def still_isotherms(self) -> Isotherms | None:
        """The laws of what immobile water reaches, in the cells that have some."""
        if self.stagnant is None or self.isotherms is None:
            return None
        return self.isotherms.at(self.stagnant.cells).shared(self.stagnant.solids)

    @cached_property
    def immobile_fraction(self) -> np.ndarray:
        """(cell,) of the pores at the start."""
        return self._share(self.stagnant.fraction) if self.stagnant else np.zeros(len(self.porosity))

    def _share(self, still: np.ndarray) -> np.ndarray:
        share = np.zeros(len(self.porosity))
        if self.stagnant is not None:
            share[self.stagnant.cells] = still
        return share

    @cached_property
    def flowing_porosity(self) -> np.ndarray:
        """(cell,) pores that water flows through, at the start."""
        return self.porosity * (1.0 - self.immobile_fraction)

    def whole(self, flowing: np.ndarray, still: np.ndarray | None) -> np.ndarray:
        """(..., cell): amounts per bulk in flowing water and what it reaches, immobile ones added."""
        if self.stagnant is None or still is None:
            return flowing
        both = flowing.copy()
        both[..., self.stagnant.cells] += still
        return both

    def water(self, state: State) -> np.ndarray:
        """(cell,) all water per bulk."""
        return self.whole(state.water, state.still.water if state.still else None)

    def solid(self, state: State) -> np.ndarray:
        """(mineral, cell) mol m-3 of bulk, all there is."""
        return self.whole(state.solid, state.still.solid if state.still else None)

    def sorbed(self, state: State) -> np.ndarray:
        """(sorbate, cell) mol m-3 of bulk, all there is."""
        return self.whole(state.sorbed, state.still.sorbed if state.still else None)

    def stored(self, state: State) -> np.ndarray:
        """(solute,) mol m-2 of cross-section: dissolved, sorbed and solid in the whole column."""
        return self.amounts(state) @ self.grid.width

    def amounts(self, state: State) -> np.ndarray:
        """(solute, cell) mol m-3 of bulk: dissolved, sorbed and solid in every cell."""
        return self._held(state, self.system.mineral_stoichiometry, lambda amount: amount)

    @cached_property
    def stock(self) -> np.ndarray:
        """(solute,) mol m-2: what the column held at the start, every mole counted without its sign."""
        formulas = np.abs(self.system.mineral_stoichiometry)
        return self._held(self.initial, formulas, np.abs) @ self.grid.width

    def _held(
        self, state: State, formulas: np.ndarray, counted: Callable[[np.ndarray], np.ndarray]
    ) -> np.ndarray:
        held = counted(state.dissolved) * state.water
        if state.still is not None:
            held = self.whole(held, counted(state.still.dissolved) * state.still.water)
        held[self.sorbates] += self.sorbed(state)
        held[: self.chemical] += formulas.T @ self.solid(state)
        return held

    @cached_property
    def closing(self) -> np.ndarray:
        """(cell,) porosity at which a cell lets no water through: next to none, or its law's critical one."""
        critical = np.array([clogging.closes_at for clogging in self.clogging])
        return np.maximum(CLOGGED, critical[self.grid.layer] * (1.0 + 1e-9))

    @cached_property
    def pore_volume(self) -> float:
        """Water in the column at the start, immobile water included, m3 per m2 of cross-section."""
        return float(np.sum(self.porosity * self.grid.width))

    @cached_property
    def volume_of_water(self) -> float:
        """m3 per mol of H2O."""
        return MOLAR_MASS_OF_WATER / self.system.water_density
