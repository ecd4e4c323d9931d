"""Fronts whose shape an isotherm makes: a self-sharpening wave and a spreading fan, against closed forms.

Freundlich, exponent 1/2: C_t + rho/theta S_t + v C_x = D C_xx settles to a travelling wave that ends at a
finite distance, because the law is infinitely steep at nothing; van der Zee (1990) Water Resour. Res. 26,
2563-2578, its shift by the mass balance. Langmuir, flushed without dispersion: C is a function of x/t; Rhee,
Aris & Amundson (1986) First-Order Partial Differential Equations, vol. 1. Both forms from memory, the numbers
computed from them with 25 digits and more.
"""

from __future__ import annotations

import pytest
from tests.support.tracer_columns import DRY, POROSITY, Solute, profiles

TWICE = 2.0 * POROSITY / DRY  # mol kg-1: sorbed per bulk is twice what is dissolved, at 1 mol m-3


@pytest.mark.parametrize(("concentration", "place"), [
    (0.01, 3.397011702393864), (0.1, 3.380525508849363), (0.3, 3.355725764735807), (0.5, 3.329656502695362),
    (0.7, 3.294618041923398), (0.9, 3.225148992989588), (0.99, 3.085584856986108),
])  # fmt: skip
def test_a_wave_that_sharpens_itself(concentration, place, wave):
    """After 10 d at a third of the water's speed: 400 cells of 15 mm, a quarter of a cell demanded."""
    assert wave.front(concentration, 10.0) == pytest.approx(place, abs=0.004)


@pytest.fixture(scope="module")
def wave():
    law = f'law = "freundlich"\ncoefficient = "{TWICE!r} mol/kg"\nexponent = 0.5'
    return profiles([Solute(isotherm=law)], velocity=1.0, dispersivity=0.02, length=6.0, cells=400, days=10.0)


def test_nothing_is_ahead_of_the_wave(wave):
    """Its foot is 7 cm ahead of the middle of its mass; numbers vanish within a few cells of it."""
    beyond = wave.walk.problem.grid.centres > 3.333 + 0.07 + 0.05
    assert wave.walk.dissolved("a")[beyond].max() < 1e-12


def test_a_fan_that_spreads():
    law = f'law = "langmuir"\ncapacity = "{TWICE!r} mol/kg"\naffinity = "4 m3/mol"'
    found = profiles([Solute(entering=0.0, initial=1.0, isotherm=law)], velocity=1.0, dispersivity=0.0,
                     length=8.0, cells=400, days=10.0)  # fmt: skip
    fan = ((0.15, 0.04704426289300229), (0.2, 0.1035533905932738), (0.3, 0.2129100498862757),
           (0.4, 0.3273502691896258), (0.5, 0.4571067811865475), (0.6, 0.6160254037844386),
           (0.7, 0.8301234497346434))  # fmt: skip
    for speed, value in fan:
        assert found.at(10.0 * speed, 10.0) == pytest.approx(value, abs=4e-3)  # 0.012 demanded
    behind, ahead = found.at(10.0 * (1.0 / 9.0 - 0.01), 10.0), found.at(10.0 * (25.0 / 33.0 + 0.01), 10.0)
    assert behind == pytest.approx(0.0, abs=0.012)  # a fan's corners are round on any grid
    assert ahead == pytest.approx(1.0, abs=0.012)
