"""The two-stage step: conservation, order, monotony, what it leaves alone."""

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as some
from scipy.special import erfc
from tests.support.orders import observed_order
from tests.support.solute_march import Column, net, started

from gossan.transport.faces import faces_of, transport_of
from gossan.transport.grid import Layer, grid_of
from gossan.transport.kernel.advect import FLAT
from gossan.transport.step import DAMPING, corrected, kept_positive, passages
from gossan.transport.tortuosity import Tortuosity

VELOCITY, POROSITY = 1e-5, 0.4  # m/s, 1
ROUND_OFF = 1e-13  # of all that was ever there, after some hundred steps


def one_layer(cells, dispersivity=0.0, diffusion=0.0, inlet="flux", limiter="van-leer", group=(0,)):
    """One metre of one material."""
    grid = grid_of([Layer("sand", 1.0, cells, dispersivity, diffusion, Tortuosity("number", factor=1.0))])
    return transport_of(grid, np.array(group), inlet, limiter)


def slope_mean(edges, at, spread):
    """Cell means of the falling edge erfc((x - at)/spread)/2."""
    z = (edges - at) / spread
    integral = 0.5 * spread * (z * erfc(z) - np.exp(-z * z) / np.sqrt(np.pi))
    return np.diff(integral) / np.diff(edges)


def error_of_an_edge(cells, coefficient, implicit, number, limiter="van-leer"):
    """L1 error of a smooth falling edge carried 0.3 m and spread by `coefficient`, far from both ends."""
    transport = one_layer(cells, coefficient / VELOCITY, limiter=limiter)
    edges = transport.grid.edges
    column = started(transport, VELOCITY * POROSITY, POROSITY)
    start, time = 0.07**2, 0.3 / VELOCITY
    column.dissolved = slope_mean(edges, 0.3, np.sqrt(start))[None]
    dt = column.at_courant(number)
    if implicit:  # the edge is smooth: nothing to damp
        steps = round(time / dt)
        for _ in range(steps):
            column.step(np.ones(1), time / steps, DAMPING)
    else:
        dt = min(dt, column.explicit_limit)
        column.run_to(time, np.ones(1), dt)
    exact = slope_mean(edges, 0.6, np.sqrt(start + 4 * coefficient * time))
    return float(np.abs(column.dissolved[0] - exact) @ transport.grid.width)


CELLS = [50, 100, 200, 400]


def test_pure_advection_is_second_order_and_small():
    errors = [error_of_an_edge(cells, 0.0, False, 0.5) for cells in CELLS]
    assert observed_order(CELLS, errors) > 1.9
    assert errors[-1] < 1e-5


def test_minmod_is_coarser():
    """It takes the lesser slope everywhere, which costs half an order on grids such as these."""
    errors = [error_of_an_edge(cells, 0.0, False, 0.5, "minmod") for cells in CELLS]
    assert observed_order(CELLS, errors) > 1.5
    assert errors[-1] < 5e-4


def test_without_slopes_it_is_first_order():
    errors = [error_of_an_edge(cells, 0.0, False, 0.5, "upwind") for cells in CELLS]
    assert observed_order(CELLS, errors) == pytest.approx(0.9, abs=0.15)  # 1 in the limit


@pytest.mark.parametrize("implicit", [False, True], ids=["explicit", "implicit"])
def test_advection_dispersion_is_second_order_and_small(implicit):
    cells = [25, 50, 100, 200] if implicit else [25, 50, 100]  # explicit steps shrink with the square
    errors = [error_of_an_edge(n, 5e-8, implicit, 0.5) for n in cells]
    assert observed_order(cells, errors) > 1.9
    assert errors[-1] < (2e-5 if implicit else 8e-5)


