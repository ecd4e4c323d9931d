"""All that changes while a column runs."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np


@dataclass(frozen=True, slots=True)
class StillWater:
    """The immobile water of the cells that have some, and the solids that it reaches; axis still = those."""

    dissolved: np.ndarray  # (solute, still) mol m-3 of immobile water
    solid: np.ndarray  # (mineral, still) mol m-3 of bulk, the immobile water's share
    sorbed: np.ndarray  # (sorbate, still) mol m-3 of bulk, likewise
    water: np.ndarray  # (still,) immobile water per bulk, m3 m-3
    swelling: np.ndarray  # (still,) s-1, water per bulk that the last step's solids pushed out
    ln_activity: np.ndarray  # these five as in State
    ionic_strength: np.ndarray
    presence: np.ndarray
    solved: np.ndarray
    seen: np.ndarray


@dataclass(frozen=True, slots=True)
class State:
    """The column at one time, with everything needed to go on bit for bit.

    Axes: solute = the system's components, then the tracers; component = the components alone.
    A State is never changed in place: a step makes a new one, and a rejected step is one nobody kept.
    Running sums come in pairs along their last axis: the sum, and what rounding lost of it.
    """

    time: float  # s
    step: int  # accepted steps so far
    dissolved: np.ndarray  # (solute, cell) mol m-3 of flowing water, total dissolved
    solid: np.ndarray  # (mineral, cell) mol m-3 of bulk, what flowing water reaches
    sorbed: np.ndarray  # (sorbate, cell) mol m-3 of bulk, on what flowing water reaches
    water: np.ndarray  # (cell,) flowing water per bulk, m3 m-3
    swelling: np.ndarray  # (cell,) s-1, water per bulk that the last step's solids pushed out
    # what the last equilibrium left: the next one starts from it
    ln_activity: np.ndarray  # (basis, cell) of the components and of the valences that are coupled, molal
    ionic_strength: np.ndarray  # (cell,) mol per kg of water
    presence: np.ndarray  # (mineral, cell) int8: 0 absent, 1 present, 2 full (may dissolve only, none lost)
    solved: np.ndarray  # (component, cell) mol per kg of water, dissolved after the last solve: the skip rule
    seen: np.ndarray  # (species, cell) mol per kg of water: what SIT's sums were taken with; else no rows
    still: StillWater | None  # the immobile water, where a layer has some
    # since time 0
    passed: np.ndarray  # (gate, solute, 2) mol m-2 through the inlet, the outlet, then each port
    made: np.ndarray  # (solute, 2) mol m-2 that came from no water: grown less decayed, given by open gases
    water_passed: np.ndarray  # (3, 2) m: entered, left, freed by solids that dissolved less what they bound
    splitting_error: float  # running sum of the steps' error estimates, relative


def state_of(parts: dict[str, Any]) -> State:
    """The state that a checkpoint kept as a dict of its fields."""
    still = parts["still"]
    return State(**{**parts, "still": None if still is None else StillWater(**still)})
