"""The other way to the minerals present: its function, and that it needs no good start."""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest
from tests.support.battery import battery, random_bounds
from tests.support.benches import DAVIES, bench_of, matrices_of, must_settle
from tests.support.small_systems import mine_water

from gossan.chemistry.kernel.rescue import find_minerals, find_minerals_in, fischer_burmeister

MINE = mine_water()
COMPONENTS, MINERALS = len(MINE.components), len(MINE.minerals)
FIRST = (-1e8, -3.0, -1e-9, 0.0, 1e-12, 0.5, 7.0, 1e9)
PAIRS = [(a, b) for a in FIRST for b in (-2e6, -1.0, 0.0, 1e-14, 2.0, 1e7)]


@pytest.mark.parametrize(("a", "b"), PAIRS)
def test_fischer_burmeister(a, b):
    value, first, second = fischer_burmeister(a, b)
    with mp.workdps(50):
        root = mp.sqrt(mp.mpf(a) ** 2 + mp.mpf(b) ** 2)
        exact = mp.mpf(a) + mp.mpf(b) - root
        assert abs(value - exact) <= 1e-15 * abs(exact)
        if root:
            assert abs(first - (1 - a / root)) < 4e-16
            assert abs(second - (1 - b / root)) < 4e-16
        else:  # any slope between those of all directions
            assert first == second == pytest.approx(1 - 2**-0.5)


def test_it_is_zero_on_the_two_half_lines_alone():
    for a, b in PAIRS:
        complementary = min(a, b) == 0.0
        assert (fischer_burmeister(a, b)[0] == 0.0) == complementary


def found_by_rescue(totals, solid, upper):
    """(found, marks, ln activities) from nothing but amounts; what stands in bench and marks is nonsense."""
    space, marks = bench_of(MINE), np.ones(MINERALS, dtype=np.int8)
    space.ln_activity[:] = 3.0
    amount, reach = np.full(MINERALS, np.nan), np.full(MINERALS, np.nan)
    good, _ = find_minerals(
        matrices_of(MINE, DAVIES), space, totals, solid, upper, marks, amount, reach
    )
    return good, marks, space.ln_activity.copy()


def test_it_finds_the_minerals_of_almost_all_waters():
    """Alone, on waters that the active set solves: the marks are right wherever it says so."""
    waters = battery(31, 300)
    bounds = random_bounds(waters, MINERALS, 31)
    good = 0
    for totals, upper in zip(waters, bounds, strict=True):
        expected = must_settle(MINE, totals, upper=upper, model=DAVIES)
        found, marks, _ = found_by_rescue(totals, np.zeros(MINERALS), upper)
        good += found and marks.tolist() == expected.presence.tolist()
    assert good > 0.9 * len(waters)


def test_what_it_leaves_settles_to_the_same_water():
    """Found or not, the active set goes on from there to the answer that it has from a cold start."""
    rng = np.random.default_rng(32)
    for totals in battery(32, 60):
        solid = 10.0 ** rng.uniform(-6, -1, MINERALS) * (rng.random(MINERALS) < 0.4)
        upper = np.where(rng.random(MINERALS) < 0.5, solid, np.inf)
        expected = must_settle(MINE, totals, solid, upper, model=DAVIES)
        _, marks, ln_activity = found_by_rescue(totals, solid, upper)
        again = must_settle(MINE, totals, solid, upper, marks, ln_activity, DAVIES)
        assert again.presence.tolist() == expected.presence.tolist()
        assert again.ln_activity == pytest.approx(expected.ln_activity, abs=1e-9)


def test_one_cell_in_amounts_per_bulk():
    """The same minerals where amounts are per 3.5 kg of water."""
    totals = battery(33, 4)[2]
    expected = must_settle(MINE, totals, model=DAVIES)
    presence = np.ones((MINERALS, 1), dtype=np.int8)
    ln_activity, strength = np.zeros((COMPONENTS, 1)), np.array([0.1])
    upper = np.full((MINERALS, 1), np.inf)
    assert find_minerals_in(
        matrices_of(MINE, DAVIES), bench_of(MINE), np.array([3.5]), 3.5 * totals[:, None],
        np.zeros((MINERALS, 1)), upper, presence, ln_activity, strength,
    )  # fmt: skip
    assert presence[:, 0].tolist() == expected.presence.tolist()
    assert ln_activity[:, 0] == pytest.approx(expected.ln_activity, abs=1e-3)
    assert strength[0] == pytest.approx(expected.ionic_strength, rel=1e-3)
