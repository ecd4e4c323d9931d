"""Isotherms, half-lives and immobile water in a case: what is wrong, and the numbers made of the words."""

from __future__ import annotations

import math

import numpy as np
import pytest
from tests.support.columns import case_of, column
from tests.support.good_case import GOOD, faults_of

from gossan.case.build import build
from gossan.chemistry.isotherm import sorbed_at

LAYER, TRACER = 'law = "kozeny-carman"', 'molar_mass = "79.9 g/mol"'
LINEAR = 'law = "linear"\nkd = "2 L/kg"'

# behind which line of the good case what is added, the words of the fault, the start of its line
FAULTS = [
    (TRACER, "half_life = 40", "tracers.bromide.half_life is 40, a bare number", "half_life"),
    (TRACER, 'half_life = "0 d"', "a half-life is more than zero", "half_life"),
    (TRACER, 'parent = "chloride"', 'is "chloride", but there is no [tracers.chloride]', "parent"),
    (TRACER, '[tracers.a]\n[tracers.b]\nparent = "a"', "which has no half_life and never decays", "parent"),
    (TRACER, 'half_life = "1 d"\nparent = "bromide"', "which comes from bromide itself", "parent"),
    (LAYER, '[layers.half_life]\nbromine = "4 d"',
     'half_life.bromine is no tracer, and only tracers decay: did you mean "bromide"?', "bromine"),
    (LAYER, '[layers.half_life]\nZn = "4 d"', "Zn is no tracer, and only tracers decay", "Zn"),
    (LAYER, "[layers.half_life]\nbromide = 4", "half_life.bromide is 4, a bare number", "bromide"),
    (LAYER, '[layers.half_life]\nbromide = "0 d"', "a half-life is more than zero", "bromide"),
    (LAYER, '[layers.sorption.Zn]\nlaw = "linear"', "Zn.kd is missing: law = \"linear\" needs it",
     "[layers.sorption.Zn]"),
    (LAYER, '[layers.sorption.Zn]\nkd = "2 L/kg"', "sorption.Zn.law is missing", "[layers.sorption.Zn]"),
    (LAYER, '[layers.sorption.Zn]\nlaw = "linear"\nkd = 2', "kd is 2, a bare number", "kd"),
    (LAYER, f'[layers.sorption.Zn]\n{LINEAR}\nexponent = 0.5', 'is not used by law = "linear": it takes kd',
     "exponent"),
    (LAYER, '[layers.sorption.Zn]\nlaw = "langmuir"\naffinity = "1 L/mg"', "Zn.capacity is missing",
     "[layers.sorption.Zn]"),
    (LAYER, '[layers.sorption.Zn]\nlaw = "freundlich"\ncoefficient = "1 mg/kg"\nexponent = 0',
     "exponent is 0; an exponent is between 0 and 2", "exponent"),
    (LAYER, f"[layers.sorption.Ni]\n{LINEAR}", "is for Ni^2+, which no water or mineral of the column holds",
     "[layers.sorption.Ni]"),
    (LAYER, f"[layers.sorption.zinc]\n{LINEAR}\n[layers.sorption.Zn]\n{LINEAR}",
     "is Zn^2+ a second time, after zinc", "[layers.sorption.Zn]"),
    (LAYER, f"[layers.sorption.H]\n{LINEAR}", "which is not given in an analysis", "[layers.sorption.H]"),
    (LAYER, f"[layers.sorption.bromine]\n{LINEAR}", 'did you mean "bromide"?', "[layers.sorption.bromine]"),
    (LAYER, '[layers.immobile]\nfraction = 30\ntransfer = "1e-6 1/s"', "did you mean 0.3?", "fraction"),
    (LAYER, "[layers.immobile]\nfraction = 0.3", "transfer is missing", "[layers.immobile]"),
    (LAYER, '[layers.immobile]\nfraction = 0.3\ntransfer = "-1 1/d"', "is not negative", "transfer"),
]  # fmt: skip


@pytest.mark.parametrize(("behind", "more", "words", "line"), FAULTS, ids=[row[2][:40] for row in FAULTS])
def test_each_fault_has_its_line(behind, more, words, line):
    text = GOOD.replace(behind, f"{behind}\n{more}", 1)
    found = [fault for fault in faults_of(text) if words in str(fault)]
    assert len(found) == 1, [str(fault) for fault in faults_of(text)]
    last = text[: text.index(behind) + len(behind) + len(more) + 1]
    assert last.split("\n")[found[0].line - 1].startswith(line)


def test_a_mass_of_a_tracer_needs_its_molar_mass():
    more = '[layers.sorption.bromide]\nlaw = "freundlich"\ncoefficient = "3 mg/kg"\nexponent = 0.8'
    text = GOOD.replace(TRACER, "").replace('"40 mg/L"', '"0.5 mmol/L"').replace(LAYER, f"{LAYER}\n{more}")
    (fault,) = faults_of(text)
    assert 'is "3 mg/kg", by mass, but the molar mass is not known' in str(fault)


