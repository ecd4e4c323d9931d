"""Waters brought to equilibrium: what the answer says of itself, what is refused, what is left alone."""

from __future__ import annotations

import pickle

import numpy as np
import pytest
from tests.oracles.activity_laws import davies
from tests.oracles.plain_speciation import speciate
from tests.support.battery import battery
from tests.support.plain_of import plain_of
from tests.support.small_systems import MINE_COMPONENTS, MINE_MINERALS
from tools.battery.mixes import mine_system

from gossan.base.errors import SolveError
from gossan.chemistry import equilibrium
from gossan.chemistry.equilibrium import Solver, equilibrate
from gossan.chemistry.system import LN10, build_system
from gossan.constants.load import load_table

MINE = mine_system("davies")
PLACE = [MINE.components.index(name) for name in MINE_COMPONENTS]
CALCIUM, SULFATE = MINE.components.index("Ca^2+"), MINE.components.index("SO4^2-")
GYPSUM = MINE.minerals.index("gypsum")


def waters(seed, count):
    """(component, water) in the system's order."""
    totals = np.zeros((len(PLACE), count))
    totals[PLACE] = battery(seed, count).T
    return totals


@pytest.fixture(scope="module")
def found():
    return equilibrate(MINE, waters(61, 40))


def test_a_small_system_as_the_oracle_has_it():
    system = build_system(load_table(), ["Na^+", "Ca^2+", "SO4^2-", "CO3^2-", "Cl^-"], ["gypsum", "calcite"])
    plain = plain_of(system)
    slope = system.activity.debye_hueckel / LN10
    rng = np.random.default_rng(62)
    for _ in range(8):
        totals = 10.0 ** rng.uniform(-4, -0.5, len(system.components))
        totals[0] = 0.3 * totals[system.components.index("CO3^2-")]
        expected = speciate(plain, totals, ln_gamma=davies(plain.charge, slope))
        found = equilibrate(system, totals)
        assert found.presence[:, 0].tolist() == expected.presence.tolist()
        assert found.solid[:, 0] == pytest.approx(expected.amount, abs=1e-13)
        assert found.molality()[:, 0] == pytest.approx(expected.molality, rel=1e-9)


def test_species_make_up_what_is_dissolved(found):
    made = MINE.stoichiometry.T @ found.molality()
    size = np.abs(MINE.stoichiometry).T @ found.molality()
    # what a free component leaves beside its minerals is a difference of amounts as large as theirs
    rounding = 1e-15 * (np.abs(found.amount).max(axis=0) + found.solid.max(axis=0))
    assert np.all(np.abs(made - found.amount) <= 1e-10 * size + rounding)
    assert 0.5 * MINE.species_charge**2 @ found.molality() == pytest.approx(found.ionic_strength, rel=1e-9)


def test_activities_are_molalities_times_coefficients(found):
    ln_gamma = MINE.activity.ln_gamma(found.ionic_strength)
    assert found.log10_activity() == pytest.approx(np.log10(found.molality()) + ln_gamma / LN10, abs=1e-12)


def test_saturation_has_the_sign_of_the_marks(found):
    index = found.saturation()
    assert index[found.presence == 1] == pytest.approx(0.0, abs=1e-12)
    assert (index[found.presence == 0] <= 1e-11).all()
    assert (found.solid[found.presence == 0] == 0.0).all()
    assert (found.solid[found.presence == 1] > 0.0).all()


def test_gases_follow_their_constants(found):
    carbon_dioxide = MINE.gases.index("CO2")
    activity = found.log10_activity()[MINE.species.index("CO2")]
    pressure = np.log10(found.gas_pressure()[carbon_dioxide])
    # Henry's constant and that of dissolved CO2 are separate entries: they differ by one number
    assert np.ptp(activity - pressure) < 1e-10


