"""The small parts of a certificate: elimination, inverse, and what of a water is scarce."""

from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest

from gossan.chemistry.kernel.certify import desk
from gossan.chemistry.kernel.dense import invert
from gossan.chemistry.kernel.pairs import eliminate_tied, follow


def laid_out(rows: np.ndarray, right: np.ndarray, order: list[int]):
    """A desk with these rows tied and the basis in this order of scarcity."""
    made = desk(rows.shape[1], 8, len(rows))
    made.rows[:], made.rows_low[:] = rows, 0.0
    made.right[:], made.right_low[:] = right, 0.0
    made.pivot[:] = -1
    made.order[:] = order
    return made


def test_the_scarcest_are_eliminated_exactly():
    """Thirds and sevenths, to 30 digits."""
    rows = np.array([[3.0, 1.0, 1.0, 0.0], [1.0, 2.0, 0.0, 1.0]])
    right = np.array([1.0, 5.0])
    made = laid_out(rows, right, [1, 0, 2, 3])
    assert eliminate_tied(made, 4) == 2
    assert made.free[:2].tolist() == [2, 3]
    assert sorted(made.pivot.tolist()) == [0, 1]
    made.x[2:] = [0.25, -0.5]
    follow(made, 2)
    # 3 a + b = 0.75 and a + 2 b = 5.5
    for k, exact in ((0, Fraction(-4, 5)), (1, Fraction(63, 20))):
        found = Fraction(float(made.x[k])) + Fraction(float(made.x_low[k]))
        assert abs(found - exact) < Fraction(1, 10**30)


def test_a_dependent_row_eliminates_nothing():
    rows = np.array([[1.0, -1.0, 0.0], [2.0, -2.0, 0.0]])
    made = laid_out(rows, np.zeros(2), [0, 1, 2])
    assert eliminate_tied(made, 3) == 2
    assert sorted(made.pivot.tolist()) == [-1, 0]


@pytest.mark.parametrize("size", [1, 5, 20])
def test_an_inverse(size):
    matrix = np.random.default_rng(size).normal(size=(size, size))
    both = np.hstack([matrix, np.eye(size)])
    assert invert(both, size)
    assert both[:, size:] @ matrix == pytest.approx(np.eye(size), abs=1e-10)
    assert not invert(np.hstack([np.zeros((size, size)), np.eye(size)]), size)
