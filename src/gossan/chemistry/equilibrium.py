"""Waters and their minerals brought to local equilibrium."""

from __future__ import annotations

from concurrent.futures import ThreadPoolExecutor
from dataclasses import dataclass, replace
from functools import lru_cache, partial
from typing import Any

import numpy as np

from gossan.base.errors import SolveError
from gossan.base.outcome import SENTENCES, SOLVED
from gossan.chemistry.redox import ELECTRON, WATER
from gossan.chemistry.system import LN10, System

START_STRENGTH = 0.1  # mol/kg, where a cold start begins
UNBOUNDED = np.inf
BLOCK = 500  # cells: a block of fewer is done in a millisecond or two, and not worth a thread


@dataclass(frozen=True, eq=False)
class Equilibrium:
    """Waters at equilibrium, one a column; made anew by every solve, never changed.

    The amounts are per whatever `kilograms` counted: mol per kg of water where that is 1.
    """

    system: System
    amount: np.ndarray  # (component, cell) dissolved
    solid: np.ndarray  # (mineral, cell)
    presence: np.ndarray  # (mineral, cell) int8: 0 absent, 1 present, 2 full
    ln_activity: np.ndarray  # (basis, cell)
    ionic_strength: np.ndarray  # (cell,) mol/kg (equations.md, 3)
    solved: np.ndarray  # (component, cell) mol/kg: dissolved after the last solve
    steps: np.ndarray  # (cell,) Newton steps; 0 where the last answer still held
    given: np.ndarray  # (open gas, cell) what the last solve took from each open gas
    seen: np.ndarray  # (species, cell) mol/kg: what SIT's sums were taken with; no rows under other laws

    def log10_activity(self) -> np.ndarray:
        """(species, cell): log10 of the activity of every species, -inf where a component is absent."""
        return log10_activity(self.system, self.ln_activity)

    def ln_gamma(self) -> np.ndarray:
        """(species, cell): ln of the activity coefficients."""
        return self.system.activity.ln_gamma(self.ionic_strength, self.seen[: len(self.system.species)])

    def molality(self) -> np.ndarray:
        """(species, cell): mol per kg of water."""
        system = self.system
        found = np.exp(LN10 * self.log10_activity() - self.ln_gamma())
        for name in (ELECTRON, WATER):
            if name in system.basis:
                found[system.basis.index(name)] = 0.0  # it has an activity and is no solute
        return found

    def water_activity(self) -> np.ndarray:
        """(cell,): activity of water; under SIT what the solve went by, else an estimate beside it."""
        return np.exp(self.system.activity.ln_water(self.ionic_strength, self.molality()))

    def held(self) -> np.ndarray:
        """(basis, cell): mol per kg of water dissolved of each valence, in all its species."""
        return self.system.stoichiometry.T @ self.molality()

    def saturation(self) -> np.ndarray:
        """(mineral, cell): saturation indices, NaN where a component is absent."""
        return mineral_saturation(self.system, self.ln_activity)

    def gas_pressure(self) -> np.ndarray:
        """(gas, cell): partial pressures in atm, NaN where a component is absent."""
        system = self.system
        return 10.0 ** saturation(system.gas_stoichiometry, system.gas_ln_k, self.ln_activity)


def log10_activity(system: System, ln_activity: np.ndarray) -> np.ndarray:
    """(species, cell): log10 of the activity of every species from the components' (equations.md, 1)."""
    ln = system.stoichiometry @ ln_activity + system.ln_k[:, None]
    return np.where(ln < -1e4, -np.inf, ln / LN10)


def pe_of(system: System, ln_activity: np.ndarray) -> np.ndarray:
    """(cell,): -log10 of the activity of e^- of ln activities (basis, cell); NaN where nothing is coupled."""
    if system.electron < 0:
        return np.full(ln_activity.shape[1], np.nan)
    return -ln_activity[system.electron] / LN10


def mineral_saturation(system: System, ln_activity: np.ndarray) -> np.ndarray:
    """(mineral, cell): saturation indices from ln activities (basis, cell); NaN: an element is absent."""
    count = len(system.minerals)
    return saturation(system.matrices.solid[:count], system.matrices.solid_ln_k[:count], ln_activity)


def saturation(stoichiometry: np.ndarray, ln_k: np.ndarray, ln_activity: np.ndarray) -> np.ndarray:
    """(solid, cell): log10 of ion activity product over K; NaN where a component is absent."""
    ln = stoichiometry @ ln_activity - ln_k[:, None]
    return np.where(ln < -1e4, np.nan, ln / LN10)


@lru_cache(maxsize=4)
def _workers(threads: int) -> ThreadPoolExecutor:
    """Threads for blocks of cells, shared by all solvers: kernels release Python's lock."""
    return ThreadPoolExecutor(threads, "gossan-cells")


