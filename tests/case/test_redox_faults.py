"""Redox said wrongly: every contradiction by name, with its line and what would be right."""

import pytest
from tests.support.good_case import GOOD, faults_of

from gossan.case.read import case_from_text

IRON = 'coupled = ["Fe(II)/Fe(III)"]'
ALL = 'redox = "coupled"'
LINEAR = '{law = "linear", kd = "1 L/kg"}'
PH, CHEMISTRY, SATURATED = "pH = 7.2", "[chemistry]", 'CO2 = "0.003 atm"'

# what stands in the good case and what stands there instead; the words of the fault
ONE_FAULT = [
    # a water by two of Eh, pe, oxygen, or by one that cannot be read
    ([(PH, f'{PH}\nEh = "310 mV"\npe = 5.2')], "pore.pe stands beside Eh: both say how oxidised the"),
    ([(PH, f'{PH}\nEh = "310 mV"\ndissolved_oxygen = "6 mg/L"')], "pore.dissolved_oxygen stands beside Eh"),
    ([(PH, f'{PH}\npe = 5.2\ndissolved_oxygen = "6 mg/L"')], "pore.dissolved_oxygen stands beside pe"),
    ([(PH, f"{PH}\nEh = 310")], 'a redox potential has a unit: did you mean "310 mV"?'),
    ([(PH, f'{PH}\nEh = "310 V"')], 'is between -3 and 3 V: did you mean "310 mV"?'),
    ([(PH, f'{PH}\nEh = "5 mg/L"')], "a mass per volume, where a redox potential is needed"),
    ([(PH, f'{PH}\npe = "5.2"')], "a pe is a number without quotes: did you mean 5.2?"),
    ([(PH, f"{PH}\npe = 310")], "a pe is between -50 and 50"),
    ([(PH, f'{PH}\neH = "310 mV"')], 'did you mean "Eh"?'),
    ([(PH, f'{PH}\ndissolved_oxygen = "<0.5 mg/L"')], "oxygen that was not found says nothing"),
    ([(PH, f'{PH}\ndissolved_oxygen = "0 mg/L"')], "oxygen that was not found says nothing"),
    ([(PH, f'{PH}\ndissolved_oxygen = "80 %"')], "where dissolved oxygen is needed"),
    ([(PH, f'{PH}\ndissolved_oxygen = "1 meq/L"')], "where dissolved oxygen is needed"),
    ([('Ca = "2 mmol/L"', 'Ca = "2 mmol/L"\nO2 = "6 mg/L"')], 'write dissolved_oxygen = "6 mg/L" among'),
    ([('Ca = "2 mmol/L"', 'Ca = "2 mmol/L"\ndissolved_oxygen = "6 mg/L"')], "it is a key of the water"),
    # the same fact once more in saturated_with
    ([(PH, f'{PH}\npe = 5.2'), (SATURATED, 'O2 = "0.2 atm"')], "O2 carries electrons and stands beside pe"),
    (
        [(PH, f'{PH}\ndissolved_oxygen = "6 mg/L"'), (SATURATED, 'O2 = "0.2 atm"')],
        "O2 carries electrons and stands beside dissolved_oxygen",
    ),
    (
        [(PH, f"{PH}\npe = -3"), (SATURATED, 'H2S = "0.01 atm"'), (CHEMISTRY, f"[chemistry]\n{ALL}")],
        "H2S carries electrons and stands beside pe",
    ),
    ([(SATURATED, "CO2 = 0.003")], 'did you mean "0.003 atm"?'),
    ([(SATURATED, f'{SATURATED}\nCaCO3 = 0.1')], 'names the mineral "CaCO3", the formula of several'),
    ([("calcite = 0.0", "zincite = 0.0\nZnO = 0.1")], "is zincite a second time, after zincite"),
    # couples
    ([(CHEMISTRY, '[chemistry]\ncoupled = ["Fe(II)/Fe(IV)"]')], 'did you mean "Fe(II)/Fe(III)"?'),
    ([(CHEMISTRY, '[chemistry]\ncoupled = ["Fe"]')], 'did you mean "Fe(II)/Fe(III)"?'),
    ([(CHEMISTRY, '[chemistry]\ncoupled = ["NO2/NH4"]')], 'name "N(III)/N(V)" and "N(-III)/N(V)"'),
    ([(CHEMISTRY, '[chemistry]\ncoupled = ["Zn(I)/Zn(II)"]')], "which the table of constants lacks: one of "),
    (
        [(CHEMISTRY, '[chemistry]\ncoupled = ["Fe(II)/Fe(III)", "Fe^3+/Fe^2+"]')],
        'is "Fe^3+/Fe^2+", the couple of "Fe(II)/Fe(III)": once is enough',
    ),
    ([(CHEMISTRY, '[chemistry]\ncoupled = "Fe(II)/Fe(III)"')], 'did you mean ["Fe(II)/Fe(III)"]?'),
    ([(CHEMISTRY, f"[chemistry]\n{ALL}\n{IRON}")], 'stands beside redox = "coupled", which couples'),
    ([(CHEMISTRY, '[chemistry]\nredox = "couple"')], 'did you mean "coupled"?'),
    # minerals that give or take electrons
    (
        [('also = ["gypsum"]', 'also = ["pyrite"]')],
        "Fe(II)/Fe(III) and S(-II)/S(VI) are not coupled: write coupled = "
        '["Fe(II)/Fe(III)", "S(-II)/S(VI)"] in [chemistry], or redox = "coupled"',
    ),
    (
        [('also = ["gypsum"]', f'also = ["pyrite"]\n{IRON}')],
        'S(-II)/S(VI) is not coupled: write coupled = ["Fe(II)/Fe(III)", "S(-II)/S(VI)"]',
    ),
    ([("calcite = 0.0", "pyrolusite = 0.0")], "Mn(II)/Mn(III) is not coupled"),
    ([('"0.8 wt%"', '"0.8 wt%"\n"elemental sulfur" = "1 wt%"')], "S(-II)/S(VI) is not coupled"),
    ([('"0.8 wt%"', '"0.8 wt%"\n"zinc metal" = "1 wt%"')], "O(0)/O(-II) is not coupled"),
    # gases
    ([("[[ports]]", '[chemistry.gases]\nO3 = "0.2 atm"\n[[ports]]')], "is no gas of the table of constants"),
    ([("[[ports]]", '[chemistry.gases]\nO2 = 0.2\n[[ports]]')], 'did you mean "0.2 atm"?'),
    ([("[[ports]]", '[chemistry.gases]\nO2 = "0 atm"\n[[ports]]')], "more than zero and at most 1000 atm"),
    ([("[[ports]]", '[chemistry.gases]\nO2 = "0.2 m"\n[[ports]]')], "where the pressure of a gas is needed"),
    ([("[[ports]]", '[chemistry.gases]\nO2 = {pressure = "0.2 atm"}\n[[ports]]')], "has no amount"),
    (
        [("[[ports]]", '[chemistry.gases]\nO2 = {pressure = "0.2 atm", amount = "-1 mol/L"}\n[[ports]]')],
        'has an amount that is "-1 mol/L"; an amount of a gas is not negative',
    ),
    (
        [("[[ports]]", '[chemistry.gases]\nO2 = {presure = "0.2 atm", amount = "1 mol/L"}\n[[ports]]')],
        'has the unknown key "presure": did you mean "pressure"?',
    ),
    (
        [
            ("[[ports]]", '[chemistry.gases]\nO2 = "0.2 atm"\nH2S = "0.1 atm"\n[[ports]]'),
            (CHEMISTRY, f"[chemistry]\n{ALL}"),
        ],
        "H2S is held without end, as O2 is, and both carry electrons: they burn for ever",
    ),
    # limits
    (
        [('Zn = "0.12 mg/L"', '"Fe(III)" = "1 mg/L"'), (CHEMISTRY, f"[chemistry]\n{IRON}")],
        "limits Fe^3+, which is coupled and counted as Fe^2+: limit Fe^2+, all valences together",
    ),
    (
        [
            ("[layers.clogging]", f'[layers.sorption]\n"Fe(III)" = {LINEAR}\n[layers.clogging]'),
            (CHEMISTRY, f"[chemistry]\n{IRON}"),
        ],
        "is for Fe^3+, which is coupled and counted as Fe^2+",
    ),
]

