"""Random waters by the thousand: all converge, meet every condition, and stand up to other methods.

The waters: tests/support/battery.py. The judges: a convex minimum of Gibbs energy, Newton at 60 digits.
"""

from __future__ import annotations

from concurrent.futures import ThreadPoolExecutor

import numpy as np
import pytest
from tests.oracles.gibbs import least_gibbs_energy
from tests.oracles.newton60 import settle
from tests.support.battery import battery, random_bounds, scaled, stirred, wide_battery
from tests.support.small_systems import MINE_COMPONENTS, WIDE_COMPONENTS
from tools.battery import (
    LAWS,
    Answers,
    as_plain,
    hardest,
    mine_system,
    molalities,
    report_conditions,
    solve,
    wide_system,
)

from gossan.chemistry.equilibrium import Equilibrium, Solver
from gossan.chemistry.system import System

SEED = 20261201
OF_LARGEST = 1e-6  # what the convex solver is good for, of the largest total
IN_LN_ACTIVITY = 1e-9
MINE = {activity: mine_system(activity) for activity in ("ideal", "davies", "debye-hueckel")}


def waters(system: System, seed: int, count: int) -> np.ndarray:
    """(water, component) in the system's order."""
    wide = len(system.components) > len(MINE_COMPONENTS)
    names = WIDE_COMPONENTS if wide else MINE_COMPONENTS
    place = [system.components.index(name) for name in names]
    totals = np.zeros((count, len(names)))
    solids = system.mineral_stoichiometry[:, place]
    totals[:, place] = wide_battery(seed, count, names, solids) if wide else battery(seed, count)
    return totals


def unbounded(system: System, count: int) -> np.ndarray:
    return np.full((count, len(system.minerals)), np.inf)


def judged(system: System, totals: np.ndarray, upper: np.ndarray, answers: Answers) -> bool:
    """Whether every water was solved and meets balances, complementarity and ionic strength."""
    plain = as_plain(system)
    found = np.isfinite(answers.ionic_strength)
    law = LAWS[system.activity.name](plain)
    return bool(report_conditions(plain, law, totals, upper, answers, found) and found.all())


def claim(answers: Answers, water: int) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """What the program says of one water, to be judged."""
    return answers.ln_activity[:, water], answers.solid[:, water], answers.presence[:, water]


def answers_of(found: Equilibrium) -> Answers:
    return Answers(found.ln_activity, found.solid, found.presence, found.ionic_strength, found.steps)


def test_two_hundred_waters_are_least_in_gibbs_energy():
    system = MINE["ideal"]
    plain = as_plain(system)
    totals = waters(system, 71, 200)
    answers = solve(system, totals, unbounded(system, 200))
    made = molalities(plain, LAWS["ideal"](plain), answers)
    for w, total in enumerate(totals):
        least = least_gibbs_energy(plain, total)
        within = OF_LARGEST * np.abs(total).max()
        assert made[:, w] == pytest.approx(least.molality, abs=within), f"water {w}"
        assert answers.solid[:, w] == pytest.approx(least.amount, abs=within), f"water {w}"


def test_bounded_minerals_are_least_in_gibbs_energy():
    system = MINE["ideal"]
    plain = as_plain(system)
    totals = waters(system, 72, 60)
    upper = random_bounds(totals, len(system.minerals), 72)
    answers = solve(system, totals, upper)
    for w, total in enumerate(totals):
        least = least_gibbs_energy(plain, total, upper[w])
        within = OF_LARGEST * np.abs(total).max()
        assert answers.solid[:, w] == pytest.approx(least.amount, abs=within), f"water {w}"


@pytest.fixture(scope="module")
def many():
    """Twenty thousand waters with Davies' law, cold."""
    system = MINE["davies"]
    totals = waters(system, SEED, 20000)
    return totals, solve(system, totals, unbounded(system, len(totals)))


def test_twenty_thousand_waters_converge(many):
    totals, answers = many
    assert judged(MINE["davies"], totals, unbounded(MINE["davies"], len(totals)), answers)
    marks = answers.presence.T
    assert len(np.unique(marks, axis=0)) > 50, "hardly any set of minerals was met"