def test_what_is_absent_has_no_activity_and_no_index():
    totals = waters(63, 2)
    totals[CALCIUM] = 0.0
    found = equilibrate(MINE, totals)
    absent = MINE.stoichiometry[:, CALCIUM] != 0
    assert np.isneginf(found.log10_activity()[absent]).all()
    assert np.isfinite(found.log10_activity()[~absent]).all()
    assert (found.molality()[absent] == 0.0).all()
    made_of = MINE.mineral_stoichiometry[:, CALCIUM] != 0
    assert np.isnan(found.saturation()[made_of]).all()
    assert np.isfinite(found.saturation()[~made_of]).all()
    carbon = waters(63, 1)
    carbon[MINE.components.index("CO3^2-")] = 0.0
    assert np.isnan(equilibrate(MINE, carbon).gas_pressure()[MINE.gases.index("CO2")]).all()


def test_what_may_only_dissolve_never_grows():
    """Gypsum handed in and not on the list: it dissolves into a thin water and stays as it is in a rich."""
    others = [name for name in MINE_MINERALS if name != "gypsum"]
    system = build_system(load_table(), MINE_COMPONENTS, others, dissolving=["gypsum"])
    gypsum = system.minerals.index("gypsum")
    assert not system.may_form[gypsum]
    place = {name: k for k, name in enumerate(system.components)}
    amount = np.full((len(system.components), 3), 1e-6)
    amount[place["Ca^2+"]] = amount[place["SO4^2-"]] = [1e-4, 0.012, 0.1]
    solid = np.zeros((len(system.minerals), 3))
    solid[gypsum] = [0.001, 0.01, 0.01]
    found = equilibrate(system, amount, solid)
    assert found.presence[gypsum].tolist() == [0, 1, 2]
    assert found.solid[gypsum, 0] == 0.0
    assert 0.0 < found.solid[gypsum, 1] < 0.01
    assert found.solid[gypsum, 2] == 0.01
    assert found.saturation()[gypsum, 2] > 0.5
    # as much again where it may grow
    grown = Solver(system).cold(np.ones(3), amount, solid, np.full_like(solid, np.inf))
    assert grown.solid[gypsum, 2] > 0.05


def test_amounts_are_per_what_kilograms_count():
    """The same waters in moles per m3 of bulk, 380 kg of water in each."""
    totals = waters(64, 12)
    kilograms = np.full(12, 380.0)
    nothing = np.zeros((len(MINE.minerals), 12))
    alone, bulk = equilibrate(MINE, totals), Solver(MINE).cold(kilograms, totals * kilograms, nothing)
    assert np.array_equal(bulk.presence, alone.presence)
    assert bulk.ln_activity == pytest.approx(alone.ln_activity, abs=1e-9)
    assert bulk.solid == pytest.approx(alone.solid * 380.0, abs=1e-12 * 380.0)
    assert bulk.solved == pytest.approx(bulk.amount / 380.0, rel=1e-15)


def test_nothing_given_is_changed():
    solver, totals = Solver(MINE), waters(65, 6)
    solid = np.full((len(MINE.minerals), 6), 1e-3)
    kilograms = np.full(6, 2.0)
    before = totals.copy(), solid.copy(), kilograms.copy()
    first = solver.cold(kilograms, totals, solid)
    kept = pickle.dumps([first.amount, first.solid, first.presence, first.ln_activity, first.solved])
    solver.settled(first, kilograms, 1.01 * first.amount, first.solid)
    for given, copy in zip((totals, solid, kilograms), before, strict=True):
        assert np.array_equal(given, copy)
    assert pickle.dumps([first.amount, first.solid, first.presence, first.ln_activity, first.solved]) == kept


def test_a_settled_water_is_skipped_and_says_so():
    solver = Solver(MINE)
    first = solver.cold(np.ones(6), waters(66, 6), np.zeros((len(MINE.minerals), 6)))
    again = solver.settled(first, np.ones(6), first.amount, first.solid, skip=1e-12)
    assert (first.steps > 0).all()
    assert not again.steps.any()
    assert np.array_equal(again.ln_activity, first.ln_activity)


