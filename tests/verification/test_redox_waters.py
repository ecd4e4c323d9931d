"""Redox in whole waters: pe of couples at pH 7, acid of oxidation, and the order in which oxidants are used.

pe at pH 7 is that of a water which holds as much of one valence as of the other, or both gases at 1 atm.
Acid is what a solid or an ion gives to a water when oxygen takes its electrons: the total of H^+ less that of
the water before, mol per mol, with fresh iron hydroxide where it is the end.

Citations
  stumm1996      Stumm & Morgan (1996), Aquatic Chemistry, 3rd ed., redox table and ch. 8
  singer1970     Singer & Stumm (1970), Science 167, 1121-1123: four of acid for a formula of pyrite
  froelich1979   Froelich et al. (1979), Geochim. Cosmochim. Acta 43, 1075-1090: oxygen, nitrate and manganese
                 dioxide, iron oxides, sulfate, methane
  arithmetic     standard pe of stumm1996 carried to the stated conditions
"""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.agreement import Check, Within
from tests.support.solutions import Solution, log10_activity

from gossan.chemistry.equilibrium import Equilibrium, equilibrate
from gossan.chemistry.system import System, build_system
from gossan.constants.load import load_table

TABLE = load_table()
PRINTED = "the printed digits, and energies of formation that differ by 1 kJ/mol"


def pe(found: Equilibrium) -> float:
    """-log10 of the activity of the electron."""
    return -log10_activity("e^-")(found)


def halves(one: str, other: str, at: float = 7.0, **more: object) -> Solution:
    """A water with 0.5 mmol/kg of each of two valences that are coupled."""
    return Solution({one: 5e-4, other: 5e-4}, pH=at, activity="ideal", coupled=(other,), **more)


def gases(coupled: str, at: float = 7.0, **pressures: float) -> Solution:
    """A water under gases at so many atm, ideal."""
    return Solution(gases=pressures, pH=at, activity="ideal", coupled=(coupled,))


# what, water, pe, tolerance, source, why
PE = [
    ("nitrate and nitrite, pH 7", halves("NO3^-", "NO2^-"), 7.15, 0.15, "stumm1996",
     "energies of nitrite in lists are 5 kJ/mol apart"),
    ("nitrate and ammonium, pH 7", halves("NO3^-", "NH4^+"), 6.15, 0.06, "stumm1996", PRINTED),
    ("sulfate and sulfide, pH 7", halves("SO4^2-", "HS^-"), 4.25 - 7.0 * 9.0 / 8.0, 0.06, "arithmetic",
     PRINTED),
    ("CO2 and CH4 at 1 atm, pH 7", gases("CH4", CO2=1.0, CH4=1.0), -4.13, 0.04, "stumm1996", PRINTED),
    ("H2 at 1 atm, pH 7", gases("H2", H2=1.0), -7.0, 0.02, "stumm1996", "nil by definition"),
    ("O2 at 1 atm, pH 7", gases("O2", O2=1.0), 13.75, 0.05, "stumm1996", PRINTED),
    ("O2 of air, pH 7", gases("O2", O2=0.21), 13.58, 0.05, "arithmetic", PRINTED),
    ("Fe(III) and Fe(II), pH 0", halves("Fe^2+", "Fe^3+", at=0.0), 13.0, 0.05, "stumm1996", PRINTED),
]  # fmt: skip

ALL = tuple(name for name, component in TABLE.components.items() if component.couple)
# what is oxidised, its parts by valence per mol, O2 per mol, acid per mol, source
OXIDISED = [
    ("pyrite to hydroxide", {"Fe^2+": 1.0, "HS^-": 2.0, "H^+": -2.0, "e^-": -2.0}, 3.75, 4.0, "singer1970"),
    ("FeS to hydroxide", {"Fe^2+": 1.0, "HS^-": 1.0, "H^+": -1.0}, 2.25, 2.0, "stumm1996"),
    ("Fe^2+ to hydroxide", {"Fe^2+": 1.0}, 0.25, 2.0, "stumm1996"),
    ("HS^- to sulfate", {"HS^-": 1.0}, 2.0, 1.0, "stumm1996"),
    ("NH4^+ to nitrate", {"NH4^+": 1.0}, 2.0, 2.0, "stumm1996"),
]  # fmt: skip


