"""The tables that show solubilities."""

from __future__ import annotations

import math
from collections.abc import Iterator

from gossan.chemistry.solubility import MOST, Solubility
from gossan.constants.temperature import KELVIN
from gossan.constants.water import density
from gossan.views.scales import BELOW_TRACE, TRACE
from gossan.views.sheet import Sheet
from gossan.views.solubility import Solubilities

NOTE = (
    "total metal beside each solid alone; from, to: with the solid's constant one sd lower and higher. "
    "Activities are ideal, as at trace; "
)
HELD = "valences are held: solids of Cu^2+ count no complexes of Cu^+"
AT_PE = "Fe, Mn and Cu count in all their valences at this pe; sulfide and all else stay as they are given"


def solubility_sheets(found: Solubilities) -> Iterator[Sheet]:
    """Solids by metal, the least soluble first, and why some have no number."""
    marks, per_litre = found.marks(), density(found.temperature) / 1e3
    rows, last = [], ""
    for row in found.rows:
        if row.known:
            metal = row.metal if row.metal != last else ""
            rows.append((metal, row.mineral, *_numbers(row, per_litre), marks.get(row.mineral, "")))
            last = row.metal
    water = [f"pH {found.pH:g}"]
    if found.pe is not None and found.Eh is not None:
        water += [f"pe {found.pe:.4g} (Eh {1e3 * found.Eh:.0f} mV)"]
    water += [f"{found.temperature - KELVIN:.4g} degC"]
    water += [f"{name} {total * per_litre:.3g} mol/L" for name, total in found.totals.items()]
    place = f"at {', '.join(water)}"
    if rows:
        heads = ("dissolved", "beside", "log10 mol/L", "mol/L", "from", "to", "")
        note = NOTE + (HELD if found.pe is None else AT_PE)
        yield Sheet(f"Solubility {place}", heads, tuple(rows), left=2, wraps=True, note=note)
    missing: dict[str, list[str]] = {}
    for row in found.rows:
        if not row.known:
            missing.setdefault(_wants(row), []).append(row.mineral)
    if missing:
        lines = tuple((why, ", ".join(solids)) for why, solids in missing.items())
        title = "Without a number" if rows else f"Without a number {place}"
        yield Sheet(title, ("for want of", "solids"), lines, left=1, wraps=True)


def _numbers(row: Solubility, per_litre: float) -> tuple[str, ...]:
    log10 = "-" if row.soluble else f"{math.log10(row.dissolved * per_litre):.2f}"
    return log10, *(_amount(value * per_litre) for value in (row.dissolved, row.low, row.high))


def _amount(molar: float) -> str:
    if molar == math.inf:
        return f">{MOST:g}"
    return BELOW_TRACE if molar < 1e-3 * TRACE else f"{molar:.2e}"


def _wants(row: Solubility) -> str:
    """What would have to be given."""
    return ", ".join([*row.lacks, *(["pe or Eh"] if row.electrons else [])])
