"""A report in the system that it is read in: the water at a pH, an alkalinity and a pe."""

from __future__ import annotations

from collections.abc import Collection

import numpy as np

from gossan.base.wrong import Wrong
from gossan.chemistry.charge import net_charge
from gossan.chemistry.equilibrium import Equilibrium
from gossan.chemistry.redox import WATERS_OWN
from gossan.chemistry.report import LabReport
from gossan.chemistry.reservoir import fixed_pe, fixed_ph, held_to
from gossan.chemistry.roots import root_between, root_of_total
from gossan.chemistry.system import System, build_system
from gossan.chemistry.valences import valence_totals
from gossan.constants.couples import DIVIDED, applicable, partner
from gossan.constants.entries import Table
from gossan.constants.potential import pe_of_oxygen

LOWEST_PH, HIGHEST_PH = -2.0, 16.0
H2_LINE, O2_LINE = -1.0, 21.5  # pe + pH where hydrogen has 100 atm, or oxygen 1000 atm, at 25 degC
CARBON = "CO3^2-"
TRACE = 1e-15  # mol/kg: less of a divided valence is none; a millionth of what any laboratory finds

# Protons that a component's main form at the end of an alkalinity titration (pH about 4.5) holds more than
# the component itself.  Source: the proton condition, Stumm & Morgan (1996), ch. 4; from memory.
PROTONS_AT_ENDPOINT = {CARBON: 2.0, "HS^-": 1.0, "PO4^3-": 2.0}


