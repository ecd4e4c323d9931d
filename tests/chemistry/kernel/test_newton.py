"""One step of each kind against a slope found by moving every unknown a little."""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.battery import battery
from tests.support.benches import DAVIES, DEBYE_HUECKEL, IDEAL, bench_of, law_of, matrices_of
from tests.support.small_systems import mine_water

from gossan.chemistry.kernel.newton import (
    balances,
    convex_step,
    dual_energy,
    far_merit,
    far_step,
    molalities,
    near_step,
)
from gossan.chemistry.kernel.nullspace import eliminate, reduce_species, reduce_totals

MINE = mine_water()
SPECIES = len(MINE.species)
NUDGE = 1e-5  # central differences: exact to about its square, and to 1e-16 over itself
SLOPE = 1e-7  # what is left of both, with room for third derivatives of a few hundred


class Ground:
    """A battery water somewhere near its balances, some minerals eliminated."""

    def __init__(self, seed, model):
        rng = np.random.default_rng(seed)
        self.model, self.law = model, law_of(MINE, model)
        self.matrices, self.bench = matrices_of(MINE, model), bench_of(MINE)
        count = len(MINE.minerals)
        presence = (rng.random(count) < 0.25).astype(np.int8)
        x = rng.uniform(-12, -3, len(MINE.components))
        self.bench.abundance[:] = np.exp(x)
        self.bench.upper[:] = np.inf
        n, self.free = eliminate(self.matrices, self.bench, presence, -1)
        self.bench.total[:] = battery(seed, 1)[0]
        self.bench.ln_activity[:] = x
        reduce_species(self.matrices, self.bench, n, self.free)
        reduce_totals(self.matrices, self.bench, n, self.free)
        self.reduced = self.bench.reduced[: self.free, :SPECIES]
        self.ln_k = self.bench.reduced_ln_k[:SPECIES]
        # constants such that no water is a brine, where near_step shortens its way on purpose
        self.ln_k[:] = np.clip(self.ln_k, -40.0, 40.0)
        raised = self.ln_k + self.reduced.T @ self.x
        self.ln_k -= np.maximum(raised - rng.uniform(-14, -6, SPECIES), 0.0)
        self.total = self.bench.reduced_total[: self.free]
        self.strength = 10.0 ** rng.uniform(-3, -0.5)

    @property
    def x(self):
        return self.bench.ln_activity[self.bench.free[: self.free]]

    def molality(self, x, strength):
        gamma = np.zeros(SPECIES) if self.law is None else np.array(self.law(strength), dtype=float)
        return np.exp(self.ln_k + self.reduced.T @ x - gamma)

    def prepare(self):
        """Fill molalities and balances; returns (mismatch, what the ionic strength lacks)."""
        made = molalities(self.matrices, self.bench, self.free, self.strength)
        return balances(self.bench, self.free), made - self.strength

    def sides(self, x):
        """Positive and negative terms of every balance."""
        terms = self.reduced * self.molality(x, self.strength)
        positive = np.maximum(terms, 0).sum(axis=1) + np.maximum(-self.total, 0)
        return positive, np.maximum(-terms, 0).sum(axis=1) + np.maximum(self.total, 0)


def slopes(function, at):
    """(value, unknown) of d function / d unknown by central differences."""
    columns = []
    for k in range(len(at)):
        step = np.zeros(len(at))
        step[k] = NUDGE * max(1.0, abs(at[k])) if k < len(at) - 1 else NUDGE * abs(at[k])
        columns.append((function(at + step) - function(at - step)) / (2 * step[k]))
    return np.array(columns).T


def same_step(found, matrix, right):
    """The step solves the equations, each row measured by its own terms."""
    size = np.abs(matrix) @ np.abs(found) + np.abs(right)
    return np.abs(matrix @ found - right) <= SLOPE * size


grounds = pytest.mark.parametrize("seed", range(12))
laws = pytest.mark.parametrize("model", [IDEAL, DAVIES, DEBYE_HUECKEL])


