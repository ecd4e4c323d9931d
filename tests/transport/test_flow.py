"""Flux and head: resistances in series, and water made on the way."""

import numpy as np
import pytest

from gossan.transport.flow import flow_of_flux, flow_of_head

WIDTH = np.full(10, 0.1)
CONDUCTIVITY = np.repeat([1e-4, 1e-6, 5e-5], [2, 5, 3])


def test_layers_under_held_head():
    """Q = dH / sum(L/K), textbook; L 0.2, 0.5, 0.3 m, K 1e-4, 1e-6, 5e-5 m/s, 1 m of head."""
    flux, head = flow_of_head(1.0, CONDUCTIVITY, WIDTH, np.zeros(11))
    assert flux == pytest.approx(np.full(11, 1.968503937007874e-06), rel=1e-14)
    assert head[[0, 2, 7, 10]] == pytest.approx([1.0, 1 - 2000 / 508000, 6000 / 508000, 0.0], rel=1e-12)


def test_water_made_on_the_way_uses_up_head():
    made_up = np.linspace(0.0, 3e-7, 11)
    flux, head = flow_of_head(1.0, CONDUCTIVITY, WIDTH, made_up)
    assert head[0] == pytest.approx(1.0, rel=1e-13)
    assert flux - flux[0] == pytest.approx(made_up, abs=1e-20)
    still, _ = flow_of_head(1.0, CONDUCTIVITY, WIDTH, np.zeros(11))
    assert flux[0] < still[0] < flux[-1]
    again, same = flow_of_flux(flux[0], CONDUCTIVITY, WIDTH, made_up)
    assert np.array_equal(again, flux)
    assert np.array_equal(same, head)


def test_without_conductivity_heads_are_unknown_and_the_flux_holds():
    flux, head = flow_of_flux(2e-6, np.full(10, np.nan), WIDTH, np.zeros(11))
    assert (flux == 2e-6).all()
    assert np.isnan(head[:-1]).all()
    assert head[-1] == 0.0


def test_no_head_no_flow():
    flux, head = flow_of_head(0.0, CONDUCTIVITY, WIDTH, np.zeros(11))
    assert not flux.any()
    assert not head.any()