WATERS = """
[waters.feed.tracers]
a = "1 mmol/L"
[waters.pore]
balance_on = "Cl"
analysis = {Zn = "10 mg/L", Ca = "100 mg/L"}
[waters.pore.tracers]
a = "79.9 mg/L"
[tracers.a]
molar_mass = "79.9 g/mol"
half_life = "2 d"
[tracers.b]
parent = "a"
"""
DRY = 2650.0 * 0.6


def problem_of(laws: str):
    return build(case_of(column(WATERS).replace("minerals = {}", laws)))


@pytest.mark.parametrize(
    ("name", "law", "per_kg"),
    [
        ("a", 'law = "linear"\nkd = "2 L/kg"', lambda c: 2e-3 * c),
        ("Zn", 'law = "linear"\nkd = "2 L/kg"', lambda c: 2e-3 * c),
        ("a", 'law = "freundlich"\ncoefficient = "12 mg/kg"\nexponent = 0.7\nat = "1 mg/L"',
         lambda c: 12e-6 * (c * 0.0799 / 1e-3) ** 0.7 / 0.0799),
        ("a", 'law = "freundlich"\ncoefficient = "3 mmol/kg"\nexponent = 0.7', lambda c: 3e-3 * c**0.7),
        ("a", 'law = "langmuir"\ncapacity = "3 mmol/kg"\naffinity = "4 L/mmol"',
         lambda c: 3e-3 * 4.0 * c / (1.0 + 4.0 * c)),
        ("Zn", 'law = "langmuir"\ncapacity = "300 mg/kg"\naffinity = "0.2 L/mg"',
         lambda c: 300e-6 * 200.0 * c / (1.0 + 200.0 * c * 0.06538) ),
    ],
)  # fmt: skip
def test_the_words_of_an_isotherm_become_numbers_per_bulk(name, law, per_kg):
    """Zinc by mass: 0.06538 kg/mol in its affinity, and once up and once down in its slope."""
    problem = problem_of(f"[layers.sorption.{name}]\n{law}\n")
    c = np.full((1, len(problem.porosity)), 0.37)
    expected = DRY * per_kg(0.37)
    assert sorbed_at(problem.isotherms, c) == pytest.approx(np.full_like(c, expected), rel=1e-4)
    (row,) = problem.sorbates
    start = sorbed_at(problem.isotherms, problem.initial.dissolved[[row]])
    assert problem.initial.sorbed == pytest.approx(start), "in equilibrium with the pore water"


def test_half_lives_and_parents_become_rates():
    decay = problem_of("").decay
    rate = math.log(2.0) / (2.0 * 86400.0)
    assert decay.rates == pytest.approx(np.array([[[-rate, 0.0], [rate, 0.0]]]))
    assert [problem_of("").solutes[row] for row in decay.solutes] == ["a", "b"]


SECOND = """[[layers]]
name = "second"
length = "1 m"
cells = 10
porosity = 0.4
dispersivity = "0 m"
water = "pore"
"""


def test_a_layer_may_have_half_lives_of_its_own():
    """Of a parent that decays nowhere else, of one that does: in both the daughter grows as it decays."""
    for own, first in (("", 0.0), ('half_life = "2 d"\n', math.log(2.0) / (2.0 * 86400.0))):
        text = column(WATERS.replace('half_life = "2 d"\n', own))
        second = SECOND + '[layers.half_life]\na = "5 h"\n'
        decay = build(case_of(text.replace("[flow]", f"{second}[flow]"))).decay
        rate = math.log(2.0) / (5.0 * 3600.0)
        for cell, expected in ((0, first), (19, first), (20, rate), (29, rate)):
            rates = decay.rates[decay.zone[cell]]
            assert rates == pytest.approx(expected * np.array([[-1.0, 0.0], [1.0, 0.0]]))


def test_immobile_water_takes_its_share_of_pores_and_solids():
    text = '[layers.immobile]\nfraction = 0.25\ntransfer = "1e-6 1/s"\nsolids = 0.4\n'
    text += f"[layers.sorption.a]\n{LINEAR}\n[layers.minerals]\ncalcite = \"1 wt%\"\n"
    problem = problem_of(text)
    state = problem.initial
    assert state.water == pytest.approx(np.full(20, 0.3))
    assert state.still.water == pytest.approx(np.full(20, 0.1))
    assert problem.pore_volume == pytest.approx(0.4)
    assert state.still.sorbed == pytest.approx(0.4 / 0.6 * state.sorbed)
    calcium = problem.system.components.index("Ca^2+")
    whole = 0.4 * 0.1 / 0.040078 + DRY * 0.01 / 0.1000869
    assert problem.stored(state)[calcium] == pytest.approx(whole, rel=1e-5)  # molar masses to five digits
