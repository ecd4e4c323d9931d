"""Activity coefficients against their published formulas at fifty digits."""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest
from tests.oracles.activity_laws import davies, extended_debye_hueckel

from gossan.chemistry.kernel.activity import HELD_FROM, LEAST_IONIC_STRENGTH, activity_coefficients

A_LOG10, B_PER_M = 0.5085, 3.281e9  # at 25 degC; Freeze & Cherry (1979)
CHARGE = np.array([1.0, -2.0, 3.0, 0.0, -1.0])
SIZE = np.array([9e-10, 4e-10, 9e-10, 0.0, 3.5e-10])  # m
IDEAL, DAVIES, DEBYE_HUECKEL = 0, 1, 2
LAWS = {
    DAVIES: davies(CHARGE, A_LOG10),
    DEBYE_HUECKEL: extended_debye_hueckel(CHARGE, SIZE, A_LOG10, B_PER_M),
}
STRENGTHS = [*np.logspace(-12, 1.5, 55), 0.3949, 0.395]
ROUNDING = 4e-15  # a dozen operations, on terms up to four times their sum


def coefficients(model, ionic_strength):
    ln_gamma, slope = np.full(len(CHARGE), np.nan), np.full(len(CHARGE), np.nan)
    activity_coefficients(
        model, A_LOG10 * np.log(10.0), CHARGE**2, (CHARGE == 0.0).astype(float), B_PER_M * SIZE,
        ionic_strength, ln_gamma, slope,
    )  # fmt: skip
    return ln_gamma, slope


@pytest.mark.parametrize("model", [DAVIES, DEBYE_HUECKEL])
@pytest.mark.parametrize("strength", STRENGTHS)
def test_coefficients_and_slopes(model, strength):
    ln_gamma, slope = coefficients(model, strength)
    with mp.workdps(50):
        exact = LAWS[model](mp.mpf(strength))
        slopes = [mp.diff(lambda i, s=s: LAWS[model](i)[s], mp.mpf(strength)) for s in range(len(CHARGE))]
    assert ln_gamma == pytest.approx(np.array(exact, dtype=float), rel=ROUNDING, abs=1e-300)
    # near Davies' minimum the slope is the difference of two equal terms
    largest = A_LOG10 * np.log(10.0) * CHARGE**2 * 0.5 / np.sqrt(strength)
    assert np.all(np.abs(slope - np.array(slopes, dtype=float)) <= ROUNDING * (largest + 0.3))


def test_ideal_waters_have_none():
    ln_gamma, slope = coefficients(IDEAL, 0.7)
    assert not ln_gamma.any()
    assert not slope.any()


def test_davies_is_held_where_its_bracket_turns():
    with mp.workdps(50):
        turn = mp.findroot(lambda i: 1 / (2 * mp.sqrt(i) * (1 + mp.sqrt(i)) ** 2) - mp.mpf("0.3"), 0.4)
    assert pytest.approx(float(turn), rel=2e-16) == HELD_FROM
    at, _ = coefficients(DAVIES, HELD_FROM)
    for beyond in (np.nextafter(HELD_FROM, 1.0), 0.5, 3.0, 100.0):
        ln_gamma, slope = coefficients(DAVIES, beyond)
        assert np.array_equal(ln_gamma, at)
        assert not slope.any()


@pytest.mark.parametrize("model", [DAVIES, DEBYE_HUECKEL])
def test_pure_water_has_numbers(model):
    """Between no ions and LEAST_IONIC_STRENGTH nothing moves; the square root's slope stays finite."""
    ln_gamma, slope = coefficients(model, 0.0)
    least, least_slope = coefficients(model, LEAST_IONIC_STRENGTH)
    assert np.array_equal(ln_gamma, least)
    assert np.array_equal(slope, least_slope)
    assert np.abs(ln_gamma).max() < 2e-6
    assert np.isfinite(slope).all()
