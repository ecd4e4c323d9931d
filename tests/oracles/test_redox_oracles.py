"""Oracles that count electrons: against the program's tables, paper chemistry, and frozen waters."""

from __future__ import annotations

import hashlib
import math

import mpmath as mp
import numpy as np
import pytest
from tests.oracles.cantera_mixture import cantera_equilibrium
from tests.oracles.gibbs import ACCURACY, least_gibbs_energy
from tests.oracles.newton60 import PRESENT, settle
from tests.support.plain_of import plain_of
from tests.support.redox_systems import redox_system
from tests.support.redox_waters import ELECTRON, IONS, VALENCES, counted_as, random_waters, totals_of
from tools.battery.mixes import redox_water_system

from gossan.base.notation import charge_of
from gossan.chemistry.system import System
from gossan.constants.load import load_table

LN10 = math.log(10.0)
SOME = ("HS^-", "Fe^3+", "N2", "CH4")


def independent(system: System):
    """The same system written out from the table's records; the program says only what is in it."""
    pressure = dict.fromkeys(system.open_gases, 0.1)
    return redox_system(
        load_table(), system.components, system.species, system.minerals, pressure, system.temperature
    )


@pytest.mark.parametrize("coupled", [(), VALENCES, SOME], ids=["held", "coupled", "partly"])
@pytest.mark.parametrize("index", [0, 5, 11])
def test_the_program_s_system_is_that_of_the_table(coupled, index):
    """Formulas exactly, constants to rounding; 0 to 50 degC, stubborn minerals and open gases among them."""
    system = redox_water_system(index, coupled, {"CO2": 0.1, "O2": 0.1})
    mine, other = plain_of(system), independent(system)
    assert mine.components == other.components
    assert len(mine.species) == len(other.species)
    named = len(system.species) - (ELECTRON in system.species)
    assert mine.species[:named] == other.species[:named]
    assert {tuple(row) for row in mine.formation} == {tuple(row) for row in other.formation}
    assert (mine.formation[:named] == other.formation[:named]).all()
    assert mine.dissolution == pytest.approx(other.dissolution, abs=1e-12)
    assert mine.ln_k[:named] == pytest.approx(other.ln_k[:named], rel=1e-13, abs=1e-11)
    assert mine.mineral_ln_k == pytest.approx(other.mineral_ln_k, rel=1e-13, abs=1e-11)
    assert (mine.charge[:named] == other.charge[:named]).all()


def test_what_a_constant_loses_is_kept_beside_it():
    mine = plain_of(redox_water_system(0, VALENCES))
    assert mine.ln_k_rest is not None
    assert np.abs(mine.ln_k_rest).max() > 0.0
    assert (np.abs(mine.ln_k_rest) <= np.spacing(np.abs(mine.ln_k))).all()


def iron(components=("H^+", "Fe^2+", "Cl^-", ELECTRON)):
    """Iron in two valences, with the oxygen and hydrogen of water."""
    species = ("H^+", "Fe^2+", "Cl^-", "Fe^3+", "OH^-")
    return redox_system(load_table(), components, species, ())


def test_iron_shares_its_electrons_as_on_paper():
    """0.01 and 0.03 of iron(II) and (III) in acid: pe = 13.02 + log10(3), since hydrolysis is left out."""
    totals = np.array([1.0, 0.04, 1.11, -0.03])
    guess = np.log([1.0, 0.01, 1.11, 10**-13.5])
    found = settle(iron(), totals, guess, [], [], digits=80)
    pe = -float(found.ln_activity[-1]) / LN10
    assert pe == pytest.approx(13.02 + math.log10(3.0), abs=1e-9)
    least = least_gibbs_energy(iron(), totals)
    assert least.molality[:5] == pytest.approx([1.0, 0.01, 1.11, 0.03, 0.0], abs=10 * ACCURACY)


