"""A laboratory report becomes a water: totals of every component, at equilibrium within the water."""

from __future__ import annotations

from collections.abc import Callable, Collection
from dataclasses import dataclass, field

import numpy as np

from gossan.base.wrong import Wrong
from gossan.chemistry.activity import DAVIES
from gossan.chemistry.charge import charge_error_percent, net_charge
from gossan.chemistry.equilibrium import Equilibrium
from gossan.chemistry.reservoir import fixed_ph, held_to, saturated, under_gas
from gossan.chemistry.system import PROTON, System, build_system
from gossan.constants.entries import Table

WARN_PERCENT, REFUSE_PERCENT = 5.0, 10.0  # charge error; acceptance limits of the trade (common practice)
DOUBLINGS = 30  # of the first guess of a total, in search of one that is too much
PURE_PH = 7.0
WARN_CO2, REFUSE_CO2 = 1.0, 10.0  # atm; no well or adit is under the second (common practice, no source)

# Protons that a component's main form at the end of an alkalinity titration (pH about 4.5) holds more than
# the component itself.  Source: the proton condition, Stumm & Morgan (1996), ch. 4; from memory.
PROTONS_AT_ENDPOINT = {"CO3^2-": 2.0, "HS^-": 1.0, "PO4^3-": 2.0}


@dataclass(frozen=True)
class LabReport:
    """What a laboratory says of a water, in the program's own terms.

    dissolved  moles per kg of water by component, without H^+
    pH         None where none was given: 7, or whatever electroneutrality makes of pure water
    alkalinity eq per kg of water, in place of the inorganic carbon
    balance_on a component, or "pH"
    minerals, gases  what the water is saturated with: index, or partial pressure in atm
    """

    name: str
    temperature: float = 298.15  # K
    dissolved: dict[str, float] = field(default_factory=dict)
    pH: float | None = None
    alkalinity: float | None = None
    balance_on: str | None = None
    minerals: dict[str, float] = field(default_factory=dict)
    gases: dict[str, float] = field(default_factory=dict)
    accept_imbalance: bool = False


@dataclass(frozen=True, eq=False)
class Water:
    """A water at equilibrium within itself; minerals do not form in it, their indices are known."""

    name: str
    equilibrium: Equilibrium
    charge_error_percent: float  # of the report, before anything was balanced
    warnings: tuple[str, ...]

    @property
    def system(self) -> System:
        """The system of all species, minerals and gases that this water could have."""
        return self.equilibrium.system

    @property
    def totals(self) -> dict[str, float]:
        """Total dissolved by component, mol per kg of water."""
        return dict(zip(self.system.components, self.equilibrium.amount[:, 0].tolist(), strict=True))

    @property
    def pH(self) -> float:
        """-log10 of the activity of H^+."""
        return float(-self.equilibrium.log10_activity()[0, 0])

    @property
    def ionic_strength(self) -> float:
        """mol per kg of water."""
        return float(self.equilibrium.ionic_strength[0])


def read_water(
    report: LabReport, table: Table, *, activity: str = DAVIES, excluded: Collection[str] = ()
) -> Water:
    """Find the totals that a report stands for (contract: totals, then charge, then saturation).

    Raises   Wrong: an imbalance above 10 %, a balance ion that would go below zero, an alkalinity that
             other solutes exceed, conditions that contradict each other
    """
    system = _system_of(report, table, activity, excluded)
    totals = np.array([report.dissolved.get(name, 0.0) for name in system.components])
    pure = not any(report.dissolved.values()) and report.alkalinity is None
    warnings: list[str] = []
    if report.balance_on == "pH" and report.alkalinity is not None:
        raise Wrong("has an alkalinity and is balanced on the pH: the same fact twice", "leave one out")
    if pure or report.balance_on == "pH":
        balanced = totals.copy()
        balanced[0] = -float(totals[1:] @ system.component_charge[1:])
        found = held_to(system, balanced, [])
        stated = not pure and report.pH is not None
        percent = charge_error_percent(_at_ph(system, report, totals)) if stated else 0.0
        if pure and report.pH is not None and abs(report.pH - _ph(found)) > 0.5 and not _conditions(report):
            warnings.append(
                f"pure water has pH {_ph(found):.2f}; the given pH {report.pH:g} would need an acid or a base"
            )
    else:
        found = _at_ph(system, report, totals)
        percent = charge_error_percent(found)
        if report.alkalinity is not None:
            warnings += _fizz(found, report)
        if report.balance_on is not None:
            found = _balanced(system, report, found)
        elif abs(percent) > REFUSE_PERCENT and not report.accept_imbalance:
            raise Wrong(
                f"has a charge error of {percent:+.1f} %",
                f"above {REFUSE_PERCENT:g} % a report is not used: check it, name the ion that takes up the "
                'difference (balance_on = "Cl"), or say accept_imbalance = true',
            )
        elif abs(percent) > WARN_PERCENT:
            warnings.append(f"charge error {percent:+.1f} %, above the usual limit of {WARN_PERCENT:g} %")
    if _conditions(report):
        conditions = [saturated(system, name, index) for name, index in report.minerals.items()]
        conditions += [under_gas(system, name, pressure) for name, pressure in report.gases.items()]
        found = held_to(system, found.amount[:, 0], conditions)
        for k, name in enumerate(system.components):
            if k and found.amount[k, 0] < 0:
                raise Wrong(f"would need to give away more {name} than it holds to be saturated with "
                            f"{', '.join(map(str, conditions))}", "check what it is saturated with")
    strength = float(found.ionic_strength[0])
    if strength > system.activity.valid_to:
        warnings.append(
            f"ionic strength {strength:.3g} mol/kg: the {system.activity.name} law is meant for waters up "
            f"to {system.activity.valid_to:g}"
        )
    return Water(report.name, found, percent, tuple(warnings))


