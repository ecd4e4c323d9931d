"""What a report says that a water can hardly be, or cannot be at all."""

from __future__ import annotations

import numpy as np

from gossan.base.wrong import Wrong
from gossan.chemistry.equilibrium import Equilibrium
from gossan.chemistry.reading import Reading
from gossan.chemistry.redox import ELECTRON, PROTON
from gossan.chemistry.valences import valence_totals
from gossan.constants.couples import partner
from gossan.constants.entries import Component, Table
from gossan.constants.oxygen import air_saturated
from gossan.constants.potential import potential_of_pe, pressures_of_water

WARN_CO2, REFUSE_CO2 = 1.0, 10.0  # atm; no well or adit is under the second (common practice, no source)
# log10 atm of oxygen or hydrogen: from the first on water bubbles; the second (45 mV beyond it for O2, 90 mV
# for H2) an electrode passes only by a slip of sign, unit or reference (common practice, no source)
WARN_BUBBLES, REFUSE_BUBBLES = 0.0, 3.0
WARN_OXYGEN = 1.05  # of air saturation; meters read to a few per cent (common practice, no source)
LASTS = 0.99  # of what a report names; more than the rest is worth a word
LEAST_SHARE = 1e-3  # % of an element: less of a valence is not worth a word
CALLED = {"O2": "oxygen", "H2": "hydrogen"}


def fizz(found: Equilibrium, ph: float) -> list[str]:
    """Warn of, or refuse, carbon dioxide that an alkalinity at a low pH would need."""
    pressure = float(found.gas_pressure()[found.system.gases.index("CO2"), 0])
    if pressure > REFUSE_CO2:
        raise Wrong(
            f"has an alkalinity at pH {ph:.2f} that needs carbon dioxide at {pressure:.3g} atm",
            "an acid water has no alkalinity: leave it out and give CO3 or CO2, or check the pH",
        )
    if pressure > WARN_CO2:
        return [f"alkalinity and pH need carbon dioxide at {pressure:.3g} atm: the sample would fizz"]
    return []


def stability(pe: float, ph: float, temperature: float, table: Table) -> list[str]:
    """Warn of, or refuse, a pe at which water itself falls apart at that pH (equations.md, 61)."""
    log10_pressure, gas = max((p, gas) for gas, p in pressures_of_water(pe, ph, temperature, table).items())
    if log10_pressure <= WARN_BUBBLES:
        return []
    told = (
        f"pe {pe:.2f} (Eh {1e3 * potential_of_pe(pe, temperature):.0f} mV) at pH {ph:.2f} is outside of what "
        f"water can stand: {CALLED[gas]} would have {_power(log10_pressure)} atm"
    )
    if log10_pressure > REFUSE_BUBBLES:
        raise Wrong(f"has a redox state that cannot be: {told}",
                    "check its sign and unit, that Eh is against the hydrogen electrode, and the pH")
    return [told]


def oxygen(found: float, temperature: float) -> list[str]:
    """Warn of more dissolved oxygen (mol/kg) than air would leave in the water (equations.md, 62)."""
    share = found / air_saturated(temperature)
    if share <= WARN_OXYGEN:
        return []
    return [
        f"dissolved oxygen is {100.0 * share:.0f} % of saturation with air at that temperature: check the "
        "unit, and whether the sample was shaken or full of algae"
    ]


def poise(reading: Reading, found: Equilibrium, pe: float) -> list[str]:
    """Warn of a pe that nothing in the report says: every element stands in one valence alone."""
    report, system = reading.report, found.system
    said = any(report.dissolved.get(name) for name in system.valences)
    carried = [found.system.gas_stoichiometry[system.gases.index(name)] for name in report.gases]
    carried += [system.matrices.solid[system.minerals.index(name)] for name in report.minerals]
    if report.says_pe or said or any(row @ system.conserved[:, system.electron] for row in carried):
        return []
    return [
        f"nothing says how oxidised it is: its pe of {pe:.1f} follows from elements in one valence each; "
        "give Eh, pe or dissolved_oxygen, or name valences, such as Fe(II) and Fe(III)"
    ]


def division(reading: Reading, found: Equilibrium, pe: float) -> list[str]:
    """Say how pe has divided the elements whose valence nobody said."""
    held = dict(zip(reading.system.basis, valence_totals(found).tolist(), strict=True))
    told = []
    for name in reading.divided:
        component: Component = reading.table.components[name]
        there, other = held[name], held[partner(component)]
        share = 100.0 * there / (there + other) if there + other > 0.0 else 0.0
        if share > LEAST_SHARE:
            told.append(f"at pe {pe:.2f}, {share:.3g} % of {_element(partner(component))} is {name}")
    return told


def reacted(reading: Reading, found: Equilibrium, pe: float) -> list[str]:
    """Say which valences that the report names do not last beside its others, or at its pe."""
    system, report = reading.system, reading.report
    count = len(system.components)
    counted = np.any(system.conserved[count:] != 0.0, axis=0).tolist()
    coupled = {name for name, others in zip(system.components, counted, strict=True) if others}
    coupled |= set(system.valences)
    coupled -= {PROTON, ELECTRON, str(report.balance_on), *report.undivided}
    told = []
    for name, named, left in zip(system.basis, reading.totals, valence_totals(found), strict=True):
        if name in coupled and left < LASTS * named:
            told.append(f"of {named:.3g} mol/kg of {name} in the report {left:.3g} are left at pe {pe:.2f}")
    return told


def _power(log10: float) -> str:
    return f"{10.0**log10:.2g}" if abs(log10) < 6.0 else f"1e{log10:.0f}"


def _element(ion: str) -> str:
    return ion.partition("^")[0]
