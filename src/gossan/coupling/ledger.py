"""What entered, left and stayed: the books of every solute, of charge and of water."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gossan.coupling.problem import Problem
from gossan.coupling.state import State


@dataclass(frozen=True, eq=False)
class Ledger:
    """The books at one time; error = (entered - left - stored + made) / the largest amount there ever was."""

    time: float
    entered: np.ndarray  # (solute,) mol m-2
    left: np.ndarray
    stored: np.ndarray  # since the start
    made: np.ndarray
    error: np.ndarray  # (solute,) relative
    water_error: float
    charge_error: float


class Books:
    """Closes the ledger of states of one problem, whose first stock is counted once."""

    def __init__(self, problem: Problem):
        self.problem = problem
        self.first = problem.stored(problem.initial)
        self.first_water = float(np.sum(problem.water(problem.initial) * problem.grid.width))

    def closed(self, state: State) -> Ledger:
        """The ledger of a state (equations.md, 39)."""
        problem = self.problem
        now = problem.stored(state)
        entered, left = state.passed[:2].sum(axis=-1)
        made = state.made.sum(axis=-1)
        change = now - self.first
        open_ = entered - left - change + made
        back = np.maximum(-left, 0.0)  # what diffused in through the outlet
        most = problem.stock + np.abs(entered) + back + np.abs(made)
        error = np.divide(open_, most, out=np.zeros_like(open_), where=most > 0.0)
        charge = problem.system.component_charge
        chemical = problem.chemical
        charges = float(np.abs(charge) @ most[:chemical])
        water_in, water_out, freed = state.water_passed.sum(axis=-1).tolist()
        water_now = float(np.sum(problem.water(state) * problem.grid.width))
        water_open = water_in - water_out + freed - (water_now - self.first_water)
        return Ledger(
            time=state.time,
            entered=entered,
            left=left,
            stored=change,
            made=made,
            error=error,
            water_error=water_open / (self.first_water + abs(water_in)),
            charge_error=float(charge @ open_[:chemical]) / charges if charges else 0.0,
        )
