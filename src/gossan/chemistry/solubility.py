"""How much of its metal every solid of the table leaves in water of a given pH and given ligands."""

from __future__ import annotations

from collections.abc import Iterable, Mapping
from dataclasses import dataclass
from math import exp, inf, log

import numpy as np

from gossan.base.errors import SolveError
from gossan.base.notation import parse_formula
from gossan.base.wrong import Wrong
from gossan.chemistry.activity import IDEAL
from gossan.chemistry.equilibrium import Equilibrium
from gossan.chemistry.redox import ELECTRON
from gossan.chemistry.reservoir import Condition, fixed_pe, fixed_ph, held_to
from gossan.chemistry.system import LN10, PROTON, System, build_system
from gossan.constants.couples import DIVIDED, partner
from gossan.constants.entries import Mineral, Reaction, Table
from gossan.constants.temperature import log10_k_at

MOST = 1.0  # mol/kg: a solid that would leave more is called soluble, and no number is given
PASSED_OVER = ("Na", "K")  # no metal that anybody asks for where a solid holds another
TRACE = log(1e-60)  # ln activity of a metal that takes no ligand away, however strongly it is bound
ENOUGH = 100.0  # ln mol/kg, far above MOST and far below what a number can hold
SOLVED = 1e-9  # in ln of the ion activity product: far below what any constant is known to


@dataclass(frozen=True, slots=True)
class Solubility:
    """What one solid leaves dissolved; amounts in mol per kg of water, inf above MOST."""

    mineral: str
    metal: str  # the component that is counted
    dissolved: float  # total of the metal; NaN where `lacks` or `electrons` says why
    low: float  # with the solid's constant one standard uncertainty lower
    high: float  # and higher
    lacks: tuple[str, ...]  # components of the solid whose amounts are not given
    electrons: bool  # its reaction needs electrons, and no pe is given

    @property
    def known(self) -> bool:
        """Whether there is a number."""
        return not self.lacks and not self.electrons

    @property
    def soluble(self) -> bool:
        """Whether it would leave more than MOST."""
        return self.dissolved == inf


def solubilities(
    table: Table,
    pH: float,
    totals: Mapping[str, float],
    temperature: float = 298.15,
    minerals: Iterable[str] | None = None,
    pe: float | None = None,
) -> list[Solubility]:
    """Bring every solid, each alone, to equilibrium with water of this pH and these ligands.

    totals       mol per kg of water of each component beside the metal, at equilibrium; the metal's own entry
                 is not used
    temperature  K
    minerals     names; default all of the table
    pe           of the water: gives the electrons of a solid's reaction and divides Fe, Mn and Cu, which are
                 then counted in all their valences; sulfide, nitrate and the like stay as they are given
    Returns      one a solid, by metal in the order of the table, the least soluble first, then those without
                 a number
    Valid        for traces: activities are ideal, valences are held but for what is said of pe, and no other
                 solid is there
    """
    by_metal: dict[str, list[Mineral]] = {}
    for name in table.minerals if minerals is None else minerals:
        mineral = table.minerals[name]
        by_metal.setdefault(counted_as(table, mineral, pe), []).append(mineral)
    found = []
    for metal in sorted(by_metal, key=list(table.components).index):
        rows = _of_one_metal(table, metal, by_metal[metal], pH, totals, temperature, pe)
        found += sorted(rows, key=lambda row: (not row.known, row.dissolved))
    return found


def counted_as(table: Table, mineral: Mineral, pe: float | None) -> str:
    """The component that a solid's metal is counted as: under a pe the first ion of its element.

    >>> from gossan.constants.load import load_table
    >>> table = load_table()
    >>> [counted_as(table, table.minerals["hematite"], pe) for pe in (None, 4.0)]
    ['Fe^3+', 'Fe^2+']
    """
    metal = metal_of(mineral)
    return partner(table.components[metal]) if pe is not None and metal in DIVIDED else metal


def metal_of(mineral: Mineral) -> str:
    """The component that a solid is named for: its first metal, sodium and potassium last.

    >>> from gossan.constants.load import load_table
    >>> metal_of(load_table().minerals["jarosite"])
    'Fe^3+'
    """
    holds = {name: parse_formula(name) for name in mineral.reaction.components if name != PROTON}
    elements = [element for element in parse_formula(mineral.formula) if element not in ("H", "O")]
    elements.sort(key=lambda element: element in PASSED_OVER)
    return next(name for element in elements for name, counts in holds.items() if element in counts)


def least_soluble(rows: Iterable[Solubility], among: Iterable[str]) -> set[str]:
    """Of each metal, the solid of these names that leaves the least of it."""
    names, least = set(among), dict[str, Solubility]()
    for row in rows:
        if row.known and row.mineral in names and not row.soluble:
            best = least.setdefault(row.metal, row)
            if row.dissolved < best.dissolved:
                least[row.metal] = row
    return {row.mineral for row in least.values()}


