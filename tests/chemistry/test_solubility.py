"""What solids leave dissolved, against the definition, published figures and arithmetic."""

from dataclasses import replace
from math import inf, isnan

import numpy as np
import pytest
from tests.support.solutions import Solution, index

from gossan.chemistry.solubility import MOST, least_soluble, metal_of, solubilities
from gossan.constants.load import load_table
from gossan.constants.temperature import log10_k_at

TABLE = load_table()
SULFIDIC = {"HS^-": 1e-4, "CO3^2-": 2e-3, "SO4^2-": 5e-3, "Cl^-": 1e-3}


def by_name(pH, totals, celsius=25.0, minerals=None, table=TABLE, pe=None):
    return {row.mineral: row for row in solubilities(table, pH, totals, 273.15 + celsius, minerals, pe)}


@pytest.mark.parametrize("pH", [4.0, 7.0, 10.0])
def test_water_of_these_totals_is_in_equilibrium_with_the_solid(pH):
    """The definition: the totals given and found, put into water of that pH, have a saturation index of 0."""
    tried = 0
    for row in solubilities(TABLE, pH, SULFIDIC):
        if row.known and not row.soluble:
            totals = {**SULFIDIC, row.metal: row.dissolved}
            water = Solution(totals, pH=pH, indexed=(row.mineral,), activity="ideal").equilibrium()
            assert index(row.mineral)(water) == pytest.approx(0.0, abs=1e-7), row.mineral
            tried += 1
    assert tried > 15


@pytest.mark.parametrize(("mineral", "pH", "totals", "log10", "within"), [
    # the least over hydroxides, ideal; sources and reasons in tests/verification/test_solubility.py
    ("gibbsite", 6.1, {}, -7.8, 0.35),
    ("spertiniite", 9.4, {}, -7.45, 0.3),
    ("tenorite", 9.4, {}, -8.45, 0.3),
    ("wülfingite", 9.6, {}, -6.2, 0.35),
    ("cadmium hydroxide", 11.6, {}, -6.0, 0.6),
    # floors in sulfidic water, tests/verification/test_sulfidic_floor.py; there by Davies' law in 0.01 m
    # salt, which is worth 0.05
    ("fresh zinc sulfide", 7.0, {"HS^-": 1e-3}, -6.4, 0.06),
    ("greenockite", 7.0, {"HS^-": 1e-4}, -11.6, 0.4),
    ("mackinawite", 7.0, {"HS^-": 1e-3}, -5.45, 0.45),
    ("chalcocite", 7.0, {"HS^-": 1e-3}, -8.5, 2.0),
])  # fmt: skip
def test_published_solubilities_come_out(mineral, pH, totals, log10, within):
    assert np.log10(by_name(pH, totals)[mineral].dissolved) == pytest.approx(log10, abs=within)


def test_complexes_count():
    """Over sphalerite zinc is held by bisulfide: free Zn^2+ is a millionth of it."""
    bound = by_name(7.0, {"HS^-": 1e-3})["sphalerite"].dissolved
    bare_table = replace(TABLE, species={"H2S": TABLE.species["H2S"], "OH^-": TABLE.species["OH^-"]})
    free = by_name(7.0, {"HS^-": 1e-3}, table=bare_table)["sphalerite"].dissolved
    # K a(H) over half of 1 mM, pK1 being near 7: 10^(-11.45 - 7) / 5e-4
    assert free == pytest.approx(10**-18.45 / 5.1e-4, rel=0.02)
    assert 1e4 < bound / free < 1e8


def test_the_band_is_one_sd_of_the_solid_to_either_side():
    """Zn(HS)2 and the like hold sulfide that is given, so that their zinc goes with K in proportion."""
    row = by_name(7.0, {"HS^-": 1e-3})["fresh zinc sulfide"]
    sd = TABLE.minerals["fresh zinc sulfide"].log10_k.sd
    assert np.log10(row.high / row.dissolved) == pytest.approx(sd, abs=0.01)
    assert np.log10(row.dissolved / row.low) == pytest.approx(sd, abs=0.01)