@pytest.mark.parametrize("limiter", ["van-leer", "minmod", "upwind"])
@pytest.mark.parametrize("dispersivity", [0.0, 0.004, 0.05])
def test_a_step_neither_overshoots_nor_undershoots(limiter, dispersivity):
    """A pulse with sharp edges at Courant 1/2 or the explicit limit: within what entered, rounding aside."""
    transport = one_layer(80, dispersivity, limiter=limiter)
    column = started(transport, VELOCITY * POROSITY, POROSITY)
    dt = min(column.at_courant(0.5),
             column.explicit_limit)
    for number in range(300):
        column.step(np.array([3.0 if number < 90 else 0.0]), dt, None)
        assert column.dissolved.min() >= 0.0
        assert column.dissolved.max() <= 3.0 * (1 + FLAT)


@pytest.mark.parametrize("growth", [1.0, 1.05, 1 / 1.05])
def test_one_stage_of_backward_euler_keeps_within_bounds(growth):
    """Where the step is thousands of times the explicit limit of dispersion, and tens of cells long."""
    grid = grid_of([Layer("sand", 1.0, 100, 1.0, growth=growth)])
    column = started(transport_of(grid, np.zeros(1), "concentration"), VELOCITY * POROSITY, POROSITY)
    dt = 10.0 * column.at_courant(0.5)
    assert dt > 900 * column.explicit_limit
    for _ in range(20):
        passed = passages(column.faces, column.dissolved, np.ones(1), dt, 1.0).passed
        column.dissolved = column.dissolved + net(passed) / (column.water * grid.width)
        assert column.dissolved.min() >= 0.0
        assert column.dissolved.max() <= 1.0 + 1e-14


@some.composite
def columns(draw):
    """Layers of any size and material, fluxes that vary or turn back, sharp and smooth contents."""
    count = draw(some.integers(1, 3))
    layers = [Layer(str(n), draw(some.floats(0.05, 1.0)), draw(some.integers(1, 12)),
                    draw(some.floats(0.0, 0.2)), draw(some.floats(0.0, 1e-8)))
              for n in range(count)]
    grid = grid_of(layers)
    cells = grid.width.size
    rng = np.random.default_rng(draw(some.integers(0, 2**32)))
    transport = transport_of(grid, np.array([0, 0, 1]), draw(some.sampled_from(["flux", "concentration"])))
    darcy_flux = 1e-6 * (1.0 + draw(some.floats(0.0, 2.0)) * rng.uniform(-1, 1, cells + 1))
    dissolved = rng.random((3, cells)) * rng.integers(0, 2, (3, cells))
    return Column(transport, rng.uniform(0.1, 0.6, cells), darcy_flux, dissolved), rng.random(3)


@settings(deadline=None, max_examples=60)
@given(columns(), some.sampled_from([None, DAMPING, 1.0]))
def test_no_mole_is_lost(made, theta):
    column, inflow = made
    width = column.transport.grid.width
    dt = column.at_courant(0.5)
    before = (column.water * column.dissolved) @ width
    for _ in range(20):
        column.step(inflow, dt, theta)
    after = (column.water * column.dissolved) @ width
    most = np.abs(before) + np.abs(column.passed).max(axis=1) + np.abs(after)
    assert (np.abs(after - before - column.passed[:, 0] + column.passed[:, -1]) <= ROUND_OFF * most).all()


@settings(deadline=None, max_examples=60)
@given(columns(), some.sampled_from([None, DAMPING, 1.0]))
def test_one_concentration_everywhere_stays(made, theta):
    """Also where the water itself comes and goes: what a cell keeps of it has the same concentration."""
    column, _ = made
    dissolved = np.full_like(column.dissolved, 2.0)
    dt = column.at_courant(0.2)
    inflow = np.full(3, 2.0)
    first = passages(column.faces, dissolved, inflow, dt, theta)
    passed = corrected(first, dissolved, dissolved)
    water = dt * np.tile(column.darcy_flux, (3, 1))
    for of in (first.passed, passed):
        np.testing.assert_allclose(of, 2.0 * water, rtol=1e-12, atol=1e-14 * np.abs(water).max())


