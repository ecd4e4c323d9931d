"""Ions, formulas and reactions as IUPAC writes them where there are no raised letters: `SO4^2-`."""

from __future__ import annotations

import re
from functools import lru_cache

from gossan.base.elements import ATOMIC_WEIGHT

ELECTRON = "e"  # the formula of e^-: a charge without an element
ROUND_OFF = 1e-9  # an imbalance below this is what thirds and other fractions leave

_RAISED = str.maketrans("⁰¹²³⁴⁵⁶⁷⁸⁹⁺⁻", "0123456789+-")
_LOWERED = str.maketrans("₀₁₂₃₄₅₆₇₈₉\u2212", "0123456789-")  # the last is the minus sign
_RAISED_TAIL = re.compile(r"([⁰¹²³⁴⁵⁶⁷⁸⁹]*[⁺⁻])$")
_CHARGE = re.compile(r"(?P<formula>[^\^+-]+)\^(?P<size>\d*)(?P<sign>[+-])")
_PHASE = re.compile(r"\((aq|s|g|l)\)$")
_VALENCE = re.compile(r"\((?:I{1,3}|I?V|VI{0,3})\)")
_PIECE = re.compile(r"(?P<open>\()|(?:(?P<element>[A-Z][a-z]?)|(?P<close>\)))(?P<count>\d+(?:\.\d+)?)?")
_DOT = re.compile(r"[·•⋅*]")
_PLAIN_DOT = re.compile(r"\.(?=\d*H2O$)")  # only before water: Fe0.95S has a decimal point
_PLUS = re.compile(r"\s+\+\s+")
_COEFFICIENT = re.compile(r"(?:(?P<top>\d+)/(?P<bottom>[1-9]\d*)|(?P<number>\d+(?:\.\d+)?))\s*(?P<name>\S.*)")


@lru_cache(maxsize=4096)
def normal_ion(text: str) -> str:
    """Write an ion or molecule in the one form that the program uses.

    Reads the plain form (`Zn^2+`), raised letters (`Zn²⁺`) and a bare sign for charge one (`Cl-`).
    Returns  the plain form; (s) and (g) stay, (aq) and (l) go
    Raises   ValueError for `Zn++` and `Zn+2`, which could be read in two ways

    >>> normal_ion("SO₄²⁻"), normal_ion("HCO3-"), normal_ion("CaCO3(aq)")
    ('SO4^2-', 'HCO3^-', 'CaCO3')
    """
    name, phase = split_phase(text.strip())
    if not name:
        raise ValueError("an ion or formula is empty")
    raised = _RAISED_TAIL.search(name)
    if raised:
        name = f"{name[: raised.start()]}^{raised.group(1).translate(_RAISED)}"
    name = name.translate(_LOWERED)
    if "^" not in name and name[-1:] in ("+", "-"):
        name = f"{name[:-1]}^{name[-1]}"
    if "^" in name:
        match = _CHARGE.fullmatch(name)
        if match is None or match["size"] == "0":
            raise ValueError(f"'{text}' has no readable charge: write it like Zn^2+ or Cl^-")
        size = "" if match["size"] in ("", "1") else match["size"]
        name = f"{match['formula']}^{size}{match['sign']}"
    elif "+" in name or "-" in name:
        raise ValueError(f"'{text}' has no readable charge: write it like Zn^2+ or Cl^-")
    return name + (f"({phase})" if phase in ("s", "g") else "")


def split_phase(text: str) -> tuple[str, str]:
    """Divide `CaCO3(s)` into its formula and its phase: "s", "g", "aq", "l", or "" where none is stated."""
    match = _PHASE.search(text)
    return (text[: match.start()], match.group(1)) if match else (text, "")


@lru_cache(maxsize=4096)
def split_ion(name: str) -> tuple[str, int]:
    """Divide an ion into its formula and its charge.

    >>> split_ion("Cu(OH)4^2-"), split_ion("ZnS(s)")
    (('Cu(OH)4', -2), ('ZnS', 0))
    """
    formula, _, charge = split_phase(normal_ion(name))[0].partition("^")
    if not charge:
        return formula, 0
    return formula, int(charge[-1] + (charge[:-1] or "1"))


def charge_of(name: str) -> int:
    """Charge of an ion in elementary charges: `charge_of("SO4^2-")` is -2."""
    return split_ion(name)[1]


@lru_cache(maxsize=4096)
def _counted(name: str) -> tuple[tuple[str, float], ...]:
    formula = split_ion(name)[0]
    if formula == ELECTRON:
        return ()
    if _VALENCE.search(formula):
        raise ValueError(f"'{name}' states a valence, not a formula: write the ion, like Fe^3+")
    counts: dict[str, float] = {}
    parts = _DOT.split(formula)
    for part in parts if len(parts) > 1 else _PLAIN_DOT.split(formula):
        times = re.match(r"\d+(?:\.\d+)?", part)
        factor = float(times.group()) if times else 1.0
        for element, count in _part(part[times.end() if times else 0 :], name).items():
            counts[element] = counts.get(element, 0.0) + factor * count
    return tuple(counts.items())


