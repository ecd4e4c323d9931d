"""Small dense systems against numpy, and against the best that rounding allows."""

from __future__ import annotations

import numpy as np
import pytest

from gossan.chemistry.kernel.dense import factor_cholesky, solve_cholesky, solve_general

EPS = 2.0**-52
SIZES = [1, 2, 3, 8, 21]


def backward_error(matrix, right, solution):
    """The least relative change of matrix and right that makes the solution exact (Rigal & Gaches 1967)."""
    size = np.abs(matrix) @ np.abs(solution) + np.abs(right)
    return (np.abs(matrix @ solution - right) / size).max()


def positive_definite(n, rng, decades=0.0):
    """Products of random rows, every unknown in its own unit."""
    rows = rng.normal(size=(3 * n, n)) * 10.0 ** rng.uniform(-decades, decades, n)
    return rows.T @ rows


def roomy(matrix, fill=np.nan):
    """The matrix in the corner of a larger one, as the kernels get it."""
    out = np.full((len(matrix) + 2,) * 2, fill)
    out[: len(matrix), : len(matrix)] = matrix
    return out


def by_cholesky(matrix, right):
    n = len(right)
    space = roomy(np.tril(matrix) + np.triu(np.full((n, n), np.nan), 1))
    solution = np.append(right, [np.nan, np.nan])
    assert factor_cholesky(space, n)
    solve_cholesky(space, n, solution)
    return space[:n, :n], solution[:n]


@pytest.mark.parametrize("n", SIZES)
@pytest.mark.parametrize("decades", [0.0, 10.0])
def test_cholesky(n, decades):
    """Only the lower triangle is read; units of the unknowns that differ by 1e20 do no harm."""
    rng = np.random.default_rng(n)
    for _ in range(5):
        matrix, right = positive_definite(n, rng, decades), rng.normal(size=n)
        factor, solution = by_cholesky(matrix, right)
        scale = 1.0 / np.sqrt(np.diag(matrix))
        expected = np.linalg.cholesky(matrix * scale[:, None] * scale) / scale[:, None]
        assert np.tril(factor) == pytest.approx(expected, rel=1e-9, abs=1e-12 * np.abs(expected).max())
        scaled = (matrix * scale[:, None] * scale, right * scale, solution / scale)
        assert backward_error(*scaled) < 10 * n * EPS


@pytest.mark.parametrize(
    "matrix",
    [
        [[1.0, 1.0], [1.0, 1.0]],
        [[1.0, 1.0], [1.0, 1.0 + EPS]],  # what is left of the pivot is rounding
        [[1.0, 2.0], [2.0, 1.0]],
        [[0.0, 0.0], [0.0, 1.0]],
        [[-1.0, 0.0], [0.0, 1.0]],
        [[np.nan, 0.0], [0.0, 1.0]],
        [[1.0, 0.0], [np.nan, 1.0]],
    ],
)
def test_cholesky_refuses_what_is_not_positive_definite(matrix):
    assert not factor_cholesky(np.array(matrix), 2)


@pytest.mark.parametrize("n", SIZES)
@pytest.mark.parametrize("decades", [0.0, 100.0])
def test_general(n, decades):
    """Equations in units that differ by 1e200: each row is scaled before pivots are compared."""
    rng = np.random.default_rng(n)
    for _ in range(5):
        matrix, exact = rng.normal(size=(n, n)), rng.normal(size=n)
        units = 10.0 ** rng.uniform(-decades, decades, n)
        right = np.append((matrix @ exact) * units, [np.nan, np.nan])
        assert solve_general(roomy(matrix * units[:, None]), n, right)
        assert right[:n] == pytest.approx(np.linalg.solve(matrix, matrix @ exact), rel=1e-9)
        assert backward_error(matrix, matrix @ exact, right[:n]) < 10 * n * EPS


def test_general_exchanges_rows():
    right = np.array([3.0, 5.0])
    assert solve_general(np.array([[0.0, 1.0], [1.0, 0.0]]), 2, right)
    assert right.tolist() == [5.0, 3.0]


@pytest.mark.parametrize(
    "matrix",
    [
        [[0.0, 0.0], [1.0, 1.0]],
        [[1.0, 2.0], [0.5, 1.0]],
        [[np.inf, 1.0], [1.0, 1.0]],
        [[np.nan, np.nan], [1.0, 1.0]],
    ],
)
def test_general_refuses_singular_matrices(matrix):
    assert not solve_general(np.array(matrix), 2, np.ones(2))
