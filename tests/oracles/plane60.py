"""The plane on which the present minerals are saturated: its free ln activities, its Newton matrix."""

from __future__ import annotations

import mpmath as mp
import numpy as np
from tests.oracles.algebra60 import minus

ABSENT, PRESENT, FULL = 0, 1, 2


class Plane:
    """The present minerals eliminate one component each: x[pivot] = right side - rows . x[free]."""

    def __init__(self, water, held, x):
        self.water = water
        self.totals = list(water.totals)
        for m in np.flatnonzero(held == FULL):
            self.totals = [
                t - s * water.upper[m] for t, s in zip(self.totals, water.dissolution[m], strict=True)
            ]
        self.full = set(np.flatnonzero(held == FULL).tolist())
        # open gases first: whatever else depends on them has to go
        self.present = sorted(np.flatnonzero(held == PRESENT).tolist(), key=lambda m: not water.open[m])
        self.dependent = None
        self._eliminate(self._abundance(x))
        self.free = [k for k in range(len(self.totals)) if k not in self.pivots]
        reduce = lambda row: [  # noqa: E731
            row[k] - mp.fsum(row[p] * line[k] for p, line in zip(self.pivots, self.rows, strict=True))
            for k in self.free
        ]
        self.formation = [reduce(row) for row in water.formation]
        self.free_totals = reduce(self.totals)

    def _abundance(self, x):
        molality = self.water.molality(x, mp.mpf("0.1"))
        return [
            mp.fsum(abs(row[k]) * c for row, c in zip(self.water.formation, molality, strict=True))
            for k in range(len(x))
        ]

    def _eliminate(self, abundance):
        """Gauss-Jordan; made keeps how each row was combined from the minerals' own."""
        self.pivots: list[int] = []
        self.rows: list[list] = []
        self.right: list = []
        self.made: list[list] = []
        for place, m in enumerate(self.present):
            row = list(self.water.dissolution[m])
            right = self.water.mineral_ln_k[m]
            made = [mp.mpf(int(place == j)) for j in range(len(self.present))]
            for p, line, value, own in zip(self.pivots, self.rows, self.right, self.made, strict=True):
                factor = row[p]
                row = minus(row, factor, line)
                right -= factor * value
                made = minus(made, factor, own)
            candidates = [k for k, v in enumerate(row) if abs(v) > self.water.rounding]
            if not candidates:
                self.dependent = m
                return
            pivot = min(candidates, key=lambda k: abundance[k])
            factor = 1 / row[pivot]
            row, right, made = [v * factor for v in row], right * factor, [v * factor for v in made]
            for i, line in enumerate(self.rows):
                factor = line[pivot]
                self.rows[i] = minus(line, factor, row)
                self.right[i] -= factor * right
                self.made[i] = minus(self.made[i], factor, made)
            self.pivots.append(pivot)
            self.rows.append(row)
            self.right.append(right)
            self.made.append(made)

    def whole(self, free):
        """All ln activities from the free ones."""
        x = [mp.mpf(0)] * len(self.totals)
        for k, value in zip(self.free, free, strict=True):
            x[k] = value
        for p, row, value in zip(self.pivots, self.rows, self.right, strict=True):
            x[p] = value - mp.fsum(row[k] * v for k, v in zip(self.free, free, strict=True))
        return x

    def missing(self, molality):
        """What the dissolved species leave of the reduced totals, and how large the terms are."""
        left, size = [], []
        for j, total in enumerate(self.free_totals):
            terms = [row[j] * c for row, c in zip(self.formation, molality, strict=True)]
            left.append(total - mp.fsum(terms))
            size.append(abs(total) + mp.fsum(map(abs, terms)))
        return left, size

    def amounts(self, molality):
        """The present minerals take what the pivots' totals leave."""
        left = {
            p: self.totals[p]
            - mp.fsum(row[p] * c for row, c in zip(self.water.formation, molality, strict=True))
            for p in self.pivots
        }
        n = [self.water.upper[m] if m in self.full else mp.mpf(0) for m in range(len(self.water.names))]
        for place, m in enumerate(self.present):
            n[m] = mp.fsum(left[p] * made[place] for p, made in zip(self.pivots, self.made, strict=True))
        return n

    def as_sum_of_present(self, row):
        """Shares of the present minerals that add up to this stoichiometry; None where none do."""
        shares = [mp.mpf(0)] * len(self.present)
        for p, line, made in zip(self.pivots, self.rows, self.made, strict=True):
            factor = row[p]
            row = minus(row, factor, line)
            shares = minus(shares, -factor, made)
        if any(abs(v) > self.water.rounding for v in row):
            return None
        return dict(zip(self.present, shares, strict=True))


def hessian(plane, molality):
    """Reduced stoichiometry, transposed, times molalities, times itself."""
    size = len(plane.free)
    matrix = [[mp.mpf(0)] * size for _ in range(size)]
    for row, c in zip(plane.formation, molality, strict=True):
        filled = [j for j in range(size) if row[j]]
        for a in filled:
            share = row[a] * c
            for b in filled:
                matrix[a][b] += share * row[b]
    return matrix
