"""Text with a unit to a number in SI: the trade's units by a small table, all others by pint.

Importing pint and building its registry takes 0.6 s, more than all the rest of reading a case. So the
units that cases are made of (`mg/L`, `m/d`, `yr`, `wt%` ...) stand in the table below, as exact fractions:
the result is the double nearest to what was written. tests/base/test_units.py holds the table against pint.
"""

from __future__ import annotations

import math
import re
from fractions import Fraction
from functools import cache, lru_cache
from typing import NamedTuple

from gossan.base.wrong import Wrong, closest

# SI unit -> what a person calls it, and how one is written; the first texts of a row are also suggestions
KINDS: dict[str, tuple[str, tuple[str, ...]]] = {
    "m": ("a length", ("1.2 m", "2 cm", "3 ft")),
    "s": ("a time", ("5 yr", "30 d", "6 h", "90 s")),
    "PV": ("a number of pore volumes", ("20 PV",)),
    "m/s": ("a velocity", ("0.12 m/d", "1e-4 cm/s", "1 ft/d", "40 m/yr")),
    "m2/s": ("a diffusion coefficient", ("1e-9 m2/s", "1e-5 cm2/s")),
    "1/s": ("a rate per time", ("1e-6 1/s", "0.2 1/d")),
    "K": ("a temperature", ("12 degC", "285.15 K")),
    "kg/m3": ("a mass per volume", ("24 mg/L", "3 ug/L", "2650 kg/m3", "2.65 g/cm3")),
    "mol/m3": ("moles per volume", ("0.4 mmol/L", "1 mol/m3", "5 umol/L")),
    "kg/m4": ("a mass per volume and length", ("5 mg/L/m",)),
    "mol/m4": ("moles per volume and length", ("0.1 mmol/L/m",)),
    "eq/m3": ("equivalents per volume", ("2.1 meq/L",)),
    "kg/kg": ("a mass per mass", ("0.8 wt%", "3 g/kg", "24 mg/kg")),
    "mol/kg": ("moles per mass", ("0.5 umol/g", "0.4 mmol/kg", "1 mol/kg")),
    "eq/kg": ("equivalents per mass", ("4 meq/100g", "2 meq/kg")),
    "m3/m3": ("a volume per volume", ("2 vol%",)),
    "m3/kg": ("a volume per mass", ("2 L/kg", "0.2 L/mg")),
    "m3/mol": ("a volume per amount of substance", ("3 L/mmol",)),
    "kg/mol": ("a molar mass", ("79.9 g/mol",)),
    "Pa": ("a pressure", ("0.003 atm", "0.2 bar", "30 Pa")),
    "V": ("a voltage", ("310 mV",)),
    "s-1": ("a frequency", ("1 Hz",)),
    "1": ("a number without a unit", ("0.38",)),
    "kg": ("a mass", ("1 kg",)),
    "mol": ("an amount of substance", ("1 mol",)),
    "eq": ("an amount of charge", ("1 meq",)),
    "m3": ("a volume", ("1 L",)),
    "m2": ("an area", ("1 m2",)),
}


def _scaled(prefixes: str, symbol: str, si: str, factor: str = "1") -> dict[str, tuple[Fraction, str]]:
    """A unit under several SI prefixes ("" among them is written "-")."""
    powers = {"-": "1", "k": "1e3", "h": "1e2", "c": "1e-2", "m": "1e-3", "u": "1e-6", "n": "1e-9"}
    return {
        prefix.strip("-") + symbol: (Fraction(powers[prefix]) * Fraction(factor), si) for prefix in prefixes
    }


DAY = Fraction(86400)
YEAR = Fraction("365.25") * DAY  # the Julian year, as pint has it

