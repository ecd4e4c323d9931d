"""All that changes while a column runs."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np


@dataclass(frozen=True, slots=True)
class State:
    """The column at one time, with everything needed to go on bit for bit.

    Axes: solute = the system's components, then the tracers; component = the components alone.
    A State is never changed in place: a step makes a new one, and a rejected step is one nobody kept.
    Running sums come in pairs along their last axis: the sum, and what rounding lost of it.
    """

    time: float  # s
    step: int  # accepted steps so far
    dissolved: np.ndarray  # (solute, cell) mol m-3 of water, total dissolved
    solid: np.ndarray  # (mineral, cell) mol m-3 of bulk
    water: np.ndarray  # (cell,) water-filled fraction of the bulk, m3 m-3
    swelling: np.ndarray  # (cell,) s-1, water per bulk that the last step's solids pushed out
    # what the last equilibrium left: the next one starts from it
    ln_activity: np.ndarray  # (basis, cell) of the components and of the valences that are coupled, molal
    ionic_strength: np.ndarray  # (cell,) mol per kg of water
    presence: np.ndarray  # (mineral, cell) int8: 0 absent, 1 present, 2 full (may dissolve only, none lost)
    solved: np.ndarray  # (component, cell) mol per kg of water, dissolved after the last solve: the skip rule
    # since time 0
    passed: np.ndarray  # (gate, solute, 2) mol m-2 through the inlet, the outlet, then each port
    made: np.ndarray  # (solute, 2) mol m-2 that came from no water: what open gases gave
    water_passed: np.ndarray  # (3, 2) m: entered, left, freed by solids that dissolved less what they bound
    splitting_error: float  # running sum of the steps' error estimates, relative
