"""Which minerals are present: every condition against trying all sets, whatever marks one starts from."""

from __future__ import annotations

from itertools import product

import numpy as np
import pytest
from tests.oracles.newton60 import settle as settle_at_60_digits
from tests.oracles.plain_speciation import ABSENT, FULL, PRESENT, NoSpeciation, speciate
from tests.support.battery import battery, random_bounds, wide_battery
from tests.support.benches import (
    DAVIES,
    DEBYE_HUECKEL,
    IDEAL,
    bench_of,
    law_of,
    matrices_of,
    must_settle,
    settled,
)
from tests.support.small_systems import MINE_MINERALS, PlainSystem, mine_water, plain_system

from gossan.base.outcome import DIVERGED, LACKING, SOLVED
from gossan.chemistry.kernel.cold import approach, survey
from gossan.chemistry.kernel.marks import mark, set_totals
from gossan.chemistry.kernel.newton import far_merit
from gossan.chemistry.kernel.nullspace import GONE, NOWHERE

MINE = mine_water()
EASY = plain_system(
    ("H^+", "Na^+", "Ca^2+", "Fe^2+", "Zn^2+", "SO4^2-", "HS^-", "CO3^2-", "Cl^-"),
    None,
    ("sphalerite", "mackinawite", "calcite", "smithsonite", "gypsum"),
)
# zinc sulfide as two minerals, zinc carbonate beside them
TWINS = plain_system(
    ("H^+", "Na^+", "Zn^2+", "HS^-", "CO3^2-", "Cl^-"),
    None,
    ("sphalerite", "fresh zinc sulfide", "smithsonite"),
)
models = pytest.mark.parametrize("model", [IDEAL, DAVIES, DEBYE_HUECKEL])


def rounding(plain, totals, found) -> float:
    """What doubles may leave in ln a of the oracle: last bits of the largest total over the scarcest."""
    dissolved = np.abs(plain.formation).T @ found.molality
    return 4e-15 * np.abs(totals).max() / dissolved.min() + 1e-11


def possible(upper):
    """The marks that a mineral of this bound can have."""
    return (ABSENT, PRESENT, FULL) if 0 < upper < np.inf else (ABSENT, PRESENT)[: 1 + (upper > 0)]


def agree(plain, found, expected, totals):
    """The same minerals, amounts, ln activities and ionic strength."""
    assert found.presence.tolist() == expected.presence.tolist()
    assert found.solid == pytest.approx(expected.amount, abs=1e-12 * np.abs(totals).max())
    assert np.abs(found.ln_activity - expected.ln_activity).max() < rounding(plain, totals, expected)
    assert found.ionic_strength == pytest.approx(expected.ionic_strength, rel=1e-9)


@models
@pytest.mark.parametrize("water", range(12))
def test_minerals_that_may_form(model, water):
    totals = wide_battery(21, 12, EASY.components, EASY.dissolution)[water]
    expected = speciate(EASY, totals, ln_gamma=law_of(EASY, model))
    agree(EASY, must_settle(EASY, totals, model=model), expected, totals)


def confirm(plain, found, totals, upper) -> bool:
    """Compare with all sets tried in doubles; where that loses the answer in its rounding, with 60 digits."""
    law = law_of(plain, DAVIES)
    try:
        agree(plain, found, speciate(plain, totals, upper, law), totals)
    except NoSpeciation:
        exact = settle_at_60_digits(
            plain, totals, found.ln_activity, found.solid, found.presence, upper, ln_gamma=law
        )
        assert exact.changes == ()
        assert exact.error < 1e-11
        assert exact.amount_error < 1e-13
        return False
    return True


def test_solids_at_hand_are_part_of_the_water():
    """What is handed in as minerals and what is handed in dissolved come to the same."""
    rng = np.random.default_rng(22)
    confirmed = []
    for totals in wide_battery(22, 12, EASY.components, EASY.dissolution):
        solid = 10.0 ** rng.uniform(-6, -1, len(EASY.minerals)) * (rng.random(len(EASY.minerals)) < 0.6)
        found = must_settle(EASY, totals, solid, model=DAVIES)
        confirmed.append(confirm(EASY, found, totals + EASY.dissolution.T @ solid, None))
    assert np.mean(confirmed) > 0.7


def dissolving(seed, count):
    """Waters and solids of EASY that may only dissolve, some of them without end."""
    rng = np.random.default_rng(seed)
    for totals in wide_battery(seed, count, EASY.components, EASY.dissolution):
        solid = np.abs(totals).max() * 10.0 ** rng.uniform(-6, 0, len(EASY.minerals))
        solid[rng.random(len(solid)) < 0.2] = 0.0
        yield totals, solid, np.where(rng.random(len(solid)) < 0.7, solid, np.inf)


def test_minerals_that_may_only_dissolve():
    """Full (nothing lost), partly dissolved and gone: all are met."""
    met, confirmed = set(), []
    for totals, solid, upper in dissolving(23, 24):
        found = must_settle(EASY, totals, solid, upper, model=DAVIES)
        confirmed.append(confirm(EASY, found, totals + EASY.dissolution.T @ solid, upper))
        for state, handed_in, most in zip(found.presence, solid, upper, strict=True):
            met.add((int(state), bool(handed_in > 0), bool(np.isfinite(most))))
    assert {(FULL, True, True), (PRESENT, True, True), (ABSENT, True, True), (PRESENT, True, False)} <= met
    assert np.mean(confirmed) > 0.7