@pytest.mark.parametrize("part", range(2))
def test_the_fifty_hardest_at_sixty_digits(many, part):
    """By what is dissolved of the scarcest component beside the largest total."""
    system = MINE["davies"]
    totals, answers = many
    plain = as_plain(system)
    law = LAWS["davies"](plain)
    chosen = hardest(plain, law, totals, answers, np.ones(len(totals), dtype=bool))[:50]
    for w in chosen[part::2].tolist():
        exact = settle(plain, totals[w], *claim(answers, w), ln_gamma=law)
        assert exact.changes == (), f"water {w}"
        assert exact.error < IN_LN_ACTIVITY, f"water {w}"
        assert exact.amount_error < 1e-12, f"water {w}"


@pytest.mark.parametrize("activity", ["ideal", "debye-hueckel"])
def test_the_other_laws(activity):
    system = MINE[activity]
    totals = waters(system, 73, 2000)
    upper = unbounded(system, 2000)
    assert judged(system, totals, upper, solve(system, totals, upper))


@pytest.mark.parametrize("changed", [scaled, stirred])
def test_two_thousand_warm_starts(changed):
    """From the answer of a water that one step of a column ago was a little other."""
    system = MINE["davies"]
    solver, count = Solver(system), 2000
    totals = waters(system, 74, count)
    nothing = np.zeros((len(system.minerals), count))
    first = solver.cold(np.ones(count), totals.T, nothing)
    after = changed(totals, 74)
    # what a step moves is dissolved; the solids stay
    dissolved = after.T - system.mineral_stoichiometry.T @ first.solid
    warm = solver.settled(first, np.ones(count), dissolved, first.solid)
    assert judged(system, after, unbounded(system, count), answers_of(warm))
    cold = solver.cold(np.ones(count), after.T, nothing)
    assert np.array_equal(warm.presence, cold.presence)
    # rounding of the totals, for traces: as large as the oracle grants them
    scarcest = (np.abs(system.stoichiometry).T @ warm.molality()).min(axis=0)
    slack = 1e-9 + 4e-15 * np.abs(after).max(axis=1) / scarcest
    assert (np.abs(warm.ln_activity - cold.ln_activity).max(axis=0) < slack).all()
    assert warm.steps.mean() < 0.6 * first.steps.mean()


@pytest.mark.parametrize("bounded", [False, True])
def test_wide_waters(bounded):
    """Twenty-two components, 170 species, 42 minerals."""
    system = wide_system("davies")
    totals = waters(system, 75, 600)
    upper = random_bounds(totals, len(system.minerals), 75) if bounded else unbounded(system, 600)
    answers = solve(system, totals, upper)
    assert judged(system, totals, upper, answers)
    if bounded:
        assert {0, 1, 2} == set(np.unique(answers.presence).tolist())


def test_the_hardest_wide_waters_at_sixty_digits():
    system = wide_system("davies")
    plain = as_plain(system)
    law = LAWS["davies"](plain)
    totals = waters(system, 76, 200)
    upper = random_bounds(totals, len(system.minerals), 76)
    answers = solve(system, totals, upper)
    for w in hardest(plain, law, totals, answers, np.ones(len(totals), dtype=bool))[:3].tolist():
        exact = settle(plain, totals[w], *claim(answers, w), upper[w], ln_gamma=law)
        assert exact.changes == (), f"water {w}"
        assert exact.error < IN_LN_ACTIVITY, f"water {w}"


def bits(found: Equilibrium, chosen=slice(None)) -> list[bytes]:
    """Everything an equilibrium holds, as bytes."""
    names = ("amount", "solid", "presence", "ln_activity", "ionic_strength", "solved", "steps")
    return [np.ascontiguousarray(getattr(found, name)[..., chosen]).tobytes() for name in names]


def cold(system: System, totals: np.ndarray, upper: np.ndarray) -> Equilibrium:
    count = len(totals)
    nothing = np.zeros((len(system.minerals), count))
    return Solver(system).cold(np.ones(count), np.ascontiguousarray(totals.T), nothing, upper.T)


@pytest.mark.parametrize("wide", [False, True])
def test_the_same_bits_however_they_are_solved(wide):
    """All at once, twice, one by one, in another order, in two threads with a solver each."""
    system = wide_system("davies") if wide else MINE["davies"]
    count = 60 if wide else 600
    totals = waters(system, 77, count)
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
