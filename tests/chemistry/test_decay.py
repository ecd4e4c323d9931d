"""Decay over a step, against matrix exponentials with 50 digits and against steady states."""

from __future__ import annotations

import mpmath
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from gossan.chemistry.decay import GENTLE, Decay, decayed

HALVES = st.floats(-9.0, 3.0).map(lambda p: 10.0**p)


def chain(rates: list[float]) -> Decay:
    """Each decays into the next."""
    matrix = np.diag([-rate for rate in rates])
    matrix[np.arange(1, len(rates)), np.arange(len(rates) - 1)] = rates[:-1]
    return Decay(np.arange(len(rates)), matrix[None], np.zeros(1, int))


def exact(decay: Decay, dt: float) -> list[mpmath.matrix]:
    """phi_0, phi_1, phi_2 of A dt: blocks of the exponential of [[Z, I, 0], [0, 0, I], [0, 0, 0]]."""
    n = len(decay.solutes)
    with mpmath.workdps(60):
        whole = mpmath.zeros(3 * n)
        for i in range(n):
            for j in range(n):
                whole[i, j] = mpmath.mpf(float(decay.rates[0, i, j])) * mpmath.mpf(dt)
            whole[i, n + i] = whole[n + i, 2 * n + i] = 1
        found = mpmath.expm(whole, method="taylor")
        return [found[:n, k * n : (k + 1) * n] for k in range(3)]


@given(st.lists(HALVES, min_size=1, max_size=4), st.booleans(), HALVES)
def test_every_entry_has_its_digits(rates, equal, dt):
    """Also where rates are equal, and where a step is many thousand half-lives."""
    decay = chain([rates[0]] * len(rates) if equal else rates)
    (kept,) = decay.over(dt).kept
    whole, first, second = exact(decay, dt)
    z = mpmath.matrix((decay.rates[0] * dt).tolist())
    compared = [(kept.whole, whole), (kept.first, first)]
    if kept.fastest <= GENTLE:
        compared += [(kept.early, z * first), (kept.late, z * second)]
    for found, right in compared:
        for i, j in np.ndindex(found.shape):
            # what has decayed below 1e-280 is no number worth its digits
            assert float(right[i, j]) == pytest.approx(found[i, j], rel=2e-12, abs=1e-280)


@given(st.lists(HALVES, min_size=1, max_size=4), HALVES, st.floats(-1.0, 5.0))
def test_nothing_is_lost_and_nothing_falls_below_nothing(rates, dt, share):
    """share of the stock that transport brings; -1 takes all of it."""
    decay = chain([*rates, 0.0]) if len(rates) < 4 else chain(rates)
    stock = np.linspace(0.1, 2.0, len(decay.solutes))[:, None]
    left, made = decayed(decay.over(dt), stock, share * stock)
    assert left.min() >= 0.0
    assert left - made == pytest.approx((1.0 + share) * stock, rel=1e-14, abs=1e-15)
    if len(rates) < 4:
        assert made.sum() == pytest.approx(0.0, abs=1e-13)  # the chain ends with what stays


@pytest.mark.parametrize("dt", [1e-6, 1.0, 1e6])
def test_a_steady_state_does_not_depend_on_the_step(dt):
    """An inflow that makes up for decay, in a chain: left is stock."""
    decay = chain([0.3, 0.1, 0.7])
    stock = np.array([[1.0], [2.0], [0.5]])
    left, _ = decayed(decay.over(dt), stock, -decay.rates[0] @ stock * dt)
    assert left == pytest.approx(stock, rel=1e-13)


def test_every_cell_has_the_rates_of_its_zone():
    """Two zones, and cells of both in turn: as if each zone were alone."""
    fast, slow = (chain(rates).rates[0] for rates in ([0.3, 0.1, 0.7], [0.01, 0.0, 2.0]))
    zone = np.array([1, 0, 0, 1, 0])
    both = Decay(np.arange(3), np.array([fast, slow]), zone).over(2.0)
    stock = np.random.default_rng(3).random((3, 5))
    left, made = decayed(both, stock, -0.5 * stock)
    for number, rates in enumerate((fast, slow)):
        here = zone == number
        one = Decay(np.arange(3), rates[None], np.zeros(5, int)).over(2.0)
        expected = decayed(one, stock, -0.5 * stock)
        assert left[:, here] == pytest.approx(expected[0][:, here], rel=1e-14)
        assert made[:, here] == pytest.approx(expected[1][:, here], rel=1e-13)
        assert both.alone(stock)[:, here] == pytest.approx(one.alone(stock)[:, here], rel=1e-14)
    some = stock[:, [3, 1]]
    assert decayed(both.at(np.array([3, 1])), some, -0.5 * some)[0] == pytest.approx(left[:, [3, 1]])


def test_descent_reaches_through_the_whole_chain():
    assert chain([0.1, 0.2, 0.3]).descent.tolist() == [[0, 0, 0], [1, 0, 0], [1, 1, 0]]
