"""Plain-text notation: what is read, what comes out, what is refused."""

import pytest
from hypothesis import given
from hypothesis import strategies as st

from gossan.base.elements import ATOMIC_WEIGHT
from gossan.base.notation import (
    charge_of,
    imbalance,
    molar_mass,
    normal_ion,
    parse_formula,
    parse_reaction,
    split_ion,
    split_phase,
)


@pytest.mark.parametrize(
    ("text", "normal"),
    [
        ("Zn^2+", "Zn^2+"),
        ("Zn²⁺", "Zn^2+"),
        ("SO₄²⁻", "SO4^2-"),
        ("Cl⁻", "Cl^-"),
        ("H+", "H^+"),
        ("NO3-", "NO3^-"),
        ("Na^1+", "Na^+"),
        ("e-", "e^-"),
        ("CO2(g)", "CO2(g)"),
        ("CaSO₄·2H₂O(s)", "CaSO4·2H2O(s)"),
        ("CaCO3(aq)", "CaCO3"),
        ("H2O(l)", "H2O"),
        ("S2^2-", "S2^2-"),
        ("CH3COO-", "CH3COO^-"),
    ],
)
def test_ions_come_out_in_one_form(text, normal):
    assert normal_ion(text) == normal
    assert normal_ion(normal) == normal


@pytest.mark.parametrize(
    "text", ["Zn++", "Zn+2", "SO4--", "SO4^-2", "Zn^0+", "^2+", "", "Zn^", "Zn^2", "Fe+Cu", "FeS+H^+"]
)
def test_ambiguous_charges_are_refused(text):
    with pytest.raises(ValueError, match=r"write it like Zn\^2\+|empty"):
        normal_ion(text)


@given(
    st.dictionaries(st.sampled_from(sorted(ATOMIC_WEIGHT)), st.integers(1, 40), min_size=1, max_size=6),
    st.integers(-6, 6),
)
def test_formula_and_charge_survive_a_round_trip(counts, charge):
    formula = "".join(f"{element}{count if count > 1 else ''}" for element, count in counts.items())
    size = "" if abs(charge) == 1 else str(abs(charge))
    name = formula + (f"^{size}{'+' if charge > 0 else '-'}" if charge else "")
    assert split_ion(name) == (formula, charge)
    assert charge_of(name) == charge
    assert parse_formula(name) == counts


@pytest.mark.parametrize(
    ("formula", "counts"),
    [
        ("Zn5(OH)6(CO3)2", {"Zn": 5, "O": 12, "H": 6, "C": 2}),
        ("CaSO4·2H2O", {"Ca": 1, "S": 1, "O": 6, "H": 4}),
        ("CaSO4.2H2O", {"Ca": 1, "S": 1, "O": 6, "H": 4}),
        ("CaSO4*0.5H2O", {"Ca": 1, "S": 1, "O": 4.5, "H": 1}),
        ("CaSO4(H2O)2(s)", {"Ca": 1, "S": 1, "O": 6, "H": 4}),
        ("Fe0.95S", {"Fe": 0.95, "S": 1}),
        ("K(Al(OH)2(O2))2", {"K": 1, "Al": 2, "O": 8, "H": 4}),
        ("Cu2S(HS)2^2-", {"Cu": 2, "S": 3, "H": 2}),
        ("e^-", {}),
    ],
)
def test_elements_are_counted(formula, counts):
    assert parse_formula(formula) == counts


@pytest.mark.parametrize(
    ("formula", "says"),
    [
        ("Fe(II)", "valence"),
        ("Fe(III)", "valence"),
        ("Mn(IV)", "valence"),
        ("Xx2", "no element of the table"),
        ("Ca(OH", "never closed"),
        ("CaOH)2", "never opened"),
        ("Ca()2", "holds nothing"),
        ("zn", "does not belong"),
        ("Zn 2", "does not belong"),
        ("Zn0", "zero times"),
        ("2", "no chemical formula"),
    ],
)
def test_what_is_no_formula_is_refused(formula, says):
    with pytest.raises(ValueError, match=says):
        parse_formula(formula)


@pytest.mark.parametrize(
    ("formula", "grams"),
    # hand sums of the IUPAC abridged weights, and textbook masses to the digits they are usually given with
    [("ZnS", 97.44), ("CaCO3", 100.086), ("SO4^2-", 96.056), ("CaSO4·2H2O", 172.164), ("FeS2", 119.965)],
)
def test_molar_masses(formula, grams):
    assert molar_mass(formula) == pytest.approx(1e-3 * grams, rel=1e-9)


def test_reactions_are_read_with_their_coefficients_and_phases():
    left, right = parse_reaction("SO4^2- + 2 CH2O(s) = HS- + 2 HCO3^- + H⁺")
    assert left == {"SO4^2-": 1.0, "CH2O(s)": 2.0}
    assert right == {"HS^-": 1.0, "HCO3^-": 2.0, "H^+": 1.0}
    left, right = parse_reaction("1/2 O2 + 2H^+ + 2 e^- ⇌ H2O(l)")
    assert left == {"O2": 0.5, "H^+": 2.0, "e^-": 2.0}
    assert right == {"H2O": 1.0}
    assert parse_reaction("H^+ + H^+ = H2")[0] == {"H^+": 2.0}
    assert split_phase("CO2(g)") == ("CO2", "g")


@pytest.mark.parametrize(
    ("text", "says"),
    [
        ("FeS + H^+", "two sides"),
        ("FeS = Fe = S", "two sides"),
        ("FeS =", "empty"),
        ("0 FeS = Fe", "empty"),
        ("FeS H^+ = Fe", "not one substance"),
        ("FeS+H^+ = Fe", "readable charge"),
    ],
)
def test_what_is_no_reaction_is_refused(text, says):
    with pytest.raises(ValueError, match=says):
        parse_reaction(text)


def test_imbalance_names_what_is_gained():
    assert imbalance("CaSO4·2H2O(s) = Ca^2+ + SO4^2- + 2 H2O") == {}
    assert imbalance("FeS2(s) + 2 H^+ + 2 e^- = Fe^2+ + 2 HS^-") == {}
    assert imbalance("CaSO4·2H2O(s) = Ca^2+ + SO4^2-") == {"H": -4.0, "O": -2.0}
    assert imbalance("Fe^3+ = Fe^2+") == {"charge": -1.0}
    assert imbalance("1/3 Cu3(OH)2(CO3)2 + 2/3 H^+ = Cu^2+ + 2/3 CO3^2- + 2/3 H2O") == {}