class Reading:
    """A report and its system, in which pe has still to divide the elements whose valence nobody said.

    totals   (basis,) mol per kg of water as reported, each valence by itself, without H^+
    divided  held components that are coupled only while the report is read
    """

    def __init__(
        self, report: LabReport, table: Table, activity: str, excluded: Collection[str],
        coupled: Collection[str],
    ):
        self.report, self.table = report, table
        self._activity, self._excluded = activity, excluded
        self._components = _components_of(report, table)
        self._coupled = applicable(coupled, self._components, table)
        self.divided = tuple(
            name
            for name in DIVIDED
            if report.says_pe
            and name in table.components
            and name not in self._coupled
            and partner(table.components[name]) in report.undivided & self._components
        )
        self.system = self._system(self._components, (*self._coupled, *self.divided))
        self.totals = np.array([report.dissolved.get(name, 0.0) for name in self.system.basis])
        if report.oxygen is not None:
            self.totals[self.system.basis.index("O2")] = report.oxygen

    @property
    def holds_pe(self) -> bool:
        """Whether the report's pe, or what stands for it, holds the water while it is read."""
        return self.report.says_pe and self.system.electron >= 0

    def index(self, name: str) -> int:
        """Where one of the basis stands."""
        return self.system.basis.index(name)

    def counted(self, totals: np.ndarray) -> np.ndarray:
        """(component,): reported totals (basis,) as they are conserved."""
        return totals @ self.system.conserved

    def pe_at(self, ph: float, oxygen_gamma: float = 1.0) -> float:
        """The pe that the report holds at a pH; oxygen_gamma is the activity coefficient of O2."""
        report = self.report
        if report.pe is not None:
            return report.pe
        assert report.oxygen is not None
        return pe_of_oxygen(report.oxygen * oxygen_gamma, ph, report.temperature, self.table)

    def oxygen_gamma(self, found: Equilibrium) -> float:
        """The activity coefficient of dissolved oxygen in a water, 1 where the report gives none."""
        if self.report.oxygen is None:
            return 1.0
        return float(np.exp(found.ln_gamma()[self.index("O2"), 0]))

    def at_ph(self, totals: np.ndarray, ph: float) -> Equilibrium:
        """The water of these totals (basis,) at a pH, and at the report's pe where it says one."""
        conditions = [fixed_ph(self.system, ph)]
        amounts = self.counted(totals)
        if not self.holds_pe:
            return held_to(self.system, amounts, conditions)
        found = held_to(self.system, amounts, [*conditions, fixed_pe(self.system, self.pe_at(ph))])
        if self.report.oxygen is not None:  # whose activity coefficient needs the ionic strength
            held = self.pe_at(ph, self.oxygen_gamma(found))
            found = held_to(self.system, amounts, [*conditions, fixed_pe(self.system, held)])
        return found

    def neutral(self) -> Equilibrium:
        """The water at the pH that electroneutrality makes of it, whatever pH is reported."""
        charge = self.system.component_charge
        amounts = self.counted(self.totals)
        if not self.holds_pe:
            amounts[0] = -float(amounts[1:] @ charge[1:])
            return held_to(self.system, amounts, [])
        low, high = LOWEST_PH, HIGHEST_PH
        if self.report.pe is not None:  # beyond of these water itself falls apart
            low, high = max(low, H2_LINE - self.report.pe), min(high, O2_LINE - self.report.pe)
        ph = root_between(lambda ph: net_charge(self.at_ph(self.totals, ph)), low, high)
        if ph is None:
            raise Wrong(f"is neutral at no pH between {low:.3g} and {high:.3g}",
                        "check the analysis and the redox potential, or balance on an ion")
        return self.at_ph(self.totals, ph)

    def at_reported_ph(self, totals: np.ndarray, ph: float) -> Equilibrium:
        """The water at its pH, the carbon from the alkalinity where that is given (equations.md, 41)."""
        given = self.report.alkalinity
        if given is None:
            return self.at_ph(totals, ph)
        carbon = self.index(CARBON)
        protons = np.array([PROTONS_AT_ENDPOINT.get(name, 0.0) for name in self.system.basis])

        def with_carbon(amount: float) -> Equilibrium:
            changed = totals.copy()
            changed[carbon] = amount
            return self.at_ph(changed, ph)

        def excess(found: Equilibrium) -> float:
            held = valence_totals(found)
            return float(protons @ held - held[0]) - given

        bare = with_carbon(0.0)
        least = excess(bare)
        if least > 1e-9 + 1e-6 * given:
            raise Wrong(
                f"has an alkalinity of {given:.3g} eq/kg, less than its other solutes make at that pH "
                f"({least + given:.3g} eq/kg)",
                "check pH and alkalinity; acid waters may carry none: leave it out and give CO3 or CO2",
            )
        if least >= 0.0:
            return bare
        cure = "check the pH, and the redox potential: carbon that is methane has none"
        told = f"has an alkalinity of {given:.3g} eq/kg that no carbon brings about"
        try:
            needed = root_of_total(lambda amount: excess(with_carbon(amount)), 0.0, max(given, 1e-9))
        except Wrong as beyond:  # more carbon than any water holds
            raise Wrong(told, cure) from beyond
        if needed is None:
            raise Wrong(told, cure)
        return with_carbon(needed)

    def let_go(self, found: Equilibrium, neutral: bool = False) -> Equilibrium:
        """The water once nothing holds its pe any more, and what that has divided is held apart.

        The oxygen and hydrogen that water itself makes at a held pe are left behind: where they are no
        solutes of the water they are no store of electrons either.
        neutral: H^+ closes the charge
        """
        if not self.holds_pe or not (self.divided or set(WATERS_OWN) - set(self._coupled)):
            return found
        held = dict(zip(self.system.basis, valence_totals(found).tolist(), strict=True))
        for name in self.divided:
            if held[name] < TRACE:
                held[partner(self.table.components[name])] += held.pop(name)
        there = {name for name in self.divided if name in held}
        system = self._system(self._components | there, self._coupled)
        amounts = np.array([held.get(name, 0.0) for name in system.basis]) @ system.conserved
        if neutral:
            amounts[0] = -float(amounts[1:] @ system.component_charge[1:])
        return held_to(system, amounts, [])

    def _system(self, components: Collection[str], coupled: Collection[str]) -> System:
        return build_system(
            self.table, components, self.table.minerals, temperature=self.report.temperature,
            activity=self._activity, excluded=self._excluded, coupled=coupled,
        )  # fmt: skip


def _components_of(report: LabReport, table: Table) -> set[str]:
    """What the water holds, in any valence, and what it is saturated with."""
    components = set(report.dissolved)
    if report.oxygen is not None:
        components.add("O2")
    if report.alkalinity is not None:
        components.add(CARBON)
    if report.balance_on not in (None, "pH"):
        components.add(str(report.balance_on))
    for name in report.minerals:
        components |= set(table.minerals[name].reaction.components)
    for name in report.gases:
        components |= set(table.gases[name].reaction.components)
    return components
