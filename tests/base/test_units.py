"""Texts with units, against pint and against numbers worked out by hand."""

import math
import subprocess
import sys
from fractions import Fraction

import pint
import pytest
from hypothesis import given
from hypothesis import strategies as st

from gossan.base.amounts import alkalinity, in_solid, in_water
from gossan.base.units import KINDS, TABLE, measured, si
from gossan.base.wrong import Wrong

PINT = pint.UnitRegistry()
PINT.define("equivalent = [equivalent_charge] = eq")
OURS_ALONE = {"PV", "wt%", "vol%", "permil", "‰", "%", "1", "molal", "M", "mM", "100g"}


@pytest.mark.parametrize("unit", sorted(set(TABLE) - OURS_ALONE))
def test_the_table_agrees_with_pint(unit):
    factor, kind = TABLE[unit]
    said = {"m2": "m**2", "cm2": "cm**2", "mm2": "mm**2", "m3": "m**3", "dm3": "dm**3", "cm3": "cm**3"}
    theirs = PINT.Quantity(1.0, said.get(unit, unit)).to(said.get(kind, kind)).magnitude
    # pint multiplies floats where the table holds fractions: a few units in the last place
    assert float(factor) == pytest.approx(theirs, rel=1e-14)


@pytest.mark.parametrize(
    ("text", "unit", "expected"),
    [
        ("0.12 m/d", "m/s", 0.12 / 86400),
        ("36 cm/h", "m/s", 1e-4),
        ("1 ft/d", "m/s", 0.3048 / 86400),
        ("40 m/a", "m/s", 40 / (365.25 * 86400)),
        ("1e-4 cm/s", "m/s", 1e-6),
        ("3 m s-1", "m/s", 3.0),
        ("3 m s⁻¹", "m/s", 3.0),
        ("1 gal/d/ft2", "m/s", 0.003785411784 / 86400 / 0.3048**2),
        ("5 yr", "s", 5 * 365.25 * 86400),
        ("5 years", "s", 5 * 365.25 * 86400),
        ("2 weeks", "s", 14 * 86400),
        ("20 PV", "PV", 20.0),
        ("12 degC", "K", 285.15),
        ("12 °C", "K", 285.15),
        ("50 degF", "K", 283.15),
        ("285.15 K", "K", 285.15),
        ("24 mg/L", "kg/m3", 0.024),
        ("24 mg/l", "kg/m3", 0.024),
        ("24mg/L", "kg/m3", 0.024),
        ("24 mg L-1", "kg/m3", 0.024),
        ("3 ug/L", "kg/m3", 3e-6),
        ("3 µg/L", "kg/m3", 3e-6),
        ("2.65 g/cm3", "kg/m3", 2650.0),
        ("0.367 mmol/L", "mol/m3", 0.367),
        ("1 mol/L", "mol/m3", 1000.0),
        ("2.1 meq/L", "eq/m3", 2.1),
        ("4 meq/100g", "eq/kg", 0.04),
        ("4 meq/100 g", "eq/kg", 0.04),
        ("0.5 umol/g", "mol/kg", 5e-4),
        ("0.8 wt%", "kg/kg", 0.008),
        ("2 vol%", "m3/m3", 0.02),
        ("1e-9 m2/s", "m2/s", 1e-9),
        ("1e-9 m²/s", "m2/s", 1e-9),
        ("1e-9 m^2/s", "m2/s", 1e-9),
        ("1e-5 cm2/s", "m2/s", 1e-9),
        ("1e-6 1/s", "1/s", 1e-6),
        ("1e-6 s-1", "1/s", 1e-6),
        ("0.003 atm", "Pa", 303.975),
        ("1 psi", "Pa", 6894.757293168),
        ("79.9 g/mol", "kg/mol", 0.0799),
        ("2 L/kg", "m3/kg", 0.002),
        ("310 mV", "V", 0.31),
        ("-2 m", "m", -2.0),
        ("5 permil", "1", 0.005),
    ],
)
def test_units_of_the_trade(text, unit, expected):
    assert si(text, unit) == pytest.approx(expected, rel=1e-12)


def test_what_the_table_knows_is_the_nearest_double():
    """0.3 m/d times a float factor would be off in the last place for some numbers; fractions never are."""
    for number in ("0.1", "0.3", "1.7", "123.456", "7e-9"):
        assert si(f"{number} m/d", "m/s") == float(Fraction(number) / 86400)


