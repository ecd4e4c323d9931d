"""Random waters, each a sum of electroneutral reagents: the charge balances by construction.

Recipe and draw order of the eleven-component battery: the project's performance study, section "Random-water
battery". The order of the draws is part of the definition; tests/oracles/test_oracles.py freezes the digests.
"""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence

import numpy as np
from tests.support.small_systems import MINE_COMPONENTS

H, NA, CA, MG, FE, ZN, CU, SO4, HS, CO3, CL = range(11)
PLAIN, BALANCED, MINERAL_RICH, TITRATION = range(4)
# what one formula of the battery's eight minerals adds, in the order of small_systems.MINE_MINERALS
MINERAL_FORMULAS: tuple[dict[int, int], ...] = (
    {ZN: 1, HS: 1, H: -1},
    {CU: 1, HS: 1, H: -1},
    {FE: 1, HS: 1, H: -1},
    {CA: 1, CO3: 1},
    {ZN: 1, CO3: 1},
    {CA: 1, SO4: 1},
    {FE: 1, H: -2},
    {CU: 1, H: -2},
)
SULFIDE_ORDER = ("Cu^2+", "Pb^2+", "Cd^2+", "Zn^2+", "Ni^2+", "Co^2+", "Fe^2+", "Mn^2+")


def battery(seed: int, count: int) -> np.ndarray:
    """Totals (count, component) in mol per kg of water, components in the order of MINE_COMPONENTS.

    Water w is of family w mod 4: plain, balanced sulfide, mineral-rich, titration.
    """
    rng = np.random.default_rng(seed)
    totals = np.zeros((count, len(MINE_COMPONENTS)))
    for w in range(count):
        _fill(totals[w], w % 4, rng)
    return totals


def _fill(t: np.ndarray, family: int, rng: np.random.Generator) -> None:
    for metal in (CA, MG, FE, ZN, CU):
        _add(t, _decades(rng, -9, 0), {metal: 1, CL: 2})
    _add(t, _decades(rng, -9, 0), {NA: 1, CL: 1})
    _add(t, _decades(rng, -9, 0), {NA: 2, SO4: 1})
    carbon_dioxide = _decades(rng, -9, -0.5)
    _add(t, carbon_dioxide, {H: 2, CO3: 1})
    sulfide = _decades(rng, -12, -1)
    if family == BALANCED:
        metals = (CU, ZN, FE)[: rng.integers(1, 4)]
        sulfide = _nearly(sum(t[metal] for metal in metals), rng)
    _add(t, sulfide, {H: 1, HS: 1})
    if family == MINERAL_RICH:
        for formula in MINERAL_FORMULAS:
            if rng.random() < 0.5:
                _add(t, _decades(rng, -8, 1), formula)
    if family == TITRATION:
        progress = rng.uniform(0, 2.2)
        hydrolysis = 2 * (t[FE] + t[ZN] + t[CU]) * rng.integers(0, 2)
        _add(t, progress * (2 * carbon_dioxide + sulfide + hydrolysis), {NA: 1, H: -1})
    acid = rng.random() < 0.5
    _add(t, _decades(rng, -9, 0.3), {H: 1, CL: 1} if acid else {NA: 1, H: -1})


def scaled(totals: np.ndarray, seed: int) -> np.ndarray:
    """Each water times 1 + uniform(-0.01, 0.01): the kind of change that one step of a column brings."""
    rng = np.random.default_rng(seed)
    return totals * (1 + rng.uniform(-0.01, 0.01, len(totals)))[:, None]


def stirred(totals: np.ndarray, seed: int) -> np.ndarray:
    """Each water with 1 % of another one in it: harsher, the present minerals change."""
    rng = np.random.default_rng(seed)
    return 0.99 * totals + 0.01 * totals[rng.integers(0, len(totals), len(totals))]