def parse_formula(name: str) -> dict[str, float]:
    """Count the elements of a formula, ion or hydrate (`CaSO4·2H2O`, also with `*` or `.`); e^- has none.

    Raises  ValueError: an element without atomic weight here, brackets that do not pair, stray signs

    >>> parse_formula("Zn5(OH)6(CO3)2")
    {'Zn': 5.0, 'O': 12.0, 'H': 6.0, 'C': 2.0}
    """
    return dict(_counted(name))


def _part(text: str, name: str) -> dict[str, float]:
    """Count the elements of one piece of a formula, brackets nested to any depth."""
    stack: list[dict[str, float]] = [{}]
    position = 0
    while position < len(text):
        piece = _PIECE.match(text, position)
        if piece is None:
            raise ValueError(f"'{name}' is no chemical formula: '{text[position]}' does not belong there")
        position = piece.end()
        if piece["open"]:
            stack.append({})
            continue
        if piece["close"]:
            group = stack.pop()
            if not stack or not group:
                raise ValueError(f"'{name}' closes a bracket that holds nothing or was never opened")
        elif piece["element"] in ATOMIC_WEIGHT:
            group = {piece["element"]: 1.0}
        else:
            raise ValueError(f"'{name}' holds '{piece['element']}', which is no element of the table")
        times = float(piece["count"] or 1)
        if times == 0.0:
            raise ValueError(f"'{name}' is no chemical formula: nothing is counted zero times")
        for element, count in group.items():
            stack[-1][element] = stack[-1].get(element, 0.0) + times * count
    if len(stack) > 1:
        raise ValueError(f"'{name}' opens a bracket that is never closed")
    if not stack[0]:
        raise ValueError(f"'{name}' is no chemical formula")
    return stack[0]


def molar_mass(name: str) -> float:
    """Molar mass of a formula, ion or hydrate in kg/mol; an ion's electrons are not weighed.

    >>> round(molar_mass("CaSO4·2H2O"), 6)
    0.172164
    """
    return 1e-3 * sum(ATOMIC_WEIGHT[element] * count for element, count in _counted(name))


def parse_reaction(text: str) -> tuple[dict[str, float], dict[str, float]]:
    """Read a reaction into its two sides, each a dict of normal names and their coefficients, all > 0.

    Terms are joined by ` + ` with a space on either side (an ion may end in a plus), the sides by `=`.
    (s) and (g) stay part of a name, because CO2(g) and CO2 differ; (aq) and (l) go.
    Coefficients: `2 H2O`, `0.5 O2`, `1/2 O2`.
    Raises  ValueError

    >>> parse_reaction("FeS(s) + H^+ = Fe^2+ + HS^-")
    ({'FeS(s)': 1.0, 'H^+': 1.0}, {'Fe^2+': 1.0, 'HS^-': 1.0})
    """
    left, right = _sides(text)
    return dict(left), dict(right)


@lru_cache(maxsize=4096)
def _sides(text: str) -> tuple[dict[str, float], dict[str, float]]:
    """Read both sides; the dicts are remembered and not for giving away."""
    sides = text.replace("⇌", "=").split("=")
    if len(sides) != 2:
        raise ValueError(f"'{text}' is no reaction: write two sides joined by one '='")
    return _side(sides[0], text), _side(sides[1], text)


def _side(side: str, text: str) -> dict[str, float]:
    terms: dict[str, float] = {}
    for term in _PLUS.split(side.strip()):
        coefficient, name = 1.0, term.strip()
        match = _COEFFICIENT.fullmatch(name)
        if match:
            name = match["name"]
            top, bottom = match["number"] or match["top"], match["bottom"] or "1"
            coefficient = float(top) / float(bottom)
        if not name or not coefficient > 0.0:
            raise ValueError(f"'{text}' is no reaction: a side or a term is empty")
        if len(name.split()) > 1:
            raise ValueError(f"'{text}' is no reaction: '{name}' is not one substance (join terms by ' + ')")
        name = normal_ion(name)
        terms[name] = terms.get(name, 0.0) + coefficient
    return terms


def imbalance(text: str) -> dict[str, float]:
    """Say what a reaction gains from left to right: element or "charge" to amount; {} when balanced.

    >>> imbalance("ZnS(s) + H^+ = Zn^2+ + HS^-"), imbalance("ZnS(s) = Zn^2+ + HS^-")
    ({}, {'charge': 1.0, 'H': 1.0})
    """
    left, right = _sides(text)
    gained: dict[str, float] = {}
    for side, sign in ((left, -1.0), (right, 1.0)):
        for name, coefficient in side.items():
            for element, count in _counted(name):
                gained[element] = gained.get(element, 0.0) + sign * coefficient * count
            gained["charge"] = gained.get("charge", 0.0) + sign * coefficient * charge_of(name)
    return {what: amount for what, amount in gained.items() if abs(amount) > ROUND_OFF}
