"""Names of a laboratory report and the moles they stand for, against arithmetic with IUPAC atomic weights."""

import pytest

from gossan.base.amounts import alkalinity, in_water
from gossan.base.wrong import Wrong
from gossan.constants.names import component_named, equivalents, moles, usual_names

COMPONENTS = [
    "H^+", "Na^+", "K^+", "Ca^2+", "Mg^2+", "Mn^2+", "Fe^2+", "Fe^3+", "Co^2+", "Ni^2+", "Cu^2+", "Cu^+",
    "Zn^2+", "Cd^2+", "Pb^2+", "Al^3+", "Cl^-", "SO4^2-", "HS^-", "CO3^2-", "NO3^-", "NH4^+", "PO4^3-",
    "C2O4^2-", "H4SiO4",
]  # fmt: skip


@pytest.mark.parametrize(
    ("text", "component", "formula"),
    [
        ("Ca", "Ca^2+", "Ca"),
        ("Ca^2+", "Ca^2+", "Ca"),
        ("Ca²⁺", "Ca^2+", "Ca"),
        ("calcium", "Ca^2+", "Ca"),
        ("Na+", "Na^+", "Na"),
        ("SO4", "SO4^2-", "SO4"),
        ("SO4^2-", "SO4^2-", "SO4"),
        ("SO₄²⁻", "SO4^2-", "SO4"),
        ("sulfate", "SO4^2-", "SO4"),
        ("Sulphate", "SO4^2-", "SO4"),
        ("HSO4^-", "SO4^2-", "HSO4"),
        ("HCO3", "CO3^2-", "HCO3"),
        ("HCO3^-", "CO3^2-", "HCO3"),
        ("CO3", "CO3^2-", "CO3"),
        ("CO2", "CO3^2-", "CO2"),
        ("C", "CO3^2-", "C"),
        ("Fe", "Fe^2+", "Fe"),
        ("Fe(II)", "Fe^2+", "Fe"),
        ("Fe(III)", "Fe^3+", "Fe"),
        ("Fe^3+", "Fe^3+", "Fe"),
        ("Cu", "Cu^2+", "Cu"),
        ("Cu(I)", "Cu^+", "Cu"),
        ("Cu+", "Cu^+", "Cu"),
        ("HS", "HS^-", "HS"),
        ("H2S", "HS^-", "H2S"),
        ("sulfide", "HS^-", "S"),
        ("S(-II)", "HS^-", "S"),
        ("S(VI)", "SO4^2-", "S"),
        ("S^2-", "HS^-", "S"),
        ("NO3", "NO3^-", "NO3"),
        ("nitrate", "NO3^-", "NO3"),
        ("NH4", "NH4^+", "NH4"),
        ("Si", "H4SiO4", "Si"),
        ("SiO2", "H4SiO4", "SiO2"),
        ("H4SiO4", "H4SiO4", "H4SiO4"),
        ("Al", "Al^3+", "Al"),
        ("Cl", "Cl^-", "Cl"),
        ("chloride", "Cl^-", "Cl"),
        ("oxalate", "C2O4^2-", "C2O4"),
        ("C2O4", "C2O4^2-", "C2O4"),
        ("P", "PO4^3-", "P"),
        ("PO4", "PO4^3-", "PO4"),
        ("lead", "Pb^2+", "Pb"),
    ],
)
def test_a_name_gives_the_component_and_the_mass(text, component, formula):
    named = component_named(text, COMPONENTS)
    assert (named.component, named.formula) == (component, formula)


def test_every_usual_name_is_read():
    for name in usual_names(COMPONENTS):
        assert component_named(name, COMPONENTS).component in COMPONENTS


@pytest.mark.parametrize(
    ("text", "words"),
    [
        ("S", '"SO4" for sulfate, "HS" for sulfide'),
        ("N", '"NO3" or "NH4"'),
        ("H", "the pH says it"),
        ("OH^-", "the pH says it"),
        ("O2", "write dissolved_oxygen"),
        ("Zm", "it holds Na, K, Ca"),
        ("Zn^3+", 'did you mean "Zn^2+"?'),
        ("sulfat", 'did you mean "sulfate"?'),
        ("SO5", 'did you mean "SO4"?'),
        ("fluoride", "which the table of constants lacks"),
        ("Fe(VI)", "which the table of constants lacks"),
        ("CH3COO", "the table of constants has no CH3COO^-"),
        ("", "which the table of constants lacks"),
        ("Zn++", "which the table of constants lacks"),
    ],
)
def test_an_unknown_name_is_refused_in_a_sentence(text, words):
    with pytest.raises(Wrong) as caught:
        component_named(text, COMPONENTS)
    assert words in str(caught.value)


@pytest.mark.parametrize(
    ("name", "text", "expected"),  # mol/m3, from atomic weights in g/mol
    [
        ("Zn", "24 mg/L", 24 / 65.38),
        ("NO3", "10 mg/L", 10 / 62.004),
        ("NO3", "10 mg/L as N", 10 / 14.007),
        ("NH4", "10 mg/L as N", 10 / 14.007),
        ("SO4", "10 mg/L as S", 10 / 32.06),
        ("PO4", "10 mg/L as P", 10 / 30.974),
        ("Si", "10 mg/L as SiO2", 10 / 60.083),
        ("SiO2", "10 mg/L", 10 / 60.083),
        ("SiO2", "10 mg/L as Si", 10 / 28.085),
        ("HCO3", "61.017 mg/L", 1.0),
        ("C", "12.011 mg/L", 1.0),
        ("C2O4", "24.022 mg/L as C", 1.0),
        ("Ca", "100.086 mg/L as CaCO3", 1.0),
        ("Mg", "100.086 mg/L as CaCO3", 1.0),
        ("Fe(III)", "159.687 mg/L as Fe2O3", 2.0),
        ("Ca", "2 meq/L", 1.0),
        ("HCO3", "2 meq/L", 2.0),
        ("CO3", "2 meq/L", 1.0),
        ("Al", "3 meq/L", 1.0),
        ("Zn", "0.4 mmol/L", 0.4),
    ],
)
def test_amounts_become_moles(name, text, expected):
    # 2e-5: the atomic weights are abridged to five figures
    assert moles(in_water(text), component_named(name, COMPONENTS)) == pytest.approx(expected, rel=2e-5)


def test_alkalinity_becomes_equivalents():
    assert equivalents(alkalinity("50.043 mg/L as CaCO3")) == pytest.approx(1.0, rel=2e-5)
    assert equivalents(alkalinity("61.017 mg/L as HCO3")) == pytest.approx(1.0, rel=2e-5)
    assert equivalents(alkalinity("0.12 meq/L")) == 0.12


@pytest.mark.parametrize(
    ("name", "text", "words"),
    [
        ("Zn", "3 mg/L as N", 'there is no Zn in N: did you mean "as Zn"?'),
        ("HCO3", "3 mg/L as CaCO3", "the water's alkalinity: give it there"),
        ("CO2", "3 meq/L", "has no charge to count"),
        ("Si", "3 meq/L", "has no charge to count"),
    ],
)
def test_an_amount_that_means_nothing_is_refused(name, text, words):
    with pytest.raises(Wrong) as caught:
        moles(in_water(text), component_named(name, COMPONENTS))
    assert words in str(caught.value)
