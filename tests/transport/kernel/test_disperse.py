"""Conductances against the formula, implicit dispersion against a dense solve."""

import numpy as np
import pytest
from tests.oracles import transport_faces

from gossan.transport.kernel.disperse import LANES, STRETCH, conduct, factor, spread


@pytest.mark.parametrize("first_type", [False, True])
def test_conductance_of_three_unlike_cells(first_type):
    flux = np.array([2e-6, 2e-6, -1e-6, 3e-6])
    water, width = np.array([0.3, 0.4, 0.5]), np.array([0.1, 0.2, 0.05])
    dispersivity, tortuosity = np.array([0.02, 0.0, 0.1]), np.array([0.7, 0.6, 0.5])
    diffusion = np.array([1e-9, 2e-9, 0.0])
    face, left, right = np.empty(4), np.empty(3), np.empty(3)
    conduct(flux, water, width, dispersivity, tortuosity, diffusion, first_type, False, face, left, right)
    speed = np.abs([2e-6, 0.5e-6, 1e-6]) / water  # of the pore water, mean of both faces
    half = water * (dispersivity * speed + tortuosity * diffusion) / (width / 2)
    series = 1 / (1 / half[:-1] + 1 / half[1:])
    inlet = half[0] if first_type else 0.0
    np.testing.assert_allclose(face, [inlet, *series, 0.0], rtol=1e-14)
    # the interface value between the cells, where both half cells pass the same
    np.testing.assert_allclose(right[:2], series / half[:-1], rtol=1e-13)
    np.testing.assert_allclose(left[1:], series / half[1:], rtol=1e-13)
    # at a third-type inlet q c_in = q c(0) - D c', so c_in stands D/q = half width * half / q before the face
    assert left[0] == pytest.approx(1.0 if first_type else 1 / (1 + half[0] / 2e-6), rel=1e-14)


def test_nothing_disperses_where_nothing_mixes():
    face, left, right = np.empty(3), np.empty(2), np.empty(2)
    width, nothing = np.array([0.1, 0.3]), np.zeros(2)
    conduct(np.full(3, 1e-6), np.full(2, 0.3), width, nothing, np.ones(2), nothing, False, False, face, left,
            right)
    assert np.array_equal(face, np.zeros(3))
    assert right[0] == pytest.approx(0.25)  # by widths alone
    assert left[1] == pytest.approx(0.75)


@pytest.mark.parametrize("peclet", [0.0, 1e-9, 0.3, 4.0, 1e4])
def test_a_held_outlet_passes_the_steady_flux(peclet):
    """Between the last centre and what is held:  q c - K c' = q (c_i + (c_i - c_held) / (e^P - 1))."""
    half, still = 0.05, 1e-7  # half the cell, m; water content times coefficient
    flux = peclet * still / half
    face, left, right = np.empty(2), np.empty(1), np.empty(1)
    one = np.ones(1)
    conduct(np.full(2, flux), one, 2 * half * one, 0 * one, one, still * one, False, True, face, left, right)
    exact = still / half * (peclet / np.expm1(min(peclet, 700.0)) if peclet else 1.0)
    assert face[1] == pytest.approx(exact, rel=1e-12)
    assert face[0] == 0.0


@pytest.mark.parametrize("cells", [1, 2, 37, STRETCH, STRETCH + 1, 2 * STRETCH + 5])
@pytest.mark.parametrize("solutes", [1, LANES, LANES + 1, 2 * LANES + 3])
@pytest.mark.parametrize("swells", [False, True])
def test_spread_is_the_dense_solve(solutes, cells, swells):
    rng = np.random.default_rng(solutes)
    dissolved, swelling = rng.random((solutes, cells)), 0.1 * swells * rng.standard_normal(cells)
    surplus, storage = rng.standard_normal((solutes, cells + 1)), 0.1 + rng.random(cells)
    conductance = 10 ** rng.uniform(-3, 3, cells + 1)
    implicit_flux = np.where(rng.random(cells + 1) < 0.5, 10 ** rng.uniform(-3, 3, cells + 1), 0.0)
    down, up, made = np.empty(cells + 1), np.empty(cells + 1), np.empty((3, cells))
    factor(storage, conductance, implicit_flux, 0.7, down, up, *made)
    passed = surplus.copy()
    spread(dissolved, swelling, passed, down, up, *made, np.empty((LANES, cells)), passed)  # in place
    _, expected = transport_faces.dispersed(surplus, dissolved, swelling, storage, conductance,
                                            implicit_flux, 0.7)
    # conductances up to 7e4 times the storage: the dense solve keeps about nine digits
    np.testing.assert_allclose(passed, surplus + expected, rtol=1e-8, atol=1e-8)
