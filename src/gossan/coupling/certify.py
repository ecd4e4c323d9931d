"""How well the cells of a column meet the equations of their equilibrium."""

from __future__ import annotations

import numpy as np

from gossan.chemistry.certificate import Certificate, certify
from gossan.chemistry.equilibrium import Equilibrium
from gossan.coupling.problem import Problem
from gossan.coupling.state import State


def certify_state(problem: Problem, state: State) -> Certificate:
    """Judge the flowing water of every cell, as the state holds it, in doubled precision.

    A cell that was left alone in the last step answers for the equilibrium before it.
    """
    system, cells = problem.system, len(state.water)
    found = Equilibrium(
        system=system,
        amount=state.dissolved[: problem.chemical],
        solid=state.solid,
        presence=state.presence,
        ln_activity=state.ln_activity,
        ionic_strength=state.ionic_strength,
        solved=state.solved,
        steps=np.zeros(cells, np.int64),
        given=np.zeros((len(system.open_gases), cells)),
        seen=state.seen,
    )
    return certify(found, np.full(cells, system.water_density))
