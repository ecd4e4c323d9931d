"""One stage of a step in the flowing water and, where there is some, in the immobile water beside it."""

from __future__ import annotations

from dataclasses import dataclass, replace
from typing import Any

import numpy as np

from gossan.chemistry.decay import KeptByCell
from gossan.chemistry.equilibrium import Equilibrium, Solver
from gossan.coupling.landing import Landed, land
from gossan.coupling.pores import squeezed
from gossan.coupling.problem import Problem
from gossan.coupling.state import State, StillWater
from gossan.transport.immobile import exchanged

# mol m-3 of bulk: what is washed out decays for ever, and numbers near the end of their range are slow
NO_ATOM = 1e-45


@dataclass(frozen=True, eq=False)
class Stage:
    """Where a stage of a step led; still and the two (solute, still) arrays only with immobile water."""

    flowing: Landed
    still: Landed | None = None
    arriving: np.ndarray | None = None  # mol m-3 of bulk that changed the flowing concentration
    exchange: np.ndarray | None = None  # mol m-3 of bulk that went from flowing to immobile water


class Waters:
    """The waters of a column at the start of a step, and what the stages of the step make of them."""

    def __init__(
        self, problem: Problem, solver: Solver, state: State, darcy_flux: np.ndarray, dt: float,
        rates: float | None = None, kept: KeptByCell | None = None,
    ):  # fmt: skip
        """Take up the waters of a state.

        darcy_flux (face,) m s-1, for dt, s, in which solids squeeze water out; 0: nothing moves
        rates      s, for how long decay and exchange go on; default dt
        kept       what decay leaves; default: of rates, of what was there and of what arrives evenly
        """
        self.problem, self.solver, self.state = problem, solver, state
        rates = dt if rates is None else rates
        self.kept = kept
        if kept is None and problem.decay is not None:
            self.kept = problem.decay.over(rates)
        self.amount = state.dissolved * state.water
        self.water = state.water + dt * (darcy_flux[:-1] - darcy_flux[1:]) / problem.grid.width
        self.beside = None
        if state.still is not None:
            self.beside = Beside(problem, state, self.water, dt, rates)
            self.water = self.beside.water

    def foreseen(self) -> np.ndarray | None:
        """(solute, cell) mol m-2 that decay and exchange will make in flowing water, None without either."""
        problem, width = self.problem, self.problem.grid.width
        if self.kept is None and self.beside is None:
            return None
        made = np.zeros_like(self.amount)
        if self.beside is not None:
            _, exchange = self.beside.exchange(self.amount, None)
            made[:, self.beside.cells] -= exchange * width[self.beside.cells]
        if self.kept is not None and problem.decay is not None:
            members = problem.decay.solutes
            stock = self.amount.copy()
            stock[problem.sorbates] += self.state.sorbed
            made[members] += (self.kept.alone(stock[members]) - stock[members]) * width
        return made

    def stage(
        self, passed: np.ndarray, before: Stage | None = None, more: np.ndarray | None = None
    ) -> Stage:
        """What passages (solute, face) mol m-2 of the whole step lead to; before is the first stage.

        more     (solute, still) mol m-3 of bulk that go on into immobile water besides
        Raises   SolveError where a cell finds no equilibrium
        """
        problem, state, beside = self.problem, self.state, self.beside
        moved = self.amount + net(passed) / problem.grid.width
        arriving = exchange = None
        if beside is not None:
            arriving, exchange = beside.exchange(moved, before)
            if more is not None:
                exchange = exchange + more
            moved[:, beside.cells] -= exchange
        moved[np.abs(moved) < NO_ATOM] = 0.0
        start = before.flowing.found if before else equilibrium_of(problem, state)
        guess = before.flowing.sorbed if before else state.sorbed
        laws = problem.flowing_isotherms
        flowing = land(problem, self.solver, state, start, guess, laws, self.kept, moved, self.water)
        if beside is None or exchange is None:
            return Stage(flowing)
        still = beside.still
        moved = still.dissolved * still.water + exchange
        moved[np.abs(moved) < NO_ATOM] = 0.0
        start = before.still.found if before and before.still else equilibrium_of(problem, still)
        guess = before.still.sorbed if before and before.still else still.sorbed
        laws = problem.still_isotherms
        kept = self.kept.at(beside.cells) if self.kept else None
        landed = land(problem, self.solver, still, start, guess, laws, kept, moved, beside.still_water)
        return Stage(flowing, landed, arriving, exchange)

    def difference(self, first: Stage, passed: np.ndarray, more: np.ndarray) -> np.ndarray:
        """(solute, cells of both waters) mol m-2: how far the second stage is from the first.

        passed (solute, face) mol m-2 of the second stage; more (solute, face), how far it is from the first's
        """
        change = net(more)
        if self.beside is None or first.exchange is None:
            return change
        width = self.problem.grid.width
        _, exchange = self.beside.exchange(self.amount + net(passed) / width, first)
        gone = (exchange - first.exchange) * width[self.beside.cells]
        change[:, self.beside.cells] -= gone
        return np.concatenate([change, gone], axis=1)

    def made(self, stage: Stage) -> np.ndarray:
        """(solute,) mol m-2: grown less decayed, and given by open gases, in both waters."""
        problem, width = self.problem, self.problem.grid.width
        total = _made(problem, stage.flowing, width, len(self.amount))
        if self.beside is not None and stage.still is not None:
            total += _made(problem, stage.still, width[self.beside.cells], len(total))
        return total

    def after(self, stage: Stage) -> State:
        """The state that a stage leaves, with the time and the sums of the one that it began with."""
        state, still = self.state, self.state.still
        if still is not None and stage.still is not None:
            still = replace(still, **_left(stage.still))
        return replace(state, **_left(stage.flowing), still=still)


