"""The little linear algebra that lists of mpmath numbers need."""

from __future__ import annotations

import mpmath as mp


def solve(matrix, right):
    """Gauss elimination; rows and columns scaled by the diagonal, the largest pivot first."""
    size = len(right)
    scale = [1 / mp.sqrt(abs(matrix[i][i])) for i in range(size)]
    rows = [
        [*(v * own * other for v, other in zip(row, scale, strict=True)), value * own]
        for row, value, own in zip(matrix, right, scale, strict=True)
    ]
    for i in range(size):
        best = max(range(i, size), key=lambda r: abs(rows[r][i]))
        rows[i], rows[best] = rows[best], rows[i]
        for r in range(i + 1, size):
            factor = rows[r][i] / rows[i][i]
            if factor:
                rows[r] = rows[r][:i] + minus(rows[r][i:], factor, rows[i][i:])
    out = [mp.mpf(0)] * size
    for i in reversed(range(size)):
        out[i] = (rows[i][size] - mp.fsum(rows[i][j] * out[j] for j in range(i + 1, size))) / rows[i][i]
    return [v * s for v, s in zip(out, scale, strict=True)]


def dot(a, b):
    return mp.fsum(p * q for p, q in zip(a, b, strict=True) if p)


def column(rows, j, weights):
    return mp.fsum(row[j] * w for row, w in zip(rows, weights, strict=True) if row[j])


def minus(row, factor, other):
    return [a - factor * b for a, b in zip(row, other, strict=True)] if factor else row