TABLE: dict[str, tuple[Fraction, str]] = {
    "1": (Fraction(1), "1"),
    **_scaled("-kcmun", "m", "m"),
    **dict.fromkeys(("in", "inch"), (Fraction("0.0254"), "m")),
    **dict.fromkeys(("ft", "foot", "feet"), (Fraction("0.3048"), "m")),
    **dict.fromkeys(("s", "sec", "second", "seconds"), (Fraction(1), "s")),
    **dict.fromkeys(("min", "minute", "minutes"), (Fraction(60), "s")),
    **dict.fromkeys(("h", "hr", "hour", "hours"), (Fraction(3600), "s")),
    **dict.fromkeys(("d", "day", "days"), (DAY, "s")),
    **dict.fromkeys(("week", "weeks"), (7 * DAY, "s")),
    **dict.fromkeys(("month", "months"), (YEAR / 12, "s")),
    **dict.fromkeys(("yr", "a", "year", "years"), (YEAR, "s")),
    **_scaled("-kmun", "g", "kg", "1e-3"),
    **dict.fromkeys(("t", "tonne", "tonnes"), (Fraction(1000), "kg")),
    "100g": (Fraction("0.1"), "kg"),
    **_scaled("-kmun", "mol", "mol"),
    **_scaled("-mu", "eq", "eq"),
    **_scaled("-cmu", "L", "m3", "1e-3"),
    **_scaled("-cmu", "l", "m3", "1e-3"),
    "m2": (Fraction(1), "m2"),
    "cm2": (Fraction("1e-4"), "m2"),
    "mm2": (Fraction("1e-6"), "m2"),
    "m3": (Fraction(1), "m3"),
    "dm3": (Fraction("1e-3"), "m3"),
    "cm3": (Fraction("1e-6"), "m3"),
    **_scaled("-kh", "Pa", "Pa"),
    **_scaled("-m", "bar", "Pa", "1e5"),
    "atm": (Fraction(101325), "Pa"),
    **_scaled("-m", "V", "V"),
    "K": (Fraction(1), "K"),
    "molal": (Fraction(1), "mol/kg"),
    "M": (Fraction(1000), "mol/m3"),
    "mM": (Fraction(1), "mol/m3"),
    "wt%": (Fraction("0.01"), "kg/kg"),
    "vol%": (Fraction("0.01"), "m3/m3"),
    "PV": (Fraction(1), "PV"),
    "%": (Fraction("0.01"), "1"),
    **dict.fromkeys(("permil", "‰"), (Fraction("1e-3"), "1")),
}

CELSIUS_ZERO = Fraction("273.15")

UNCLEAR = {
    "ppm": "can be mg/L, mg/kg or a share of moles or of a gas's volume",
    "ppb": "can be ug/L, ug/kg or a share of moles or of a gas's volume",
    "ppt": "can be parts per thousand or per trillion, by mass or by volume",
}

NUMBER = re.compile(r"[+-]?(?:\d+\.?\d*|\.\d+)(?:[eE][+-]?\d+)?")
# a factor is letters with at most one digit of exponent: pint evaluates exponents, and 9**9**9 takes for ever
SYMBOL = r"[A-Za-z%]+(?:\^?-?[1-9])?"
UNIT = re.compile(rf"(?:1|{SYMBOL})(?:\s*[*/ ]\s*\(?\s*{SYMBOL}\s*\)?)*")
CHARACTERS = str.maketrans(
    {"µ": "u", "μ": "u", "²": "2", "³": "3", "⁻": "-", "¹": "1", "·": "*", "⋅": "*"}
    | {"\u2212": "-", "\u00d7": "x", "\u00a0": " "}  # minus and times signs, a space that does not break
)


class Quantity(NamedTuple):
    """A number in SI, and the SI unit that it is in (one of KINDS, or pint's words for another)."""

    si: float
    unit: str


def si(text: str, unit: str) -> float:
    """The quantity in `text` as a number of the SI unit that is demanded.

    text    a number and a unit, "0.12 m/d"
    unit    one of KINDS, "m/s"
    Raises  Wrong in a sentence: no unit, unknown unit, another dimension, not a finite number

    >>> si("36 cm/h", "m/s")
    0.0001
    >>> si("12 degC", "K")
    285.15
    """
    return measured(text, (unit,)).si


def measured(text: str, units: tuple[str, ...], needed: str = "", example: str = "") -> Quantity:
    """The quantity in `text`, which must be in one of several SI units.

    needed, example   what to call it and how one is written, where the words of KINDS are too wide
    Raises            Wrong

    >>> measured("0.8 wt%", ("kg/kg", "mol/kg"))
    Quantity(si=0.008, unit='kg/kg')
    """
    needed = needed or " or ".join(KINDS[unit][0] for unit in units)
    example = example or KINDS[units[0]][1][0]
    number, unit_text = split(text, needed, example)
    said = f'is "{text.strip()}"'
    if not unit_text and units != ("1",):
        usual = example.split(" ", 1)[1]
        raise Wrong(f"{said}, without a unit; {needed} is needed", f'did you mean "{number} {usual}"?')
    try:
        quantity = in_si(number, unit_text or "1")
    except UnknownUnit as unknown:
        close = _suggestion(unit_text, units)
        cure = f'did you mean "{number} {close}"?' if close else f'{needed} is written such as "{example}"'
        raise Wrong(f'{said}, and "{unit_text}" {unknown}', cure) from None
    if quantity.unit not in units:
        close = _suggestion(unit_text, units, cutoff=0.8)
        given = f"{KINDS[quantity.unit][0]}, where" if quantity.unit in KINDS else "but"
        cure = f'did you mean "{number} {close}"?' if close else f'write for instance "{example}"'
        raise Wrong(f"{said}, {given} {needed} is needed", cure)
    return quantity


