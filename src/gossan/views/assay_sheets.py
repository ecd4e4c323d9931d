"""The tables that an assay prints."""

from __future__ import annotations

import math
from collections.abc import Iterator

from gossan.chemistry.redox import ELECTRON
from gossan.constants.temperature import KELVIN
from gossan.views.assay import WaterAssay
from gossan.views.scales import TRACE, Scale, dissolved_text, solute_scale
from gossan.views.sheet import Sheet

MAIN_SHARE = 0.001  # of its component: species with less are not printed
LEAST_OXYGEN = 0.5  # % of saturation: less is not printed
SAME_EH = 5e-4  # V: what rounds to the same number of mV


def assay_sheets(one: WaterAssay) -> Iterator[Sheet]:
    """Balance, totals, species, saturation indices, gases of one water."""
    yield Sheet(f"Water {one.name}", ("", ""), _facts(one), left=2)
    yield _totals(one)
    yield from _valences(one)
    yield _species(one)
    yield from _saturation(one)
    yield from _gases(one)


def _facts(one: WaterAssay) -> tuple[tuple[str, str], ...]:
    balance = one.balanced_on or "nothing: the imbalance stays"
    return (
        ("pH", f"{one.pH:.2f}"),
        *_redox(one),
        ("temperature", f"{one.temperature - KELVIN:.1f} degC"),
        ("ionic strength", f"{one.ionic_strength:.4g} mol/kg"),
        ("activity of water", f"{one.water_activity:.4f}"),
        ("charge error", f"{one.charge_error_percent:+.1f} % of the report: {one.acceptance}"),
        ("balanced on", balance),
    )


def _redox(one: WaterAssay) -> tuple[tuple[str, str], ...]:
    """pe and Eh of the water where anything is coupled, else those of the report; and its oxygen."""
    rows: list[tuple[str, str]] = []
    if not math.isnan(one.pe):
        rows += [("pe", f"{one.pe:.2f}"), ("Eh", f"{1e3 * one.Eh:.0f} mV against the hydrogen electrode")]
    elif not math.isnan(one.reported_Eh):
        rows.append(("pe", "none: nothing is coupled"))
    if not math.isnan(one.reported_Eh) and not abs(one.reported_Eh - one.Eh) < SAME_EH:
        rows.append(("Eh reported", f"{1e3 * one.reported_Eh:.0f} mV"))
    if one.oxygen_percent >= LEAST_OXYGEN:
        rows.append(("dissolved oxygen", f"{one.oxygen_percent:.0f} % of saturation with air"))
    return tuple(rows)


def _totals(one: WaterAssay) -> Sheet:
    rows = tuple((name, *_amounts(one, name, total)) for name, total in one.dissolved.items())
    note = "mg/L of the ion or molecule that names the component; H^+ is total excess H, alkaline below zero"
    if ELECTRON in one.dissolved:
        note += "; e^- what the valences hold beyond the ones named"
    return Sheet("Dissolved", ("component", "mg/L", "mmol/kg"), rows, note=note)


def _amounts(one: WaterAssay, name: str, total: float) -> tuple[str, str]:
    """A total as mg/L, where it has a mass, and as mmol/kg."""
    density, scale = one.water.system.water_density, solute_scale(name)
    mass = dissolved_text(total * density, scale) if scale.unit == "mg/L" else "-"
    return mass, dissolved_text(total * density, Scale("mmol/kg", 1e3 / density))


def _valences(one: WaterAssay) -> Iterator[Sheet]:
    """What the coupled elements are divided into."""
    rows = tuple((name, *_amounts(one, name, total)) for name, total in one.coupled.items())
    if rows:
        note = "what the elements whose valences are coupled are divided into"
        yield Sheet("Valences", ("valence", "mg/L", "mmol/kg"), rows, note=note)


def _species(one: WaterAssay) -> Sheet:
    activities = one.species
    rows, last = [], ""
    density = one.water.system.water_density
    for part in one.parts(MAIN_SHARE):
        if one.valences[part.component] * density < TRACE:
            continue
        first = part.component if part.component != last else ""
        amount, activity = f"{1e3 * part.molality:.4g}", f"{activities[part.species][1]:.3f}"
        rows.append((first, part.species, amount, f"{100 * part.share:.1f}", activity))
        last = part.component
    heads = ("component", "species", "mmol/kg", "% of it", "log10 activity")
    return Sheet("Species", heads, tuple(rows), left=2, note=f"above {100 * MAIN_SHARE:g} % of a component")


def _saturation(one: WaterAssay) -> Iterator[Sheet]:
    rows = tuple(
        (name, f"{index:.2f}", "may form" if name in one.forms else "")
        for name, index in one.saturation.items() if not math.isnan(index)
    )  # fmt: skip
    if rows:
        note = "log10 of ion activity product over Ksp; marked: may form in a column of this case"
        yield Sheet("Saturation indices", ("mineral", "index", ""), rows, note=note)


def _gases(one: WaterAssay) -> Iterator[Sheet]:
    rows = tuple(
        (name, f"{pressure:.3g}", f"{math.log10(pressure):.2f}")
        for name, pressure in one.gases.items() if pressure > 0.0
    )  # fmt: skip
    if rows:
        yield Sheet("Gases", ("gas", "bar", "log10"), rows)