def test_a_metal_that_takes_the_sulfide_away_dissolves_the_more():
    """Nickel over its fresh sulfide exceeds what the sulfide was before nickel came."""
    row = by_name(7.0, {"HS^-": 1e-4})["fresh nickel sulfide"]
    assert row.dissolved > 1e-4


def test_solids_without_their_elements_say_so():
    found = by_name(7.0, {"HS^-": 1e-4})
    assert found["smithsonite"].lacks == ("CO3^2-",)
    assert set(found["jarosite"].lacks) == {"K^+", "SO4^2-"}
    assert found["chalcopyrite"].lacks == ("Fe^2+",)
    assert found["pyrite"].electrons
    assert not found["pyrite"].known
    assert isnan(found["smithsonite"].dissolved)
    assert by_name(7.0, {"HS^-": 1e-4, "Fe^2+": 1e-4})["chalcopyrite"].dissolved < 1e-12


@pytest.mark.parametrize(
    ("pH", "pe"), [(16.0, None), (16.0, -14.0), (14.0, -12.0), (14.0, 5.0), (-2.0, 20.0)]
)
def test_the_ends_of_the_scale_have_answers(pH, pe):
    """Hydroxides of which there would be thousands of mol/kg are soluble, and no solve is lost on them."""
    found = by_name(pH, {}, pe=pe)
    assert found["amorphous zinc hydroxide"].soluble
    assert sum(row.known for row in found.values()) > 20


def log10_k(name):
    return log10_k_at(TABLE.minerals[name], 298.15)


def test_pyrite_and_sulfur_at_a_pe_by_hand():
    """FeS2 + 2 H+ + 2 e- = Fe2+ + 2 HS-, and S + H+ + 2 e- = HS-, with H2S + HS- as dissolved sulfide.

    At pH 5 and 1e-8 mol/kg of sulfide no complex of iron counts, and iron is all Fe(II).
    """
    pH, pe = 5.0, 0.0
    acid = 10 ** log10_k_at(TABLE.species["H2S"], 298.15)  # H+ + HS- = H2S
    bisulfide = 1e-8 / (1.0 + acid * 10**-pH)
    found = by_name(pH, {"HS^-": 1e-8}, minerals=["pyrite", "sulfur"], pe=pe)
    iron = log10_k("pyrite") - 2 * pH - 2 * pe - 2 * np.log10(bisulfide)
    assert np.log10(found["pyrite"].dissolved) == pytest.approx(iron, abs=1e-3)
    sulfide = 10 ** (log10_k("sulfur") - pH - 2 * pe) * (1.0 + acid * 10**-pH)
    assert found["sulfur"].dissolved == pytest.approx(sulfide, rel=1e-6)
    assert found["sulfur"].metal == "HS^-"


def test_oxides_at_a_pe_count_both_valences_of_iron():
    """Fe2O3 + 6 H+ = 2 Fe3+ + 3 H2O, and Fe2+ from Fe3+ + e-: at pH 4 and pe 8 iron is Fe^2+, 99.9 %."""
    pH, pe = 4.0, 8.0
    couple = TABLE.components["Fe^3+"].half_log10_k.value  # Fe2+ = Fe3+ + e-
    held = by_name(pH, {}, minerals=["hematite", "magnetite"])
    found = by_name(pH, {}, minerals=["hematite", "magnetite"], pe=pe)
    ferrous = log10_k("hematite") / 2 - 3 * pH - couple - pe
    assert np.log10(found["hematite"].dissolved) == pytest.approx(ferrous, abs=2e-3)
    assert (held["hematite"].metal, found["hematite"].metal) == ("Fe^3+", "Fe^2+")
    assert held["magnetite"].lacks == ("Fe^3+",)
    # Fe3O4 + 8 H+ = Fe2+ + 2 Fe3+ + 4 H2O
    ferrous = (log10_k("magnetite") - 8 * pH - 2 * (couple + pe)) / 3
    assert np.log10(found["magnetite"].dissolved) == pytest.approx(ferrous, abs=2e-3)


