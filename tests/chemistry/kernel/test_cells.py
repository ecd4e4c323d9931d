"""A block of cells: which are solved, which are left alone, and that no mole is lost."""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.battery import battery, stirred
from tests.support.benches import DAVIES, bench_of, law_of, matrices_of, must_settle
from tests.support.small_systems import MINE_MINERALS, mine_water

from gossan.base.outcome import LACKING, SOLVED
from gossan.chemistry.kernel.cells import COLD, WARM, settle_cells
from gossan.chemistry.kernel.nullspace import NOWHERE

MINE = mine_water()
COMPONENTS, MINERALS = len(MINE.components), len(MINE.minerals)
MATRICES = matrices_of(MINE, DAVIES)
NO_SKIP = -1.0


class Block:
    """Cells with amounts per volume of bulk, some solids at hand, half of which may only dissolve."""

    def __init__(self, totals, seed=0, solids=0.4):
        rng = np.random.default_rng(seed)
        cells = len(totals)
        self.kilograms = rng.uniform(50.0, 450.0, cells)  # per m3 of bulk
        self.amount = np.ascontiguousarray(totals.T) * self.kilograms
        shape = (MINERALS, cells)
        self.solid = 10.0 ** rng.uniform(-6, -1, shape) * (rng.random(shape) < solids) * self.kilograms
        self.upper = np.where(rng.random(shape) < 0.5, self.solid, np.inf)
        self.presence = np.zeros(shape, dtype=np.int8)
        self.ln_activity = np.zeros((COMPONENTS, cells))
        self.ionic_strength = np.full(cells, 0.1)
        self.solved = np.full((COMPONENTS, cells), np.nan)
        self.given = np.zeros((0, cells))  # of open gases
        self.seen = np.zeros((0, cells))  # of interactions
        self.outcome, self.steps = np.full(cells, -1), np.full(cells, -1)

    STATE = ("amount", "solid", "presence", "ln_activity", "ionic_strength", "solved")

    def settle(self, skip=NO_SKIP, start=COLD, first=0, last=None):
        return settle_cells(
            MATRICES, bench_of(MINE), self.kilograms, self.amount, self.solid, self.upper, self.presence,
            self.ln_activity, self.ionic_strength, self.solved, self.given, self.seen, skip, start,
            self.outcome, self.steps, first, len(self.kilograms) if last is None else last,
        )  # fmt: skip

    def copies(self):
        return {name: getattr(self, name).copy() for name in self.STATE}

    def total(self):
        """What water and solids hold together, and how large the amounts are that make it up."""
        made = MINE.dissolution.T @ self.solid
        size = np.abs(self.amount) + np.abs(MINE.dissolution).T @ self.solid
        return self.amount + made, size


def test_cells_are_waters_of_their_own():
    """Each is the water that `settle` finds alone, in amounts per bulk."""
    block = Block(battery(41, 40), seed=41)
    given = block.copies()
    assert block.settle() == 0
    assert (block.outcome == SOLVED).all()
    for i, weight in enumerate(block.kilograms):
        alone = must_settle(
            MINE, given["amount"][:, i] / weight, given["solid"][:, i] / weight, block.upper[:, i] / weight,
            model=DAVIES,
        )  # fmt: skip
        assert np.array_equal(block.presence[:, i], alone.presence)
        assert np.array_equal(block.ln_activity[:, i], alone.ln_activity)
        assert block.steps[i] == alone.steps
        largest = np.abs(block.amount[:, i]).max()
        assert block.solid[:, i] == pytest.approx(alone.solid * weight, abs=1e-14 * largest)


def test_no_mole_is_lost():
    """Water and solids together hold what they held, to the rounding of what was moved."""
    block = Block(battery(42, 400), seed=42)
    before, size_before = block.total()
    assert block.settle() == 0
    after, size_after = block.total()
    size = np.maximum(size_before, size_after).max(axis=0)
    assert np.all(np.abs(after - before) < 4e-15 * size)
    assert (block.solid >= 0).all()
    assert (block.solid <= block.upper).all()


def test_what_a_pivot_leaves_dissolved_is_no_remainder():
    """Beside its sulfides' millimoles a trace of dissolved metal is its own number to twelve digits."""
    block = Block(battery(43, 400)[1::4], solids=0.0)
    totals = block.amount.copy()
    assert block.settle() == 0
    # the same totals once more: by now the pivots are chosen by what is dissolved
    block.amount, block.solid[:] = totals.copy(), 0.0
    assert block.settle(start=WARM) == 0
    law = law_of(MINE, DAVIES)
    gamma = np.array([law(strength) for strength in block.ionic_strength.tolist()], dtype=float).T
    molality = np.exp(MINE.ln_k[:, None] + MINE.formation @ block.ln_activity - gamma)
    copper = MINE.components.index("Cu^2+")
    expected = (MINE.formation[:, copper] @ molality) * block.kilograms
    present = block.presence[MINE_MINERALS.index("covellite")] == 1
    traces = present & (expected < 1e-7 * totals[copper])  # subtraction would leave nine digits
    assert traces.sum() > 20
    off = np.abs(block.amount[copper, traces] / expected[traces] - 1)
    # where another component was scarcer at the start of the solve, copper is no pivot
    assert np.quantile(off, 0.9) < 1e-12


