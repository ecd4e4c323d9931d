"""The exponential to its last digits, and sums over species against exact ones."""

from __future__ import annotations

import math

import mpmath as mp
import numpy as np
import pytest

from gossan.chemistry.kernel.matrices import LANES
from gossan.chemistry.kernel.vectors import (
    HIGHEST,
    LN2_HIGH,
    LN2_LOW,
    LOWEST,
    add_row,
    both_sums,
    dot,
    exponentials,
    row_dot,
)

EPS = 2.0**-52
LN2 = math.log(2.0)


def exponential(exponents):
    exponents = np.array(exponents, dtype=float)
    out = np.full(len(exponents), np.nan)
    exponentials(exponents, np.zeros(len(exponents), dtype=np.int64), out)
    return out


def in_last_places(found, exponents):
    """How far from e^x at fifty digits, in units of the last place."""
    with mp.workdps(50):
        exact = [mp.exp(mp.mpf(float(x))) for x in exponents]
        return np.array(
            [
                float(abs(mp.mpf(float(a)) - b) / mp.mpf(float(np.spacing(float(b)))))
                for a, b in zip(found, exact, strict=True)
            ]
        )


def test_exponential_over_its_whole_range():
    rng = np.random.default_rng(1)
    whole = np.concatenate(
        [
            rng.uniform(LOWEST, HIGHEST, 6000),
            rng.uniform(-1.0, 1.0, 2000),
            rng.choice([-1.0, 1.0], 500) * 10.0 ** rng.uniform(-20, 0, 500),
            [LOWEST, HIGHEST, 0.0, -0.0],
        ]
    )
    assert in_last_places(exponential(whole), whole).max() < 2.0


def test_exponential_where_the_power_of_two_changes():
    """At odd multiples of ln(2) / 2 the remainder is largest and the power may go either way."""
    odd = (np.arange(-995, 86) + 0.5) * LN2
    beside = [np.nextafter(odd, np.inf), np.nextafter(odd, -np.inf)]
    edges = np.concatenate([odd, *beside, np.arange(-995, 87) * LN2])
    edges = edges[(edges >= LOWEST) & (edges <= HIGHEST)]
    assert in_last_places(exponential(edges), edges).max() < 2.0


def test_exponents_are_held_to_their_range():
    beyond = [-1e6, -746.0, LOWEST - 1e-9, HIGHEST + 1e-9, 710.0, 1e6]
    held = exponential([LOWEST] * 3 + [HIGHEST] * 3)
    assert np.array_equal(exponential(beyond), held)
    assert held[0] == pytest.approx(math.exp(LOWEST), rel=3 * EPS)
    assert held[-1] == pytest.approx(math.exp(HIGHEST), rel=3 * EPS)


def test_an_exponential_does_not_know_its_neighbours():
    """The same bits at every place of a row of whole lanes: vector body or not."""
    rng = np.random.default_rng(2)
    values = rng.uniform(-300.0, 20.0, LANES * 9)
    found = exponential(values)
    for start in range(len(values)):
        assert np.array_equal(exponential(np.roll(values, start)), np.roll(found, start))
    for count in range(LANES, len(values), LANES):
        assert np.array_equal(exponential(values[:count]), found[:count])


def test_the_parts_of_ln_2():
    """Products of the high part with the powers met are exact; both parts together are ln 2."""
    with mp.workdps(50):
        assert abs(mp.mpf(LN2_HIGH) + mp.mpf(LN2_LOW) - mp.log(2)) < mp.mpf(2) ** -85
        for n in (-995, -994, 87):
            assert mp.mpf(LN2_HIGH * n) == mp.mpf(LN2_HIGH) * n


@pytest.fixture(params=[LANES, 5 * LANES, 22 * LANES])
def terms(request):
    """A matrix of stoichiometries and molalities over thirty decades."""
    rng = np.random.default_rng(request.param)
    coefficient = rng.integers(-3, 4, (4, request.param)).astype(float)
    return coefficient, 10.0 ** rng.uniform(-30, 1, request.param)


def test_dot(terms):
    coefficient, molality = terms
    for row in coefficient:
        size = math.fsum(abs(row * molality))
        assert abs(dot(row, molality) - math.fsum(row * molality)) <= len(row) * EPS * size


def test_row_dot(terms):
    coefficient, molality = terms
    for r, row in enumerate(coefficient):
        size = math.fsum(abs(row * molality))
        assert abs(row_dot(coefficient, r, molality) - math.fsum(row * molality)) <= len(row) * EPS * size


def test_both_sums_are_kept_apart(terms):
    coefficient, molality = terms
    for r, row in enumerate(coefficient):
        products = row * molality
        positive, negative = both_sums(coefficient, r, molality)
        assert positive == pytest.approx(math.fsum(products[products > 0]), rel=len(row) * EPS)
        assert negative == pytest.approx(-math.fsum(products[products < 0]), rel=len(row) * EPS)


def test_a_trace_is_found_beside_a_sum_that_would_drown_it():
    coefficient = np.array([[1.0, -1.0, 0.0, 0.0, 0.0, 0.0, 0.0, 0.0]])
    positive, negative = both_sums(coefficient, 0, np.array([1.0, 1e-200, 7.0, 0.0, 0.0, 0.0, 0.0, 0.0]))
    assert (positive, negative) == (1.0, 1e-200)


def test_add_row(terms):
    coefficient, molality = terms
    for r, row in enumerate(coefficient):
        out = molality.copy()
        add_row(out, -0.7, coefficient, r)
        assert out == pytest.approx(molality - 0.7 * row, rel=2 * EPS, abs=2 * EPS * np.abs(row).max())
