"""One Newton step towards the mass balances of the free components (equations.md, 13-17)."""

from __future__ import annotations

import math

from gossan.base.jit import kernel
from gossan.chemistry.kernel.dense import factor_cholesky, solve_cholesky, solve_general
from gossan.chemistry.kernel.interaction import coefficients
from gossan.chemistry.kernel.vectors import add_row, both_sums, dot, exponentials, four_row_dots, row_dot

SLIGHT = 1e-290  # keeps a ratio of sums finite


@kernel(inner=True)
def molalities(matrices, bench, free, ionic_strength):
    """Fill bench.molality from the free ln activities; returns the ionic strength these species make."""
    coefficients(matrices, bench, ionic_strength)
    exponent, reduced_ln_k, ln_gamma = bench.exponent, bench.reduced_ln_k, bench.ln_gamma
    for s in range(exponent.shape[0]):
        exponent[s] = reduced_ln_k[s] - ln_gamma[s]
    for j in range(free + matrices.given):
        add_row(exponent, bench.ln_activity[bench.free[j]], bench.reduced, j)
    exponentials(exponent, bench.bits, bench.molality)
    return 0.5 * dot(matrices.charge_squared, bench.molality)


@kernel(inner=True)
def balances(bench, free):
    """Fill the positive and negative terms of every free mass balance; returns their largest mismatch.

    A balance reads positive = negative; the mismatch is |positive - negative| / the smaller of both.
    """
    worst = 0.0
    for j in range(free):
        total = bench.reduced_total[j]
        made, unmade = both_sums(bench.reduced, j, bench.molality)
        short = (total - made) + unmade
        positive = made - (total if total < 0.0 else 0.0)
        negative = unmade + (total if total > 0.0 else 0.0)
        less = positive if positive < negative else negative
        mismatch = abs(short) / (less + SLIGHT)
        if not mismatch <= worst:
            worst = mismatch
        bench.positive[j] = positive
        bench.negative[j] = negative
        bench.short[j] = short
    return worst


@kernel(inner=True)
def products_up_to(reduced, j, share, matrix):
    """Fill row j of a symmetric matrix, as far as its diagonal, by the sums of reduced times share."""
    whole = (j + 1) // 4 * 4
    for i in range(0, whole, 4):
        one, two, three, four = four_row_dots(reduced, i, share)
        matrix[j, i], matrix[j, i + 1], matrix[j, i + 2], matrix[j, i + 3] = one, two, three, four
    for i in range(whole, j + 1):
        matrix[j, i] = row_dot(reduced, i, share)


@kernel(inner=True)
def near_step(matrices, bench, free, short):
    """The Newton step of balances and ionic strength together; returns (found, step of I).

    short is what the ionic strength lacks of the one its species make; the step of the ln activities is
    left in bench.right.  The balances' own matrix is symmetric, so Cholesky serves; the ionic strength
    joins as a rank-one correction (Sherman & Morrison 1950).
    """
    matrix, right, side, weight, share = bench.matrix, bench.right, bench.side, bench.weight, bench.share
    reduced, molality, slope, charge_squared = (
        bench.reduced, bench.molality, bench.slope, matrices.charge_squared
    )  # fmt: skip
    own = 1.0 + 0.5 * charge_slope(charge_squared, molality, slope)
    if own < 0.2:
        own = 0.2  # highly charged brines: a shorter step in I instead of one the wrong way
    for j in range(free):
        for s in range(molality.shape[0]):
            share[s] = reduced[j, s] * molality[s]
        products_up_to(reduced, j, share, matrix)
        side[j] = -dot(share, slope)
        weight[j] = 0.5 * dot(share, charge_squared)
        right[j] = bench.short[j] - side[j] * short / own
    if not factor_cholesky(matrix, free):
        return False, 0.0
    solve_cholesky(matrix, free, right)
    solve_cholesky(matrix, free, side)
    along = 0.0
    back = own
    for j in range(free):
        along += weight[j] * right[j]
        back += weight[j] * side[j]
    if not abs(back) > 1e-3 * own:
        back = own
    rise = short
    for j in range(free):
        right[j] -= side[j] * along / back
        rise += weight[j] * right[j]
    return True, rise / own


@kernel(inner=True, fastmath={"reassoc", "contract"})
def charge_slope(charge_squared, molality, slope):
    """The sum over species of charge squared, molality and slope of ln gamma."""
    value = 0.0
    for s in range(molality.shape[0]):
        value += charge_squared[s] * molality[s] * slope[s]
    return value


@kernel(inner=True)
def convex_step(bench, free):
    """The Newton step of the convex dual of the Gibbs energy at a given ionic strength.

    Left in bench.right.  With a step short enough to lower dual_energy it comes home from anywhere,
    slowly; the diagonal is raised by a trace so that flat directions cannot break it.
    """
    matrix, right, share = bench.matrix, bench.right, bench.share
    reduced, molality = bench.reduced, bench.molality
    for j in range(free):
        for s in range(molality.shape[0]):
            share[s] = reduced[j, s] * molality[s]
        products_up_to(reduced, j, share, matrix)
        matrix[j, j] += 1e-12 * (bench.negative[j] + bench.positive[j]) + SLIGHT
        right[j] = bench.short[j]
    if not factor_cholesky(matrix, free):
        return False
    solve_cholesky(matrix, free, right)
    return True


@kernel(inner=True)
def dual_energy(bench, free):
    """The convex function whose lowest point is the equilibrium: sum of molalities - totals . x.

    Returns (value, what of it is lost in rounding): a trace component can hide below that.
    """
    value, size = 0.0, 0.0
    for s in range(bench.molality.shape[0]):
        value += bench.molality[s]
    size = value
    for j in range(free):
        term = bench.reduced_total[j] * bench.ln_activity[bench.free[j]]
        value -= term
        size += abs(term)
    return value, 1e-14 * size


@kernel(inner=True)
def far_merit(bench, free):
    """The sum of squares of ln(positive / negative), which a good far step makes smaller."""
    merit = 0.0
    for j in range(free):
        ratio = math.log(bench.negative[j] + SLIGHT) - math.log(bench.positive[j] + SLIGHT)
        merit += ratio * ratio
    return merit


@kernel(inner=True)
def far_step(bench, free):
    """The Newton step of ln(positive / negative) = 0, which reaches far; left in bench.right."""
    matrix, right, share = bench.matrix, bench.right, bench.share
    reduced, molality = bench.reduced, bench.molality
    for j in range(free):
        positive, negative = bench.positive[j] + SLIGHT, bench.negative[j] + SLIGHT
        right[j] = math.log(negative) - math.log(positive)
        for s in range(molality.shape[0]):
            value = reduced[j, s] * molality[s]
            share[s] = value / (positive if value > 0.0 else negative)
        for i in range(free):
            matrix[j, i] = row_dot(reduced, i, share)
    return solve_general(matrix, free, right)
