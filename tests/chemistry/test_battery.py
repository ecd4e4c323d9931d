"""Random waters by the thousand: all converge, meet every condition, and stand up to other methods.

The waters: tests/support/battery.py and redox_waters.py; the systems: tools/battery/mixes.py. The judges:
plain numpy, a convex minimum of Gibbs energy, cantera, Newton at 60 and 120 digits.
"""

from __future__ import annotations

from concurrent.futures import ThreadPoolExecutor
from itertools import islice

import numpy as np
import pytest
from tests.oracles.cantera_mixture import Unbalanced, cantera_equilibrium, ct
from tests.oracles.gibbs import NotConverged, least_gibbs_energy
from tests.support.battery import random_bounds, scaled, stirred
from tests.support.plain_of import judged, solids_of
from tools.battery.answers import Answers, solve
from tools.battery.conditions import conditions
from tools.battery.digits import hardest, scarcity, settled
from tools.battery.mixes import MIXES, Batch, batches, first_waters, mine_system, wide_system
from tools.battery.report import IN_LN_ACTIVITY, Report

from gossan.chemistry.certificate import certify
from gossan.chemistry.equilibrium import Equilibrium, Solver
from gossan.chemistry.system import System

SEED = 20261201
OF_LARGEST = 1e-6  # what the convex solver and cantera are good for, of the largest total
WIDENED = ("held", "coupled", "partial", "open", "missing", "bounded")
MINE = {activity: mine_system(activity) for activity in ("ideal", "davies", "debye-hueckel")}


def first_batch(system: System, seed: int, count: int, bounded: bool = False) -> Batch:
    """Waters of the first two batteries."""
    totals = first_waters(system, seed, count)
    upper = np.full((count, len(system.minerals)), np.inf)
    return Batch("", system, totals, random_bounds(totals, upper.shape[1], seed) if bounded else upper)


def passed(answers: Answers) -> bool:
    """Whether every water was solved and meets balances, complementarity, ties and ionic strength."""
    report = Report("test")
    report.asked = len(answers.water) + len(answers.failures)
    report.add(conditions(answers), None)
    for line in report.lines():
        print(line)
    return report.good()


@pytest.mark.parametrize("mix", ["mine", *WIDENED])
def test_ideal_waters_are_least_in_gibbs_energy(mix):
    """Sixty of each kind, 200 of the first battery; open gases and bounds included.

    Where the convex solver itself gives up, nothing follows.
    """
    compared = given_up = 0
    for batch in batches(mix, 71, 200 if mix == "mine" else 60, "ideal"):
        found = conditions(solve(batch))
        amounts, _ = solids_of(found.answers.found)
        for w, totals in enumerate(batch.totals):
            kept = found.answers.found.ln_activity[: len(totals), w] > -1e5
            there = np.all(found.plain.dissolution[:, ~kept] == 0.0, axis=1)
            upper = np.concatenate([batch.upper[w], np.full(found.plain.endless, np.inf)])
            try:
                least = least_gibbs_energy(found.plain.with_only(kept), totals[kept], upper[there])
            except NotConverged:
                given_up += 1
                continue
            compared += 1
            within = OF_LARGEST * max(np.abs(totals).max(), np.abs(amounts[:, w]).max(initial=0.0))
            dissolved = np.all(found.plain.formation[:, ~kept] == 0.0, axis=1)
            where = f"{batch.name}, water {w}"
            assert found.molality[dissolved, w] == pytest.approx(least.molality, abs=within), where
            assert amounts[there, w] == pytest.approx(least.amount, abs=within), where
    assert compared > 3 * given_up


def test_cantera_finds_the_same_waters():
    """Held and coupled ideal waters; where cantera's solver gives up nothing follows, and it seldom does.

    Of partly coupled waters it gives up every other one.
    """
    given_up = compared = 0
    for mix in ("mine", "held", "coupled"):
        for batch in batches(mix, 72, 36, "ideal"):
            found = conditions(solve(batch))
            for w, totals in enumerate(batch.totals):
                try:
                    molality, amount = cantera_equilibrium(found.plain, totals, found.molality[:, w].sum())
                except (ct.CanteraError, Unbalanced):
                    given_up += 1
                    continue
                compared += 1
                within = OF_LARGEST * np.abs(totals).max()
                assert found.molality[:, w] == pytest.approx(molality, abs=within), f"{batch.name}, water {w}"
                assert found.answers.found.solid[:, w] == pytest.approx(amount, abs=within)
    assert compared > 80
    assert given_up < 0.15 * compared


