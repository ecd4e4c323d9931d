"""What a person wrote and what it is in SI: lengths, times, and amounts in water and in solids.

A mass becomes moles only where the substance is known, so an amount keeps *per what* it was given as its SI
unit (kg/m3, mol/m3, eq/m3 ...) and the formula of `as N`; constants/names.py turns it into moles.
"""

from __future__ import annotations

import re
from dataclasses import dataclass

from gossan.base.notation import parse_formula
from gossan.base.units import measured
from gossan.base.wrong import Wrong

IN_WATER = ("kg/m3", "mol/m3", "eq/m3", "mol/kg", "kg/kg", "eq/kg")  # per volume or per kg of water
OF_ALKALINITY = ("eq/m3", "kg/m3", "eq/kg", "kg/kg")
IN_SOLID = ("kg/kg", "mol/kg", "m3/m3", "mol/m3")  # the first two per dry solid, the others per bulk

BELOW = re.compile(r"\s*<\s*")
AS_FORMULA = re.compile(r"\s+as\s+(\S+)\s*$")
NOT_DETECTED = re.compile(r"\s*(n\.?d\.?|b\.?d\.?l\.?|u|j|--?|not detected)\s*", re.I)


@dataclass(frozen=True, slots=True)
class Amount:
    """A quantity of the case: `si` in the SI unit `unit`, beside the text and the line it came from.

    below_detection  the text was "<0.5 ug/L": `si` is half the limit
    as_formula       the substance that a mass is counted as, "N" in `10 mg/L as N`; else ""
    line             of the file, from 1; 0 for a default or a value made by the program
    """

    text: str
    si: float
    unit: str
    line: int = 0
    as_formula: str = ""
    below_detection: bool = False

    def __str__(self) -> str:
        return self.text


def amount(text: str, units: tuple[str, ...], line: int = 0, needed: str = "", example: str = "") -> Amount:
    """A quantity in one of the SI units, without detection limit or `as`; raises Wrong.

    >>> amount("20 PV", ("s", "PV"))
    Amount(text='20 PV', si=20.0, unit='PV', line=0, as_formula='', below_detection=False)
    """
    si, unit = measured(text, units, needed, example)
    return Amount(text.strip(), si, unit, line)


def in_water(text: str, line: int = 0, units: tuple[str, ...] = IN_WATER, needed: str = "an amount in water",
             example: str = "24 mg/L") -> Amount:
    """An amount in water as a laboratory writes it: `24 mg/L`, `<0.5 ug/L`, `10 mg/L as N`, `2.1 meq/L`.

    Raises  Wrong: besides those of units, a qualifier without a number, `as` with moles, no formula

    >>> in_water("<0.5 ug/L").si
    2.5e-07
    """
    if NOT_DETECTED.fullmatch(text):
        cure = 'write the detection limit, such as "<0.0005 mg/L": half of it is used'
        raise Wrong(f'is "{text}"', cure)
    below = BELOW.match(text)
    plain = text[below.end() :] if below else text
    named = AS_FORMULA.search(plain)
    si, unit = measured(plain[: named.start()] if named else plain, units, needed, example)
    formula = _formula(named[1], text, unit) if named else ""
    return Amount(text.strip(), si / 2 if below else si, unit, line, formula, bool(below))


def alkalinity(text: str, line: int = 0) -> Amount:
    """An alkalinity, a mass only with the substance it is counted as: `6 mg/L as CaCO3`, `0.12 meq/L`."""
    found = in_water(text, line, OF_ALKALINITY, "an alkalinity", "6 mg/L as CaCO3")
    if found.unit in ("kg/m3", "kg/kg") and not found.as_formula:
        wrong = f'is "{text}", without the substance it is counted as'
        raise Wrong(wrong, f'did you mean "{text} as CaCO3"?')
    if found.as_formula not in ("", "CaCO3", "HCO3"):
        raise Wrong(f'is "{text}"', "an alkalinity is counted as CaCO3 or as HCO3")
    return found


def in_solid(text: str, line: int = 0) -> Amount:
    """An amount of a solid: `0.8 wt%`, `3 g/kg`, `0.5 umol/g` of the dry solid; `2 vol%`, `1 mol/L` of bulk.

    >>> in_solid("0.8 wt%").si
    0.008
    """
    if re.search(r"\d\s*%", text):
        by_weight, by_volume = text.replace("%", "wt%"), text.replace("%", "vol%")
        raise Wrong(f'is "{text}"', f'say of what: "{by_weight}" or "{by_volume}"')
    needed = "an amount of solid (wt%, g/kg, umol/g, vol%, mol/L of bulk)"
    return amount(text, IN_SOLID, line, needed, "0.8 wt%")


def _formula(written: str, text: str, unit: str) -> str:
    """The formula after `as`, without a charge."""
    if unit not in ("kg/m3", "kg/kg"):
        raise Wrong(f'is "{text}"', f'"as {written}" goes with a mass, such as "10 mg/L as {written}"')
    formula = written.partition("^")[0].rstrip("+-")
    try:
        parse_formula(formula)
    except ValueError:
        wrong = f'is "{text}", and "{written}" is no formula'
        raise Wrong(wrong, 'write for instance "as N" or "as CaCO3"') from None
    return formula