def test_implicit_and_explicit_agree_in_small_steps():
    """Two layers of unlike cells: at a hundredth of the explicit limit both give the same to 1e-6."""
    layers = [Layer("fine", 0.2, 40, 0.01, 1e-9), Layer("coarse", 0.8, 20, 0.1, 1e-9)]
    transport = transport_of(grid_of(layers), np.zeros(1))
    ends = []
    for theta in (None, DAMPING):
        column = started(transport, 4e-6, np.repeat([0.3, 0.45], [40, 20]),
                         initial=lambda x: np.exp(-((x - 0.2) ** 2) / 0.01))
        dt = 0.01 * column.explicit_limit
        for _ in range(400):
            column.step(np.zeros(1), dt, theta)
        ends.append(column.dissolved)
    assert np.abs(ends[0] - ends[1]).max() < 1e-6


def test_solute_that_a_solid_holds_stays_stable_and_positive_at_any_step():
    """The solid holds nine times the dissolved amount; implicit steps far beyond the explicit limit."""
    transport = one_layer(100, dispersivity=0.5)
    column = started(transport, VELOCITY * POROSITY, POROSITY)
    dt, width = column.at_courant(0.5), transport.grid.width
    assert dt > 20 * column.explicit_limit
    total, held, crossed = np.zeros((1, 100)), 10 * column.water, False
    for _ in range(1000):
        dissolved = total / held
        first = passages(column.faces, dissolved, np.ones(1), dt, DAMPING)
        predicted = (total + net(first.passed) / width) / held
        passed = corrected(first, dissolved, predicted)
        crossed |= (total + net(passed) / width).min() < -1e-5
        passed = kept_positive(first, dissolved, total, passed, np.array([True]))
        total = total + net(passed) / width
        assert total.min() > -1e-17
        assert (total / held).max() < 1.0 + 1e-9
    assert crossed  # without holding back it would have gone below zero
    assert np.abs(np.diff(total[0], 2)).max() < 0.1 * total.max() / 100  # no saw teeth


def test_holding_back_keeps_charge_and_leaves_good_passages_alone():
    """Two solutes of one group, equal and opposite charge, one tracer; a passage made to take too much."""
    transport = one_layer(20, 0.05, group=(0, 0, 1))
    rng = np.random.default_rng(5)
    dissolved = np.repeat(rng.random((1, 20)), 3, axis=0) * np.array([[1.0], [2.0], [1.0]])
    water, flux, inflow = np.full(20, POROSITY), np.full(21, 1e-6), np.array([0.5, 1.0, 0.5])
    first = passages(faces_of(transport, water, flux), dissolved, inflow, 3000.0, 1.0)
    amount, positive = water * dissolved, np.array([True, True, True])
    assert kept_positive(first, dissolved, amount, first.passed, positive) is first.passed
    greedy = first.passed.copy()
    greedy[:2, 7] += [0.05, 0.10]
    kept = kept_positive(first, dissolved, amount, greedy, positive)
    assert (amount * 0.05 + net(kept)).min() > -1e-16
    assert abs(2 * kept[0] - kept[1]).max() < 1e-16
    assert np.array_equal(kept[2], greedy[2])
    free = kept_positive(first, dissolved, amount, greedy, np.array([False, False, True]))
    assert free is greedy


def test_courant_counts_cells_per_step():
    transport = one_layer(50)
    assert 500.0 * faces_of(transport, np.full(50, 0.4), np.full(51, 8e-6)).fastest == pytest.approx(0.5)


def test_explicit_limit_by_hand():
    """Dt (2 q + 2 conductances) = water width, conductance = dispersivity q / width."""
    transport = one_layer(50, dispersivity=0.01)
    expected = 0.4 * 0.02 / (2 * 8e-6 + 2 * 0.01 * 8e-6 / 0.02)
    assert faces_of(transport, np.full(50, 0.4), np.full(51, 8e-6)).explicit_limit == pytest.approx(expected)
    still = faces_of(one_layer(50), np.full(50, 0.4), np.zeros(51)).explicit_limit
    assert still == float("inf")


def test_solutes_of_a_group_are_bounded_by_their_numbers():
    assert one_layer(5, group=(0, 0, 0, 1, 2)).bounds.tolist() == [0, 3, 4, 5]
    assert one_layer(5, group=(0,)).bounds.tolist() == [0, 1]
