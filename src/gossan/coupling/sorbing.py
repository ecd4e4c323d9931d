"""Chemistry of a water, with components that sorb by an isotherm besides."""

from __future__ import annotations

from dataclasses import dataclass, fields, replace
from typing import Any

import numpy as np

from gossan.base.errors import SolveError
from gossan.chemistry.equilibrium import UNBOUNDED, Equilibrium, Solver
from gossan.chemistry.isotherm import NO_ATOM, Isotherms, shared_out, sorbed_at
from gossan.coupling.problem import Problem

# A cell is left alone while its dissolved amounts stand within this of its last solve: far below any
# accuracy that a case may ask for, far above rounding.
SKIP = 1e-12
AGREED = 1e-11  # of what is sorbed: what the isotherm may still wish for; above what SKIP leaves
NEVER = -1.0  # to skip: a secant needs answers that follow every change
ROUNDS = 100  # halving a bracket alone takes half as many


def react(
    problem: Problem, solver: Solver, start: Equilibrium, isotherms: Isotherms | None,
    moved: np.ndarray, sorbed: np.ndarray, guess: np.ndarray, solid: np.ndarray, water: np.ndarray,
) -> Equilibrium:
    """Equilibrate what transport left in every cell; amounts are per bulk.

    moved   (component, cell) mol m-3 of bulk, dissolved; solid (mineral, cell)
    sorbed  (sorbate, cell) mol m-3 of bulk; those of components are changed in place
    guess   (sorbate, cell) what they may come to where minerals hold the component, too
    Raises  SolveError naming the cell
    """
    upper = np.where(problem.system.may_form[:, None], UNBOUNDED, solid)
    kilograms = water * problem.system.water_density
    rows = np.flatnonzero(problem.sorbates < problem.chemical)
    if isotherms is None or not len(rows):
        return solver.settled(start, kilograms, moved, solid, upper, skip=SKIP)
    bed = _Bed(solver, isotherms.of(rows), moved, solid, upper, water, kilograms, sorbed[rows],
               guess[rows])
    found, sorbed[rows] = bed.settled(start)
    return found