@pytest.mark.parametrize(("pH", "pe"), [(4.0, 12.0), (7.0, 2.0), (7.0, -3.0), (10.0, -5.0)])
def test_water_of_these_totals_and_this_pe_is_in_equilibrium_with_the_solid(pH, pe):
    """The definition, with couples solved by the program instead of reduced to the first ion."""
    tried = 0
    coupled = ("Fe^3+", "Cu^+", "Mn^3+")
    for row in solubilities(TABLE, pH, SULFIDIC, pe=pe):
        reaction = TABLE.minerals[row.mineral].reaction
        sulfur = "HS^-" in reaction.components and reaction.electrons  # wants sulfate coupled too
        if row.known and not row.soluble and row.metal in ("Fe^2+", "Cu^2+", "Mn^2+") and not sulfur:
            totals = {**SULFIDIC, row.metal: row.dissolved}
            water = Solution(
                totals, pH=pH, pe=pe, indexed=(row.mineral,), activity="ideal", coupled=coupled
            ).equilibrium()  # fmt: skip
            assert index(row.mineral)(water) == pytest.approx(0.0, abs=1e-7), row.mineral
            tried += 1
    assert tried > 10


def test_what_dissolves_without_end_has_no_number():
    row = by_name(3.0, {})["zincite"]  # 10^(11.12 - 6) mol/kg
    assert row.dissolved == row.low == inf
    assert row.soluble
    # in strong lye complexes alone make more than MOST: Zn(OH)4^2- 10^(11.12 - 40.41 + 30)
    assert by_name(15.0, {})["zincite"].soluble
    assert by_name(14.0, {})["zincite"].dissolved == pytest.approx(10**-1.29, rel=0.2)
    assert all(row.dissolved <= MOST or row.soluble for row in by_name(1.0, SULFIDIC).values() if row.known)


def test_rows_come_by_metal_and_the_least_soluble_first():
    rows = solubilities(TABLE, 7.0, SULFIDIC)
    assert len(rows) == len(TABLE.minerals)
    metals = [row.metal for row in rows]
    assert metals == sorted(metals, key=list(TABLE.components).index)
    zinc = [row for row in rows if row.metal == "Zn^2+"]
    assert [row.known for row in zinc] == sorted((row.known for row in zinc), reverse=True)
    numbers = [row.dissolved for row in zinc if row.known]
    assert numbers == sorted(numbers)
    least = least_soluble(rows, TABLE.minerals)
    assert {"sphalerite", "covellite", "greenockite", "galena", "millerite", "hematite"} <= least
    forming = least_soluble(rows, [name for name, mineral in TABLE.minerals.items() if mineral.forms])
    assert {"fresh zinc sulfide", "fresh copper sulfide", "ferrihydrite"} <= forming


@pytest.mark.parametrize(("mineral", "metal"), [
    ("jarosite", "Fe^3+"), ("alunite", "Al^3+"), ("dolomite", "Ca^2+"), ("chalcopyrite", "Cu^2+"),
    ("amorphous silica", "H4SiO4"), ("chalcocite", "Cu^+"), ("zinc oxalate", "Zn^2+"),
])  # fmt: skip
def test_the_metal_of_a_solid(mineral, metal):
    assert metal_of(TABLE.minerals[mineral]) == metal


def test_temperature_moves_them():
    """Gypsum apart, calcite is less soluble in the warm."""
    cold, warm = (by_name(8.0, {"CO3^2-": 1e-3}, celsius, ["calcite"])["calcite"] for celsius in (5.0, 35.0))
    assert cold.dissolved > 1.5 * warm.dissolved
