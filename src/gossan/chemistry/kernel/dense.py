"""Small dense linear systems, solved in place."""

from __future__ import annotations

import math

from gossan.base.jit import kernel

# A pivot this much smaller than its diagonal has lost all its digits.
LOST = 1e-15


@kernel(inner=True)
def factor_cholesky(matrix, n):
    """Overwrite the lower triangle of a symmetric positive definite matrix by its Cholesky factor.

    matrix (>= n, >= n), only its lower triangle is read; returns False where it is singular.
    """
    for j in range(n):
        pivot = matrix[j, j]
        floor = LOST * pivot
        for k in range(j):
            pivot -= matrix[j, k] * matrix[j, k]
        if not pivot > floor or pivot <= 0.0:
            return False
        pivot = math.sqrt(pivot)
        matrix[j, j] = pivot
        for i in range(j + 1, n):
            value = matrix[i, j]
            for k in range(j):
                value -= matrix[i, k] * matrix[j, k]
            matrix[i, j] = value / pivot
    return True


@kernel(inner=True)
def solve_cholesky(matrix, n, right):
    """Overwrite right by the solution of L L^T x = right."""
    for i in range(n):
        value = right[i]
        for k in range(i):
            value -= matrix[i, k] * right[k]
        right[i] = value / matrix[i, i]
    for i in range(n - 1, -1, -1):
        value = right[i]
        for k in range(i + 1, n):
            value -= matrix[k, i] * right[k]
        right[i] = value / matrix[i, i]


@kernel(inner=True)
def solve_general(matrix, n, right):
    """Overwrite right by the solution of matrix x = right: LU with rows scaled and exchanged.

    matrix is destroyed; returns False where it is singular.
    """
    for i in range(n):
        largest = 0.0
        for j in range(n):
            size = abs(matrix[i, j])
            if size > largest:
                largest = size
        if not largest > 0.0 or largest == math.inf:
            return False
        for j in range(n):
            matrix[i, j] /= largest
        right[i] /= largest
    for j in range(n):
        best = j
        for i in range(j + 1, n):
            if abs(matrix[i, j]) > abs(matrix[best, j]):
                best = i
        if not abs(matrix[best, j]) > 1e-300:
            return False
        if best != j:
            for k in range(n):
                matrix[j, k], matrix[best, k] = matrix[best, k], matrix[j, k]
            right[j], right[best] = right[best], right[j]
        for i in range(j + 1, n):
            share = matrix[i, j] / matrix[j, j]
            if share != 0.0:
                for k in range(j + 1, n):
                    matrix[i, k] -= share * matrix[j, k]
                right[i] -= share * right[j]
    for i in range(n - 1, -1, -1):
        value = right[i]
        for k in range(i + 1, n):
            value -= matrix[i, k] * right[k]
        right[i] = value / matrix[i, i]
    return True


@kernel(inner=True)
def invert(matrix, n):
    """Turn (matrix | unit) into (unit | inverse), in place; False where it is singular."""
    for j in range(n):
        best = j
        for i in range(j + 1, n):
            if abs(matrix[i, j]) > abs(matrix[best, j]):
                best = i
        if not abs(matrix[best, j]) > 1e-300:
            return False
        if best != j:
            for c in range(2 * n):
                matrix[j, c], matrix[best, c] = matrix[best, c], matrix[j, c]
        head = matrix[j, j]
        for c in range(2 * n):
            matrix[j, c] /= head
        for i in range(n):
            share = matrix[i, j]
            if i != j and share != 0.0:
                for c in range(2 * n):
                    matrix[i, c] -= share * matrix[j, c]
    return True
