"""What a stage of a step leaves in one water: decay, isotherms and chemistry of what has arrived."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gossan.chemistry.decay import KeptByCell, decayed
from gossan.chemistry.equilibrium import Equilibrium, Solver
from gossan.chemistry.isotherm import Isotherms, shared_out
from gossan.coupling.problem import Problem
from gossan.coupling.sorbing import react
from gossan.coupling.state import State, StillWater


@dataclass(frozen=True, eq=False)
class Landed:
    """One water and its solids after a stage."""

    amount: np.ndarray  # (solute, cell) dissolved, mol m-3 of bulk
    sorbed: np.ndarray  # (sorbate, cell) mol m-3 of bulk
    made: np.ndarray | None  # (member, cell) mol m-3 of bulk, by decay; None where nothing decays
    found: Equilibrium
    water: np.ndarray  # (cell,) m3 m-3, with what solids freed
    freed: np.ndarray  # (cell,) m3 m-3 of that

    @property
    def dissolved(self) -> np.ndarray:
        """(solute, cell) mol m-3 of water."""
        return self.amount / self.water


def land(
    problem: Problem,
    solver: Solver,
    begun: State | StillWater,
    start: Equilibrium,
    guess: np.ndarray,
    isotherms: Isotherms | None,
    kept: KeptByCell | None,
    moved: np.ndarray,
    water: np.ndarray,
) -> Landed:
    """Let decay, isotherms and chemistry act on what transport and exchange have left in a water.

    begun     what the step began with; start the equilibrium from which to go on
    guess     (sorbate, cell) mol m-3 of bulk, what may come to be sorbed
    moved     (solute, cell) mol m-3 of bulk, dissolved after transport and exchange; changed in place
    water     (cell,) m3 m-3 after transport and exchange
    Raises    SolveError where a cell finds no equilibrium
    """
    chemical = problem.chemical
    sorbed, made = begun.sorbed, None
    if isotherms is not None or kept is not None:
        sorbed = sorbed.copy()
        made = _tracers(problem, begun, isotherms, kept, moved, sorbed, water)
    found = react(problem, solver, start, isotherms, moved[:chemical], sorbed, guess, begun.solid, water)
    moved[:chemical] = found.amount
    freed = -problem.volume_of_water * (problem.system.mineral_water @ (found.solid - begun.solid))
    return Landed(moved, sorbed, made, found, water + freed, freed)


def _tracers(
    problem: Problem, begun: State | StillWater, isotherms: Isotherms | None, kept: KeptByCell | None,
    moved: np.ndarray, sorbed: np.ndarray, water: np.ndarray,
) -> np.ndarray | None:
    """Decay and sorption of the tracers; moved and sorbed are changed in place, what decay made returned."""
    held = np.zeros_like(moved)
    held[problem.sorbates] = sorbed
    made = None
    if kept is not None and problem.decay is not None:
        members = problem.decay.solutes
        stock = begun.dissolved[members] * begun.water + held[members]
        left, made = decayed(kept, stock, moved[members] + held[members] - stock)
        moved[members] = left - held[members]
    if isotherms is not None:
        rows = np.flatnonzero(isotherms.solutes >= problem.chemical)
        which = isotherms.solutes[rows]
        moved[which], sorbed[rows] = shared_out(isotherms.of(rows), moved[which] + sorbed[rows], water)
    return made
