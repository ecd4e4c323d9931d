"""Doubled numbers against mpmath at 60 digits."""

from __future__ import annotations

import mpmath as mp
import numpy as np
import pytest

from gossan.chemistry.kernel.doubled import add, exponential, over, times, two_product, two_sum

PAIRS = 3000


def exact(high: float, low: float = 0.0) -> mp.mpf:
    return mp.mpf(high) + mp.mpf(low)


def drawn(seed: int, decades: float = 20.0) -> np.ndarray:
    """(pair, 4): two doubled numbers, of either sign and any size, low parts below half a last bit."""
    rng = np.random.default_rng(seed)
    high = rng.choice([-1.0, 1.0], (PAIRS, 2)) * 10.0 ** rng.uniform(-decades, decades, (PAIRS, 2))
    low = 0.49 * np.spacing(np.abs(high)) * rng.uniform(-1, 1, (PAIRS, 2))
    return np.column_stack([high[:, 0], low[:, 0], high[:, 1], low[:, 1]])


@pytest.fixture(autouse=True)
def _digits():
    with mp.workdps(70):
        yield


@pytest.mark.parametrize(("kernel", "plain"), [(two_sum, mp.fadd), (two_product, mp.fmul)])
def test_sums_and_products_of_doubles_are_exact(kernel, plain):
    for a, _, b, _ in drawn(1).tolist():
        high, low = kernel(a, b)
        assert exact(high, low) == plain(mp.mpf(a), mp.mpf(b), exact=True)
        assert high == float(plain(mp.mpf(a), mp.mpf(b), exact=True))


@pytest.mark.parametrize("decades", [1.0, 20.0])
def test_a_sum_is_right_to_thirty_one_digits_of_its_larger_part(decades):
    for a, a_low, b, b_low in drawn(2, decades).tolist():
        high, low = add(a, a_low, b, b_low)
        assert high == high + low
        off = abs(exact(high, low) - exact(a, a_low) - exact(b, b_low))
        assert off <= mp.mpf("4e-32") * max(abs(a), abs(b))


def test_what_nearly_cancels_keeps_its_digits():
    high, low = add(1.0, 1e-20, -1.0, 3e-25)
    assert exact(high, low) == pytest.approx(mp.mpf("1.00003e-20"), rel=1e-11)
    for a, a_low, _, _ in drawn(3).tolist():
        assert add(a, a_low, -a, -a_low) == (0.0, 0.0)


@pytest.mark.parametrize(("kernel", "plain"), [(times, mp.fmul), (over, mp.fdiv)])
def test_products_and_quotients_are_right_to_thirty_digits(kernel, plain):
    for a, a_low, b, b_low in drawn(4).tolist():
        high, low = kernel(a, a_low, b, b_low)
        right = plain(exact(a, a_low), exact(b, b_low))
        assert high == high + low
        assert abs(exact(high, low) - right) <= mp.mpf("2e-31") * abs(right)


def test_an_exponential_is_right_to_thirty_digits():
    rng = np.random.default_rng(5)
    wide, narrow = rng.uniform(-590, 590, 2000), 10.0 ** rng.uniform(-20, 0, 500)
    for high in [0.0, 1.0, -1.0, *wide.tolist(), *narrow.tolist()]:
        low = 0.49 * float(np.spacing(abs(high))) * rng.uniform(-1, 1)
        found = exact(*exponential(high, low))
        right = mp.exp(exact(high, low))
        assert abs(found - right) <= mp.mpf("1e-30") * right


def test_what_is_far_too_small_is_nothing():
    assert exponential(-601.0, 0.0) == (0.0, 0.0)
    assert exponential(-1e6, 0.0) == (0.0, 0.0)