def test_every_start_ends_in_the_same_water():
    """From all sets of marks there are, sensible or not, and ln activities off by decades."""
    rng = np.random.default_rng(24)
    for totals, solid, upper in dissolving(24, 4):
        whole = totals + EASY.dissolution.T @ solid
        expected = speciate(EASY, whole, upper, law_of(EASY, DAVIES))
        for marks in product(*map(possible, upper)):
            start = expected.ln_activity + rng.normal(scale=6.0, size=len(whole))
            agree(EASY, must_settle(EASY, totals, solid, upper, marks, start, DAVIES), expected, whole)


@pytest.mark.parametrize(
    ("fresh", "bound", "presence"),
    [
        (0.0, np.inf, (PRESENT, ABSENT)),  # the stable one takes all
        (3e-3, np.inf, (PRESENT, ABSENT)),  # and what there was of the other
        (3e-3, 1e-3, (FULL, PRESENT)),  # until it may not grow: the other holds the water
        (0.0, 1e-3, (FULL, PRESENT)),
    ],
)
def test_polymorphs(fresh, bound, presence):
    """Sphalerite and fresh zinc sulfide, one formula: never both where the stable one has room."""
    totals = np.array([0.0, 0.03, 0.004, 0.002, 1e-4, 0.0358])
    solid, upper = np.array([0.0, fresh, 0.0]), np.array([bound, np.inf, np.inf])
    whole = totals + TWINS.dissolution.T @ solid
    expected = speciate(TWINS, whole, upper)
    assert tuple(expected.presence[:2]) == presence
    for marks in (None, *product(*map(possible, upper))):
        agree(TWINS, must_settle(TWINS, totals, solid, upper, marks), expected, whole)


# of battery(5, 2000) with random_bounds: marks went round more than 20 times before they were settled singly
WENT_ROUND = (144, 654, 1056, 1175, 1307, 1807)


def test_waters_whose_marks_went_round():
    waters = battery(5, 2000)
    bounds = random_bounds(waters, len(MINE.minerals), 5)
    law = law_of(MINE, DAVIES)
    for totals, upper in zip(waters[[*WENT_ROUND]], bounds[[*WENT_ROUND]], strict=True):
        found = must_settle(MINE, totals, upper=upper, model=DAVIES)
        exact = settle_at_60_digits(
            MINE, totals, found.ln_activity, found.solid, found.presence, upper, ln_gamma=law
        )
        assert exact.changes == ()
        assert exact.error < 1e-11
        assert exact.amount_error < 1e-13


@pytest.mark.parametrize("water", range(8))
@pytest.mark.parametrize("bounded", [False, True])
def test_more_minerals_than_the_phase_rule_has_room_for(water, bounded):
    """FeS + Cu(OH)2 = CuS + Fe(OH)2, all four handed in: one must go, and its amount goes to the others."""
    square = ("covellite", "mackinawite", "iron(II) hydroxide", "spertiniite")
    four = np.array([name in square for name in MINE_MINERALS])
    totals = battery(28, 8)[water]
    solid = np.where(four, 10.0 ** np.random.default_rng(water).uniform(-4, -1, len(four)), 0.0)
    upper = np.where(four & bounded, solid, np.inf)
    found = must_settle(MINE, totals, solid, upper, model=DAVIES)
    whole = totals + MINE.dissolution.T @ solid
    exact = settle_at_60_digits(
        MINE, whole, found.ln_activity, found.solid, found.presence, upper, ln_gamma=law_of(MINE, DAVIES)
    )
    assert exact.changes == ()
    assert exact.error < 1e-9  # what is handed in is added in doubles
    assert exact.amount_error < 1e-13
    again = must_settle(MINE, totals, solid, upper, four, model=DAVIES)
    assert again.presence.tolist() == found.presence.tolist()
    assert again.ln_activity == pytest.approx(found.ln_activity, abs=1e-9)


def test_a_cold_start_comes_near():
    """Without minerals, sides that differ by six decades come within a factor of two or so, in the mean."""
    matrices = matrices_of(MINE, DAVIES)
    bare = matrices._replace(solid=matrices.solid[:0], solid_ln_k=matrices.solid_ln_k[:0])
    before, after = [], []
    for totals in battery(25, 200)[::4]:
        space = bench_of(MINE)
        set_totals(bare, space, totals, np.zeros(0), np.zeros(0), np.zeros(0, dtype=np.int8))
        approach(bare, space, totals)
        survey(bare, space, 0.0)
        components = len(totals)
        negative = np.maximum(totals, 0)
        space.negative[:] += negative
        space.positive[:] += negative - totals
        after.append(np.sqrt(far_merit(space, components) / components))
        space.ln_activity[:] = np.log(np.maximum(totals, 1e-7))
        survey(bare, space, 0.0)
        space.negative[:] += negative
        space.positive[:] += negative - totals
        before.append(np.sqrt(far_merit(space, components) / components))
    assert np.median(after) < 0.5
    assert np.max(after) < 4.0
    assert np.median(before) > 10.0