def split(text: str, needed: str, example: str) -> tuple[str, str]:
    """The number and the unit of a text, both still text.

    Raises  Wrong where it does not start with a finite number written with a decimal point
    """
    plain = text.strip().translate(CHARACTERS).replace("**", "^")
    said = f'is "{text.strip()}"'
    match = NUMBER.match(plain)
    if re.match(r"[+-]?\d+,\d", plain):
        cure = f'the decimal sign is a point: "{plain.replace(",", ".", 1)}"'
        if re.match(r"[+-]?[1-9]\d{0,2}(,\d{3})+(?!\d)", plain):
            cure += f', or "{plain.replace(",", "")}"?'
        raise Wrong(f"{said}, with a comma", cure)
    if re.match(r"[+-]?[\d.]+\s*[x*]\s*10\s*\^?", plain):
        raise Wrong(said, f'powers of ten are written with an e, such as "1e-9": "{example}"')
    if not match or re.match(r"[\d.]", plain[match.end() :]):
        what = "not a finite number" if re.match(r"[+-]?(nan|inf)", plain, re.I) else f"not {needed}"
        raise Wrong(f"{said}, {what}", f'write for instance "{example}"')
    number = match.group()
    if not math.isfinite(float(number)):
        raise Wrong(f"{said}, too large a number", f'write for instance "{example}"')
    return number, plain[match.end() :].strip()


class UnknownUnit(ValueError):
    """A unit that neither the table nor pint knows, or one that does not say enough."""


def in_si(number: str, unit: str) -> Quantity:
    """A number, still text, in SI: the nearest double where the table knows the unit.

    Raises  UnknownUnit

    >>> in_si("180", "mg/L")
    Quantity(si=0.18, unit='kg/m3')
    """
    if unit in UNCLEAR:
        raise UnknownUnit(UNCLEAR[unit])
    if unit in ("degC", "°C"):
        return Quantity(float(_exact(number) + CELSIUS_ZERO), "K")
    known = _from_table(unit)
    if known:
        return Quantity(float(_exact(number) * known[0]), known[1])
    return _from_pint(number, unit)


def _exact(number: str) -> Fraction:
    """The number as a fraction; zero below the range of doubles, where a fraction could fill the memory."""
    return Fraction(number) if float(number) else Fraction(0)


@lru_cache(maxsize=1024)
def _from_table(unit: str) -> tuple[Fraction, str] | None:
    """Factor and SI unit of a unit of the table, or of one over another."""
    unit = re.sub(r"\s*/\s*", "/", unit.replace("^", "").replace("100 g", "100g"))
    if unit in TABLE:
        return TABLE[unit]
    above, slash, below = unit.partition("/")
    if not slash or above not in TABLE or below not in TABLE:
        return None
    (top, top_si), (bottom, bottom_si) = TABLE[above], TABLE[below]
    name = f"{top_si}/{bottom_si}"
    return (top / bottom, name) if name in KINDS else None


@cache
def _registry():
    """Pint's units with equivalents, a kind of their own."""
    import pint

    registry: pint.UnitRegistry = pint.UnitRegistry()
    registry.define("equivalent = [equivalent_charge] = eq")
    return registry


@cache
def _dimensions() -> dict:
    """Pint's dimensionality -> our SI unit; shares (kg/kg, m3/m3) are left out, pint cannot tell them."""
    registry = _registry()
    kinds = {}
    for unit in KINDS:
        if unit not in ("PV", "kg/kg", "m3/m3", "s-1"):
            kinds[registry.parse_units(_for_pint(unit)).dimensionality] = unit
    return kinds


def _for_pint(unit: str) -> str:
    """`m2 s-1` as pint writes it, `m**2 * s**-1`."""
    unit = re.sub(r"([A-Za-z])\^?(-?\d)", r"\1**\2", unit)
    return "dimensionless" if unit == "1" else re.sub(r"^1\s*/", "1/", unit)


def _from_pint(number: str, unit: str) -> Quantity:
    if not UNIT.fullmatch(unit) or unit.count("(") != unit.count(")"):
        raise UnknownUnit("is not a unit that is known")
    registry = _registry()
    try:
        quantity = registry.Quantity(float(number), registry.parse_units(_for_pint(unit))).to_base_units()
        kind = _dimensions().get(quantity.dimensionality)
        factor = registry.Quantity(1.0, quantity.units).to(_for_pint(kind)).magnitude if kind else 1.0
        value = float(quantity.magnitude) * factor
    except Exception as error:  # pint raises its own, tokenize's and Python's errors for odd texts
        raise UnknownUnit("is not a unit that is known") from error
    if not math.isfinite(value):
        raise UnknownUnit("leads beyond the range of numbers")
    return Quantity(value, kind or f"{quantity.units:~}" or "1")


def _suggestion(unit: str, units: tuple[str, ...], cutoff: float = 0.5) -> str:
    """The unit of a demanded kind whose text is most like the one given, or ""."""
    if unit in UNCLEAR:
        cutoff = 1.0
    if "K" in units and unit.lower() in ("c", "deg c", "°", "deg", "celsius", "degrees c", "degree c"):
        return "degC"
    choices = {text.split(" ", 1)[1]: None for name in units for text in KINDS[name][1] if " " in text}
    return closest(unit, choices, cutoff)
