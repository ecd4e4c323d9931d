"""Solids to pores: porosity, the conductivity it leaves, the water pushed about (equations.md, 31-34)."""

from __future__ import annotations

import numpy as np

from gossan.constants.water import fluidity_ratio
from gossan.coupling.feeds import Push
from gossan.coupling.problem import Problem
from gossan.coupling.state import State, StillWater
from gossan.transport.clogging import conductivity_left
from gossan.transport.flow import flow_of_flux, flow_of_head

NEARLY_CLOSED = 1e-30  # m/s: so that a closed cell still has a head


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


def pore_room(problem: Problem, state: State) -> np.ndarray:
    """(cell,) m3 m-3: what is left before flowing or immobile pores count as closed."""
    room = pore_space(problem, state.solid) - problem.closing * (1.0 - problem.immobile_fraction)
    if state.still is not None and problem.stagnant is not None:
        cells, fraction = problem.stagnant.cells, problem.stagnant.fraction
        still = still_pore_space(problem, state.still.solid) - problem.closing[cells] * fraction
        room[cells] = np.minimum(room[cells], still)
    return room


def conductivity(problem: Problem, water: np.ndarray, temperature: float) -> np.ndarray:
    """(cell,) m s-1: saturated hydraulic conductivity of the bed.

    water (cell,), all there is per bulk; temperature K
    """
    left = conductivity_left(problem.clogging, problem.grid.layer, water, problem.porosity)
    return problem.conductivity * (left * fluidity_ratio(temperature, problem.reference_temperature))


def flow(problem: Problem, state: State, dt: float, push: Push) -> tuple[np.ndarray, np.ndarray]:
    """Darcy flux and head at every face for the coming step: (face,) m s-1, (face,) m.

    What the solids pushed out in the last step they are taken to push out in this one, and what is now in
    excess of the pores leaves within dt: so water and pores agree to second order in dt and never drift.
    """
    excess = (state.water - pore_space(problem, state.solid)) / dt + state.swelling
    if state.still is not None:
        excess = problem.whole(excess, squeezed(problem, state.still, dt))
    made_up = np.concatenate([[0.0], np.cumsum(excess * problem.grid.width)])
    conductivities = np.maximum(conductivity(problem, problem.water(state), push.temperature), NEARLY_CLOSED)
    if push.head_drop == push.head_drop:
        return flow_of_head(push.head_drop, conductivities, problem.grid.width, made_up)
    return flow_of_flux(push.darcy_flux, conductivities, problem.grid.width, made_up)
