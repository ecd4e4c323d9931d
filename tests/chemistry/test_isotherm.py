"""Isotherms and their inverse, against roots found with 40 digits."""

from __future__ import annotations

import mpmath
import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from gossan.chemistry.isotherm import (
    FREUNDLICH,
    LANGMUIR,
    LINEAR,
    NO_ATOM,
    Isotherms,
    shared_out,
    sorbed_at,
)


def decades(low: float, high: float) -> st.SearchStrategy[float]:
    return st.floats(low, high).map(lambda p: 10.0**p)


def law_of(kind: int, strength: float, bend: float) -> Isotherms:
    return Isotherms(np.array([0]), np.array([[kind]], np.int8), np.array([[strength]]), np.array([[bend]]))


@given(
    st.sampled_from([LINEAR, FREUNDLICH, LANGMUIR]), decades(-6, 6), st.floats(0.1, 2.0), decades(-6, 6),
    decades(-30, 6), st.floats(0.01, 0.9),
)  # fmt: skip
def test_both_parts_keep_their_digits(kind, strength, exponent, affinity, total, water):
    """However little of one there is beside the other."""
    laws = law_of(kind, strength, exponent if kind == FREUNDLICH else affinity)
    dissolved, sorbed = shared_out(laws, np.array([[total]]), np.array([water]))
    assert dissolved + sorbed == pytest.approx(total, rel=1e-15)
    with mpmath.workdps(40):
        t, w, s, n, b = map(mpmath.mpf, (total, water, strength, exponent, affinity))
        law = {
            LINEAR: lambda c: s * c, FREUNDLICH: lambda c: s * c**n, LANGMUIR: lambda c: s * c / (1 + b * c)
        }[kind]  # fmt: skip
        low, high = mpmath.mpf(10) ** -400, t / w
        x = mpmath.findroot(lambda x: mpmath.log(w * mpmath.exp(x) + law(mpmath.exp(x))) - mpmath.log(t),
                            (mpmath.log(low), mpmath.log(high)), solver="anderson", tol=1e-60, maxsteps=400)
        c = mpmath.exp(x)
        exact = float(w * c), float(law(c))
    if exact[0] < NO_ATOM:
        assert dissolved[0, 0] == 0.0
    else:
        # a steep law's own rounding: an exponent's digits of ln c
        assert dissolved[0, 0] == pytest.approx(exact[0], rel=2e-13)
    assert sorbed[0, 0] == pytest.approx(exact[1], rel=2e-13)


@given(decades(-6, 3), st.floats(0.2, 1.5), decades(-6, 3))
def test_it_inverts_the_law(strength, exponent, concentration):
    laws, water = law_of(FREUNDLICH, strength, exponent), np.array([0.3])
    held = sorbed_at(laws, np.array([[concentration]]))
    dissolved, sorbed = shared_out(laws, 0.3 * concentration + held, water)
    # the total has lost what the lesser of both has beyond its last digit
    assert min(dissolved / 0.3 / concentration, sorbed / held) == pytest.approx(1.0, rel=1e-9) or min(
        0.3 * concentration, float(held[0, 0])
    ) < 1e-6 * max(0.3 * concentration, float(held[0, 0]))


def test_nothing_and_less_than_nothing_are_dissolved():
    for kind in (LINEAR, FREUNDLICH, LANGMUIR):
        dissolved, sorbed = shared_out(law_of(kind, 2.0, 0.5), np.array([[0.0]]), np.array([0.3]))
        assert dissolved[0, 0] == sorbed[0, 0] == 0.0
        dissolved, sorbed = shared_out(law_of(kind, 2.0, 0.5), np.array([[-1e-20]]), np.array([0.3]))
        assert (dissolved[0, 0], sorbed[0, 0]) == (-1e-20, 0.0)


def test_laws_of_different_cells_stand_side_by_side():
    laws = Isotherms(np.array([3]), np.array([[0, LINEAR, FREUNDLICH, LANGMUIR]], np.int8),
                     np.array([[0.0, 2.0, 2.0, 2.0]]), np.array([[0.0, 0.0, 0.5, 4.0]]))
    assert sorbed_at(laws, np.full((1, 4), 0.25)).tolist() == [[0.0, 0.5, 1.0, 0.25]]
    dissolved, sorbed = shared_out(laws, np.array([[0.1, 0.6, 1.1, 0.35]]), np.full(4, 0.4))
    assert dissolved[0] == pytest.approx([0.1, 0.1, 0.1, 0.1], rel=1e-14)
    assert sorbed[0] == pytest.approx([0.0, 0.5, 1.0, 0.25], rel=1e-14)
    half = laws.shared(np.full(4, 0.5)).at(np.array([2, 3]))
    assert sorbed_at(half, np.full((1, 2), 0.25)).tolist() == [[0.5, 0.125]]
