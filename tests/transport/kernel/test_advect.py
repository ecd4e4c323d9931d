"""The passages of one explicit evaluation, against the equations taken face by face."""

import numpy as np
import pytest
from tests.oracles import transport_faces

from gossan.transport.kernel.advect import (
    BLOCK,
    FIRST_ORDER,
    MINMOD,
    ROWS,
    UNLIMITED,
    VAN_LEER,
    Outlet,
    Slopes,
    carry,
)

NUMBER = {"upwind": FIRST_ORDER, "minmod": MINMOD, "van-leer": VAN_LEER, "none": UNLIMITED}
ROUNDING = 1e-13  # relative: a dozen operations per face


def random_column(cells, rng, uneven):
    """Concentrations with fronts, plateaus, extrema, zeros and traces; slopes unlike in some cells."""
    dissolved = rng.random((5, cells))
    dissolved[1, : cells // 2] = 0.0
    dissolved[2, cells // 3 :] = 2.0
    dissolved[3] *= 1e-25
    dissolved[4] = np.linspace(-1.0, 1.0, cells) ** 3
    lean_left, lean_right = np.full(cells, 0.5), np.full(cells, 0.5)
    lean_left[uneven], lean_right[uneven] = rng.random((2, len(uneven)))
    square = rng.random(cells) ** 2
    rise_left, rise_right = (1.0 - square) / 6.0, (2.0 + square) / 6.0
    rise_left[uneven], rise_right[uneven] = rng.random((2, len(uneven)))
    kept = np.where(rng.random(cells) < 0.2, rng.random(cells), 1.0)
    return dissolved, [lean_left, lean_right, rise_left, rise_right, kept]


def runs_of(cells):
    """Stretches of neighbouring cells, (n, 2)."""
    starts = [cell for cell in cells if cell - 1 not in set(cells)]
    ends = [cell + 1 for cell in cells if cell + 1 not in set(cells)]
    return np.array([starts, ends]).T.reshape(-1, 2)


@pytest.mark.parametrize("limiter", NUMBER)
@pytest.mark.parametrize("cells", [1, 2, 3, 40, BLOCK, BLOCK + 1, BLOCK + 2, 2 * BLOCK + 7])
@pytest.mark.parametrize("held", [False, True])
def test_carry_is_what_the_equations_say(cells, limiter, held):
    rng = np.random.default_rng(cells)
    stretch = np.arange(*np.sort(rng.integers(0, cells, 2)))
    uneven = np.unique(np.concatenate(([0], rng.integers(0, cells, 4), stretch)))
    dissolved, weights = random_column(cells, rng, uneven)
    inflow, bounds = rng.random(5), np.array([0, 3, 4, 5])
    darcy_flux, conductance = rng.random(cells + 1), rng.random(cells + 1)
    darcy_flux[rng.random(cells + 1) < 0.1] *= -0.1  # here and there the water turns back
    beyond = np.array([rng.random(5) * held, rng.normal(size=5) * (not held)])
    conductance[cells] *= held
    rest = {"rise": 0.3 * (not held), "half": 0.4, "reach": 0.9, "spread": 0.7, "held": held}
    passed = np.full((5, cells + 1), np.nan)
    slopes = Slopes(*weights, runs_of(uneven.tolist()), NUMBER[limiter])
    carry(dissolved, inflow, bounds, darcy_flux, conductance, slopes, Outlet(**rest, beyond=beyond), 0.3,
          np.empty((ROWS, BLOCK + 1)), passed)
    names = ("lean_left", "lean_right", "rise_left", "rise_right", "kept")
    expected = transport_faces.passed(
        dissolved, inflow, [[0, 1, 2], [3], [4]], darcy_flux, conductance,
        dict(zip(names, weights, strict=True)), set(uneven.tolist()), limiter,
        rest | {"beyond": beyond[0], "gradient": beyond[1]}, 0.3)
    np.testing.assert_allclose(passed, expected, rtol=ROUNDING, atol=ROUNDING)
    faint = np.s_[3, :cells] if beyond.any() else np.s_[3, :]
    np.testing.assert_allclose(passed[faint], expected[faint], rtol=1e-11, atol=1e-36)  # by a trace's measure


def carried(dissolved, inflow, bounds, mixing=0.0, limiter=VAN_LEER):
    """Through equal cells, flux 1, Courant number 0.3, for dt 1."""
    cells = dissolved.shape[1]
    half, one, square = np.full(cells, 0.5), np.ones(cells + 1), 0.09
    passed = np.empty((len(dissolved), cells + 1))
    rises = np.full(cells, (1 - square) / 6), np.full(cells, (2 + square) / 6)
    slopes = Slopes(half, half, *rises, np.ones(cells), np.array([[0, 1]]), limiter)
    conductance = mixing * one
    conductance[cells] = 0.0
    outlet = Outlet(0.25, 0.5, 1.0, 0.0, False, np.zeros((2, len(dissolved))))
    carry(dissolved, inflow, bounds, one, conductance, slopes, outlet, 1.0, np.empty((ROWS, BLOCK + 1)),
          passed)
    return passed


def test_one_group_keeps_a_combination_of_its_solutes():
    """Charges 2, -1, -3 that cancel everywhere cancel in every passage, fronts and extrema included."""
    dissolved = np.random.default_rng(7).random((3, 200))
    dissolved[0, 80:] *= 1e-3
    dissolved[2] = (2 * dissolved[0] - dissolved[1]) / 3
    inflow, charge = np.array([1.0, 0.5, 0.5]), np.array([2.0, -1.0, -3.0])
    assert abs(charge @ carried(dissolved, inflow, np.array([0, 3]), 0.2)).max() < 1e-14
    alone = carried(dissolved, inflow, np.arange(4), 0.2)
    assert abs(charge @ alone).max() > 1e-3  # limited each alone, charge would break


def test_a_solute_at_rest_does_not_flatten_the_others():
    """A constant with noise of rounding in it leaves the slopes of its group alone."""
    smooth = np.exp(-np.linspace(0, 1, 60))
    noise = 5.0 * (1 + 1e-14 * np.random.default_rng(3).standard_normal(60))
    together = carried(np.stack([smooth, noise]), np.array([1.0, 5.0]), np.array([0, 2]))
    alone = carried(smooth[None], np.array([1.0]), np.array([0, 1]))
    assert np.array_equal(together[0], alone[0])


def test_a_trace_beside_a_high_neighbour_stays_positive():
    """Slopes keep their digits where one side is 1e20 times the other."""
    row = np.array([[1.0, 1.0, 1e-20, 1e-21, 1e-40, 0.0, 0.0]])
    assert (carried(row, np.array([1.0]), np.array([0, 1])) >= 0.0).all()


def test_the_outlet_of_a_front_stays_positive():
    """However sharp the front: what leaves is no less than nothing, though its profile points below."""
    for row in ([1.0, 0.9, 0.05], [0.15, 0.1, 0.01], [1.0, 1.0, 1e-9], [1.0, 0.5, 0.0]):
        assert carried(np.array([row]), np.array([1.0]), np.array([0, 1]))[0, -1] >= 0.0


def test_same_input_same_bits():
    rng = np.random.default_rng(11)
    cells = 3 * BLOCK
    dissolved, weights = random_column(cells, rng, np.array([0]))
    arguments = (dissolved, rng.random(5), np.array([0, 5]), rng.random(cells + 1), rng.random(cells + 1),
                 Slopes(*weights, np.array([[0, 1]]), VAN_LEER),
                 Outlet(0.2, 0.5, 1.0, 0.0, False, np.zeros((2, 5))), 0.1, np.empty((ROWS, BLOCK + 1)))
    first, second = np.empty((5, cells + 1)), np.empty((5, cells + 1))
    carry(*arguments, first)
    carry(*arguments, second)
    assert np.array_equal(first, second)