def _of_one_metal(
    table: Table, metal: str, minerals: list[Mineral], pH: float, totals: Mapping[str, float],
    temperature: float, pe: float | None,
) -> list[Solubility]:
    valences = [name for name in DIVIDED if pe is not None and partner(table.components[name]) == metal]
    kept = {name: total for name, total in totals.items() if name not in (metal, *valences)}
    given = {PROTON, metal, *valences, *kept}
    system = build_system(
        table, [metal, *kept], (), temperature=temperature, activity=IDEAL, coupled=valences
    )  # fmt: skip
    dissolved = np.array([kept.get(name, 0.0) for name in system.components])
    water = _Water(system, pH, pe, dissolved, metal)
    rows = []
    for mineral in minerals:
        lacks = tuple(name for name in mineral.reaction.components if name not in given)
        electrons = pe is None and mineral.reaction.electrons != 0.0
        band = [np.nan] * 3
        if not lacks and not electrons:
            log10_k, sd = log10_k_at(mineral, temperature), mineral.log10_k.sd or 0.0
            band = [water.leaves(mineral.reaction, log10_k + shift) for shift in (-sd, 0.0, sd)]
        rows.append(Solubility(mineral.name, metal, band[1], band[0], band[2], lacks, electrons))
    return rows


class _Water:
    """Water of one pH and given ligands, to which a metal is added until a solid is in equilibrium."""

    def __init__(self, system: System, pH: float, pe: float | None, dissolved: np.ndarray, metal: str):
        self.system, self.dissolved, self.pe = system, dissolved, pe
        self.metal = system.basis.index(metal)
        self.held = [fixed_ph(system, pH)]
        if system.electron >= 0 and pe is not None:
            self.held.append(fixed_pe(system, pe))
        self.bare = held_to(system, dissolved, self.held).ln_activity[:, 0]
        # at a pe the ln activities of the metal's other valences keep their distance from its own
        self.valences = [system.basis.index(name) for name in system.valences]
        self.apart = self._with(TRACE).ln_activity[self.valences, 0] - TRACE if self.valences else 0.0
        own = [self.metal, *self.valences, *(system.basis.index(name) for name in (PROTON, ELECTRON)
                                             if name in system.basis)]  # fmt: skip
        alone = ~np.delete(system.stoichiometry != 0.0, own, axis=1).any(axis=1)
        self.alone, self.alone_ln_k = system.stoichiometry[alone], system.ln_k[alone]
        self.holds = (self.alone @ system.conserved)[:, self.metal]

    def leaves(self, reaction: Reaction, log10_k: float) -> float:
        """Total metal (mol/kg) beside a solid that dissolves by a reaction; inf where it would exceed MOST.

        The metal takes ligands away and so lowers what its solid feels of them: its activity is at least
        that beside untouched ligands, and is sought upwards from there.
        """
        try:
            return self._leaves(reaction, log10_k)
        except Wrong as wrong:
            if isinstance(wrong.__cause__, SolveError):
                raise
            return inf  # it would take more than any water holds

    def _leaves(self, reaction: Reaction, log10_k: float) -> float:
        from scipy.optimize import brentq

        row = np.zeros(len(self.system.basis))
        for name, times in reaction.components.items():
            row[self.system.basis.index(name)] = times
        ln_k = LN10 * (log10_k + reaction.electrons * (self.pe or 0.0))
        ln_k -= float((row[self.valences] * self.apart).sum())
        row[self.metal] += row[self.valences].sum()
        row[self.valences] = 0.0
        others = np.where(np.arange(len(row)) == self.metal, 0.0, self.bare)

        def lacking(ln_metal: float) -> float:
            return float(row @ self._with(ln_metal).ln_activity[:, 0] - ln_k)

        low = (ln_k - row @ others) / row[self.metal]
        if low > log(MOST) or self._at_least(low) > MOST:
            return inf
        if lacking(low) < -SOLVED:
            high = low + 1.0
            while lacking(high) < 0.0:
                if self._at_least(high) > MOST or self._total(high) > MOST:
                    return inf
                low, high = high, high + 1.0
            low = brentq(lacking, low, high, xtol=SOLVED)
        total = self._total(low)
        return total if total <= MOST else inf

    def _total(self, ln_metal: float) -> float:
        return float(self._with(ln_metal).amount[self.metal, 0])

    def _at_least(self, ln_metal: float) -> float:
        """The metal and its hydroxides alone: where that is too much already, no solve is needed."""
        ln_activity = self.bare.copy()
        ln_activity[self.metal] = ln_metal
        ln_activity[self.valences] = ln_metal + self.apart
        ln_molality = self.alone @ ln_activity + self.alone_ln_k
        return float(np.exp(np.minimum(ln_molality, ENOUGH)) @ self.holds)

    def _with(self, ln_metal: float) -> Equilibrium:
        """The water with the metal's activity held: as much dissolves as that takes (equations.md, 43)."""
        formula = np.zeros(len(self.system.basis))
        formula[self.metal] = 1.0
        metal = Condition(f"an activity of {exp(ln_metal):.3g}", formula, ln_metal)
        return held_to(self.system, self.dissolved, [*self.held, metal])