class Beside:
    """Immobile water beside the flowing water of some cells, during one step."""

    def __init__(self, problem: Problem, state: State, water: np.ndarray, dt: float, rates: float):
        assert problem.stagnant is not None
        assert state.still is not None
        self.problem, self.stagnant, self.still, self.rates = problem, problem.stagnant, state.still, rates
        self.cells = cells = problem.stagnant.cells
        self.dissolved, self.flowing, self.sorbed = (
            state.dissolved[:, cells], state.water[cells], state.sorbed[:, cells]
        )
        squeezed_out = dt * squeezed(problem, self.still, dt) if dt > 0.0 else np.zeros(len(cells))
        self.water = water.copy()
        self.water[cells] += squeezed_out
        self.still_water = self.still.water - squeezed_out
        # what the water takes along that solids push out of one region into the other
        self.carried = squeezed_out * np.where(squeezed_out > 0.0, self.still.dissolved, self.dissolved)
        self.capacities = (
            _capacity(problem, self.dissolved, self.flowing, self.sorbed),
            _capacity(problem, self.still.dissolved, self.still.water, self.still.sorbed),
        )

    def exchange(self, moved: np.ndarray, before: Stage | None) -> tuple[np.ndarray, np.ndarray]:
        """What has come into the flowing water, and what goes on into the immobile water (equations.md, 57).

        moved (solute, cell) mol m-3 of bulk, dissolved in flowing water after the passages of this stage.
        Returns two (solute, still) mol m-3 of bulk. The second stage adds what the first found and constant
        capacities had not told: isotherms that bend, minerals, decay.
        """
        moved = moved[:, self.cells]
        swelling = self.dissolved * (self.water[self.cells] - self.flowing)
        arriving = moved - self.dissolved * self.flowing + self.carried - swelling
        begun = (self.stagnant.transfer, self.rates, self.dissolved - self.still.dissolved)
        passed, _, _ = exchanged(*begun, arriving, *self.capacities)
        if before is not None and before.still is not None and before.arriving is not None:
            _, told, weight = exchanged(*begun, before.arriving, *self.capacities)
            found = before.flowing.dissolved[:, self.cells] - before.still.dissolved
            passed += weight * (found - told)
        return arriving, self._within(moved, passed - self.carried)

    def _within(self, moved: np.ndarray, passed: np.ndarray) -> np.ndarray:
        """The exchange, held back to what the giving water has; one share for all components of a group."""
        problem = self.problem
        flowing, still = moved.copy(), self.still.dissolved * self.still.water
        flowing[problem.sorbates] += self.sorbed
        still[problem.sorbates] += self.still.sorbed
        room = np.maximum(np.where(passed > 0.0, flowing, still), 0.0)
        signed = np.isin(np.arange(len(passed)), problem.system.signed)
        over = (np.abs(passed) > room) & ~signed[:, None]
        if not over.any():
            return passed
        share = np.divide(room, np.abs(passed), out=np.ones_like(room), where=over)
        bounds = problem.transport.bounds
        return passed * np.repeat(np.minimum.reduceat(share, bounds[:-1], axis=0), np.diff(bounds), axis=0)


def net(passed: np.ndarray) -> np.ndarray:
    """(solute, cell) in less out of passages (solute, face)."""
    return passed[:, :-1] - passed[:, 1:]


def _left(landed: Landed) -> dict[str, Any]:
    """What a state keeps of a water and its solids."""
    found = landed.found
    return {
        "dissolved": landed.dissolved, "solid": found.solid, "sorbed": landed.sorbed, "water": landed.water,
        "ln_activity": found.ln_activity, "ionic_strength": found.ionic_strength,
        "presence": found.presence, "solved": found.solved, "seen": found.seen,
    }  # fmt: skip


def equilibrium_of(problem: Problem, water: State | StillWater) -> Equilibrium:
    """The equilibrium that a water was left in, where the next solve starts."""
    return Equilibrium(
        system=problem.settled_in or problem.system,
        amount=water.dissolved[: problem.chemical],
        solid=water.solid,
        presence=water.presence,
        ln_activity=water.ln_activity,
        ionic_strength=water.ionic_strength,
        solved=water.solved,
        steps=np.zeros(len(water.water), np.int64),
        given=np.zeros((len(problem.system.open_gases), len(water.water))),
        seen=water.seen,
    )


def _made(problem: Problem, landed: Landed, width: np.ndarray, solutes: int) -> np.ndarray:
    total = np.zeros(solutes)
    total[: problem.chemical] = problem.system.gas_supply.T @ (landed.found.given @ width)
    if problem.decay is not None and landed.made is not None:
        total[problem.decay.solutes] += landed.made @ width
    return total


def _capacity(problem: Problem, dissolved: np.ndarray, water: np.ndarray, sorbed: np.ndarray) -> np.ndarray:
    """(solute, cell) m3 m-3: what a water, and for tracers what its solids sorb, holds per mol m-3.

    The sorbed part is the secant's: never more than there is can then be given. Components count by their
    water alone, so that an exchange of neutral waters is neutral.
    """
    held = np.tile(water, (len(dissolved), 1))
    tracers = problem.sorbates >= problem.chemical
    rows = problem.sorbates[tracers]
    concentration = dissolved[rows]
    held[rows] += np.divide(
        sorbed[tracers], concentration, out=np.zeros_like(concentration), where=concentration > 0.0
    )
    return held