def counted(system: System, amounts: dict[str, float]) -> np.ndarray:
    """(component,) of what is made up from valences."""
    total = np.zeros(len(system.components))
    for name, amount in amounts.items():
        total += amount * system.conserved[system.basis.index(name)]
    return total


def acid(parts: dict[str, float], oxygen: float, moles: float = 1e-4) -> float:
    """mol of H^+ per mol that is oxidised, in a water of 2 mmol/kg of sodium bicarbonate."""
    before = {"Na^+": 2e-3, "CO3^2-": 2e-3, "H^+": 2e-3}
    names = {*before, *parts, "O2"} - {"e^-"}
    system = build_system(TABLE, names, ["ferrihydrite"], activity="ideal", coupled=ALL)
    water = counted(system, before)
    added = counted(system, {**parts, "O2": oxygen})
    found = equilibrate(system, water + moles * added)
    return float(found.amount[0, 0] - water[0]) / moles


# oxidants as they should go, and the component or mineral that shows what is left of them
LADDER = ["O2", "NO3^-", "pyrolusite", "ferrihydrite", "SO4^2-", "CO3^2-"]


def used_up() -> list[float]:
    """mmol/kg of H2 given to a water until half of each oxidant of the ladder is gone, ideal."""
    names = ["Na^+", "Cl^-", "Fe^2+", "Mn^2+", "SO4^2-", "NO3^-", "CO3^2-", "O2", "H2"]
    system = build_system(TABLE, names, ["ferrihydrite", "pyrolusite"], activity="ideal", coupled=ALL)
    start = {"Na^+": 0.0203, "SO4^2-": 1e-4, "NO3^-": 1e-4, "CO3^2-": 0.02, "H^+": 0.02, "O2": 2e-4}
    given = np.linspace(0.0, 2.6e-3, 521)
    water = counted(system, start)[:, None] + counted(system, {"H2": 1.0})[:, None] * given
    solid = np.full((2, given.size), 1e-4)
    found = equilibrate(system, water, solid)
    left = {name: found.held()[system.basis.index(name)] for name in LADDER if name in system.basis}
    left |= {name: found.solid[system.minerals.index(name)] for name in LADDER if name in system.minerals}
    left["CO3^2-"] = left["CO3^2-"] - 0.0195  # of so much carbon only the first is given time
    return [1e3 * float(given[np.argmax(left[name] < 0.5 * left[name][0])]) for name in LADDER]


CHECKS = [
    Check(f"pe, {what}", lambda water=water: pe(water.equilibrium()), Within(round(value, 3), tolerance),
          source, False, why, logarithmic=True)
    for what, water, value, tolerance, source, why in PE
] + [
    Check(f"acid of {what}, mol/mol", lambda parts=parts, oxygen=oxygen: acid(parts, oxygen),
          Within(published, 0.01), source, False, "a trace of iron stays dissolved")
    for what, parts, oxygen, published, source in OXIDISED
]  # fmt: skip


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_redox(check):
    check.judge()


def test_zinc_sulfide_makes_no_acid():
    """Unlike iron's: what it gives is zinc and sulfate (stumm1996), and zinc stays dissolved."""
    assert acid({"Zn^2+": 1.0, "HS^-": 1.0, "H^+": -1.0}, 2.0) == pytest.approx(0.0, abs=1e-6)


def test_oxidants_go_in_the_order_of_the_trade():
    """froelich1979: each is half gone before the next, from oxygen to methane."""
    amounts = used_up()
    assert amounts == sorted(amounts)
    assert len(set(amounts)) == len(amounts)
