"""How well the cells of a column meet the equations of their equilibrium."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from gossan.chemistry.certificate import Certificate, certify
from gossan.coupling.problem import Problem
from gossan.coupling.state import State, StillWater
from gossan.coupling.waters import equilibrium_of


def certify_state(problem: Problem, water: State | StillWater) -> Certificate:
    """Judge the flowing water of every cell, or the immobile water, as its last solve left it.

    A cell that was left alone in the last step answers for the equilibrium before it. What solids free or
    bind of water after a solve is `diluted_since`, and no fault of the solve.
    """
    return certify(replace(equilibrium_of(problem, water), amount=water.solved))


def diluted_since(problem: Problem, water: State | StillWater) -> np.ndarray:
    """(cell,) 1: how far the amounts stored are from those of the last solve, relative."""
    stored = water.dissolved[: problem.chemical] / problem.system.water_density
    off = np.abs(stored - water.solved)
    return np.divide(off, np.abs(water.solved), out=np.zeros_like(off), where=water.solved != 0.0).max(axis=0)
