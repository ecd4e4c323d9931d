"""Exchange of two well-mixed waters over a step, against the exponential of their matrix."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.linalg import expm

from gossan.transport.immobile import exchanged

SIZES = st.floats(0.02, 20.0)


def oracle(rate: float, dt: float, c: float, still: float, arriving: float, a: float, b: float):
    """Amounts after dt by expm, the even inflow as a third unknown: what passed, and the difference."""
    matrix = np.array([[-rate / a, rate / b, arriving / dt], [rate / a, -rate / b, 0.0], [0.0, 0.0, 0.0]])
    here, beside, _ = expm(matrix * dt) @ np.array([a * c, b * still, 1.0])
    return beside - b * still, here / a - beside / b


@given(st.floats(-8.0, 1.0), st.floats(0.0, 2.0), st.floats(0.0, 2.0), st.floats(-0.5, 0.5), SIZES, SIZES)
def test_two_well_mixed_waters(power, c, still, arriving, a, b):
    rate, dt = 10.0**power, 3.0
    arrays = [np.array([[value]]) for value in (c - still, arriving, a, b)]
    passed, difference, _ = exchanged(np.array([rate]), dt, *arrays)
    exact_passed, exact_difference = oracle(rate, dt, c, still, arriving, a, b)
    # expm works on the amounts: what it gives of their difference has its rounding
    assert passed[0, 0] == pytest.approx(exact_passed, rel=1e-9, abs=1e-13 * (a + b))
    assert difference[0, 0] == pytest.approx(exact_difference, rel=1e-9, abs=1e-13 * (1 + b / a))


def test_no_transfer_passes_nothing_and_an_endless_one_mixes():
    one = np.ones((1, 1))
    passed, difference, weight = exchanged(np.zeros(1), 10.0, one, 0.1 * one, 0.3 * one, 0.1 * one)
    assert (passed[0, 0], weight[0, 0]) == (0.0, 0.0)
    assert difference[0, 0] == pytest.approx(1.0 + 0.1 / 0.3)
    passed, difference, _ = exchanged(np.array([1e30]), 10.0, one, 0.0 * one, 0.3 * one, 0.1 * one)
    assert passed[0, 0] == pytest.approx(0.3 * 0.1 / 0.4)
    assert difference[0, 0] == 0.0