def test_warm_and_cold_starts_end_in_the_same_water():
    waters = battery(44, 200)
    warm = Block(waters, seed=44)
    assert warm.settle() == 0
    mixed = stirred(waters, 44)
    warm.amount += np.ascontiguousarray((mixed - waters).T) * warm.kilograms * 0.01
    np.maximum(warm.amount[1:], 0.0, out=warm.amount[1:])
    cold = Block(waters, seed=44)
    cold.upper, cold.amount, cold.solid = warm.upper, warm.amount.copy(), warm.solid.copy()
    assert warm.settle(start=WARM) == 0
    assert cold.settle() == 0
    assert np.array_equal(warm.presence, cold.presence)
    assert warm.ln_activity == pytest.approx(cold.ln_activity, abs=1e-9)
    assert warm.steps.mean() < 0.7 * cold.steps.mean()


def test_a_settled_cell_is_left_alone():
    """Within skip of what was dissolved after the last solve nothing moves, not one bit."""
    block = Block(battery(45, 50), seed=45)
    block.settle()
    given = block.copies()
    assert block.settle(skip=1e-12, start=WARM) == 0
    assert not block.steps.any()
    for name, values in given.items():
        assert np.array_equal(getattr(block, name), values), name
    block.amount *= 1 + 1e-13
    moved = block.amount.copy()
    block.settle(skip=1e-12, start=WARM)
    assert not block.steps.any()
    assert np.array_equal(block.amount, moved)
    # compared with the last solve, not with the last call: small steps add up
    block.amount *= 1 + 1e-12
    block.settle(skip=1e-12, start=WARM)
    assert (block.steps > 0).all()


def test_one_component_is_enough_to_wake_a_cell():
    for k in range(COMPONENTS):
        block = Block(battery(46, 1), solids=0.0)
        block.settle()
        block.amount[k, 0] *= 1.001
        block.settle(skip=1e-12, start=WARM)
        assert block.steps[0] > 0, MINE.components[k]


def test_a_cell_is_never_skipped_when_its_marks_and_solids_disagree():
    """A mineral put back by a later stage of the same step, or used up by it."""
    block = Block(battery(47, 1), solids=0.0)
    block.settle()
    gone = int(np.flatnonzero(block.presence[:, 0] == 0)[0])
    block.solid[gone, 0] = 1e-6
    block.settle(skip=1e-12, start=WARM)
    assert block.steps[0] > 0
    block = Block(battery(43, 4)[2:3], solids=0.0)
    block.settle()
    there = int(np.flatnonzero(block.presence[:, 0] == 1)[0])
    block.solid[there, 0] = 0.0
    block.settle(skip=1e-12, start=WARM)
    assert block.steps[0] > 0


def test_skipping_off_solves_every_cell():
    block = Block(battery(48, 20), seed=48)
    block.settle()
    block.settle(start=WARM)
    assert (block.steps >= 0).all()
    assert (block.outcome == SOLVED).all()


def test_a_failed_cell_is_left_as_it_was():
    block = Block(battery(49, 9), seed=49)
    block.settle()
    block.amount *= 1.01
    calcium = MINE.components.index("Ca^2+")
    block.amount[calcium, 4] = -1.0
    block.solid[:, 4], block.presence[:, 4] = 0.0, 0
    given = block.copies()
    assert block.settle(start=WARM) == 1
    assert block.outcome.tolist() == [LACKING if i == 4 else SOLVED for i in range(9)]
    for name, values in given.items():
        assert np.array_equal(getattr(block, name)[..., 4], values[..., 4]), name
    assert not np.array_equal(block.solved[:, 5], given["solved"][:, 5])


def test_only_the_cells_asked_for():
    block = Block(battery(50, 9), seed=50)
    given = block.copies()
    block.settle(first=3, last=6)
    assert (block.steps[3:6] > 0).all()
    for name, values in given.items():
        for i in (0, 1, 2, 6, 7, 8):
            assert np.array_equal(getattr(block, name)[..., i], values[..., i], equal_nan=True), name


def test_absent_components_come_and_go():
    """Water without copper, then with it, then without again."""
    totals = battery(51, 1)
    copper = MINE.components.index("Cu^2+")
    without = totals.copy()
    without[0, copper] = 0.0
    block = Block(without, solids=0.0)
    assert block.settle() == 0
    assert block.ln_activity[copper, 0] == NOWHERE
    assert block.amount[copper, 0] == 0.0
    first = block.ln_activity.copy()
    block.amount[copper, 0] = totals[0, copper] * block.kilograms[0]
    assert block.settle(start=WARM) == 0
    assert block.ln_activity[copper, 0] > -200.0
    # all of it is taken away again, as water and as solids
    block.amount = np.ascontiguousarray(without.T) * block.kilograms
    block.solid[:] = 0.0
    assert block.settle(start=WARM) == 0
    assert block.ln_activity[copper, 0] == NOWHERE
    assert block.ln_activity == pytest.approx(first, abs=1e-9)


def test_the_same_bits_alone_in_any_order_and_twice():
    waters = battery(52, 60)
    together = Block(waters, seed=52)
    together.settle()
    order = np.random.default_rng(52).permutation(60)
    for cells in ([[i] for i in range(60)], [order], [range(60)]):
        for chosen in cells:
            chosen = np.array(chosen)
            other = Block(waters, seed=52)
            for name in ("kilograms", "upper", *Block.STATE, "outcome", "steps"):
                setattr(other, name, np.ascontiguousarray(getattr(other, name)[..., chosen]))
            other.settle()
            for name in (*Block.STATE, "steps"):
                assert np.array_equal(getattr(other, name), getattr(together, name)[..., chosen]), name