def test_balanced_electrons_leave_what_water_itself_makes():
    """Iron(II) alone: what little iron(III) there is has made hydrogen, two for one."""
    totals = np.array([0.1, 0.01, 0.12, 0.0])
    start = np.log([0.1, 0.01, 0.12, 1e-6])
    found = settle(iron(), totals, start, [], [], digits=120)
    names = iron().species
    ferric, hydrogen = found.molality[names.index("Fe^3+")], found.molality[names.index("H2 of water")]
    oxygen = found.molality[names.index("O2 of water")]
    with mp.workdps(100):
        assert abs(ferric + 4 * oxygen - 2 * hydrogen) < mp.mpf("1e-60")
    # Fe^2+ + H^+ = Fe^3+ + 1/2 H2: the cube root of what the two constants and 0.01 x 0.1 allow
    k = 10 ** (-13.02 - 3.102 / 2)
    assert float(ferric) == pytest.approx((k * 0.01 * 0.1 * math.sqrt(2.0)) ** (2 / 3), rel=1e-6)


def test_an_open_gas_gives_what_its_pressure_wants():
    """0.1 atm of CO2 over pure water: carbonic acid by Henry's law, H^+ and HCO3^- alike."""
    table = load_table()
    species = ("H^+", "CO3^2-", "OH^-", "HCO3^-", "CO2")
    system = redox_system(table, ("H^+", "CO3^2-"), species, (), {"CO2": 0.1})
    found = settle(system, [0.0, 0.0], np.log([1e-4, 1e-10]), [0.0], [PRESENT])
    molality = dict(zip(species, map(float, found.molality), strict=True))
    assert molality["CO2"] == pytest.approx(0.1 * 10**-1.468, rel=0.01)
    assert molality["H^+"] == pytest.approx(math.sqrt(10**-6.352 * molality["CO2"]), rel=0.01)
    taken = float(found.amount[0])
    assert -taken == pytest.approx(molality["CO2"] + molality["HCO3^-"] + molality["CO3^2-"], rel=1e-12)
    least = least_gibbs_energy(system, np.array([0.0, 0.0]))
    assert least.amount[0] == pytest.approx(taken, abs=10 * ACCURACY)


def test_cantera_divides_iron_too():
    totals = np.array([1.0, 0.04, 1.11, -0.03])
    molality, _ = cantera_equilibrium(iron(), totals, 2.15)
    assert molality[:4] == pytest.approx([1.0, 0.01, 1.11, 0.03], abs=1e-7)


def test_redox_waters_are_electroneutral_and_grow_by_appending():
    waters = random_waters(3, 50, missing=0.2)
    charge = np.array([charge_of(name) for name in IONS])
    assert np.abs(waters @ charge).max() < 1e-14 * np.abs(waters).max()
    assert (waters[:17] == random_waters(3, 17, missing=0.2)).all()
    assert (waters[:, 1:] >= 0.0).all()
    assert (waters[:, 1:] == 0.0).any(axis=1).all(), "with some reagents missing every water lacks some"


def test_counting_keeps_charge_and_electrons():
    """However valences are counted, a water is as neutral as it was."""
    waters = random_waters(4, 30)
    for coupled in ((), VALENCES, SOME):
        system = redox_water_system(0, coupled)
        totals = totals_of(waters, counted_as(load_table(), system.components))
        charge = np.array([charge_of(name) for name in system.components])
        assert np.abs(totals @ charge).max() < 1e-13 * np.abs(totals).max()


def test_redox_waters_are_frozen():
    """SHA-256 in single precision: the last bit of a double's power differs between C libraries."""

    def digest(waters):
        return hashlib.sha256(waters.astype("<f4").tobytes()).hexdigest()[:16]

    table = load_table()
    waters = random_waters(20261201, 200)
    assert digest(waters) == "cb99641e54328c77"
    assert digest(random_waters(20261201, 100, missing=0.35)) == "75aa2100f6bba168"
    components = redox_water_system(0, VALENCES).components
    assert digest(totals_of(waters, counted_as(table, components))) == "584b434678ae37fe"
