"""Elimination of the minerals present against dense linear algebra and exact fractions."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
from tests.support.benches import bench_of, matrices_of
from tests.support.small_systems import MINE_MINERALS, PlainSystem, mine_water

from gossan.chemistry.kernel.nullspace import (
    GONE,
    NOWHERE,
    eliminate,
    pivots_follow,
    reduce_species,
    reduce_totals,
)

MINE = mine_water()
COMPONENTS, MINERALS = len(MINE.components), len(MINE.minerals)
EPS = 2.0**-52


def marked(*names):
    return np.array([name in names for name in MINE_MINERALS], dtype=np.int8)


class Eliminated:
    """The mine system with some minerals eliminated, abundances given or random."""

    def __init__(self, presence, abundance, entering=-1, solid=None, upper=None):
        self.matrices, self.bench = matrices_of(MINE), bench_of(MINE)
        self.presence = np.array(presence, dtype=np.int8)
        self.bench.abundance[:] = abundance
        self.bench.solid[:] = 0.0 if solid is None else solid
        self.bench.upper[:] = np.inf if upper is None else upper
        self.n, self.f = eliminate(self.matrices, self.bench, self.presence, entering)
        self.active = self.bench.active[: self.n]
        self.pivot = self.bench.pivot[: self.n]
        self.free = self.bench.free[: self.f]
        self.rows = self.bench.rows[: self.n]
        self.stoichiometry = MINE.dissolution[self.active]

    def null_space(self):
        """(component, free): how ln activities move that leave the minerals saturated."""
        out = np.zeros((COMPONENTS, self.f))
        out[self.free, range(self.f)] = 1.0
        pivots = self.stoichiometry[:, self.pivot]
        out[self.pivot] = -np.linalg.solve(pivots, self.stoichiometry[:, self.free])
        return out


def random_sets():
    """Sets of minerals and abundances, dependent sets among them."""
    rng = np.random.default_rng(3)
    for _ in range(60):
        yield (rng.random(MINERALS) < 0.5).astype(np.int8), 10.0 ** rng.uniform(-20, 0, COMPONENTS)


def test_a_basis_of_the_minerals_present():
    """Each mineral has its own pivot, the rest stays free, and one is dropped only if it must be."""
    for presence, abundance in random_sets():
        done = Eliminated(presence, abundance)
        assert done.n == (np.linalg.matrix_rank(MINE.dissolution[presence == 1]) if presence.any() else 0)
        assert done.n + done.f == COMPONENTS
        assert sorted([*done.pivot, *done.free]) == list(range(COMPONENTS))
        assert done.rows[:, done.pivot] == pytest.approx(np.eye(done.n), abs=0)
        combined = done.bench.turns[: done.n, : done.n] @ done.stoichiometry
        assert combined == pytest.approx(done.rows, abs=1e-12)
        assert np.array_equal(np.flatnonzero(done.presence == 1), np.sort(done.active))
        assert not np.any(done.presence[presence == 0])


def test_species_in_the_free_components_are_the_null_space():
    for presence, abundance in random_sets():
        done = Eliminated(presence, abundance)
        reduce_species(done.matrices, done.bench, done.n, done.f)
        species = len(MINE.species)
        reduced = done.bench.reduced[: done.f, :species]
        assert reduced == pytest.approx((MINE.formation @ done.null_space()).T, abs=1e-12)
        # where all free ln activities are 0
        x = np.zeros(COMPONENTS)
        right = MINE.mineral_ln_k[done.active]
        x[done.pivot] = np.linalg.solve(done.stoichiometry[:, done.pivot], right)
        expected = MINE.ln_k + MINE.formation @ x
        assert done.bench.reduced_ln_k[:species] == pytest.approx(expected, abs=1e-11)


def test_pivots_follow_and_the_minerals_are_saturated():
    rng = np.random.default_rng(4)
    for presence, abundance in random_sets():
        done = Eliminated(presence, abundance)
        done.bench.ln_activity[:] = rng.uniform(-60, 0, COMPONENTS)
        given = done.bench.ln_activity.copy()
        pivots_follow(done.matrices, done.bench, done.n, done.f)
        assert np.array_equal(done.bench.ln_activity[done.free], given[done.free])
        saturation = done.stoichiometry @ done.bench.ln_activity - MINE.mineral_ln_k[done.active]
        assert saturation == pytest.approx(0.0, abs=1e-12)


def exact_rows(done) -> list[list[Fraction]]:
    """The reduced rows as fractions: what Gauss-Jordan on whole numbers gives for these pivots."""
    rows = [[Fraction(value) for value in row] for row in done.stoichiometry.tolist()]
    for r, p in enumerate(done.pivot):
        best = next(i for i in range(r, len(rows)) if rows[i][p])
        rows[r], rows[best] = rows[best], rows[r]
        rows[r] = [value / rows[r][p] for value in rows[r]]
        for i in range(len(rows)):
            if i != r and rows[i][p]:
                rows[i] = [a - rows[i][p] * b for a, b in zip(rows[i], rows[r], strict=True)]
    return rows


def test_coefficients_that_are_no_doubles_lose_nothing():
    """Three of one to seven of the other: thirds of two totals that cancel to fifteen digits."""
    done = Eliminated(marked("covellite"), np.full(COMPONENTS, 1e-3))
    k, other = done.free[0], done.pivot[0]
    solid = np.zeros_like(done.matrices.solid)
    solid[done.active[0], [other, k]] = [3.0, -7.0]
    done.bench.rows[0] = 0.0
    done.bench.rows[0, [other, k]] = [1.0, -7.0 / 3.0]
    done.bench.turns[0, 0] = 1.0 / 3.0
    done.bench.total[:] = 0.0
    done.bench.total[other], done.bench.total[k] = 0.3, -0.7
    reduce_totals(done.matrices._replace(solid=solid), done.bench, done.n, done.f)
    exact = Fraction(-0.7) + Fraction(7, 3) * Fraction(0.3)
    assert abs(exact) < Fraction(1, 10**15)
    assert done.bench.reduced_total[0] == pytest.approx(float(exact), rel=1e-12)


def test_totals_are_subtracted_as_if_exactly():
    """Totals that cancel to twelve digits and more: one rounding is left of all subtractions."""
    rng = np.random.default_rng(5)
    for presence, abundance in random_sets():
        done = Eliminated(presence, abundance)
        # in the space of the minerals, and a trifle beside it
        total = MINE.dissolution.T @ (presence * 10.0 ** rng.uniform(-6, 0, MINERALS))
        total += 1e-16 * rng.uniform(-1, 1, COMPONENTS)
        done.bench.total[:] = total
        reduce_totals(done.matrices, done.bench, done.n, done.f)
        rows = exact_rows(done)
        for j, k in enumerate(done.free):
            terms = [Fraction(total[k])]
            terms += [-rows[r][k] * Fraction(total[p]) for r, p in enumerate(done.pivot)]
            exact = sum(terms)
            lost = EPS**2 * sum(abs(term) for term in terms) * len(terms)
            assert abs(Fraction(done.bench.reduced_total[j]) - exact) <= EPS * abs(exact) + lost


def test_the_scarcest_component_is_the_pivot():
    abundance = np.full(COMPONENTS, 1e-3)
    zinc, sulfide = MINE.components.index("Zn^2+"), MINE.components.index("HS^-")
    for scarce in (zinc, sulfide):
        abundance[[zinc, sulfide]] = 1e-3
        abundance[scarce] = 1e-9
        assert Eliminated(marked("sphalerite"), abundance).pivot.tolist() == [scarce]


def test_the_proton_is_the_pivot_last_of_all():
    """H^+ of 1e-7 is no trace: a pivot of protons would leave the metal of a hydroxide to subtraction."""
    abundance = np.full(COMPONENTS, 1e-3)
    abundance[0] = 1e-8
    done = Eliminated(marked("iron(II) hydroxide"), abundance)
    assert done.pivot.tolist() == [MINE.components.index("Fe^2+")]


# FeS + Cu(OH)2 = CuS + Fe(OH)2
SQUARE = ("covellite", "mackinawite", "iron(II) hydroxide", "spertiniite")


def test_of_dependent_minerals_one_goes():
    done = Eliminated(marked(*SQUARE), np.full(COMPONENTS, 1e-3))
    assert done.n == 3
    assert done.presence.sum() == 3


@pytest.mark.parametrize("entering", SQUARE)
def test_what_leaves_is_what_runs_out_first(entering):
    """The ratio test of linear programming, found here by letting the mineral grow until a bound is met."""
    rng = np.random.default_rng(6)
    new = MINE_MINERALS.index(entering)
    others = [MINE_MINERALS.index(name) for name in SQUARE if name != entering]
    met = set()
    for _ in range(40):
        solid, upper = np.zeros(MINERALS), np.full(MINERALS, np.inf)
        solid[others] = 10.0 ** rng.uniform(-6, -1, 3)
        bounded = rng.random(3) < 0.6
        upper[others] = np.where(bounded, solid[others] * (1 + 10.0 ** rng.uniform(-3, 1, 3)), np.inf)
        shares, *_ = np.linalg.lstsq(MINE.dissolution[others].T, MINE.dissolution[new], rcond=None)
        reach = [
            (solid[m] / share, m, 0) if share > 0 else ((upper[m] - solid[m]) / -share, m, 2)
            for m, share in zip(others, shares, strict=True)
            if abs(share) > 1e-9
        ]
        _, leaves, mark = min(reach)
        done = Eliminated(marked(*SQUARE), np.full(COMPONENTS, 1e-3), new, solid, upper)
        assert done.presence[leaves] == mark
        assert done.presence[new] == 1
        assert done.n == 3
        met.add(mark)
    assert 0 in met


def test_the_unstable_of_two_polymorphs_makes_room():
    twins = PlainSystem(
        components=("A^+", "B^-"),
        species=("A^+", "B^-"),
        minerals=("stable", "unstable"),
        formation=np.eye(2),
        ln_k=np.zeros(2),
        charge=np.array([1.0, -1.0]),
        ion_size=np.full(2, 4e-10),
        dissolution=np.ones((2, 2)),
        mineral_ln_k=np.array([-20.0, -15.0]),
    )
    matrices, space = matrices_of(twins), bench_of(twins)
    space.upper[:] = np.inf
    space.solid[1] = 0.1
    presence = np.ones(2, dtype=np.int8)
    assert eliminate(matrices, space, presence, 0) == (1, 1)
    assert presence.tolist() == [1, 0]


def test_absent_components_are_neither_free_nor_pivots():
    matrices, space = matrices_of(MINE), bench_of(MINE)
    absent = [MINE.components.index("Cu^2+"), MINE.components.index("CO3^2-")]
    space.place[absent] = GONE
    space.abundance[:] = 1e-3
    n, f = eliminate(matrices, space, marked("sphalerite"), -1)
    reduce_species(matrices, space, n, f)
    assert (n, f) == (1, COMPONENTS - 3)
    assert not set(absent) & {*space.pivot[:n], *space.free[:f]}
    made_of = (MINE.formation[:, absent] > 0).any(axis=1)
    vanished = space.reduced_ln_k[: len(MINE.species)] < 0.5 * NOWHERE
    assert np.array_equal(vanished, made_of)
