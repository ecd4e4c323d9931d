"""The arithmetic that a warm solve cannot do without, each piece timed alone.

One iteration needs the exponents of all species, their exponentials, the balances and their matrix, and a
Cholesky solve. Timed twice: one water at a time with species innermost, by the program's own loops; and LANES
waters in lock step, where every operation serves a whole register. Neither counts the activity coefficients,
the minerals, nor the way from one piece to the next.
"""

from __future__ import annotations

import math

import numba
import numpy as np
from tools.bench.timing import medians

from gossan.chemistry.kernel.dense import factor_cholesky, solve_cholesky
from gossan.chemistry.kernel.vectors import add_row, both_sums, exponentials, row_dot
from gossan.chemistry.system import System

LANES = 16
ROUNDS = 2000  # of a piece in one call, so that the call itself does not count


@numba.njit(error_model="numpy")
def exponents(reduced, ln_k, ln_activity, out, rounds):
    """The exponents of all species, one water."""
    for _ in range(rounds):
        out[:] = ln_k
        for j in range(reduced.shape[0]):
            add_row(out, ln_activity[j], reduced, j)


@numba.njit(error_model="numpy")
def exponentiated(exponent, bits, out, rounds):
    """The exponentials of all species, one water or many."""
    for _ in range(rounds):
        exponentials(exponent, bits, out)


@numba.njit(error_model="numpy")
def accumulated(reduced, molality, share, matrix, right, rounds):
    """The balances and their symmetric matrix, one water."""
    for _ in range(rounds):
        for j in range(reduced.shape[0]):
            made, unmade = both_sums(reduced, j, molality)
            right[j] = made - unmade
            for s in range(molality.shape[0]):
                share[s] = reduced[j, s] * molality[s]
            for i in range(j + 1):
                matrix[j, i] = row_dot(reduced, i, share)


@numba.njit(error_model="numpy")
def factored(start, matrix, right, n, rounds):
    """A Cholesky solve, one water."""
    for _ in range(rounds):
        for j in range(n):
            right[j] = 1.0
            for i in range(j + 1):
                matrix[j, i] = start[j, i]
        factor_cholesky(matrix, n)
        solve_cholesky(matrix, n, right)


@numba.njit(error_model="numpy", fastmath={"contract"})
def lane_exponents(species, component, factor, ln_k, ln_activity, out, rounds):
    """The exponents of all species of LANES waters, from the non-zero factors alone."""
    for _ in range(rounds):
        for s in range(ln_k.shape[0]):
            row, k = out[s], ln_k[s]
            for lane in range(LANES):
                row[lane] = k
        for p in range(species.shape[0]):
            row, x, share = out[species[p]], ln_activity[component[p]], factor[p]
            for lane in range(LANES):
                row[lane] += share * x[lane]


@numba.njit(error_model="numpy", fastmath={"contract"})
def lane_accumulated(target, species, factor, molality, out, rounds):
    """The entries of balances and matrix, from the non-zero products of stoichiometry alone."""
    for _ in range(rounds):
        out[:] = 0.0
        for p in range(species.shape[0]):
            row, x, share = out[target[p]], molality[species[p]], factor[p]
            for lane in range(LANES):
                row[lane] += share * x[lane]


