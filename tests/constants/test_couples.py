"""Couples by every name that people give them, and those that are none."""

import pytest

from gossan.base.wrong import Wrong
from gossan.constants.couples import applicable, couple_named, couples_of, partner
from gossan.constants.load import load_table
from gossan.constants.names import component_named, is_bare_element

TABLE = load_table()

NAMES = [
    ("Fe(II)/Fe(III)", "Fe^3+"), ("Fe(III)/Fe(II)", "Fe^3+"), ("Fe^2+/Fe^3+", "Fe^3+"),
    ("Fe²⁺/Fe³⁺", "Fe^3+"), ("Fe(II) / Fe^3+", "Fe^3+"), ("ferrous iron/ferric iron", "Fe^3+"),
    ("Cu+/Cu^2+", "Cu^+"),
    ("S(VI)/S(-II)", "HS^-"), ("SO4/HS", "HS^-"), ("SO4^2-/H2S", "HS^-"), ("sulphate/sulphide", "HS^-"),
    ("NO3/NH4", "NH4^+"), ("N(V)/N(-III)", "NH4^+"), ("N2/NO3^-", "N2"), ("N(V)/N(0)", "N2"),
    ("NO2-/NO3-", "NO2^-"), ("O2/H2O", "O2"), ("H2O/O2", "O2"), ("O(-II)/O(0)", "O2"), ("H^+/H2", "H2"),
    ("H2/H+", "H2"),
    ("HCO3/CH4", "CH4"), ("C(IV)/C(-IV)", "CH4"), ("Mn^2+/Mn^3+", "Mn^3+"),
]  # fmt: skip


@pytest.mark.parametrize(("text", "held"), NAMES)
def test_a_couple_is_known_by_any_of_its_names(text, held):
    assert couple_named(text, TABLE) == held


def test_every_couple_is_known_by_its_own_name_and_by_its_ions():
    assert len(couples_of(TABLE)) == 10
    for held in couples_of(TABLE):
        component = TABLE.components[held]
        assert couple_named(component.couple, TABLE) == held
        assert couple_named(f"{partner(component)}/{held}", TABLE) == held


NONE = [
    ("Fe(II)/Fe(IV)", 'did you mean "Fe(II)/Fe(III)"?'),
    ("Fe2+/Fe3+", 'did you mean "Fe(II)/Fe(III)"?'),
    ("Fe(II)", 'did you mean "Fe(II)/Fe(III)"?'),
    ("Fe(III)/Cu(I)", 'one of "Fe(II)/Fe(III)", "Cu(I)/Cu(II)" is needed'),
    ("N(III)/N(-III)", 'name "N(III)/N(V)" and "N(-III)/N(V)"'),
    ("Zn/Zn(II)", '"N(III)/N(V)", "Mn(II)/Mn(III)" is needed'),
    ("", "is needed"),
    ("/", "is needed"),
    ("Fe(II)/Fe(III)/Fe(II)/x", 'did you mean "Fe(II)/Fe(III)"?'),
]


@pytest.mark.parametrize(("text", "cure"), NONE)
def test_what_is_no_couple_is_refused_with_the_next_best(text, cure):
    with pytest.raises(Wrong) as wrong:
        couple_named(text, TABLE)
    assert cure in wrong.value.right
    assert f'"{text}"' in wrong.value.wrong


@pytest.mark.parametrize("food", ["CH3COO^-/CO3^2-", "acetate/C", "CH2O/CO3^2-"])
def test_food_is_never_coupled(food):
    """Acetate and sugar would be at equilibrium with nothing before they are eaten."""
    with pytest.raises(Wrong):
        couple_named(food, TABLE)


def test_a_couple_applies_where_its_element_is():
    every = couples_of(TABLE)
    assert set(applicable(every, {"Ca^2+"}, TABLE)) == {"O2", "H2"}
    assert set(applicable(every, {"Fe^2+", "HS^-"}, TABLE)) == {"O2", "H2", "Fe^3+", "HS^-"}
    assert set(applicable(every, {"NO3^-"}, TABLE)) == {"O2", "H2", "NO2^-", "NH4^+", "N2"}
    assert applicable(["Fe^3+"], {"Cu^2+"}, TABLE) == ()


@pytest.mark.parametrize(
    ("name", "bare"),
    [("Fe", True), ("iron", True), ("Cu", True), ("Fe(II)", False), ("Fe^2+", False), ("SO4", False),
     ("ferrous iron", False), ("copper", True)],
)  # fmt: skip
def test_a_bare_element_says_no_valence(name, bare):
    assert is_bare_element(name) is bare


@pytest.mark.parametrize(("text", "component"), [("N(III)", "NO2^-"), ("N(0)", "N2"), ("C(-IV)", "CH4")])
def test_valences_of_an_analysis(text, component):
    assert component_named(text, TABLE.components).component == component