class Solver:
    """Local equilibrium of many cells of one system, with its working space laid out once."""

    def __init__(self, system: System, threads: int = 1):
        """Lay out the working space of so many threads; what a cell comes to does not depend on them."""
        from gossan.chemistry.kernel.matrices import bench

        self.system = system
        self.threads = threads
        self._benches = [bench(system.matrices) for _ in range(threads)]
        self._bench = self._benches[0]

    def cold(
        self, kilograms: np.ndarray, amount: np.ndarray, solid: np.ndarray, upper: np.ndarray | None = None
    ) -> Equilibrium:
        """Equilibrate from nothing but the amounts; arguments as for `settled`."""
        cells = amount.shape[1]
        system = self.system
        start = Equilibrium(
            system=system,
            amount=amount,
            solid=solid,
            presence=np.zeros((len(system.minerals), cells), np.int8),
            ln_activity=np.zeros((len(system.basis), cells)),
            ionic_strength=np.full(cells, START_STRENGTH),
            solved=np.full((len(system.components), cells), np.nan),
            steps=np.zeros(cells, np.int64),
            given=np.zeros((len(system.open_gases), cells)),
            seen=np.zeros((len(system.matrices.interaction), cells)),
        )
        return self.settled(start, kilograms, amount, solid, upper, cold=True)

    def settled(
        self,
        start: Equilibrium,
        kilograms: np.ndarray,
        amount: np.ndarray,
        solid: np.ndarray,
        upper: np.ndarray | None = None,
        *,
        skip: float = -1.0,
        cold: bool = False,
    ) -> Equilibrium:
        """Equilibrate these amounts, starting from an earlier equilibrium.

        kilograms (cell,) kg of water per unit the amounts are per (kg per m3 of bulk; 1 for mol/kg)
        amount (component, cell) dissolved, solid (mineral, cell) before
        upper (mineral, cell) the most of a mineral there may be: inf, or what there was at the start for
            one that may only dissolve; default: by system.may_form
        skip: leave a cell alone whose dissolved amounts all stand within this (relative) of the last solve,
            where that was of this same system, at this temperature
        Raises   SolveError naming the cell; nothing given is changed
        """
        from gossan.chemistry.kernel.cells import COLD, WARM

        system = self.system
        if start.system is not system:
            skip = -1.0
        if upper is None:
            upper = np.where(system.may_form[:, None], UNBOUNDED, solid)
        amount, solid, upper = (np.array(a, float, order="C") for a in (amount, solid, upper))
        kilograms = np.ascontiguousarray(kilograms, float)
        presence, ln_activity = start.presence.copy(), start.ln_activity.copy()
        ionic_strength, solved, seen = start.ionic_strength.copy(), start.solved.copy(), start.seen.copy()
        cells = amount.shape[1]
        outcome, steps = np.zeros(cells, np.int64), np.zeros(cells, np.int64)
        given = np.zeros((len(system.open_gases), cells))
        arrays = (
            kilograms, amount, solid, upper, presence, ln_activity, ionic_strength, solved, given, seen
        )  # fmt: skip
        if self._settle(cells, *arrays, skip, COLD if cold else WARM, outcome, steps):
            self._rescue(arrays, outcome, steps)
        return replace(
            start, system=system, amount=amount, solid=solid, presence=presence, ln_activity=ln_activity,
            ionic_strength=ionic_strength, solved=solved, steps=steps, given=given,
            seen=seen,
        )  # fmt: skip

    def _settle(self, cells: int, *arrays: Any) -> int:
        """Settle so many cells, a block of them in each thread; returns how many failed."""
        from gossan.chemistry.kernel.cells import settle_cells

        blocks = max(1, min(self.threads, cells // BLOCK))
        if blocks == 1:
            return int(settle_cells(self.system.matrices, self._bench, *arrays, 0, cells))
        bounds = [cells * number // blocks for number in range(blocks + 1)]
        settle = partial(settle_cells, self.system.matrices)
        running = [
            _workers(self.threads).submit(settle, bench, *arrays, first, last)
            for bench, first, last in zip(self._benches[:blocks], bounds[:-1], bounds[1:], strict=True)
        ]
        return sum(int(block.result()) for block in running)

    def _rescue(self, arrays: tuple[np.ndarray, ...], outcome: np.ndarray, steps: np.ndarray) -> None:
        """Find the minerals of failed cells another way, then settle them again; in place."""
        from gossan.chemistry.kernel.cells import MARKED, settle_cells
        from gossan.chemistry.kernel.rescue import find_minerals_in

        for i in np.flatnonzero(outcome != SOLVED):
            one = [np.ascontiguousarray(a[..., i : i + 1]) for a in arrays]
            result, count = outcome[i : i + 1].copy(), steps[i : i + 1].copy()
            find_minerals_in(self.system.matrices, self._bench, *one[:7])
            settle_cells(self.system.matrices, self._bench, *one, -1.0, MARKED, result, count, 0, 1)
            if result[0] != SOLVED:
                result[0] = outcome[i]
                raise SolveError(SENTENCES[int(result[0])], cell=int(i))
            for a, new in zip(arrays[1:], one[1:], strict=True):
                a[..., i] = new[..., 0]
            outcome[i], steps[i] = result[0], count[0]


def equilibrate(system: System, dissolved: np.ndarray, solid: np.ndarray | None = None) -> Equilibrium:
    """Bring waters to equilibrium with their minerals, from nothing but the amounts.

    dissolved (component,) or (component, cell) mol per kg of water; H^+ is its total excess
    solid     (mineral, cell) mol per kg of water that are there; default none
    Returns   an Equilibrium in mol per kg of water
    Raises    SolveError
    """
    amount = np.asarray(dissolved, float).reshape(len(system.components), -1)
    if solid is None:
        solid = np.zeros((len(system.minerals), amount.shape[1]))
    return Solver(system).cold(np.ones(amount.shape[1]), amount, np.asarray(solid, float))
