"""What drives a column from one state on, until the next mark of its feeds."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

from gossan.constants.water import diffusion_ratio
from gossan.coupling.feeds import Push
from gossan.coupling.pores import flow
from gossan.coupling.problem import Problem
from gossan.coupling.state import State
from gossan.transport.faces import Faces, faces_of


def pore_volumes(problem: Problem, state: State) -> float:
    """Water that has entered over the water there was at the start (equations.md, 45)."""
    return float(state.water_passed[0].sum()) / problem.pore_volume


def clock(problem: Problem, state: State) -> float:
    """What the clock of the feeds shows: seconds, or pore volumes."""
    return problem.feeds.begins.clock(state.time, pore_volumes(problem, state))


def settled(problem: Problem, state: State) -> Problem:
    """The problem with the chemistry at the temperature that a state was left in (equations.md, 65).

    Where the temperature jumps, a state that stands at the jump still has the one before it.
    """
    return problem.at(problem.feeds.temperature_before(clock(problem, state)))


@dataclass(frozen=True, eq=False)
class Drive:
    """Water, flow and temperature of the steps from a state on; none may pass the next mark."""

    problem: Problem
    state: State

    @cached_property
    def now(self) -> float:
        """What the clock of the feeds shows."""
        return clock(self.problem, self.state)

    @cached_property
    def piece(self) -> int:
        """The piece of the feeds that goes on from here."""
        return self.problem.feeds.piece(self.now)

    @property
    def inflow(self) -> np.ndarray:
        """(solute,) mol m-3 of what enters at this instant."""
        return self.problem.feeds.at(self.problem.feeds.inflow, self.piece, self.now)

    @property
    def temperature(self) -> float:
        """K, from this instant on."""
        return self._number(self.problem.feeds.temperature, 0.0)

    @property
    def push(self) -> Push:
        """What drives the water at this instant."""
        return self._push(0.0)

    @property
    def ramps(self) -> bool:
        """Whether flow, or how well the bed conducts, changes by itself within a step."""
        feeds = self.problem.feeds
        courses = (feeds.darcy_flux, feeds.head_drop, feeds.temperature)
        return any(feeds.slope(values, self.piece) for values in courses)

    def flow(
        self, dt: float, span: float | None = None, water: np.ndarray | None = None
    ) -> tuple[np.ndarray, np.ndarray]:
        """Darcy flux (face,) m s-1 and head (face,) m, the mean over the next span, s; 0 for this instant.

        dt     s, within which water in excess of the pores leaves; also the span, where none is given
        water  (cell,) all water per bulk, which conductivities follow; default the state's
        """
        span = dt if span is None else span
        return flow(self.problem, self.state, dt, self._push(0.5 * span), water)

    def faces(self, darcy_flux: np.ndarray, span: float = 0.0, water: np.ndarray | None = None) -> Faces:
        """The faces of the column, as warm as it is on the mean over the next span, s; 0 for this instant.

        darcy_flux  (face,) m s-1
        water       (cell,) flowing water per bulk; default the state's
        """
        water = self.state.water if water is None else water
        warmth = diffusion_ratio(self._push(0.5 * span).temperature, self.problem.reference_temperature)
        return faces_of(self.problem.transport, water, darcy_flux, warmth)

    def rise(self, dt: float) -> float:
        """How fast the Darcy flux through the inlet changes, m s-2; dt as in `flow`."""
        if not self.ramps:
            return 0.0
        # straight where a head changes, so that any span tells; nearly so where the temperature does
        first, mean = (float(self.flow(dt, span)[0][0]) for span in (0.0, dt))
        return (mean - first) / (0.5 * dt)

    def mean_inflow(self, dt: float, inlet: tuple[float, float]) -> np.ndarray:
        """(solute,) mol m-3: what enters in a step of dt over the water that does (equations.md, 64).

        inlet  its Darcy flux at this instant, m s-1, and how fast that changes, m s-2
        """
        feeds, (flux, rise) = self.problem.feeds, inlet
        start, end = self.inflow, feeds.at(feeds.inflow, self.piece, self._after(dt, inlet))
        if feeds.begins.by_volume:
            return 0.5 * (start + end)
        last = flux + rise * dt
        share = 0.5
        if flux + last > 0.0:
            share = min(max((flux + 2.0 * last) / (3.0 * (flux + last)), 0.0), 1.0)
        return (1.0 - share) * start + share * end

    def temperature_after(self, dt: float, inlet: tuple[float, float]) -> float:
        """K, at the end of a step."""
        feeds = self.problem.feeds
        return float(feeds.at(feeds.temperature, self.piece, self._after(dt, inlet)))

    def _after(self, dt: float, inlet: tuple[float, float]) -> float:
        """What the clock shows after dt."""
        if not self.problem.feeds.begins.by_volume:
            return self.now + dt
        return self.now + dt * (inlet[0] + 0.5 * inlet[1] * dt) / self.problem.pore_volume

    def _push(self, later: float) -> Push:
        feeds = self.problem.feeds
        # flow changes between marks only where the clock is time: a share of a volume would need the flux
        courses = (feeds.darcy_flux, feeds.head_drop, feeds.temperature)
        return Push(*(self._number(values, later) for values in courses))

    def _number(self, values: np.ndarray, later: float) -> float:
        feeds = self.problem.feeds
        if feeds.begins.by_volume:
            later = 0.0
        return float(feeds.at(values, self.piece, self.now + later))


def time_to_pass(volume: float, inlet: tuple[float, float]) -> float:
    """s, until a volume (m3 m-2, > 0) has passed the inlet; inf where it never will while this goes on.

    inlet  its flux, m s-1, and how fast it changes, m s-2

    >>> time_to_pass(8.0, (0.0, 1.0)), time_to_pass(8.0, (4.0, 0.0)), time_to_pass(8.0, (1.0, -0.5))
    (4.0, 2.0, inf)
    """
    flux, rise = inlet
    square = flux * flux + 2.0 * rise * volume
    if square < 0.0:
        return math.inf
    pace = flux + math.sqrt(square)
    return 2.0 * volume / pace if pace > 0.0 else math.inf


def at_once(settled: State, before: State) -> State:
    """A state that has settled anew in no time: what solids pushed out then goes on no longer."""
    still = settled.still
    if still is not None and before.still is not None:
        still = replace(still, swelling=before.still.swelling)
    return replace(settled, time=before.time, step=before.step, swelling=before.swelling, still=still)
