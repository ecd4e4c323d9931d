"""The units that people read: mg/L, hours to years, and the names of ions in print."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass

import numpy as np

from gossan.base.notation import molar_mass, split_ion
from gossan.base.units import DAY, YEAR
from gossan.store.layout import variable

TRACE = 1e-9  # mol m-3, that is 1e-12 mol/L: below this a dissolved amount is not told from nothing
BELOW_TRACE = "<1e-12"  # what is printed instead, mol/L

_RAISED = str.maketrans("0123456789+-", "⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻")
_LOWERED = str.maketrans("0123456789", "₀₁₂₃₄₅₆₇₈₉")


@dataclass(frozen=True, slots=True)
class Scale:
    """A unit for print; a value in SI times `factor` is the number that is printed."""

    unit: str
    factor: float


PLAIN = Scale("", 1.0)
AMOUNT = Scale("mmol/L", 1.0)  # mol m-3 is mmol/L


def time_scale(seconds: float) -> Scale:
    """The unit in which a time of this length (s) is best read.

    >>> time_scale(20 * 86400.0).unit, time_scale(8 * 365.25 * 86400.0).unit
    ('d', 'yr')
    """
    day, year = float(DAY), float(YEAR)
    if seconds < 2 * 60.0:
        return Scale("s", 1.0)
    if seconds < 2 * day:
        return Scale("h", 1.0 / 3600.0)
    if seconds < 3 * year:
        return Scale("d", 1.0 / day)
    return Scale("yr", 1.0 / year)


MOST_TIMES = 12


def round_times(end: float) -> np.ndarray:
    """(time,) s: a few round times from 0 to an end, which is the last; year by year where it is in years.

    >>> (round_times(8.0 * 31557600.0) / 31557600.0).round(6).tolist()
    [0.0, 1.0, 2.0, 3.0, 4.0, 5.0, 6.0, 7.0, 8.0]
    >>> (round_times(45.0 * 86400.0) / 86400.0).round(6).tolist()
    [0.0, 5.0, 10.0, 15.0, 20.0, 25.0, 30.0, 35.0, 40.0, 45.0]
    """
    factor = time_scale(end).factor
    span = end * factor
    if span <= 0.0:
        return np.zeros(1)
    decade = 10.0 ** math.floor(math.log10(span / MOST_TIMES))
    step = next(m * decade for m in (1.0, 2.0, 5.0, 10.0) if span / (m * decade) <= MOST_TIMES)
    if time_scale(end).unit == "yr":
        step = max(step, 1.0)
    whole = step * np.arange(math.floor(span / step * (1.0 - 1e-9)) + 1)
    return np.append(whole / factor, end)


def time_text(seconds: float) -> str:
    """A time with its unit, `412.6 d`.

    >>> time_text(86400.0 * 412.6)
    '412.6 d'
    """
    scale = time_scale(abs(seconds))
    return f"{seconds * scale.factor:.4g} {scale.unit}"


def length_scale(metres: float) -> Scale:
    """m, or cm for what is shorter than 50 cm."""
    return Scale("cm", 100.0) if metres < 0.5 else Scale("m", 1.0)


def solute_scale(name: str, tracer_masses: Mapping[str, float] | None = None) -> Scale:
    """mg/L of a solute, counted as the ion or molecule that names it; mmol/L of what has no mass.

    tracer_masses  kg/mol by tracer, where a case gives them

    >>> round(solute_scale("Zn^2+").factor, 2), solute_scale("H^+").unit
    (65.38, 'mmol/L')
    """
    masses = tracer_masses or {}
    if name in masses:
        return Scale("mg/L", 1e3 * masses[name])
    if name in ("H^+", "e^-"):
        return AMOUNT
    try:
        return Scale("mg/L", 1e3 * molar_mass(name))
    except ValueError:
        return AMOUNT


def dissolved_text(value: float | None, scale: Scale) -> str:
    """A dissolved amount in mol m-3 as it is printed, without the unit of its scale.

    >>> dissolved_text(0.367, solute_scale("Zn^2+")), dissolved_text(1e-20, AMOUNT)
    ('23.99', '<1e-12 mol/L')
    """
    if value is None or math.isnan(value):
        return "-"
    if abs(value) < TRACE:
        return f"{BELOW_TRACE} mol/L"
    return f"{value * scale.factor:.4g}"


def printed_ion(name: str) -> str:
    """An ion with raised and lowered figures, for figures and pages.

    >>> printed_ion("SO4^2-"), printed_ion("bromide")
    ('SO₄²⁻', 'bromide')
    """
    try:
        molar_mass(name)
    except ValueError:
        return name
    formula = split_ion(name)[0]
    return formula.translate(_LOWERED) + name.partition("^")[2].translate(_RAISED)


def axis_label(group: str, name: str, scale: Scale | None = None) -> str:
    """The title of an axis: the layout's words, in the unit of a scale where one is given.

    >>> axis_label("ports/outlet", "dissolved", Scale("mg/L", 1.0))
    'flux-averaged concentration (mg/L)'
    """
    row = variable(group, name)
    words = row.long_name.partition(",")[0]
    unit = scale.unit if scale else ("" if row.unit == "1" else row.unit)
    return f"{words} ({unit})" if unit else words