def _fizz(found: Equilibrium, report: LabReport) -> list[str]:
    """Warn of, or refuse, carbon dioxide that an alkalinity at a low pH would need."""
    pressure = float(found.gas_pressure()[found.system.gases.index("CO2"), 0])
    if pressure > REFUSE_CO2:
        raise Wrong(
            f"has an alkalinity at pH {_ph(found):.2f} that needs carbon dioxide at {pressure:.3g} atm",
            "an acid water has no alkalinity: leave it out and give CO3 or CO2, or check the pH",
        )
    if pressure > WARN_CO2:
        return [f"alkalinity and pH need carbon dioxide at {pressure:.3g} atm: the sample would fizz"]
    return []


def _conditions(report: LabReport) -> bool:
    return bool(report.minerals or report.gases)


def _ph(found: Equilibrium) -> float:
    return float(-found.log10_activity()[0, 0])


def _system_of(report: LabReport, table: Table, activity: str, excluded: Collection[str]) -> System:
    components = set(report.dissolved)
    if report.alkalinity is not None:
        components.add("CO3^2-")
    if report.balance_on not in (None, "pH"):
        components.add(str(report.balance_on))
    for name in report.minerals:
        components |= set(table.minerals[name].reaction.components)
    for name in report.gases:
        components |= set(table.gases[name].reaction.components)
    return build_system(
        table, components, table.minerals,
        temperature=report.temperature, activity=activity, excluded=excluded,
    )


def _at_ph(system: System, report: LabReport, totals: np.ndarray) -> Equilibrium:
    """The water at its pH, the carbon from the alkalinity where that is given (equations.md, 41)."""
    condition = fixed_ph(system, PURE_PH if report.pH is None else report.pH)
    if report.alkalinity is None:
        return held_to(system, totals, [condition])
    given = report.alkalinity
    carbon = system.components.index("CO3^2-")
    protons = np.array([PROTONS_AT_ENDPOINT.get(name, 0.0) for name in system.components])

    def with_carbon(amount: float) -> Equilibrium:
        changed = totals.copy()
        changed[carbon] = amount
        return held_to(system, changed, [condition])

    def excess(found: Equilibrium) -> float:
        return float(protons @ found.amount[:, 0] - found.amount[0, 0]) - given

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
    carbon_needed = _root(lambda amount: excess(with_carbon(amount)), 0.0, max(given, 1e-9))
    if carbon_needed is None:
        raise Wrong(f"has an alkalinity of {given:.3g} eq/kg that no carbon brings about", "check the pH")
    return with_carbon(carbon_needed)


def _balanced(system: System, report: LabReport, found: Equilibrium) -> Equilibrium:
    """The water with the balance ion's total moved until the charges cancel."""
    ion = str(report.balance_on)
    k = system.components.index(ion)
    charge = system.component_charge[k]
    if charge == 0:
        raise Wrong(f'is balanced on "{ion}", which carries no charge', "name an ion, such as Cl or Na")
    before = float(found.amount[k, 0])

    def with_ion(amount: float) -> Equilibrium:
        changed = found.amount[:, 0].copy()
        changed[0] = 0.0
        changed[k] = amount
        return _at_ph(system, report, changed)

    off = net_charge(found)
    needed = before - off / charge
    if needed < 0.0:
        raise Wrong(
            f'is balanced on "{ion}", which would have to fall below zero (from {before:.3g} by '
            f"{-(needed - before):.3g} mol/kg)", _who_could_serve(found, off)
        )
    amount = _root(lambda amount: net_charge(with_ion(amount)), before, needed)
    if amount is None:
        wrong = f'is balanced on "{ion}", which cannot take up the charge at that pH, even at zero'
        if ion == "CO3^2-" and report.alkalinity is not None:
            wrong = f'is balanced on "{ion}", which its alkalinity fixes'
        raise Wrong(wrong, _who_could_serve(found, off))
    return with_ion(amount)


def _who_could_serve(found: Equilibrium, off: float) -> str:
    """Name the most abundant ion that can take up a charge error, or one that can be added."""
    system = found.system
    # what the pH has put on or taken off an ion moves with it, and is lost to the balance
    protons = system.stoichiometry.T @ (system.stoichiometry[:, 0] * found.molality()[:, 0])
    carried = found.amount[:, 0] * system.component_charge + protons
    room = [
        (abs(held), name)
        for name, held, charge in zip(system.components, carried, system.component_charge, strict=True)
        if name not in (PROTON, "CO3^2-") and charge * off > 0 and held * off > off**2
    ]
    adding = "Cl" if off > 0 else "Na"
    return f'"{max(room)[1] if room else adding}" could serve'


def _root(residual: Callable[[float], float], start: float, guess: float) -> float | None:
    """Where a residual, nearly linear in one total (>= 0), vanishes; None where it keeps its sign.

    The bracket runs from start over guess, and twice as far each time, until the sign has changed.
    """
    from scipy.optimize import brentq

    first = residual(start)
    if first == 0.0:
        return start
    reach = guess - start
    for _ in range(DOUBLINGS):
        end = max(start + reach, 0.0)
        if residual(end) * first <= 0.0:
            return float(brentq(residual, start, end, xtol=1e-30, rtol=4.0 * np.finfo(float).eps))
        if end == 0.0:
            return None
        reach *= 2.0
    return None