@dataclass(frozen=True, eq=False)
class _Bed:
    """Cells whose water has chemistry and whose solids sorb; laws are those of components alone."""

    solver: Solver
    laws: Isotherms
    moved: np.ndarray
    solid: np.ndarray
    upper: np.ndarray
    water: np.ndarray
    kilograms: np.ndarray
    sorbed: np.ndarray  # (sorbate, cell) before
    guess: np.ndarray  # (sorbate, cell)

    def settled(self, start: Equilibrium) -> tuple[Equilibrium, np.ndarray]:
        """The equilibrium, and the sorbed amounts that isotherm and chemistry agree to (equations.md, 58).

        Where no mineral holds a component, all that is not sorbed is dissolved: the isotherm alone decides.
        Where one does, guess that it goes on to hold the concentration, and close what the isotherm then
        still wishes for.
        """
        moved = self.moved[self.laws.solutes]
        formulas = self.solver.system.mineral_stoichiometry[:, self.laws.solutes]
        there = np.abs(formulas.T) @ self.solid
        free, held = shared_out(self.laws, moved + self.sorbed, self.water)
        free = np.where(there > 0.0, moved + (self.sorbed - self.guess), free)
        held = np.where(there > 0.0, self.guess, held)
        found = self._tried(start, free, SKIP)
        wish = self._wished(found, held)
        open_ = np.flatnonzero(~_small(held, wish).all(axis=0))
        if len(open_):
            part = self._at(open_)
            found_part, held[:, open_] = part._closed(
                _columns(found, open_), free[:, open_], held[:, open_], wish[:, open_], there[:, open_], open_
            )
            found = _with_columns(found, open_, found_part)
        return found, held

    def _closed(
        self, found: Equilibrium, free: np.ndarray, held: np.ndarray, wish: np.ndarray, there: np.ndarray,
        names: np.ndarray,
    ) -> tuple[Equilibrium, np.ndarray]:
        """Bring every wish (sorbate, cell) to nothing.

        free is what chemistry is given to share, held what is sorbed: both are carried along, or the lesser
        would lose its digits. What is dissolved falls with what is sorbed, so a wish falls at least as fast
        as what is sorbed grows: its secant is kept no flatter. With one sorbate its bracket is kept, too.
        """
        found_all, held_all = found, held.copy()
        bed, here = self, np.arange(held.shape[1])
        fall = np.ones_like(held)
        low, high = -held, free + there  # of what may still be added to held
        for _ in range(ROUNDS):
            if len(bed.laws.solutes) == 1:
                low, high = np.where(wish > 0.0, 0.0, low), np.where(wish < 0.0, 0.0, high)
            more = wish / fall
            more = np.where(more <= low, 0.5 * low, np.where(more >= high, 0.5 * high, more))
            more = np.where(_small(held, wish), 0.0, more)
            free, held, low, high = free - more, held + more, low - more, high - more
            try:
                found = bed._tried(found, free, NEVER)
            except SolveError as error:
                error.cell = int(names[here[error.cell]])
                raise
            after = bed._wished(found, held)
            new = np.divide(wish - after, more, out=np.ones_like(more), where=more != 0.0)
            fall, wish = np.maximum(new, 1.0), after
            found_all = _with_columns(found_all, here, found)
            held_all[:, here] = held
            left = np.flatnonzero(~_small(held, wish).all(axis=0))
            if not len(left):
                return found_all, held_all
            bed, here, found = bed._at(left), here[left], _columns(found, left)
            free, held, wish, fall, low, high = (a[:, left] for a in (free, held, wish, fall, low, high))
        reason = "what sorbs and what minerals hold come to no common equilibrium"
        raise SolveError(reason, cell=int(names[here[0]]), residual=float(np.abs(wish).max()))

    def _tried(self, start: Equilibrium, free: np.ndarray, skip: float) -> Equilibrium:
        amount = self.moved.copy()
        amount[self.laws.solutes] = free
        return self.solver.settled(start, self.kilograms, amount, self.solid, self.upper, skip=skip)

    def _wished(self, found: Equilibrium, held: np.ndarray) -> np.ndarray:
        dissolved = np.maximum(found.amount[self.laws.solutes], 0.0)
        wish = sorbed_at(self.laws, dissolved / self.water) - held
        wish[(dissolved < NO_ATOM) & (wish < 0.0)] = 0.0  # a steep law may hold much at next to nothing
        return wish

    def _at(self, cells: np.ndarray) -> _Bed:
        arrays = {f.name: getattr(self, f.name)[..., cells] for f in fields(self)
                  if isinstance(getattr(self, f.name), np.ndarray)}
        return replace(self, laws=self.laws.at(cells), **arrays)


def _small(held: np.ndarray, wish: np.ndarray) -> np.ndarray:
    """(sorbate, cell) whether a wish is as good as none."""
    return np.abs(wish) <= AGREED * np.maximum(np.abs(held + wish), np.abs(held))


def _columns(found: Equilibrium, cells: np.ndarray) -> Equilibrium:
    """The equilibrium of some of the cells."""
    return replace(found, **{name: array[..., cells] for name, array in _arrays(found).items()})


def _with_columns(found: Equilibrium, cells: np.ndarray, part: Equilibrium) -> Equilibrium:
    """The equilibrium of all cells, that of some replaced."""
    arrays = {name: array.copy() for name, array in _arrays(found).items()}
    for name, array in _arrays(part).items():
        arrays[name][..., cells] = array
    return replace(found, **arrays)


def _arrays(found: Equilibrium) -> dict[str, Any]:
    values = {field.name: getattr(found, field.name) for field in fields(found)}
    return {name: value for name, value in values.items() if isinstance(value, np.ndarray)}