GOOD_ALL_THE_SAME = [
    [(PH, f'{PH}\nEh = "-0.2 V"')],
    [(PH, f"{PH}\npe = -4")],
    [(PH, f'{PH}\ndissolved_oxygen = "0.25 mmol/L"')],
    [(PH, f"{PH}\npe = -3"), (SATURATED, 'H2S = "0.01 atm"')],  # held: the gas brings sulfide, no electrons
    [(PH, f'{PH}\nEh = "310 mV"'), (CHEMISTRY, f"[chemistry]\n{ALL}")],  # CO2 carries none either
    [(CHEMISTRY, '[chemistry]\ncoupled = ["SO4^2-/HS^-", "Fe(III)/Fe(II)"]'),
     ('also = ["gypsum"]', 'also = ["pyrite", "elemental sulfur"]')],
    [("[[ports]]", '[chemistry.gases]\nO2 = "0.2 atm"\nH2S = "0.1 atm"\n[[ports]]')],  # held: they never meet
    [("[[ports]]", '[chemistry.gases]\nO2 = "0.2 atm"\nH2S = {pressure = "0.1 atm", amount = "1e-3 mol/L"}\n'
      "[[ports]]"), (CHEMISTRY, f"[chemistry]\n{ALL}")],
    [("[[ports]]", '[chemistry.gases]\nO2 = "0.2 atm"\nCO2 = "10 mbar"\n[[ports]]'),
     (CHEMISTRY, f"[chemistry]\n{ALL}")],
    [('Zn = "0.12 mg/L"', 'Fe = "1 mg/L"'), (CHEMISTRY, f"[chemistry]\n{IRON}")],
    [('Zn = "0.12 mg/L"', '"Fe(III)" = "1 mg/L"')],
]  # fmt: skip


def changed(changes) -> str:
    text = GOOD
    for old, new in changes:
        assert old in text
        text = text.replace(old, new, 1)
    return text


@pytest.mark.parametrize(("changes", "words"), ONE_FAULT, ids=[row[1][:60] for row in ONE_FAULT])
def test_each_contradiction_is_named_with_its_line(changes, words):
    found = faults_of(changed(changes))
    assert [fault for fault in found if words in str(fault)], [str(fault) for fault in found]
    assert len(found) == 1, [str(fault) for fault in found]
    assert found[0].line > 0
    assert found[0].right


@pytest.mark.parametrize("changes", GOOD_ALL_THE_SAME, ids=[str(row)[:60] for row in GOOD_ALL_THE_SAME])
def test_what_only_looks_like_a_contradiction_is_accepted(changes):
    case_from_text(changed(changes)).require_column()


def test_the_ph_is_given_once():
    """A key twice is no TOML; what else says the pH is refused in the analysis."""
    assert "is given twice" in str(faults_of(changed([(PH, f"{PH}\npH = 7")]))[0])
    for name in ('"H^+"', "pH", "OH"):
        found = faults_of(changed([('Ca = "2 mmol/L"', f'Ca = "2 mmol/L"\n{name} = "1 umol/L"')]))
        assert len(found) == 1