@pytest.mark.parametrize(
    ("component", "amount", "says"),
    [
        ("Ca^2+", -1e-3, "negative or no number"),
        ("Ca^2+", np.nan, "negative or no number"),
        ("H^+", np.nan, "real numbers"),
    ],
)
def test_what_has_no_answer_is_named(component, amount, says):
    totals = waters(67, 5)
    totals[MINE.components.index(component), 3] = amount
    solver = Solver(MINE)
    with pytest.raises(SolveError, match=says) as caught:
        solver.cold(np.ones(5), totals, np.zeros((len(MINE.minerals), 5)))
    assert caught.value.cell == 3
    assert pickle.loads(pickle.dumps(caught.value)).cell == 3
    # the solver's working space has forgotten it
    good = solver.cold(np.ones(2), waters(67, 2), np.zeros((len(MINE.minerals), 2)))
    assert np.array_equal(good.ln_activity, equilibrate(MINE, waters(67, 2)).ln_activity)


def test_a_failed_cell_is_rescued(monkeypatch):
    """The active set refused one cell: the rescue finds its minerals, and the rest is as it was."""
    from gossan.chemistry.kernel import cells

    totals = waters(68, 7)
    expected = equilibrate(MINE, totals)
    settle, calls = cells.settle_cells, []

    def refusing(*arguments):
        """All cells, but for the fifth at the first call."""
        calls.append(arguments[-1])
        given = [a.copy() if isinstance(a, np.ndarray) else a for a in arguments]
        failed = settle(*arguments)
        if len(calls) == 1:
            for values, before in zip(arguments[3:12], given[3:12], strict=True):
                values[..., 4] = before[..., 4]
            arguments[14][4] = 2
            failed += 1
        return failed

    monkeypatch.setattr(cells, "settle_cells", refusing)
    found = equilibrate(MINE, totals)
    assert calls == [7, 1]
    assert np.array_equal(found.presence, expected.presence)
    others = np.arange(7) != 4
    assert np.array_equal(found.ln_activity[:, others], expected.ln_activity[:, others])
    assert found.ln_activity[:, 4] == pytest.approx(expected.ln_activity[:, 4], abs=1e-9)
    assert found.solid[:, 4] == pytest.approx(expected.solid[:, 4], abs=1e-13)


def test_no_minerals_no_waters():
    system = build_system(load_table(), ["Na^+", "Cl^-"], [])
    assert equilibrate(system, [0.0, 0.1, 0.1]).solid.shape == (0, 1)
    nothing = Solver(MINE).cold(np.ones(0), np.zeros((len(PLACE), 0)), np.zeros((len(MINE.minerals), 0)))
    assert nothing.amount.shape == (len(PLACE), 0)


@pytest.mark.parametrize("threads", [2, 3, 7])
def test_threads_change_no_bit(threads, found, monkeypatch):
    """Blocks of any size, of which the last may be a single cell."""
    monkeypatch.setattr(equilibrium, "BLOCK", 5)
    totals = waters(61, 40)
    nothing = np.zeros((len(MINE.minerals), 40))
    spread = Solver(MINE, threads).cold(np.ones(40), totals, nothing)
    for name in ("amount", "solid", "presence", "ln_activity", "ionic_strength", "solved", "steps"):
        assert getattr(spread, name).tobytes() == getattr(found, name).tobytes(), name


def test_a_cell_that_fails_is_named_whatever_thread_it_was_in(monkeypatch):
    monkeypatch.setattr(equilibrium, "BLOCK", 5)
    totals = waters(61, 40)
    totals[SULFATE, 33] = np.nan
    with pytest.raises(SolveError) as caught:
        Solver(MINE, 4).cold(np.ones(40), totals, np.zeros((len(MINE.minerals), 40)))
    assert caught.value.cell == 33
