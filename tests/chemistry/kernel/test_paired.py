"""The step of balances, ionic strength and interacting molalities against dense Newton on all of them."""

from __future__ import annotations

import numpy as np
import pytest

from gossan.chemistry.activity import Activity
from gossan.chemistry.kernel.marks import set_totals
from gossan.chemistry.kernel.matrices import bench as bench_for
from gossan.chemistry.kernel.newton import balances, molalities
from gossan.chemistry.kernel.nullspace import eliminate, reduce_species, reduce_totals
from gossan.chemistry.kernel.paired import paired_step
from gossan.chemistry.system import build_system
from gossan.constants.load import load_table

COMPONENTS = ["Na^+", "K^+", "Mg^2+", "Ca^2+", "Fe^2+", "Zn^2+", "Al^3+", "Cl^-", "SO4^2-", "CO3^2-", "HS^-"]
SYSTEM = build_system(load_table(), COMPONENTS, ["gypsum", "calcite", "sphalerite"], activity="sit")
SPECIES = len(SYSTEM.species)
NUDGE = 1e-6  # central differences: exact to about 1e-9
NOISE = 1e-8  # rounding of exponents up to 100, over the nudge
SLOPE = 1e-6  # what is left of differences and of molalities that lag


class Ground:
    """A brine somewhere near its balances, some minerals eliminated, seen with other molalities."""

    def __init__(self, seed, strength):
        rng = np.random.default_rng(seed)
        self.matrices, self.bench = SYSTEM.matrices, bench_for(SYSTEM.matrices)
        self.strength = strength
        bench, count = self.bench, len(SYSTEM.minerals)
        presence = (rng.random(count) < 0.5).astype(np.int8)
        total = 10.0 ** rng.uniform(-3, -0.5, len(SYSTEM.components))
        bench.upper[:] = np.inf
        bench.ln_activity[:-1] = np.log(total)
        bench.abundance[:-1] = total
        set_totals(self.matrices, bench, total, np.zeros(count), bench.upper, presence)
        n, self.free = eliminate(self.matrices, bench, presence, -1)
        reduce_species(self.matrices, bench, n, self.free)
        reduce_totals(bench, n, self.free)
        # constants such that the water has about this strength and no species more than that
        reduced = bench.reduced[: self.free, :SPECIES]
        raised = bench.reduced_ln_k[:SPECIES] + reduced.T @ self.x
        wanted = np.log(10.0 ** rng.uniform(-9, -1.3, SPECIES) * strength)
        there = np.array(SYSTEM.species) != "H2O"
        bench.reduced_ln_k[:SPECIES] -= np.where(there, raised - wanted, 0.0)
        bench.seen[:SPECIES] = np.exp(wanted + rng.normal(0.0, 0.1, SPECIES)) * there

    @property
    def x(self):
        return self.bench.ln_activity[self.bench.free[: self.free]]

    def made(self, unknowns):
        """What species make of the balances, of the ionic strength, and molalities: by the laws in Python."""
        law: Activity = SYSTEM.activity
        free, bench = self.free, self.bench
        x, strength, seen = unknowns[:free], np.array(unknowns[free]), unknowns[free + 1 :]
        exponent = bench.reduced_ln_k[:SPECIES] + bench.reduced[:free, :SPECIES].T @ x
        exponent += bench.reduced[free, :SPECIES] * law.ln_water(strength, seen)
        molality = np.exp(exponent - law.ln_gamma(strength, seen))
        strength = 0.5 * SYSTEM.species_charge**2 @ molality
        return np.concatenate([-bench.reduced[:free, :SPECIES] @ molality, [strength], molality])


def slopes(function, at):
    columns = []
    for k, value in enumerate(at):
        step = np.zeros(len(at))
        step[k] = max(NUDGE * abs(value), NUDGE)
        back = at - step if abs(value) > step[k] else at  # no molality is below zero
        columns.append((function(at + step) - function(back)) / ((at + step) - back)[k])
    return np.array(columns).T


@pytest.mark.parametrize("seed", range(8))
@pytest.mark.parametrize("strength", [0.05, 1.0, 3.5, 6.0])
def test_it_is_newtons(seed, strength):
    ground = Ground(seed, strength)
    bench, free = ground.bench, ground.free
    made = molalities(ground.matrices, bench, free, strength)
    balances(bench, free)
    at = np.concatenate([ground.x, [strength], bench.seen[:SPECIES]])
    own = np.concatenate([-bench.reduced_total[:free], at[free:]])
    right = ground.made(at) - own
    assert bench.short[:free] == pytest.approx(right[:free], rel=1e-9, abs=1e-12)
    lacks = bench.molality[:SPECIES] - bench.seen[:SPECIES]
    assert lacks == pytest.approx(right[free + 1 :], rel=1e-11, abs=1e-13)
    assert made - strength == pytest.approx(right[free], rel=1e-11, abs=1e-12)
    matrix = np.diag((np.arange(len(at)) >= free).astype(float)) - slopes(ground.made, at)
    found, rise = paired_step(ground.matrices, bench, free, made - strength, strength)
    assert found
    step = np.concatenate([bench.right[:free], [rise], bench.seen_step[:SPECIES]])
    size = np.abs(matrix) @ np.abs(step) + np.abs(right)
    # of the molalities that are no unknowns the step is all that there was to go
    unknown = [*range(free + 1), *(free + 1 + bench.chosen[: np.count_nonzero(bench.chosen)])]
    assert len(unknown) > free + 5
    # where a molality hardly depends on a ln activity, differences see only its rounding
    molality = bench.molality[:SPECIES]
    there = np.abs(bench.reduced[:free, :SPECIES]) @ molality, [SYSTEM.species_charge**2 @ molality], molality
    unclear = NOISE * np.concatenate(there) * np.abs(bench.right[:free]).max()
    assert np.all((np.abs(matrix @ step - right) <= SLOPE * size + unclear)[unknown])
