"""How well the cells of a column meet the equations of their equilibrium."""

from __future__ import annotations

import numpy as np

from gossan.chemistry.certificate import Certificate, certify
from gossan.coupling.problem import Problem
from gossan.coupling.state import State
from gossan.coupling.waters import equilibrium_of


def certify_state(problem: Problem, state: State) -> Certificate:
    """Judge the flowing water of every cell, as the state holds it, in doubled precision.

    A cell that was left alone in the last step answers for the equilibrium before it.
    """
    kilograms = np.full(len(state.water), problem.system.water_density)
    return certify(equilibrium_of(problem, state), kilograms)
