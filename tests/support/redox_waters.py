"""Random waters from hydrogen to oxygen: amounts of ions in every valence, which a system counts its own way.

Each water is a sum of electroneutral reagents, drawn as named ions. Where a valence is held its ion is a
component; where it is coupled it counts as its first ion, protons and electrons (`counted_as`). So the same
draw serves held, coupled and partly coupled systems. The order of the draws is part of the definition.
"""

from __future__ import annotations

from collections.abc import Mapping, Sequence

import numpy as np

from gossan.constants.entries import Table

IONS = (
    "H^+", "Na^+", "Ca^2+", "Mg^2+", "Mn^2+", "Fe^2+", "Zn^2+", "Cu^2+", "SO4^2-", "CO3^2-", "NO3^-", "Cl^-",
    "HS^-", "Fe^3+", "Cu^+", "O2", "H2", "NO2^-", "NH4^+", "N2", "CH4", "Mn^3+",
)  # fmt: skip
FIRSTS, VALENCES = IONS[:12], IONS[12:]
ELECTRON = "e^-"
PLACE = {name: k for k, name in enumerate(IONS)}
OXIC, REDUCING, ANY, BALANCED, PURE = range(5)
# what brings an ion without charge; carbonate comes as CO2, sulfide as H2S
REAGENTS: dict[str, dict[str, float]] = {
    "Na^+": {"Na^+": 1, "Cl^-": 1}, "Ca^2+": {"Ca^2+": 1, "Cl^-": 2}, "Mg^2+": {"Mg^2+": 1, "Cl^-": 2},
    "Mn^2+": {"Mn^2+": 1, "Cl^-": 2}, "Fe^2+": {"Fe^2+": 1, "Cl^-": 2}, "Zn^2+": {"Zn^2+": 1, "Cl^-": 2},
    "Cu^2+": {"Cu^2+": 1, "Cl^-": 2}, "SO4^2-": {"SO4^2-": 1, "Na^+": 2}, "CO3^2-": {"CO3^2-": 1, "H^+": 2},
    "NO3^-": {"NO3^-": 1, "Na^+": 1}, "HS^-": {"HS^-": 1, "H^+": 1}, "Fe^3+": {"Fe^3+": 1, "Cl^-": 3},
    "Cu^+": {"Cu^+": 1, "Cl^-": 1}, "O2": {"O2": 1}, "H2": {"H2": 1}, "NO2^-": {"NO2^-": 1, "Na^+": 1},
    "NH4^+": {"NH4^+": 1, "Cl^-": 1}, "N2": {"N2": 1}, "CH4": {"CH4": 1}, "Mn^3+": {"Mn^3+": 1, "Cl^-": 3},
}  # fmt: skip
# what a mineral-rich water gets: sphalerite, covellite, chalcocite, mackinawite, calcite, gypsum, and
# iron(II), iron(III) and copper hydroxide, sulfur (as SO4^2- less what HS^- holds), rhodochrosite
SOLIDS: tuple[dict[str, float], ...] = (
    {"Zn^2+": 1, "HS^-": 1, "H^+": -1}, {"Cu^2+": 1, "HS^-": 1, "H^+": -1},
    {"Cu^+": 2, "HS^-": 1, "H^+": -1}, {"Fe^2+": 1, "HS^-": 1, "H^+": -1}, {"Ca^2+": 1, "CO3^2-": 1},
    {"Ca^2+": 1, "SO4^2-": 1}, {"Fe^2+": 1, "H^+": -2}, {"Fe^3+": 1, "H^+": -3}, {"Cu^2+": 1, "H^+": -2},
    {"SO4^2-": 0.25, "HS^-": 0.75, "H^+": 1.25}, {"Mn^2+": 1, "CO3^2-": 1},
)  # fmt: skip
# electrons that one of each takes up (or gives off, below zero) on the way to its first ion or to water
TAKES = {"O2": 4, "Fe^3+": 1, "NO3^-": 8, "Mn^3+": 1, "HS^-": -8, "H2": -2, "CH4": -8, "NH4^+": -8}
OXIDANTS, REDUCTANTS = ("O2", "Fe^3+", "Mn^3+"), ("HS^-", "H2", "CH4", "NH4^+")


def random_waters(seed: int, count: int, *, missing: float = 0.0) -> np.ndarray:
    """Amounts (count, ion) of IONS in mol per kg of water.

    Water w is of family w mod 5: oxic, reducing, anything, balanced, pure valences. A balanced one has an
    oxidant that takes what a reductant gives but for a fraction of 1e-12 to 0.1; a pure one has just one
    valence of every element, and neither oxygen nor hydrogen.
    missing  chance of each reagent to be left out altogether
    """
    rng = np.random.default_rng(seed)
    waters = np.zeros((count, len(IONS)))
    for w in range(count):
        _fill(waters[w], w % 5, rng, missing)
    return waters