@pytest.fixture(scope="module")
def many():
    """Twenty thousand waters of the first battery with Davies' law, cold."""
    return conditions(solve(first_batch(MINE["davies"], SEED, 20000)))


def test_twenty_thousand_waters_converge(many):
    assert passed(many.answers)
    marks = many.answers.found.presence.T
    assert len(np.unique(marks, axis=0)) > 50, "hardly any set of minerals was met"


@pytest.mark.parametrize("part", range(2))
def test_the_fifty_hardest_at_sixty_digits(many, part):
    """By what is dissolved of the scarcest component beside the largest total."""
    batch, found = many.answers.batch, many.answers.found
    chosen = np.argsort(-scarcity(many), kind="stable")[:50]
    for w in chosen[part::2].tolist():
        exact = judged(found, w, batch.totals[w], plain=many.plain)
        assert exact.changes == (), f"water {w}"
        assert exact.error < IN_LN_ACTIVITY, f"water {w}"
        assert exact.amount_error < 1e-12, f"water {w}"


@pytest.mark.parametrize("mix", WIDENED)
def test_waters_from_hydrogen_to_oxygen(mix):
    """0 to 50 degC; the hardest at 60 or 120 digits, each error within what its certificate says."""
    report = Report(mix)
    for batch in batches(mix, SEED, 480):
        found = conditions(solve(batch))
        report.asked += len(batch.totals)
        certificate = certify(found.answers.found, totals=batch.totals.T, upper=batch.upper.T)
        report.add(found, certificate)
        for cell in hardest(found, certificate, 3):
            report.settled.append(settled(found, certificate, cell))
    for line in report.lines():
        print(line)
    assert report.good()
    assert max(one.covered for one in report.settled) <= 1.0
    if mix == "coupled":
        pe = np.concatenate(report.pe)
        assert pe.min() < -10
        assert pe.max() > 20


# of a mix of 20000 waters: its seed, number of the batch, numbers of waters that once were lost, and on what
STRAYS = {
    "coupled": [(900001, 1, [1369]), (910001, 4, [1438])],  # two balances that said nearly the same
    "partial": [
        (900003, 3, [111, 122, 486, 817, 852, 1542, 1566]),  # the same
        (910004, 3, [176]),  # the same, with a step of 10^32 instead of none
        (910001, 9, [216, 1206]),  # a mineral of no more than the last digit of the largest total
    ],
    # sulfide held by a gas beside sulfate: no start near enough
    "open": [(900003, 2, [4, 26, 83, 110, 383, 546, 843, 1091, 1283, 1288])],
    "bounded": [
        (900001, 1, [1187, 1410]),  # a mineral that came back from full and pushed out the wrong one
        (900001, 5, [1076, 1595]),  # far steps to ever larger waters
    ],
}


@pytest.mark.parametrize("mix", STRAYS)
def test_waters_that_once_were_lost(mix):
    for seed, index, waters in STRAYS[mix]:
        batch = next(islice(batches(mix, seed, 20000), index, None))
        assert passed(solve(Batch(batch.name, batch.system, batch.totals[waters], batch.upper[waters])))


@pytest.mark.parametrize("activity", ["ideal", "debye-hueckel"])
@pytest.mark.parametrize("mix", ["mine", "coupled"])
def test_the_other_laws(mix, activity):
    for batch in batches(mix, 73, 2000 if mix == "mine" else 240, activity):
        assert passed(solve(batch))


def remade(answers: Answers, totals: np.ndarray, found: Equilibrium) -> Answers:
    """The answers of other totals of the same system."""
    batch = Batch("warm", answers.batch.system, totals, answers.batch.upper)
    return Answers(batch, answers.water, found, ())