@pytest.mark.parametrize(
    ("text", "unit", "words"),
    [
        ("12", "K", 'without a unit; a temperature is needed: did you mean "12 degC"?'),
        ("12 C", "K", 'did you mean "12 degC"?'),
        ("12 m", "m/s", 'is "12 m", a length, where a velocity is needed'),
        ("5 d", "m", "a time, where a length is needed"),
        ("24 mgl", "kg/m3", '"mgl" is not a unit that is known: did you mean "24 mg/L"?'),
        ("24 MG/L", "kg/m3", 'did you mean "24 mg/L"?'),
        ("24 ppm", "kg/m3", '"ppm" can be mg/L, mg/kg'),
        ("3 furlongss", "m", '"furlongss" is not a unit that is known'),
        ("0,12 m/d", "m/s", 'the decimal sign is a point: "0.12 m/d"'),
        ("1,300 mg/L", "kg/m3", 'the decimal sign is a point: "1.300 mg/L", or "1300 mg/L"?'),
        ("1x10^-9 m2/s", "m2/s", 'such as "1e-9"'),
        ("nan m", "m", "not a finite number"),
        ("inf m", "m", "not a finite number"),
        ("-inf m", "m", "not a finite number"),
        ("1e999 m", "m", "too large a number"),
        ("", "m", 'not a length: write for instance "1.2 m"'),
        ("fast", "m/s", "not a velocity"),
        ("1.2.3 m", "m", "not a length"),
        ("3 m^9^9^9", "m", "not a unit that is known"),
        ("20 PV", "m", "a number of pore volumes, where a length is needed"),
        ("0.8 wt%", "m3/m3", "a mass per mass, where a volume per volume is needed"),
        ("1e300 Ym", "m", "beyond the range of numbers"),
    ],
)
def test_a_wrong_text_is_refused_in_a_sentence(text, unit, words):
    with pytest.raises(Wrong) as caught:
        si(text, unit)
    assert words in str(caught.value)


def test_vanishing_numbers_need_no_memory():
    assert si("1e-999999999 m", "m") == 0.0


def says_why_or_is_finite(text, units):
    """Whether the text is a finite quantity or is refused with a sentence; any other error comes through."""
    try:
        return math.isfinite(measured(text, units).si)
    except Wrong as error:
        return len(str(error)) > 20


@given(st.text(max_size=30))
def test_any_text_is_a_quantity_or_a_sentence(text):
    assert says_why_or_is_finite(text, ("m", "kg/m3"))


UNIT_TEXTS = st.lists(
    st.sampled_from([*TABLE, "*", "/", " ", "^2", "-1", "(", ")", "1", "psi", "x"]), min_size=1, max_size=6
).map("".join)


@given(st.sampled_from(["1", "-2.5", "3e4", "0"]), UNIT_TEXTS, st.sampled_from(sorted(KINDS)))
def test_any_chain_of_units_is_a_quantity_or_a_sentence(number, unit, kind):
    assert says_why_or_is_finite(f"{number} {unit}", (kind,))


@given(st.floats(-1e12, 1e12, allow_subnormal=False), st.sampled_from(sorted(set(TABLE) - OURS_ALONE)))
def test_numbers_scale(number, unit):
    """Every number keeps its sign and its proportion, within the rounding of one product of normal floats."""
    factor, kind = TABLE[unit]
    assert si(f"{number!r} {unit}", kind) == pytest.approx(number * float(factor), rel=1e-15, abs=1e-300)


def test_pint_stays_away_until_it_is_needed():
    """Pint costs more time than reading a whole case, so common texts must not import it."""
    code = (
        "import sys; from gossan.base.units import si; si('0.12 m/d', 'm/s'); si('4 meq/100g', 'eq/kg');"
        "si('12 °C', 'K'); si('20 PV', 'PV'); assert 'pint' not in sys.modules; si('1 psi', 'Pa');"
        "assert 'pint' in sys.modules"
    )
    subprocess.run([sys.executable, "-c", code], check=True)


def test_amounts_in_water():
    assert in_water("24 mg/L").unit == "kg/m3"
    nitrate = in_water("10 mg/L as N", line=7)
    assert (nitrate.si, nitrate.as_formula, nitrate.line) == (0.01, "N", 7)
    cadmium = in_water("<0.0005 mg/L")
    assert cadmium.below_detection
    assert cadmium.si == pytest.approx(0.25e-6)
    assert cadmium.text == "<0.0005 mg/L"
    assert alkalinity("6 mg/L as CaCO3").as_formula == "CaCO3"
    assert alkalinity("0.12 meq/L").unit == "eq/m3"


def test_amounts_in_solids():
    texts = ("0.8 wt%", "3 g/kg", "0.5 umol/g", "2 vol%", "0.1 mol/L", "5 kg/t")
    units = [in_solid(text).unit for text in texts]
    assert units == ["kg/kg", "kg/kg", "mol/kg", "m3/m3", "mol/m3", "kg/kg"]


@pytest.mark.parametrize(
    ("read", "text", "words"),
    [
        (in_water, "ND", "write the detection limit"),
        (in_water, "--", "write the detection limit"),
        (in_water, "2 mmol/L as N", '"as N" goes with a mass'),
        (in_water, "2 mg/L as Xx", '"Xx" is no formula'),
        (in_water, "3 wt%/L", "not a unit that is known"),
        (in_water, "3 d", "a time, where an amount in water is needed"),
        (alkalinity, "6 mg/L", 'did you mean "6 mg/L as CaCO3"?'),
        (alkalinity, "6 mg/L as N", "counted as CaCO3 or as HCO3"),
        (alkalinity, "6 mmol/L", "where an alkalinity is needed"),
        (in_solid, "3 %", 'say of what: "3 wt%" or "3 vol%"'),
        (in_solid, "3 mg/L", "a mass per volume, where an amount of solid"),
    ],
)
def test_a_wrong_amount_is_refused_in_a_sentence(read, text, words):
    with pytest.raises(Wrong) as caught:
        read(text)
    assert words in str(caught.value)