def test_totals_under_marks():
    """Absent gives all back, full takes what it lacks, present drops out."""
    matrices, space = matrices_of(EASY), bench_of(EASY)
    dissolved = np.full(len(EASY.components), 0.1)
    solid, upper = np.array([0.01, 0.02, 0.03, 0.0, 0.05]), np.array([np.inf, 0.05, np.inf, np.inf, 0.05])
    marks = np.array([ABSENT, FULL, PRESENT, ABSENT, FULL], dtype=np.int8)
    set_totals(matrices, space, dissolved, solid, upper, marks)
    expected = dissolved + EASY.dissolution.T @ np.array([0.01, -0.03, 0.0, 0.0, 0.0])
    assert space.total == pytest.approx(expected, rel=1e-15)
    assert not space.place.any()


def test_a_component_that_only_a_full_mineral_holds_must_come_from_it():
    matrices, space = matrices_of(EASY), bench_of(EASY)
    dissolved = np.full(len(EASY.components), 0.1)
    dissolved[EASY.components.index("SO4^2-")] = 0.0
    marks = np.array([0, 0, 0, 0, FULL], dtype=np.int8)
    solid = np.array([0.0, 0.0, 0.0, 0.0, 0.05])
    set_totals(matrices, space, dissolved, solid, solid, marks)
    assert marks[4] == PRESENT
    assert not space.place.any()


def test_a_mark_changes_to_the_side_that_was_left():
    space = bench_of(EASY)
    solid = np.array([0.01, 0.01, 0.01, 0.0, 0.0])
    space.gained[:5] = [-0.02, 0.5, 0.0, 0.0, 0.0]
    marks = np.array([PRESENT, PRESENT, FULL, ABSENT, ABSENT], dtype=np.int8)
    assert mark(0, 3, solid, marks, space) == 3
    assert mark(1, 2, solid, marks, space) == 2
    assert mark(-1, -1, solid, marks, space) == -1
    assert marks.tolist() == [ABSENT, FULL, PRESENT, PRESENT, ABSENT]


def there(plain, found):
    return {name for name, state in zip(plain.minerals, found.presence, strict=True) if state}


def test_absent_components_leave_the_rest_alone():
    """The same water, solved in the smaller system that knows nothing of copper and carbonate."""
    kept = np.array([name not in ("Cu^2+", "CO3^2-") for name in MINE.components])
    smaller = MINE.with_only(kept)
    for totals in battery(26, 24):
        part = np.where(kept, totals, 0.0)
        found = must_settle(MINE, part, model=DAVIES)
        expected = must_settle(smaller, part[kept], model=DAVIES)
        assert np.all(found.ln_activity[~kept] == NOWHERE)
        assert found.ln_activity[kept] == pytest.approx(expected.ln_activity, abs=1e-11)
        assert there(MINE, found) == there(smaller, expected)


def test_pure_water():
    water = PlainSystem(
        components=("H^+",),
        species=("H^+", "OH^-"),
        minerals=(),
        formation=np.array([[1.0], [-1.0]]),
        ln_k=np.array([0.0, -13.995 * np.log(10.0)]),
        charge=np.array([1.0, -1.0]),
        ion_size=np.array([9e-10, 3.5e-10]),
        dissolution=np.zeros((0, 1)),
        mineral_ln_k=np.zeros(0),
    )
    assert must_settle(water, [0.0]).ln_activity[0] == pytest.approx(-6.9975 * np.log(10.0), abs=1e-12)


@pytest.mark.parametrize(
    ("component", "amount", "outcome"),
    [
        ("Ca^2+", np.nan, LACKING),
        ("Ca^2+", -1e-3, LACKING),
        ("Ca^2+", -1e-15, SOLVED),  # rounding of a step that used it up
        ("H^+", np.nan, DIVERGED),
        ("Zn^2+", np.inf, DIVERGED),
    ],
)
def test_what_is_no_water_is_told(component, amount, outcome):
    totals = battery(27, 1)[0]
    totals[MINE.components.index(component)] = amount
    assert settled(MINE, totals, model=DAVIES).outcome == outcome


def test_an_absent_component_has_no_place():
    matrices, space = matrices_of(EASY), bench_of(EASY)
    dissolved = np.full(len(EASY.components), 0.1)
    zinc = EASY.components.index("Zn^2+")
    dissolved[zinc] = 0.0
    marks = np.zeros(5, dtype=np.int8)
    set_totals(matrices, space, dissolved, np.zeros(5), np.full(5, np.inf), marks)
    assert space.place[zinc] == GONE
    assert space.ln_activity[zinc] == NOWHERE
    marks[0] = PRESENT  # zinc sulfide dissolves: there will be zinc
    set_totals(matrices, space, dissolved, np.ones(5), np.full(5, np.inf), marks)
    assert space.place[zinc] == 0
    assert space.ln_activity[zinc] > -100.0
