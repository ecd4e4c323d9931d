"""Diffusion through pores that close or open, against exact solutions; De = D0 n^2 per section of bulk.

Fronts (Neumann's similarity solution, x_f = 2 lambda sqrt(D t), D = De/n of the pores behind):

    closing   c = 10 mol m-3 held at x = 0 and nil at x_f, 50 mol m-3 of bulk react, n from 0.3 to 0.1
    opening   c = 0 held at x = 0 and 20 mol m-3 at x_f, 4000 mol m-3 of bulk dissolve, 50 cm3/mol, 0.1 to 0.3

Derived for this; context: Lagneau & van der Lee (2010), J. Contam. Hydrol. 112, 118-129 (from memory).

A wave of kinetic precipitation that moves at c_w = -1e-9 m/s without changing its shape, through pores that
it closes; r mol m-3 in the solid:

    (n C)_t = (D0 n^2 C_x)_x + r n_t          r n_t = -k n (C - Ceq)
    D0 n C' = c_w (r - C)                     c_w r n' = k n (C - Ceq)

In the spirit of Hayek, Kosakowski & Churakov (2011), Water Resour. Res. 47, W07545. The table by quadrature
with 26 digits; between its rows the two equations are integrated here.

The program's faces, tortuosity and passages march; what reacts is done here, cell by cell.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import cache

import numpy as np
import pytest
from scipy.integrate import OdeSolution, solve_ivp
from tests.support.solute_march import Column, net

from gossan.transport.faces import faces_of, transport_of
from gossan.transport.grid import Layer, grid_of
from gossan.transport.step import DAMPING, passages
from gossan.transport.tortuosity import Tortuosity

YEAR = 31557600.0  # s
FREE = 1e-9  # m2/s
DEMAND = 0.01  # of a front's position
ARCHIE = Tortuosity("archie", exponent=2.0)
SETTLED = 20  # steps in which the pores of a cell at a front change by less than a hundredth

Settle = Callable[[np.ndarray], tuple[np.ndarray, np.ndarray, np.ndarray]]


def closing(amount: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """Concentration, porosity, share that has reacted; amount (cell,) mol m-3 of bulk came and reacts."""
    left = np.maximum(50.0 - amount, 0.0)
    porosity = 0.1 + 0.2 * left / 50.0
    return np.maximum(amount - 50.0, 0.0) / porosity, porosity, 1.0 - left / 50.0


def opening(amount: np.ndarray) -> tuple[np.ndarray, np.ndarray, np.ndarray]:
    """The same where amount is that of solid and water together, at the solubility while there is a solid."""
    solid = np.maximum((amount - 0.3 * 20.0) / (1.0 - 5e-5 * 20.0), 0.0)
    porosity = 0.3 - 5e-5 * solid
    return np.where(solid > 0.0, 20.0, amount / porosity), porosity, 1.0 - solid / 4000.0


def front_after_a_year(settle: Settle, first: float, held: float, cell: float, length: float) -> float:
    """Where the front is, m: explicit steps as long as the program allows them."""
    cells = round(length / cell)
    grid = grid_of([Layer("bed", length, cells, 0.0, FREE, ARCHIE)])
    transport = transport_of(grid, np.zeros(1, int), inlet="concentration")
    still, inflow = np.zeros(cells + 1), np.array([held])
    amount, time = np.full(cells, first), 0.0
    while time < YEAR:
        dissolved, porosity, _ = settle(amount)
        faces = faces_of(transport, porosity, still)
        dt = min(faces.explicit_limit, (YEAR - time) / SETTLED)
        for _ in range(SETTLED):
            passed = passages(faces, dissolved[None, :], inflow, dt).passed
            amount = amount + net(passed)[0] / grid.width
            dissolved = settle(amount)[0]
        time += SETTLED * dt
        if YEAR - time < 1e-6 * YEAR:
            break
    return float(settle(amount)[2] @ grid.width)


@pytest.mark.parametrize(
    ("settle", "first", "held", "exact", "offset", "cells"),
    [(closing, 0.0, 10.0, 0.01119806389002543, 1 / 3, (2e-3, 1e-3)),
     (opening, 4000.0 + 20.0 * 0.1, 0.0, 0.005330670770949733, -1.0, (1e-3, 0.5e-3))],
    ids=["closing", "opening"],
)  # fmt: skip
def test_fronts(settle, first, held, exact, offset, cells):
    """In the cell of a front n^2 goes from one value to the other: its mean resistance is that of neither.

    Half of that cell lies between the front and the pores behind it. So the front is ahead or behind by a
    share of a cell that the mean of 1/n^2 gives: half of 1 - 33.3/100 closing, of 1 - 33.3/11.1 opening. What
    two grids extrapolate to is right.
    """
    found = [front_after_a_year(settle, first, held, cell, 1.5 * exact) for cell in cells]
    for x, cell in zip(found, cells, strict=True):
        assert x - exact == pytest.approx(offset * cell, abs=0.15 * cell)
    assert 2.0 * found[1] - found[0] == pytest.approx(exact, rel=DEMAND)


SOLID, RATE, SOLUBILITY, SPEED = 1000.0, 1e-5, 10.0, -1e-9  # mol m-3, s-1, mol m-3, m s-1
WAVE = [(30.0, 0.0, 0.3), (28.0, 0.0005836883194281547, 0.2684787430273066),
        (25.0, 0.001357739765641833, 0.2362285607127747), (20.0, 0.002477819982997031, 0.2052256614903256),
        (15.0, 0.003479139403925966, 0.190314038837992),
        (12.0, 0.004051290807004587, 0.1865346872134642)]  # fmt: skip


@cache
def whole_wave() -> OdeSolution:
    """Concentration and porosity over x - c_w t, m."""

    def slopes(_: float, values: np.ndarray) -> list[float]:
        c, n = values
        return [SPEED * (SOLID - c) / (FREE * n), RATE * n * (c - SOLUBILITY) / (SPEED * SOLID)]

    run = solve_ivp(slopes, (0.0, 0.005), [30.0, 0.3], "DOP853", rtol=1e-11, atol=1e-13, dense_output=True)
    return run.sol


def wave(places: np.ndarray) -> np.ndarray:
    """Concentration and porosity where x - c_w t is this, m."""
    return whole_wave()(places)


def test_the_wave_is_the_tabulated_one():
    concentration, porosity = wave(np.array([row[1] for row in WAVE]))
    assert concentration == pytest.approx([row[0] for row in WAVE], rel=1e-9)
    assert porosity == pytest.approx([row[2] for row in WAVE], rel=1e-9)


def reacted(dissolved: np.ndarray, porosity: np.ndarray, dt: float) -> tuple[np.ndarray, np.ndarray]:
    """Concentration and porosity after dt of precipitation alone, by the midpoint rule."""

    def grown(c: np.ndarray, n: np.ndarray) -> np.ndarray:
        return -RATE / SOLID * n * (c - SOLUBILITY)

    def after(change: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
        n = porosity + change
        return (porosity * dissolved + SOLID * change) / n, n

    halfway = after(0.5 * dt * grown(dissolved, porosity))
    return after(dt * grown(*halfway))


def test_a_wave_of_precipitation():
    """2.5 mm in 100 cells through most of the table, the exact concentrations held at both ends.

    Beside ends that change in time Strang's splitting is of first order, as is known of it: the steps decide.
    """
    length, cells, end, steps = 0.0025, 100, 1.5e6, 1200
    grid = grid_of([Layer("bed", length, cells, 0.0, FREE, ARCHIE)])
    concentration, porosity = wave(grid.centres)
    dt, still = end / steps, np.zeros(cells + 1)
    for step in range(steps):
        (inlet, outlet), _ = wave(np.array([0.0, length]) - SPEED * (step + 0.5) * dt)
        concentration, porosity = reacted(concentration, porosity, 0.5 * dt)
        transport = transport_of(grid, np.zeros(1, int), inlet="concentration", outlet=np.array([outlet]))
        column = Column(transport, porosity, still, concentration[None, :])
        column.step(np.array([inlet]), dt, DAMPING)
        concentration, porosity = reacted(column.dissolved[0], porosity, 0.5 * dt)
    exact = wave(grid.centres - SPEED * end)
    assert porosity == pytest.approx(exact[1], rel=0.002)
    assert porosity[20:80] == pytest.approx(exact[1][20:80], rel=0.001), "away from the ends"
    assert concentration == pytest.approx(exact[0], rel=0.005)
