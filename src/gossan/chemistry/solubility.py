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
from gossan.chemistry.reservoir import Condition, fixed_ph, held_to
from gossan.chemistry.system import LN10, PROTON, System, build_system
from gossan.constants.entries import Mineral, Table

MOST = 1.0  # mol/kg: a solid that would leave more is called soluble, and no number is given
PASSED_OVER = ("Na", "K")  # no metal that anybody asks for where a solid holds another
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
    electrons: bool  # its reaction needs electrons: no solubility while valences are held

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
) -> list[Solubility]:
    """Bring every solid, each alone, to equilibrium with water of this pH and these ligands.

    totals       mol per kg of water of each component beside the metal, at equilibrium; the metal's own entry
                 is not used
    temperature  K
    minerals     names; default all of the table
    Returns      one a solid, by metal in the order of the table, the least soluble first, then those without
                 a number
    Valid        for traces: activities are ideal, each valence is held, and no other solid is there
    """
    by_metal: dict[str, list[Mineral]] = {}
    for name in table.minerals if minerals is None else minerals:
        mineral = table.minerals[name]
        by_metal.setdefault(metal_of(mineral), []).append(mineral)
    found = []
    for metal in sorted(by_metal, key=list(table.components).index):
        rows = _of_one_metal(table, metal, by_metal[metal], pH, totals, temperature)
        found += sorted(rows, key=lambda row: (not row.known, row.dissolved))
    return found


def system_of(
    table: Table, metals: Iterable[str], totals: Iterable[str], minerals: Iterable[str], temperature: float
) -> System:
    """The system of these metals, what else is given, and these solids; activities are ideal."""
    return build_system(table, [*metals, *totals], minerals, temperature=temperature, activity=IDEAL)


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
    temperature: float,
) -> list[Solubility]:
    given = {PROTON, metal, *totals}
    system = system_of(table, [metal], totals, [mineral.name for mineral in minerals], temperature)
    dissolved = np.array([0.0 if name == metal else totals.get(name, 0.0) for name in system.components])
    water = _Water(system, pH, dissolved, system.components.index(metal))
    rows = []
    for mineral in minerals:
        lacks = tuple(name for name in mineral.reaction.components if name not in given)
        electrons = mineral.reaction.electrons != 0.0
        band = [np.nan] * 3
        if not lacks and not electrons:
            sd = mineral.log10_k.sd or 0.0
            band = [water.leaves(mineral.name, shift) for shift in (-sd, 0.0, sd)]
        rows.append(Solubility(mineral.name, metal, band[1], band[0], band[2], lacks, electrons))
    return rows


class _Water:
    """Water of one pH and given ligands, to which a metal is added until a solid is in equilibrium."""

    def __init__(self, system: System, pH: float, dissolved: np.ndarray, metal: int):
        self.system, self.pH, self.dissolved, self.metal = system, pH, dissolved, metal
        self.bare = held_to(system, dissolved, [fixed_ph(system, pH)]).ln_activity[:, 0]

    def leaves(self, mineral: str, shift: float) -> float:
        """Total metal (mol/kg) beside a solid whose log10 K is shifted; inf where it would exceed MOST.

        The metal takes ligands away and so lowers what its solid feels of them: its activity is at least
        that beside untouched ligands, and is sought upwards from there.
        """
        try:
            return self._leaves(mineral, shift)
        except Wrong as wrong:
            if isinstance(wrong.__cause__, SolveError):
                raise
            return inf  # it would take more than any water holds

    def _leaves(self, mineral: str, shift: float) -> float:
        from scipy.optimize import brentq

        m = self.system.minerals.index(mineral)
        row = self.system.mineral_stoichiometry[m]
        ln_k = self.system.matrices.solid_ln_k[m] + shift * LN10
        others = np.where(np.arange(len(row)) == self.metal, 0.0, self.bare)

        def lacking(ln_metal: float) -> float:
            return float(row @ self._with(ln_metal).ln_activity[:, 0] - ln_k)

        low = (ln_k - row @ others) / row[self.metal]
        if low > log(MOST):
            return inf
        if lacking(low) < -SOLVED:
            high = low + 1.0
            while lacking(high) < 0.0:
                if self._total(high) > MOST:
                    return inf
                low, high = high, high + 1.0
            low = brentq(lacking, low, high, xtol=SOLVED)
        total = self._total(low)
        return total if total <= MOST else inf

    def _total(self, ln_metal: float) -> float:
        return float(self._with(ln_metal).amount[self.metal, 0])

    def _with(self, ln_metal: float) -> Equilibrium:
        """The water with the metal's activity held: as much dissolves as that takes (equations.md, 43)."""
        formula = np.zeros(len(self.system.components))
        formula[self.metal] = 1.0
        metal = Condition(f"an activity of {exp(ln_metal):.3g}", formula, ln_metal)
        return held_to(self.system, self.dissolved, [fixed_ph(self.system, self.pH), metal])