@numba.njit(error_model="numpy", fastmath={"contract"})
def lane_factored(start, matrix, right, n, rounds):
    """A Cholesky solve of LANES matrices (row, column, lane)."""
    for _ in range(rounds):
        matrix[:] = start
        right[:] = 1.0
        for j in range(n):
            pivot = matrix[j, j]
            for k in range(j):
                left = matrix[j, k]
                for lane in range(LANES):
                    pivot[lane] -= left[lane] * left[lane]
            for lane in range(LANES):
                pivot[lane] = 1.0 / math.sqrt(pivot[lane])
            for i in range(j + 1, n):
                value = matrix[i, j]
                for k in range(j):
                    above, left = matrix[i, k], matrix[j, k]
                    for lane in range(LANES):
                        value[lane] -= above[lane] * left[lane]
                for lane in range(LANES):
                    value[lane] *= pivot[lane]
        for i in range(n):
            value, pivot = right[i], matrix[i, i]
            for k in range(i):
                left, known = matrix[i, k], right[k]
                for lane in range(LANES):
                    value[lane] -= left[lane] * known[lane]
            for lane in range(LANES):
                value[lane] *= pivot[lane]
        for i in range(n - 1, -1, -1):
            value, pivot = right[i], matrix[i, i]
            for k in range(i + 1, n):
                left, known = matrix[k, i], right[k]
                for lane in range(LANES):
                    value[lane] -= left[lane] * known[lane]
            for lane in range(LANES):
                value[lane] *= pivot[lane]


def pieces(system: System, free: int) -> dict[str, tuple[float, float]]:
    """Seconds per water of each piece with so many free components, alone and in lanes.

    The reduced stoichiometry is taken to be the first rows of the whole one: the same shape, much the same
    number of non-zero entries.
    """
    reduced = np.ascontiguousarray(system.matrices.stoichiometry[:free])
    ln_k = np.full(reduced.shape[1], -3.0)
    x = np.linspace(-9.0, -1.0, free)
    species = reduced.shape[1]
    exponent, molality, share = np.empty(species), np.linspace(0.1, 1.0, species), np.empty(species)
    bits = np.empty(species, np.int64)
    start = np.eye(free) * free + 0.5
    matrix, right = np.empty((free, free)), np.empty(free)

    where, which = np.nonzero(reduced)
    products = [
        (j * (j + 1) // 2 + i, int(s), reduced[i, s] * reduced[j, s])
        for j in range(free) for i in range(j + 1) for s in np.flatnonzero(reduced[i] * reduced[j])
    ]  # fmt: skip
    entries = free * (free + 1) // 2
    products += [(entries + j, s, reduced[j, s]) for j, s in zip(where.tolist(), which.tolist(), strict=True)]
    target, of, factor = (np.array(column) for column in zip(*products, strict=True))
    xs, many = np.repeat(x[:, None], LANES, 1), np.full((len(system.species), LANES), 0.3)
    flat, flat_bits, flat_out = np.full(many.size, -2.0), np.empty(many.size, np.int64), np.empty(many.size)
    sums = np.empty((entries + free, LANES))
    starts = np.repeat(start[:, :, None], LANES, 2)
    matrices, rights = np.empty_like(starts), np.empty((free, LANES))
    n = ROUNDS
    seconds = medians(
        lambda: exponents(reduced, ln_k, x, exponent, n),
        lambda: lane_exponents(which, where, reduced[where, which], ln_k[: len(many)], xs, many, n),
        lambda: exponentiated(exponent, bits, molality, n),
        lambda: exponentiated(flat, flat_bits, flat_out, n),
        lambda: accumulated(reduced, molality, share, matrix, right, n),
        lambda: lane_accumulated(target, of, factor, many, sums, n),
        lambda: factored(start, matrix, right, free, n),
        lambda: lane_factored(starts, matrices, rights, free, n),
    )
    names = ("exponents", "exponentials", "accumulate", "factor")
    pairs = zip(names, seconds[::2], seconds[1::2], strict=True)
    return {name: (alone / n, lanes / n / LANES) for name, alone, lanes in pairs}


def least_seconds(pieces: dict[str, tuple[float, float]], steps: float) -> tuple[float, float]:
    """A warm solve of so many steps: one evaluation more than steps; (alone, in lanes)."""
    alone, lanes = (
        (steps + 1) * sum(pieces[name][side] for name in ("exponents", "exponentials", "accumulate"))
        + steps * pieces["factor"][side]
        for side in (0, 1)
    )
    return alone, lanes
