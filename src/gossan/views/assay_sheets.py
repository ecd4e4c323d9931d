"""The tables that an assay prints."""

from __future__ import annotations

import math
from collections.abc import Iterator

from gossan.constants.temperature import KELVIN
from gossan.views.assay import WaterAssay
from gossan.views.scales import Scale, dissolved_text, solute_scale
from gossan.views.sheet import Sheet

MAIN_SHARE = 0.001  # of its component: species with less are not printed


def assay_sheets(one: WaterAssay) -> Iterator[Sheet]:
    """Balance, totals, species, saturation indices, gases of one water."""
    yield Sheet(f"Water {one.name}", ("", ""), _facts(one), left=2)
    yield _totals(one)
    yield _species(one)
    yield from _saturation(one)
    yield from _gases(one)


def _facts(one: WaterAssay) -> tuple[tuple[str, str], ...]:
    balance = one.balanced_on or "nothing: the imbalance stays"
    return (
        ("pH", f"{one.pH:.2f}"),
        ("temperature", f"{one.temperature - KELVIN:.1f} degC"),
        ("ionic strength", f"{one.ionic_strength:.4g} mol/kg"),
        ("charge error", f"{one.charge_error_percent:+.1f} % of the report: {one.acceptance}"),
        ("balanced on", balance),
    )


def _totals(one: WaterAssay) -> Sheet:
    density = one.water.system.water_density
    rows = []
    for name, total in one.dissolved.items():
        scale = solute_scale(name)
        mass = dissolved_text(total * density, scale) if scale.unit == "mg/L" else "-"
        rows.append((name, mass, dissolved_text(total * density, Scale("mmol/kg", 1e3 / density))))
    note = "mg/L of the ion or molecule that names the component; H^+ is total excess H, alkaline below zero"
    return Sheet("Dissolved", ("component", "mg/L", "mmol/kg"), tuple(rows), note=note)


def _species(one: WaterAssay) -> Sheet:
    activities = one.species
    rows, last = [], ""
    for part in one.parts(MAIN_SHARE):
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
