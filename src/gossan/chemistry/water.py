"""A laboratory report becomes a water: totals of every component, at equilibrium within the water."""

from __future__ import annotations

from collections.abc import Collection
from dataclasses import dataclass

from gossan.base.wrong import Wrong
from gossan.chemistry import plausible
from gossan.chemistry.activity import DAVIES
from gossan.chemistry.balance import balanced
from gossan.chemistry.charge import charge_error_percent
from gossan.chemistry.equilibrium import Equilibrium, pe_of
from gossan.chemistry.pairs import estimated_pairs
from gossan.chemistry.reading import Reading
from gossan.chemistry.redox import ELECTRON, WATER
from gossan.chemistry.report import LabReport
from gossan.chemistry.reservoir import held_to, saturated, under_gas
from gossan.chemistry.system import PROTON, System
from gossan.chemistry.valences import valence_totals
from gossan.constants.entries import Table

WARN_PERCENT, REFUSE_PERCENT = 5.0, 10.0  # charge error; acceptance limits of the trade (common practice)
PURE_PH = 7.0


@dataclass(frozen=True, eq=False)
class Water:
    """A water at equilibrium within itself; minerals do not form in it, their indices are known."""

    name: str
    equilibrium: Equilibrium
    charge_error_percent: float  # of the report, before anything was balanced
    warnings: tuple[str, ...]
    reported_pe: float = float("nan")  # what Eh, pe or dissolved oxygen of the report stand for; NaN without

    @property
    def system(self) -> System:
        """The system of all species, minerals and gases that this water could have."""
        return self.equilibrium.system

    @property
    def totals(self) -> dict[str, float]:
        """Total dissolved by component, mol per kg of water."""
        return dict(zip(self.system.components, self.equilibrium.amount[:, 0].tolist(), strict=True))

    @property
    def valences(self) -> dict[str, float]:
        """Total dissolved by valence, mol per kg of water; H^+ as an excess over water, without e^-."""
        held = dict(zip(self.system.basis, valence_totals(self.equilibrium).tolist(), strict=True))
        for name in (ELECTRON, WATER):
            held.pop(name, None)
        return held

    @property
    def pH(self) -> float:
        """-log10 of the activity of H^+."""
        return _ph(self.equilibrium)

    @property
    def pe(self) -> float:
        """-log10 of the activity of e^-; NaN where nothing is coupled."""
        return _pe(self.equilibrium)

    @property
    def ionic_strength(self) -> float:
        """mol per kg of water."""
        return float(self.equilibrium.ionic_strength[0])


def read_water(
    report: LabReport,
    table: Table,
    *,
    activity: str = DAVIES,
    excluded: Collection[str] = (),
    coupled: Collection[str] = (),
) -> Water:
    """Find the totals that a report stands for (contract: totals, then charge, then saturation).

    coupled  held components, such as "Fe^3+", that are at redox equilibrium with the first ion of their
             element; others stay what they were named as, or what the report's pe divides them into, once
    Raises   Wrong: an imbalance above 10 %, a balance ion that would go below zero, an alkalinity that
             other solutes exceed, a pe that water cannot have, conditions that contradict each other
    """
    reading = Reading(report, table, activity, excluded, coupled)
    warnings: list[str] = []
    if report.balance_on == "pH" and report.alkalinity is not None:
        raise Wrong("has an alkalinity and is balanced on the pH: the same fact twice", "leave one out")
    ph = PURE_PH if report.pH is None else report.pH
    neutral = report.is_pure or report.balance_on == "pH"
    if neutral:
        found = reading.neutral()
        stated = not report.is_pure and report.pH is not None
        percent = charge_error_percent(reading.at_ph(reading.totals, ph)) if stated else 0.0
        warnings += _ph_of_pure_water(report, found)
        if report.pe is not None:
            warnings += plausible.stability(report.pe, _ph(found), report.temperature, table)
    else:
        if report.pe is not None:
            warnings += plausible.stability(report.pe, ph, report.temperature, table)
        found = reading.at_reported_ph(reading.totals, ph)
        percent = charge_error_percent(found)
        if report.alkalinity is not None:
            warnings += plausible.fizz(found, ph)
        if report.balance_on is not None:
            found = balanced(reading, found, ph)
        else:
            warnings += _imbalance(report, percent)
    reported_pe = float("nan")
    if report.says_pe:
        reported_pe = reading.pe_at(_ph(found), reading.oxygen_gamma(found))
        warnings += plausible.division(reading, found, reported_pe)
    if report.oxygen is not None:
        warnings += plausible.oxygen(report.oxygen, report.temperature)
    if coupled:
        warnings += plausible.reacted(reading, found, _pe(found))
    found = reading.let_go(found, neutral)
    if report.minerals or report.gases:
        found = _saturated(report, found)
    if found.system.electron >= 0:
        warnings += plausible.poise(reading, found, _pe(found))
    warnings += beyond_strength(found) + _pairs(found, table)
    return Water(report.name, found, percent, tuple(warnings), reported_pe)


def _saturated(report: LabReport, found: Equilibrium) -> Equilibrium:
    """The water with so much of its minerals and gases that all their indices and pressures hold."""
    system = found.system
    conditions = [saturated(system, name, index) for name, index in report.minerals.items()]
    conditions += [under_gas(system, name, pressure) for name, pressure in report.gases.items()]
    found = held_to(system, found.amount[:, 0], conditions)
    for name, amount in zip(system.components, found.amount[:, 0], strict=True):
        if name not in (PROTON, ELECTRON) and amount < 0:
            raise Wrong(f"would need to give away more {name} than it holds to be saturated with "
                        f"{', '.join(map(str, conditions))}", "check what it is saturated with")
    return found


def _ph_of_pure_water(report: LabReport, found: Equilibrium) -> list[str]:
    given, made = report.pH, _ph(found)
    if not report.is_pure or given is None or abs(given - made) <= 0.5 or report.minerals or report.gases:
        return []
    return [f"pure water has pH {made:.2f}; the given pH {given:g} would need an acid or a base"]


def _imbalance(report: LabReport, percent: float) -> list[str]:
    if abs(percent) > REFUSE_PERCENT and not report.accept_imbalance:
        raise Wrong(
            f"has a charge error of {percent:+.1f} %",
            f"above {REFUSE_PERCENT:g} % a report is not used: check it, name the ion that takes up the "
            'difference (balance_on = "Cl"), or say accept_imbalance = true',
        )
    if abs(percent) > WARN_PERCENT:
        return [f"charge error {percent:+.1f} %, above the usual limit of {WARN_PERCENT:g} %"]
    return []


def beyond_strength(found: Equilibrium) -> list[str]:
    """Warn of an ionic strength beyond what the law of activities is meant for."""
    strength, law = float(found.ionic_strength[0]), found.system.activity
    if strength <= law.valid_to:
        return []
    return [
        f"ionic strength {strength:.3g} mol/kg: the {law.name} law is meant for waters up to {law.valid_to:g}"
    ]


def _pairs(found: Equilibrium, table: Table) -> list[str]:
    """Say which interactions between the main ions are estimates."""
    if not found.system.activity.interacts:
        return []
    named = estimated_pairs(table, found.system.species, found.molality()[:, 0])
    return [f"interaction coefficients estimated, not known: {', '.join(named)}"] if named else []


def _ph(found: Equilibrium) -> float:
    return float(-found.log10_activity()[0, 0])


def _pe(found: Equilibrium) -> float:
    return float(pe_of(found.system, found.ln_activity)[0])
