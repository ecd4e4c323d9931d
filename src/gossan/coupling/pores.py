"""Solids to pores: porosity, the conductivity it leaves, the water pushed about (equations.md, 31-34)."""

from __future__ import annotations

import numpy as np

from gossan.constants.water import fluidity_ratio
from gossan.coupling.feeds import Push
from gossan.coupling.problem import CLOGGED, Problem
from gossan.coupling.state import State, StillWater
from gossan.transport.clogging import conductivity_left
from gossan.transport.flow import flow_of_flux, flow_of_head

NEARLY_CLOSED = 1e-30  # m/s: so that a closed cell still has a head
LANDING = 1e-6  # m3 m-3: with so little room left a pore has closed
CLOSED = 1e-3  # of the clean bed's conductivity: below, a flow that turns back is none


def pore_space(problem: Problem, solid: np.ndarray) -> np.ndarray:
    """(cell,) m3 m-3: what solids leave of the bulk for flowing water.

    solid (mineral, cell) mol m-3 of bulk, what flowing water reaches
    """
    grown = solid - problem.initial.solid
    return problem.flowing_porosity - problem.system.molar_volume @ grown


def still_pore_space(problem: Problem, solid: np.ndarray) -> np.ndarray:
    """(still,) m3 m-3: what solids leave for immobile water, each water having a share of them of its own."""
    assert problem.stagnant is not None
    assert problem.initial.still is not None
    first = problem.porosity[problem.stagnant.cells] * problem.stagnant.fraction
    return first - problem.system.molar_volume @ (solid - problem.initial.still.solid)


def squeezed(problem: Problem, still: StillWater, dt: float) -> np.ndarray:
    """(still,) s-1: water per bulk that solids squeeze out of immobile pores (equations.md, 59)."""
    return (still.water - still_pore_space(problem, still.solid)) / dt + still.swelling


def pore_room(problem: Problem, state: State, push: Push) -> np.ndarray:
    """(cell,) m3 m-3: what is left before flowing or immobile pores count as closed.

    A held flux ends where its law lets nothing through any more; a held head only where a cell is full: until
    then the column goes on without flow.
    """
    closing = problem.closing if is_held(push.darcy_flux) else np.full_like(problem.closing, CLOGGED)
    room = pore_space(problem, state.solid) - closing * (1.0 - problem.immobile_fraction)
    if state.still is not None and problem.stagnant is not None:
        cells, fraction = problem.stagnant.cells, problem.stagnant.fraction
        still = still_pore_space(problem, state.still.solid) - closing[cells] * fraction
        room[cells] = np.minimum(room[cells], still)
    return room


def share_to_close(room: np.ndarray, beyond: np.ndarray) -> float:
    """The share of a step after which the first pore closes, by straight lines (equations.md, 84).

    room, beyond  (cell,) m3 m-3, what was left before the step, > LANDING, and after it, somewhere < 0
    """
    closed = beyond < 0.0
    return float(np.min((room[closed] - 0.5 * LANDING) / (room[closed] - beyond[closed])))


def is_held(value: float) -> bool:
    """Whether one of the two that may drive a column is the one that is held; the other is NaN."""
    return value == value


def conductivity(problem: Problem, water: np.ndarray, temperature: float) -> np.ndarray:
    """(cell,) m s-1: saturated hydraulic conductivity of the bed.

    water (cell,), all there is per bulk; temperature K
    """
    left = conductivity_left(problem.clogging, problem.grid.layer, water, problem.porosity)
    return problem.conductivity * (left * fluidity_ratio(temperature, problem.reference_temperature))


def flow(
    problem: Problem, state: State, dt: float, push: Push, water: np.ndarray | None = None
) -> tuple[np.ndarray, np.ndarray]:
    """Darcy flux and head at every face for the coming step: (face,) m s-1, (face,) m.

    What the solids pushed out in the last step they are taken to push out in this one, and what is now in
    excess of the pores leaves within dt: so water and pores agree to second order in dt and never drift.
    water  (cell,) all there is per bulk, which conductivities follow; default the state's
    """
    excess = (state.water - pore_space(problem, state.solid)) / dt + state.swelling
    if state.still is not None:
        excess = problem.whole(excess, squeezed(problem, state.still, dt))
    made_up = np.concatenate([[0.0], np.cumsum(excess * problem.grid.width)])
    water = problem.water(state) if water is None else water
    conductivities = np.maximum(conductivity(problem, water, push.temperature), NEARLY_CLOSED)
    if is_held(push.head_drop):
        return _flow_of_head(problem, push.head_drop, conductivities, made_up)
    return flow_of_flux(push.darcy_flux, conductivities, problem.grid.width, made_up)


def _flow_of_head(
    problem: Problem, head_drop: float, conductivities: np.ndarray, made_up: np.ndarray
) -> tuple[np.ndarray, np.ndarray]:
    """Flux and head under a held head; where the bed has closed nothing enters (equations.md, 83).

    Solids that go on growing there would push water back through the inlet, more than the head drives in.
    That little leaves by the outlet instead, and the heads are those of still water.
    """
    width = problem.grid.width
    if conductivities.min() > NEARLY_CLOSED:
        darcy_flux, head = flow_of_head(head_drop, conductivities, width, made_up)
        if darcy_flux[0] >= 0.0 or _left_in_series(problem, conductivities) > CLOSED:
            return darcy_flux, head
    _, head = flow_of_head(head_drop, conductivities, width, np.zeros_like(made_up))
    return made_up, head


def _left_in_series(problem: Problem, conductivities: np.ndarray) -> float:
    """The conductivity of the whole column over that of the clean bed."""
    width = problem.grid.width
    return float(np.sum(width / problem.conductivity) / np.sum(width / conductivities))
