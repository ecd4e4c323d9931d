"""Every reaction of the table keeps elements, charge and electrons, counted apart from the loader.

Formulas are counted here by one expression, without `base.notation`. An electron balance is that of valences:
a formula holds as many electrons above the first ions as the valences of those, summed over its elements, lie
above its charge. Sulfide: H 1 + S 6 - (-1) = 8.
"""

from __future__ import annotations

import re
import tomllib
from collections import Counter
from fractions import Fraction
from pathlib import Path

import pytest

import gossan.constants
from gossan.constants.load import load_table

TABLE = load_table()
FOLDER = Path(gossan.constants.__file__).parent
KINDS = ("components", "species", "minerals", "gases")
FILES = {kind: tomllib.loads((FOLDER / f"{kind}.toml").read_text(encoding="utf-8"))[kind] for kind in KINDS}
ENTRIES = [(kind, name) for kind, named in FILES.items() for name in named]
REACTIONS = {
    f"{kind}: {name}": entry[key]
    for kind, named in FILES.items()
    for name, entry in named.items()
    for key in ("reaction", "half_reaction")
    if key in entry
}
PIECE = re.compile(r"\(([^()]*)\)([\d.]*)|([A-Z][a-z]?)([\d.]*)")  # no formula has brackets within brackets
# valences of the first ions, those of the salts and acids that waters are reported as
VALENCE = {
    "H": 1, "O": -2, "Na": 1, "K": 1, "Ca": 2, "Mg": 2, "Mn": 2, "Fe": 2, "Co": 2, "Ni": 2, "Cu": 2, "Zn": 2,
    "Cd": 2, "Pb": 2, "Al": 3, "Cl": -1, "S": 6, "C": 4, "N": 5, "P": 5, "Si": 4, "B": 3,
}  # fmt: skip


def elements(formula: str) -> Counter:
    """What a formula without charge and phase holds."""
    held: Counter = Counter()
    for part in formula.split("·"):
        molecules, rest = re.fullmatch(r"([\d.]*)(.*)", part).groups()
        for group, of_group, element, of_element in PIECE.findall(rest):
            inside = elements(group) if group else {element: Fraction(1)}
            for name, count in inside.items():
                held[name] += count * Fraction(of_group or of_element or 1) * Fraction(molecules or 1)
    return held


def parted(term: str) -> tuple[Counter, int]:
    """Elements and charge of a term: `SO4^2-`, `CaSO4·2H2O(s)`, `e^-`."""
    formula, _, size = re.sub(r"\((?:s|g)\)$", "", term).partition("^")
    held = Counter() if formula == "e" else elements(formula)
    return held, int(size[-1] + (size[:-1] or "1")) if size else 0


def electrons(term: str) -> Fraction:
    """What a term holds above the first ions of its elements; one for e^- itself."""
    held, charge = parted(term)
    return sum((VALENCE[element] * count for element, count in held.items()), Fraction(0)) - charge


def made(reaction: str) -> dict[str, Fraction]:
    """Terms and how often each is made; those of the left count negative."""
    terms: dict[str, Fraction] = {}
    for sign, side in zip((-1, 1), reaction.split(" = "), strict=True):
        for term in side.split(" + "):
            times, _, name = term.strip().rpartition(" ")
            terms[name] = terms.get(name, Fraction(0)) + sign * Fraction(times or 1)
    return terms


def gained(terms: dict[str, Fraction]) -> dict[str, float]:
    """Elements and charge made from nothing, beyond what thirds leave; empty for a sound reaction."""
    total: Counter = Counter()
    for name, times in terms.items():
        held, charge = parted(name)
        total["charge"] += times * charge
        for element, count in held.items():
            total[element] += times * count
    return {what: float(count) for what, count in total.items() if abs(count) > 1e-9}


def test_the_counting_itself():
    assert elements("Cu3SO4(OH)4") == {"Cu": 3, "S": 1, "O": 8, "H": 4}
    assert elements("Zn5(OH)6(CO3)2") == {"Zn": 5, "O": 12, "H": 6, "C": 2}
    assert elements("CaSO4·2H2O") == {"Ca": 1, "S": 1, "O": 6, "H": 4}
    assert gained(made("Zn^2+ + 2 HS^- = ZnS(s) + H^+")) == {"charge": 1.0, "H": -1.0, "S": -1.0}
    held = {"HS^-": 8, "Fe^3+": -1, "O2": -4, "NH4^+": 8, "FeS2(s)": 14, "CO2(g)": 0, "e^-": 1}
    assert {term: electrons(term) for term in held} == held


@pytest.mark.parametrize("name", REACTIONS)
def test_reactions_as_printed(name):
    terms = made(REACTIONS[name])
    assert gained(terms) == {}, REACTIONS[name]
    assert sum(times * electrons(term) for term, times in terms.items()) == 0, REACTIONS[name]


@pytest.mark.parametrize(("kind", "name"), ENTRIES, ids=lambda word: word)
def test_reactions_as_reduced_to_components(kind, name):
    """What the loader made of them holds the same elements, charge and electrons as the formula."""
    entry = getattr(TABLE, kind)[name]
    reaction = entry.half_reaction if kind == "components" else entry.reaction
    if reaction is None:  # a first ion is made of nothing else, and holds no electron above itself
        assert electrons(name) == (2 if name == "C2O4^2-" else 0)  # oxalate: a ligand, never oxidised here
        return
    whole = entry.formula if kind == "minerals" else name
    parts = {term: Fraction(times) for term, times in reaction.components.items()}
    parts |= {"H2O": Fraction(reaction.water), "e^-": Fraction(reaction.electrons)}
    assert gained({**parts, whole: parts.get(whole, Fraction(0)) - 1}) == {}
    assert float(sum(times * electrons(term) for term, times in parts.items())) == float(electrons(whole))


@pytest.mark.parametrize("kind", ["species", "minerals", "gases"])
def test_only_entries_of_another_valence_need_electrons(kind):
    """Held components carry their own valence: sulfur, metals and oxides of Mn(III) and Mn(IV) remain."""
    metals, oxides = {"copper metal", "iron metal", "zinc metal"}, {"pyrolusite", "manganite"}
    polysulfides = {"S2^2-", "S3^2-", "S4^2-", "S5^2-", "S6^2-"}
    expected = {"species": polysulfides, "minerals": {"pyrite", "sulfur"} | oxides | metals}.get(kind, set())
    assert {name for name, entry in getattr(TABLE, kind).items() if entry.reaction.electrons} == expected
