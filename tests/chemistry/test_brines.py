"""Brines under SIT: against a slow oracle, against themselves, with couples, and beyond the law's range."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from tests.oracles.activity_laws import sit
from tests.oracles.brine import speciate_brine
from tests.support.battery import battery
from tests.support.small_systems import MINE_COMPONENTS, MINE_MINERALS, plain_system

from gossan.chemistry.activity import SIT
from gossan.chemistry.equilibrium import Equilibrium, Solver, equilibrate
from gossan.chemistry.pairs import coefficient, held_complexes, interaction_matrix
from gossan.chemistry.reservoir import fixed_pe, held_to
from gossan.chemistry.system import LN10, build_system
from gossan.constants.load import load_table
from gossan.constants.temperature import log10_k_at

TABLE = load_table()
SALT = ["Na^+", "Ca^2+", "Mg^2+", "Cl^-", "SO4^2-", "CO3^2-"]
TIGHT = 1e-11  # ln activity: the solve stops at 1e-12


def waters(system, count, seed, top=0.3):
    """(component, water): random salts of chloride and sulfate, some carbon dioxide."""
    rng = np.random.default_rng(seed)
    place = {name: k for k, name in enumerate(system.components)}
    totals = np.zeros((len(system.components), count))
    for name, chloride in (("Na^+", 1), ("Ca^2+", 2), ("Mg^2+", 2)):
        amount = 10.0 ** rng.uniform(-3, np.log10(top), count)
        totals[place[name]] += amount
        totals[place["Cl^-"]] += chloride * amount
    sodium = 10.0 ** rng.uniform(-3, np.log10(top), count)
    totals[place["Na^+"]] += 2 * sodium
    totals[place["SO4^2-"]] += sodium
    carbon = 10.0 ** rng.uniform(-4, -2, count)
    totals[place["CO3^2-"]] += carbon
    totals[0] += carbon
    totals[place["Na^+"]] += carbon
    return totals


def test_the_oracle_has_the_same_brines():
    system = build_system(TABLE, SALT, ["gypsum", "calcite"], activity=SIT)
    complexes = [name for name in system.species if name not in system.basis]
    plain = plain_system(system.components, complexes, system.minerals)
    # constants at 25 degC by their fits, as the program takes them
    ln_k = np.delete(system.ln_k, system.species.index("H2O"))
    plain = replace(plain, ln_k=ln_k, mineral_ln_k=system.matrices.solid_ln_k)
    law = sit(plain.charge, interaction_matrix(TABLE, plain.species), system.activity.debye_hueckel / LN10)
    formed = [0.0] * len(system.components) + [TABLE.species[name].reaction.water for name in complexes]
    freed = [TABLE.minerals[name].reaction.water for name in system.minerals]
    assert any(formed)
    assert freed[list(system.minerals).index("gypsum")] == 2.0
    totals = waters(system, 4, 71, top=1.0)
    found = equilibrate(system, totals)
    assert found.ionic_strength.max() > 1.0
    for i in range(4):
        expected, ln_water = speciate_brine(plain, totals[:, i], law, formed, freed)
        assert found.presence[:, i].tolist() == expected.presence.tolist()
        assert found.ln_activity[:-1, i] == pytest.approx(expected.ln_activity, abs=1e-9)
        assert found.ln_activity[-1, i] == pytest.approx(ln_water, abs=1e-11)
        assert found.solid[:, i] == pytest.approx(expected.amount, abs=1e-12)
        present = [s for s, name in enumerate(system.species) if name != "H2O"]
        assert found.molality()[present, i] == pytest.approx(expected.molality, rel=1e-9)


def own_conditions(found: Equilibrium) -> None:
    """Balances, ionic strength, water and coefficients all belong to the same molalities."""
    system, molality = found.system, found.molality()
    made = system.conserved.T @ (system.stoichiometry.T @ molality)
    size = np.abs(system.conserved.T) @ (np.abs(system.stoichiometry.T) @ molality)
    rounding = 2e-15 * (np.abs(found.amount).max(axis=0) + found.solid.max(axis=0, initial=0.0))
    assert np.all(np.abs(made - found.amount) <= 2e-9 * size + rounding)
    assert 0.5 * system.species_charge**2 @ molality == pytest.approx(found.ionic_strength, rel=1e-9)
    assert found.seen[: len(system.species)] == pytest.approx(molality, rel=TIGHT, abs=TIGHT)
    water = system.activity.ln_water(found.ionic_strength, molality)
    assert found.ln_activity[system.basis.index("H2O")] == pytest.approx(water, abs=TIGHT)
    assert found.log10_activity()[system.species.index("H2O")] == pytest.approx(water / LN10, abs=TIGHT)
    assert found.water_activity() == pytest.approx(np.exp(water), rel=TIGHT)


def minerals_hold(found: Equilibrium) -> None:
    index = found.saturation()
    assert np.abs(index[found.presence == 1]).max(initial=0.0) < TIGHT
    assert (index[found.presence == 0] <= TIGHT).all()


MINE = build_system(TABLE, MINE_COMPONENTS, MINE_MINERALS, activity=SIT)


def mine_waters(count, seed):
    totals = np.zeros((len(MINE.components), count))
    totals[[MINE.components.index(name) for name in MINE_COMPONENTS]] = battery(seed, count).T
    return totals


def test_random_waters_of_all_strengths_hold_together():
    found = equilibrate(MINE, mine_waters(200, 72))
    assert found.ionic_strength.max() > 1.0
    own_conditions(found)
    minerals_hold(found)


def test_a_warm_start_comes_to_the_same_answer():
    solver, totals = Solver(MINE), mine_waters(60, 73)
    nothing = np.zeros((len(MINE.minerals), 60))
    first = solver.cold(np.ones(60), totals, nothing)
    changed = first.amount * (1.0 + 0.02 * np.random.default_rng(74).uniform(-1, 1, first.amount.shape))
    warm = solver.settled(first, np.ones(60), changed, first.solid)
    cold = solver.cold(np.ones(60), changed, first.solid)
    own_conditions(warm)
    minerals_hold(warm)
    assert np.array_equal(warm.presence, cold.presence)
    assert warm.ionic_strength == pytest.approx(cold.ionic_strength, rel=1e-9)
    again = solver.settled(first, np.ones(60), changed, first.solid)
    assert np.array_equal(again.ln_activity, warm.ln_activity)
    assert np.array_equal(again.seen, warm.seen)


def test_a_cell_does_not_know_its_neighbours():
    solver, totals = Solver(MINE), mine_waters(12, 75)
    nothing = np.zeros((len(MINE.minerals), 12))
    together = solver.cold(np.ones(12), totals, nothing)
    for i in (3, 11):
        alone = Solver(MINE).cold(np.ones(1), totals[:, i : i + 1], nothing[:, :1])
        assert np.array_equal(alone.ln_activity[:, 0], together.ln_activity[:, i])
        assert np.array_equal(alone.seen[:, 0], together.seen[:, i])


def test_couples_hold_in_brines():
    """Iron and sulfur coupled: water stands in their half reactions too."""
    system = build_system(
        TABLE, [*SALT, "Fe^2+"], [], activity=SIT, coupled=("Fe^3+", "HS^-", "O2", "H2")
    )  # fmt: skip
    assert system.basis[-1] == "H2O"
    totals = np.zeros(len(system.components))
    for name, amount in (("Na^+", 2.0), ("Cl^-", 2.02), ("Fe^2+", 0.01), ("SO4^2-", 0.001), ("H^+", 0.002)):
        totals[system.components.index(name)] = amount
    found = held_to(system, totals, [fixed_pe(system, 8.0)])
    own_conditions(found)
    ln = dict(zip(system.basis, found.ln_activity[:, 0], strict=True))
    for name in ("Fe^3+", "HS^-", "O2", "H2"):
        half = TABLE.components[name].half_reaction
        made = sum(times * ln[ion] for ion, times in half.components.items())
        made += half.electrons * ln["e^-"] + half.water * ln["H2O"]
        log10_k = log10_k_at(TABLE.components[name], 298.15)
        assert (ln[name] - made) / LN10 == pytest.approx(log10_k, abs=1e-9)


def test_complexes_that_coefficients_hold_are_left_out():
    system = build_system(TABLE, ["Na^+", "K^+", "SO4^2-", "Co^2+", "Zn^2+", "Cl^-"], [], activity=SIT)
    assert {"NaSO4^-", "CoCl^+"} <= held_complexes(TABLE)
    assert not held_complexes(TABLE) & set(system.species)
    assert {"KSO4^-", "ZnCl^+", "CoSO4"} <= set(system.species)


@pytest.mark.parametrize(("one", "other", "value", "estimate"), [
    ("Na^+", "Cl^-", 0.03, False),
    ("Cl^-", "Na^+", 0.03, False),
    ("FeOH^2+", "Cl^-", 0.15, True),
    ("Al2(OH)2^4+", "Cl^-", 0.33, True),
    ("ZnOH^+", "NO3^-", 0.075, True),
    ("K^+", "CH3COO^-", 0.09, False),
    ("NH4^+", "HCO3^-", 0.0, True),
    ("CO2", "Mg^2+", 0.2, True),
    ("SO4^2-", "CO2", 0.2, True),
    ("CaSO4", "Na^+", 0.0, False),
    ("Na^+", "Ca^2+", 0.0, False),
])  # fmt: skip
def test_a_pair_is_published_or_estimated(one, other, value, estimate):
    assert coefficient(TABLE, one, other) == (value, estimate)


def test_the_pairs_are_symmetric():
    pairs = interaction_matrix(TABLE, MINE.species)
    assert np.array_equal(pairs, pairs.T)
    assert np.array_equal(MINE.activity.interaction, LN10 * pairs)


def test_beyond_its_range_a_brine_still_has_an_answer():
    system = build_system(TABLE, ["Na^+", "Mg^2+", "Cl^-", "Fe^3+"], [], activity=SIT)
    totals = np.zeros((len(system.components), 4))
    place = {name: k for k, name in enumerate(system.components)}
    totals[place["Mg^2+"]] = [0.5, 2.0, 4.0, 6.0]
    totals[place["Fe^3+"]] = [0.1, 0.3, 0.5, 1.0]
    totals[0] = 0.1
    totals[place["Cl^-"]] = 2 * totals[place["Mg^2+"]] + 3 * totals[place["Fe^3+"]] + 0.1
    found = equilibrate(system, totals)
    assert found.ionic_strength[-1] > 15.0
    own_conditions(found)


@pytest.mark.parametrize("law", ["davies", "debye-hueckel", "ideal"])
def test_water_is_one_less_seventeen_thousandths_under_other_laws(law):
    system = build_system(TABLE, ["Na^+", "Cl^-"], [], activity=law)
    found = equilibrate(system, [0.0, 0.1, 0.1])
    assert system.basis == system.components
    assert found.water_activity()[0] == pytest.approx(1.0 - 0.017 * 0.2, abs=1e-6)
