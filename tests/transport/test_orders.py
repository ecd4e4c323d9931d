"""Orders of convergence of each term and of all together, on even and growing cells; bounds of any column."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as some
from tests.support.orders import observed_order
from tests.support.solute_march import started

from gossan.transport.faces import faces_of, outlet_rise, transport_of
from gossan.transport.grid import Grid, Layer, grid_of
from gossan.transport.step import DAMPING, corrected, passages
from gossan.transport.tortuosity import Tortuosity

STILL = Tortuosity("number", factor=1.0)
NODES, WEIGHTS = np.polynomial.legendre.leggauss(6)
CELLS = (16, 32, 64, 128)


def mean(function, edges: np.ndarray) -> np.ndarray:
    """(cell,) means of a function over cells, by Gauss's rule."""
    half = 0.5 * np.diff(edges)
    at = edges[:-1, None] + half[:, None] * (1.0 + NODES)
    return function(at) @ WEIGHTS / 2.0


@dataclass(frozen=True)
class Made:
    """A solution that is made up, and what must be added to the column to have it (manufactured solution).

    Two layers; water content theta_l m(t), m = 1 + swing sin(t): the water that comes and goes changes the
    flux along the column. c = 2 + e^-t cos(pi s), s the share of the resistance to diffusion that lies before
    x: a kink at the interface, and no gradient at the ends.
    """

    mixing: float  # m2 per unit of time in the second layer; a third of it in the first
    speed: float  # of the entering water
    swing: float = 0.3
    parts: tuple[float, float] = (0.4, 0.6)
    contents: tuple[float, float] = (0.3, 0.5)

    def grid(self, cells: int, growth: float) -> Grid:
        """`growth`: the longest cell of a layer over its shortest, fine towards the interface."""
        count = (cells * 2 // 5, cells - cells * 2 // 5)
        factor = [growth ** (-1.0 / n) for n in count]
        growths, mixing = (factor[0], 1.0 / factor[1]), (self.mixing / 3, self.mixing)
        return grid_of([
            Layer(str(i), self.parts[i], count[i], 0.0, mixing[i], STILL, growths[i]) for i in (0, 1)
        ])

    def content(self, x):
        return np.where(x < self.parts[0], *self.contents)

    def stored(self, x):
        """Of the water content at rest, from 0 to x."""
        first = np.minimum(x, self.parts[0])
        return self.contents[0] * first + self.contents[1] * (x - first)

    def moment(self, t):
        return 1.0 + self.swing * math.sin(t), self.swing * math.cos(t)

    def flux(self, x, t):
        return self.speed - self.moment(t)[1] * self.stored(x)

    def share(self, x):
        if self.mixing == 0.0:
            return x
        resist = [1.0 / (n * d) for n, d in zip(self.contents, (self.mixing / 3, self.mixing), strict=True)]
        first = np.minimum(x, self.parts[0])
        whole = resist[0] * self.parts[0] + resist[1] * self.parts[1]
        return (resist[0] * first + resist[1] * (x - first)) / whole

    def value(self, x, t):
        return 2.0 + math.exp(-t) * np.cos(math.pi * self.share(x))

    def passing(self, x, t):
        """q c - theta D c_x, with theta D s_x = m / (whole resistance)."""
        moved = self.flux(x, t) * self.value(x, t)
        if self.mixing == 0.0:
            return moved
        resist = [1.0 / (n * d) for n, d in zip(self.contents, (self.mixing / 3, self.mixing), strict=True)]
        whole = resist[0] * self.parts[0] + resist[1] * self.parts[1]
        slope = -math.pi * math.exp(-t) * np.sin(math.pi * self.share(x))
        return moved - self.moment(t)[0] / whole * slope

    def held(self, edges, t):
        """(cell,) mol m-2."""
        amount = mean(lambda x: self.content(x) * self.value(x, t), edges)
        return self.moment(t)[0] * amount * np.diff(edges)

    def error(self, cells: int, growth: float, steps: int, implicit: bool) -> float:
        """L1 error at the end, mol m-2."""
        found, exact = self.marched(cells, growth, steps, implicit)
        return float(np.abs(found - exact).sum())

    def marched(
        self, cells: int, growth: float, steps: int, implicit: bool, end: float = 0.5
    ) -> tuple[np.ndarray, np.ndarray]:
        """(cell,) mol m-2 at the end, marched and exact."""
        grid = self.grid(cells, growth)
        transport = transport_of(grid, np.zeros(1), limiter="none")
        edges, width = grid.edges, grid.width
        rest = np.diff(self.stored(edges)) / width
        amount, dt = self.held(edges, 0.0)[None], end / steps
        for step in range(steps):
            t = step * dt
            times = t + 0.5 * dt * (1.0 + NODES)

            def over(function, times=times):
                return sum(w * function(at) for w, at in zip(WEIGHTS, times, strict=True)) / 2.0

            water, after = rest * self.moment(t)[0], rest * self.moment(t + dt)[0]
            darcy_flux = over(lambda at: self.flux(edges, at))
            inflow = np.array([over(lambda at: self.passing(0.0, at))]) / darcy_flux[0]
            out = dt * over(lambda at: self.passing(edges, at))
            source = self.held(edges, t + dt) - self.held(edges, t) + out[1:] - out[:-1]
            # conductances of the middle of the step, amounts of its start
            faces = faces_of(transport, 0.5 * (water + after), darcy_flux)
            dissolved = amount / (water * width)
            first = passages(faces, dissolved, inflow, dt, DAMPING if implicit else None)
            predicted = (amount + first.passed[:, :-1] - first.passed[:, 1:] + source) / (after * width)
            passed = corrected(first, dissolved, predicted)
            amount = amount + passed[:, :-1] - passed[:, 1:] + source
        return amount[0], self.held(edges, end)


TERMS = {
    "advection": Made(0.0, 0.5),
    "diffusion": Made(0.05, 0.16, swing=0.3),  # just enough flux for the water that the column takes up
    "both": Made(0.02, 0.4),
}


@pytest.mark.parametrize("growth", [1.0, 4.0], ids=["even", "growing"])
@pytest.mark.parametrize("term", TERMS)
def test_second_order_in_space_and_time_together(term, growth):
    """Two layers, water contents and fluxes that change; steps as long as the shortest cells shrink."""
    made = TERMS[term]
    each = 1.5 if growth == 1.0 else 3.0
    errors = [made.error(n, growth, int(n * each), term != "advection") for n in CELLS]
    assert observed_order(CELLS, errors) > 1.8, errors
    assert errors[-1] < 2e-4


@pytest.mark.parametrize("implicit", [False, True], ids=["explicit", "implicit"])
@pytest.mark.parametrize("term", TERMS)
def test_second_order_in_time_alone(term, implicit):
    """On one mesh, against it in steps sixteen times shorter than the shortest; Courant up to 1/2."""
    made, steps = TERMS[term], (64, 128, 256)
    finest = made.marched(32, 1.5, 16 * steps[-1], implicit)[0]
    errors = [float(np.abs(made.marched(32, 1.5, n, implicit)[0] - finest).sum()) for n in steps]
    assert observed_order(steps, errors) > 1.9, errors


@some.composite
def columns(draw):
    """Layers of any size, growth and material; sharp contents; any limiter that is one."""
    layers = [
        Layer(str(n), draw(some.floats(0.05, 1.0)), draw(some.integers(1, 12)), draw(some.floats(0.0, 0.3)),
              draw(some.floats(0.0, 1e-8)), growth=draw(some.sampled_from([0.67, 0.9, 1.0, 1.2, 1.5])))
        for n in range(draw(some.integers(1, 3)))
    ]
    grid = grid_of(layers)
    rng = np.random.default_rng(draw(some.integers(0, 2**32)))
    cells = grid.width.size
    limiter = draw(some.sampled_from(["van-leer", "minmod", "upwind"]))
    outlet = np.array([0.5]) if draw(some.booleans()) else None
    transport = transport_of(grid, np.zeros(1), draw(some.sampled_from(["flux", "concentration"])), limiter,
                             outlet)
    flux = draw(some.sampled_from([0.0, 1e-9, 1e-6]))
    column = started(transport, flux, rng.uniform(0.1, 0.6, cells))
    column.dissolved = rng.integers(0, 2, (1, cells)).astype(float)
    return column


@settings(deadline=None, max_examples=150)
@given(columns(), some.floats(0.0, 1.0))
def test_nothing_leaves_the_range_of_what_was_there_and_what_comes(column, entering):
    """The maximum principle of explicit steps up to their limit, and the books to round-off."""
    faces, width = column.faces, column.transport.grid.width
    dt = min(0.5 / faces.fastest if faces.fastest > 0 else math.inf, faces.explicit_limit)
    if dt == math.inf:
        return
    before = float((column.water * column.dissolved[0]) @ width)
    for _ in range(25):
        column.step(np.array([entering]), dt, None)
        assert column.dissolved.min() >= -1e-14
        assert column.dissolved.max() <= 1.0 + 1e-9  # 1e-10 of variation counts as rounding
    after = float((column.water * column.dissolved[0]) @ width)
    passed = column.passed[0]
    most = before + np.abs(passed).max() + after
    assert abs(after - before - passed[0] + passed[-1]) <= 1e-13 * most


@settings(deadline=None, max_examples=100)
@given(columns(), some.floats(0.0, 1.0), some.floats(0.1, 300.0))
def test_nor_in_one_implicit_stage_however_long(column, entering, times):
    """Backward Euler with limited slopes: steps of many cells, and of any length in still water."""
    faces, storage = column.faces, column.water * column.transport.grid.width
    dt = times * (1.0 / faces.fastest if faces.fastest > 0 else 1e6)
    for _ in range(5):
        passed = passages(column.faces, column.dissolved, np.array([entering]), dt, 1.0).passed
        column.dissolved = column.dissolved + (passed[:, :-1] - passed[:, 1:]) / storage
        assert column.dissolved.min() >= -1e-12
        assert column.dissolved.max() <= 1.0 + 1e-9


@pytest.mark.parametrize(("last", "before"), [(1.0, 1.0), (0.3, 0.5), (2.0, 0.4)])
@pytest.mark.parametrize("layer", [1e-3, 0.2, 1.0, 30.0, 900.0])
def test_the_rise_to_the_outlet_is_that_of_the_profile_it_stands_for(last, before, layer):
    """c = x - layer e^(x/layer), x from the outlet: both means by Gauss's rule on many pieces."""
    def profile(x):
        return x - layer * np.exp(x / layer)

    means = [float(np.mean(mean(profile, np.linspace(low, high, 2000))))
             for low, high in ((-last, 0.0), (-last - before, -last))]
    expected = (profile(0.0) - means[0]) / (means[0] - means[1])
    assert outlet_rise(last, before, layer) == pytest.approx(float(expected), rel=2e-4)