def random_bounds(totals: np.ndarray, minerals: int, seed: int) -> np.ndarray:
    """Upper bounds (count, mineral) in mol per kg of water for minerals that may only dissolve.

    A fifth of them are 0; of the rest 30 % are inf, the others 1e-6 to 1 of the water's largest total.
    """
    rng = np.random.default_rng(seed)
    shape = (len(totals), minerals)
    upper = np.abs(totals).max(axis=1)[:, None] * 10.0 ** rng.uniform(-6, 0, shape)
    upper[rng.random(shape) < 0.3] = np.inf
    upper[rng.random(shape) < 0.2] = 0.0
    return upper


def wide_battery(seed: int, count: int, components: Sequence[str], dissolution: np.ndarray) -> np.ndarray:
    """Totals (count, component) of waters on any list of components, in mol per kg of water; none is zero.

    components  plain-text ions with H^+, Na^+ and Cl^- among them
    dissolution (mineral, component), what a mineral-rich water may get
    The four families are those of `battery`; a balanced water has sulfide for the first few of SULFIDE_ORDER.
    """
    rng = np.random.default_rng(seed)
    place = {name: k for k, name in enumerate(components)}
    reagents = [_reagent(name, place) for name in components if name not in ("H^+", "HS^-")]
    totals = np.zeros((count, len(components)))
    for w in range(count):
        _fill_wide(totals[w], w % 4, rng, place, reagents, dissolution)
    return totals


def _fill_wide(t, family, rng, place, reagents, dissolution) -> None:
    for reagent in reagents:
        _add(t, _decades(rng, -9, -0.5), reagent)
    weak_acid = max(t[place["H^+"]], 0.0)
    if "HS^-" in place:
        sulfide = _decades(rng, -12, -1)
        metals = [place[name] for name in SULFIDE_ORDER if name in place]
        if family == BALANCED and metals:
            sulfide = _nearly(sum(t[k] for k in metals[: rng.integers(1, len(metals) + 1)]), rng)
        _add(t, sulfide, {place["H^+"]: 1, place["HS^-"]: 1})
        weak_acid += sulfide
    if family == MINERAL_RICH:
        for row in dissolution:
            if rng.random() < 0.5:
                _add(t, _decades(rng, -8, 0), dict(enumerate(row)))
    base = {place["Na^+"]: 1, place["H^+"]: -1}
    if family == TITRATION:
        hydrolysis = sum(charge_of(name) * t[k] for name, k in place.items() if charge_of(name) > 1)
        progress = rng.uniform(0, 2.2)
        _add(t, progress * (weak_acid + hydrolysis * rng.integers(0, 2)), base)
    acid = rng.random() < 0.5
    _add(t, _decades(rng, -9, 0.0), {place["H^+"]: 1, place["Cl^-"]: 1} if acid else base)


def _reagent(name: str, place: dict[str, int]) -> dict[int, float]:
    """What brings a component electroneutrally: chlorides of cations, CO2, sodium salts of other anions."""
    charge = charge_of(name)
    if name == "CO3^2-":
        return {place[name]: 1, place["H^+"]: 2}
    if charge > 0:
        return {place[name]: 1, place["Cl^-"]: charge}
    if name == "Cl^-":
        return {place[name]: 1, place["Na^+"]: 1}
    return {place[name]: 1, place["Na^+"]: -charge} if charge else {place[name]: 1}


def charge_of(name: str) -> int:
    """The charge that a plain-text ion carries.

    >>> charge_of("SO4^2-"), charge_of("Na^+"), charge_of("H4SiO4")
    (-2, 1, 0)
    """
    found = re.search(r"\^(\d*)([+-])$", name)
    return int(found[2] + (found[1] or "1")) if found else 0


def _decades(rng: np.random.Generator, low: float, high: float) -> float:
    return 10.0 ** rng.uniform(low, high)


def _nearly(amount: float, rng: np.random.Generator) -> float:
    """The amount, off by a random fraction between 1e-12 and 0.1 to either side."""
    off = _decades(rng, -12, -1)
    return amount * (1 + off if rng.random() < 0.5 else 1 - off)


def _add(t: np.ndarray, amount: float, reagent: Mapping[int, float]) -> None:
    for k, coefficient in reagent.items():
        t[k] += amount * coefficient