@grounds
@laws
def test_molalities_and_balances(seed, model):
    ground = Ground(seed, model)
    mismatch, _ = ground.prepare()
    expected = ground.molality(ground.x, ground.strength)
    # the exponents' own rounding: 1e-16 of up to 100
    assert ground.bench.molality[:SPECIES] == pytest.approx(expected, rel=1e-13)
    assert not ground.bench.molality[SPECIES:].max() > 1e-290
    positive, negative = ground.sides(ground.x)
    assert ground.bench.positive[: ground.free] == pytest.approx(positive, rel=1e-13)
    assert ground.bench.negative[: ground.free] == pytest.approx(negative, rel=1e-13)
    size = positive + negative
    assert np.all(np.abs(ground.bench.short[: ground.free] - (negative - positive)) <= 1e-13 * size)
    expected = (np.abs(negative - positive) / np.minimum(positive, negative)).max()
    assert mismatch == pytest.approx(expected, rel=1e-9)
    ratio = np.log(negative / positive)
    assert far_merit(ground.bench, ground.free) == pytest.approx(ratio @ ratio, rel=1e-12)


@grounds
@laws
def test_a_near_step_is_newton_s_with_the_ionic_strength(seed, model):
    ground = Ground(seed, model)
    _, short = ground.prepare()
    at = np.append(ground.x, ground.strength)

    def residuals(unknowns):
        molality = ground.molality(unknowns[:-1], unknowns[-1])
        made = 0.5 * MINE.charge**2 @ molality
        return np.append(ground.total - ground.reduced @ molality, made - unknowns[-1])

    slope = slopes(residuals, at)
    found, rise = near_step(ground.matrices, ground.bench, ground.free, short)
    assert found
    step = np.append(ground.bench.right[: ground.free], rise)
    assert same_step(step, -slope, residuals(at)).all()


@grounds
@laws
def test_a_far_step_is_newton_s_on_logarithms(seed, model):
    ground = Ground(seed, model)
    ground.prepare()

    def ratios(x):
        positive, negative = ground.sides(x)
        return np.log(negative / positive)

    # np.append: the last unknown of `slopes` is moved in proportion, as an ionic strength must be
    slope = slopes(lambda u: ratios(u[:-1]), np.append(ground.x, 1.0))[:, :-1]
    assert far_step(ground.bench, ground.free)
    assert same_step(ground.bench.right[: ground.free], -slope, ratios(ground.x)).all()


@grounds
@laws
def test_a_convex_step_goes_down(seed, model):
    """Newton's step on the energy whose slope is the balances, at this ionic strength."""
    ground = Ground(seed, model)
    ground.prepare()

    def energy(x):
        return np.array([ground.molality(x, ground.strength).sum() - ground.total @ x])

    def short(x):
        return ground.total - ground.reduced @ ground.molality(x, ground.strength)

    value, lost = dual_energy(ground.bench, ground.free)
    assert value == pytest.approx(energy(ground.x)[0], rel=1e-12, abs=lost)
    padded = np.append(ground.x, 1.0)
    gradient = slopes(lambda u: energy(u[:-1]), padded)[0, :-1]
    scale = np.abs(ground.reduced) @ ground.molality(ground.x, ground.strength) + np.abs(ground.total)
    assert np.all(np.abs(gradient + short(ground.x)) <= 1e-8 * scale.max())
    assert convex_step(ground.bench, ground.free)
    step = ground.bench.right[: ground.free].copy()
    curvature = -slopes(lambda u: short(u[:-1]), padded)[:, :-1]
    assert same_step(step, curvature, short(ground.x)).all()
    share = min(1.0, 0.01 / np.abs(step).max())
    assert energy(ground.x + share * step)[0] < value


def test_what_cannot_be_solved_is_told():
    """Without species that react to it a component has no slope."""
    ground = Ground(0, IDEAL)
    ground.prepare()
    ground.bench.molality[:] = 0.0
    assert not near_step(ground.matrices, ground.bench, ground.free, 0.0)[0]
    assert not far_step(ground.bench, ground.free)