def _fill(water: np.ndarray, family: int, rng: np.random.Generator, missing: float) -> None:
    left_out = rng.random(len(IONS)) < missing
    drawn = 10.0 ** rng.uniform(-9, -0.5, len(IONS))
    weak = rng.random(len(IONS)) < 0.3  # a trace of what does not belong there
    drawn = np.where(left_out, 0.0, drawn)
    if family in (OXIC, REDUCING):
        for name in VALENCES:
            belongs = (name in OXIDANTS) == (family == OXIC)
            drawn[PLACE[name]] *= 1.0 if belongs else (1e-6 if weak[PLACE[name]] else 0.0)
        if family == REDUCING:
            drawn[PLACE["NO3^-"]] *= 1e-6 if weak[PLACE["NO3^-"]] else 0.0
    if family == BALANCED:
        _balance(drawn, rng)
    if family == PURE:
        _purify(drawn, rng)
    for name, reagent in REAGENTS.items():
        _add(water, drawn[PLACE[name]], reagent)
    solids = [formula for formula in SOLIDS if rng.random() < 0.5]
    amounts = 10.0 ** rng.uniform(-8, 0, len(solids))
    rich = rng.random() < 0.3 and family != PURE
    for formula, amount in zip(solids, amounts, strict=True):
        if rich and not any(left_out[PLACE[name]] for name in formula if name != "H^+"):
            _add(water, amount, formula)
    _acid_or_base(water, drawn, rng)


def _balance(drawn: np.ndarray, rng: np.random.Generator) -> None:
    """One oxidant takes nearly what one reductant gives; there is nothing else of either."""
    oxidant, reductant = OXIDANTS[rng.integers(len(OXIDANTS))], REDUCTANTS[rng.integers(len(REDUCTANTS))]
    for name in VALENCES:
        if name not in (oxidant, reductant):
            drawn[PLACE[name]] = 0.0
    drawn[PLACE["NO3^-"]] = 0.0
    given = -TAKES[reductant] * drawn[PLACE[reductant]]
    off = 10.0 ** rng.uniform(-12, -1) * (1 if rng.random() < 0.5 else -1)
    drawn[PLACE[oxidant]] = given / TAKES[oxidant] * (1 + off)


def _purify(drawn: np.ndarray, rng: np.random.Generator) -> None:
    """Every element in one valence, which is its first one with a chance of 3/4."""
    for first, other in (("Fe^2+", "Fe^3+"), ("Cu^2+", "Cu^+"), ("Mn^2+", "Mn^3+"), ("SO4^2-", "HS^-")):
        nil = first if rng.random() < 0.25 else other
        drawn[PLACE[nil]] = 0.0
    for name in ("O2", "H2", "NO2^-", "NH4^+", "N2", "CH4"):
        drawn[PLACE[name]] = 0.0


def _acid_or_base(water: np.ndarray, drawn: np.ndarray, rng: np.random.Generator) -> None:
    base = {"Na^+": 1, "H^+": -1}
    progress, hydrolysis = rng.uniform(0, 2.2), rng.integers(0, 2)
    metals = sum(drawn[PLACE[name]] for name in ("Fe^2+", "Zn^2+", "Cu^2+", "Mn^2+"))
    weak_acid = 2 * drawn[PLACE["CO3^2-"]] + drawn[PLACE["HS^-"]] + 3 * drawn[PLACE["Fe^3+"]]
    if rng.random() < 0.4:
        _add(water, progress * (weak_acid + hydrolysis * 2 * metals), base)
    amount = 10.0 ** rng.uniform(-9, 0)
    _add(water, amount, {"H^+": 1, "Cl^-": 1} if rng.random() < 0.5 else base)


def _add(water: np.ndarray, amount: float, reagent: Mapping[str, float]) -> None:
    for name, coefficient in reagent.items():
        water[PLACE[name]] += amount * coefficient


def counted_as(table: Table, components: Sequence[str]) -> np.ndarray:
    """(ion, component): what one of IONS counts as where these are the components; zero where it cannot be.

    An ion that is no component is taken apart by its half reaction, protons and electrons included.
    """
    place = {name: k for k, name in enumerate(components)}
    rows = np.zeros((len(IONS), len(components)))
    for i, name in enumerate(IONS):
        half = table.components[name].half_reaction
        if name in place:
            rows[i, place[name]] = 1.0
        elif half is not None and set(half.components) <= set(place) and ELECTRON in place:
            for first, times in half.components.items():
                rows[i, place[first]] = times
            rows[i, place[ELECTRON]] = half.electrons
    return rows


def totals_of(waters: np.ndarray, counted: np.ndarray) -> np.ndarray:
    """(water, component): term by term in the order of IONS, so that every machine makes the same bits."""
    totals = np.zeros((len(waters), counted.shape[1]))
    for i, row in enumerate(counted):
        for k in np.flatnonzero(row):
            totals[:, k] += row[k] * waters[:, i]
    return totals
