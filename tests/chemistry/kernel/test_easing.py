"""Walking to new marks by stages: it starts where the water is and ends at the constants themselves."""

from __future__ import annotations

import numpy as np
import pytest

from gossan.chemistry.equilibrium import Solver
from gossan.chemistry.kernel.cold import survey
from gossan.chemistry.kernel.complement import begin, reduce_all
from gossan.chemistry.kernel.easing import ease, fullness, nearer
from gossan.chemistry.kernel.marks import set_totals
from gossan.chemistry.kernel.matrices import bench
from gossan.chemistry.kernel.newton import balances, molalities
from gossan.chemistry.system import build_system
from gossan.constants.load import load_table

TABLE = load_table()
COUPLED = [name for name, component in TABLE.components.items() if component.couple]
IONS = ("H^+", "Na^+", "Ca^2+", "Mg^2+", "Fe^2+", "Cu^2+", "Zn^2+", "Cl^-", "SO4^2-", "CO3^2-", "HS^-")
SYSTEM = build_system(TABLE, IONS, coupled=COUPLED)

# H, Na, Ca, Mg, Fe, Cu, Zn, Cl, SO4, CO3, e: mol/kg of random waters that were lost before there were stages
LOST = [
    (-0.1539, 0.1671, 2.678e-05, 0.003188, 0.1194, 0.005751, 0.02798, 0.3215, 2.124e-4, 0.001162, 0.001689),
    (-0.05626, 0.05625, 1.254e-8, 0.01709, 0.3708, 1.208e-4, 0.002563, 0.7811, 6.729e-9, 1.44e-8, -3.88e-6),
    (1.139e-4, 0.003335, 0.7036, 3.668e-09, 0.02688, 2.468e-06, 2.334e-06, 0.1145, 0.6412, 0.0337, 0.0),
    (-1.844, 1.874, 0.006591, 0.1789, 0.4614, 5.581e-09, 0.03201, 1.358, 0.01464, 3.511e-07, 5.335e-4),
    (2.473, 0.005317, 1.578e-05, 0.3243, 2.158e-08, 0.01913, 0.2834, 0.6511, 0.3081, 9.045e-06, 2.465),
    (-0.7387, 0.7451, 0.8862, 0.02032, 0.1847, 0.1345, 0.09072, 2.633, 6.011e-4, 1.27e-09, 0.004808),
    (-14.2, 0.1791, 2.74e-08, 0.001, 3.079, 4.081, 0.003171, 0.08828, 0.1104, 5.669e-4, 0.0),
]


def totals_of(values: tuple[float, ...]) -> np.ndarray:
    """In the program's order of components."""
    names = [*IONS[:10], "e^-"]
    return np.array([values[names.index(name)] for name in SYSTEM.components])


def started(values: tuple[float, ...]):
    """A bench at a cold start under the mark of ferrihydrite alone, not yet walked to it."""
    matrices, space = SYSTEM.matrices, bench(SYSTEM.matrices)
    count = len(SYSTEM.minerals)
    solid, upper, marks = np.zeros(count), np.full(count, np.inf), np.zeros(count, np.int8)
    total = totals_of(values)
    space.dissolved[:], space.upper[:] = total, upper
    strength = begin(matrices, space, total, solid, upper, marks)
    survey(matrices, space, strength)
    before = space.molality.copy()
    marks[SYSTEM.minerals.index("ferrihydrite")] = 1
    set_totals(matrices, space, total, solid, upper, marks)
    active, free = reduce_all(matrices, space, total, solid, upper, marks, -1)
    return matrices, space, strength, active, free, before


def test_the_walk_starts_where_the_water_is():
    matrices, space, strength, active, free, before = started(LOST[1])
    molalities(matrices, space, free, strength)
    assert fullness(space) > 100.0
    ease(matrices, space, active)
    molalities(matrices, space, free, strength)
    there = before > 1e-200
    assert space.molality[there] == pytest.approx(before[there], rel=1e-9)


def test_the_walk_ends_at_the_constants_themselves():
    matrices, space, strength, active, free, _ = started(LOST[1])
    own = space.reduced_ln_k.copy()
    ease(matrices, space, active)
    left, stages = 1.0, 0
    while left > 0.0:
        molalities(matrices, space, free, strength)
        balances(space, free)
        after = nearer(space, free, left)
        assert after < left
        left, stages = after, stages + 1
    assert 1 < stages <= 500
    assert space.reduced_ln_k == pytest.approx(own, abs=1e-9 * np.abs(space.eased).max())


@pytest.mark.parametrize("values", LOST)
def test_waters_that_were_lost_settle(values):
    """Conditions, not answers: balances, saturation, no negative amount."""
    total = totals_of(values)
    found = Solver(SYSTEM).cold(np.ones(1), total[:, None], np.zeros((len(SYSTEM.minerals), 1)))
    molality, solid = found.molality()[:, 0], found.solid[:, 0]
    species = SYSTEM.stoichiometry @ SYSTEM.conserved
    off = species.T @ molality + SYSTEM.mineral_stoichiometry.T @ solid - total
    size = np.abs(species).T @ molality + np.abs(SYSTEM.mineral_stoichiometry).T @ solid
    assert np.all(np.abs(off) <= 1e-11 * size)
    assert solid.min() >= 0.0
    index = found.saturation()[:, 0]
    assert np.all(index[np.isfinite(index)] < 1e-9)
    assert np.abs(index[solid > 0.0]).max() < 1e-9