@pytest.mark.parametrize("changed", [scaled, stirred])
@pytest.mark.parametrize("mix", ["mine", "coupled"])
def test_warm_starts(mix, changed):
    """From the answer of a water that one step of a column ago was a little other."""
    for batch in batches(mix, 74, 2000 if mix == "mine" else 240):
        system, count = batch.system, len(batch.totals)
        cold = solve(batch)
        after = changed(batch.totals, 74)
        # what a step moves is dissolved; the solids stay
        dissolved = after.T - system.mineral_stoichiometry.T @ cold.found.solid
        warm = Solver(system).settled(cold.found, np.ones(count), dissolved, cold.found.solid)
        assert passed(remade(cold, after, warm))
        again = solve(Batch("", system, after, batch.upper)).found
        assert np.array_equal(warm.presence, again.presence)
        # rounding of the totals, for traces: as large as the certificates grant them
        slack = 1e-9 + certify(warm, totals=after.T).worst + certify(again, totals=after.T).worst
        difference = np.where(again.ln_activity > -1e5, np.abs(warm.ln_activity - again.ln_activity), 0.0)
        assert (difference.max(axis=0) < slack).all()
        if mix == "mine":
            assert warm.steps.mean() < 0.6 * cold.found.steps.mean()


@pytest.mark.parametrize("bounded", [False, True])
def test_wide_waters(bounded):
    """Twenty-two held components with the default list of minerals."""
    answers = solve(first_batch(wide_system(), 75, 600, bounded))
    assert passed(answers)
    if bounded:
        assert {0, 1, 2} == set(np.unique(answers.found.presence).tolist())


def test_the_hardest_wide_waters_at_sixty_digits():
    found = conditions(solve(first_batch(wide_system(), 76, 200, bounded=True)))
    batch = found.answers.batch
    for w in np.argsort(-scarcity(found), kind="stable")[:3].tolist():
        exact = judged(found.answers.found, w, batch.totals[w], batch.upper[w], found.plain)
        assert exact.changes == (), f"water {w}"
        assert exact.error < IN_LN_ACTIVITY, f"water {w}"


def bits(found: Equilibrium, chosen=slice(None)) -> list[bytes]:
    """Everything an equilibrium holds, as bytes."""
    names = (
        "amount", "solid", "presence", "ln_activity", "ionic_strength", "solved", "steps", "given", "seen",
    )  # fmt: skip
    return [np.ascontiguousarray(getattr(found, name)[..., chosen]).tobytes() for name in names]


def cold(system: System, totals: np.ndarray, upper: np.ndarray) -> Equilibrium:
    count = len(totals)
    nothing = np.zeros((len(system.minerals), count))
    return Solver(system).cold(np.ones(count), np.ascontiguousarray(totals.T), nothing, upper.T)


@pytest.mark.parametrize("mix", ["mine", "wide", "coupled", "open"])
def test_the_same_bits_however_they_are_solved(mix):
    """All at once, twice, one by one, in another order, in two threads with a solver each."""
    batch = next(batches(mix, 77, {"mine": 600, "wide": 60}.get(mix, 480)))
    system, totals = batch.system, batch.totals
    count = len(totals)
    upper = random_bounds(totals, len(system.minerals), 77)
    whole = cold(system, totals, upper)
    expected = bits(whole)
    assert bits(cold(system, totals, upper)) == expected
    order = np.random.default_rng(77).permutation(count)
    assert bits(cold(system, totals[order], upper[order])) == bits(whole, order)
    solver = Solver(system)
    for i in range(count):
        one = solver.cold(
            np.ones(1), totals[i : i + 1].T, np.zeros((len(system.minerals), 1)), upper[i : i + 1].T
        )
        assert bits(one) == bits(whole, slice(i, i + 1)), f"water {i}"
    halves = np.array_split(np.arange(count), 2)
    with ThreadPoolExecutor(2) as pool:
        for _ in range(4):
            both = pool.map(lambda half: bits(cold(system, totals[half], upper[half])), halves)
            assert list(both) == [bits(whole, half) for half in halves]


def test_every_mix_has_a_dozen_temperatures():
    for mix in WIDENED:
        kelvin = [batch.system.temperature for batch in batches(mix, 1, 12)]
        assert len(set(kelvin)) == 12
        assert (min(kelvin), max(kelvin)) == (273.15, 323.15)
    assert set(WIDENED) < set(MIXES)
