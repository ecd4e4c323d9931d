"""One Newton step towards the mass balances of the free components (equations.md, 13-17)."""

from __future__ import annotations

import math

from gossan.base.jit import kernel
from gossan.chemistry.kernel.activity import activity_coefficients
from gossan.chemistry.kernel.dense import factor_cholesky, solve_cholesky, solve_general

CLIP = 60.0  # largest exponent: e^60 mol/kg is far from any water and still far from overflow
SLIGHT = 1e-300  # keeps a ratio of sums finite


@kernel
def molalities(matrices, bench, ionic_strength):
    """Fill bench.molality from the free ln activities; returns the ionic strength these species make."""
    activity_coefficients(
        matrices.model, matrices.debye_hueckel, matrices.kind_charge_squared, matrices.kind_size,
        ionic_strength, bench.ln_gamma, bench.slope,
    )
    made = 0.0
    for s in range(matrices.ln_k.shape[0]):
        exponent = bench.reduced_ln_k[s] - bench.ln_gamma[matrices.kind[s]]
        for e in range(bench.reduced_start[s], bench.reduced_start[s + 1]):
            exponent += (
                bench.reduced_coefficient[e] * bench.ln_activity[bench.free[bench.reduced_member[e]]]
            )
        molality = math.exp(exponent) if exponent < CLIP else math.exp(CLIP)
        bench.molality[s] = molality
        made += matrices.charge_squared[s] * molality
    return 0.5 * made


@kernel
def balances(matrices, bench, free):
    """Fill the positive and negative terms of every free mass balance; returns their largest mismatch.

    A balance reads positive = negative; the mismatch is |positive - negative| / the smaller of both.
    """
    for j in range(free):
        total = bench.reduced_total[j]
        bench.positive[j] = -total if total < 0.0 else 0.0
        bench.negative[j] = total if total > 0.0 else 0.0
    for s in range(matrices.ln_k.shape[0]):
        molality = bench.molality[s]
        for e in range(bench.reduced_start[s], bench.reduced_start[s + 1]):
            amount = bench.reduced_coefficient[e] * molality
            if amount > 0.0:
                bench.positive[bench.reduced_member[e]] += amount
            else:
                bench.negative[bench.reduced_member[e]] -= amount
    worst = 0.0
    for j in range(free):
        less = bench.positive[j] if bench.positive[j] < bench.negative[j] else bench.negative[j]
        mismatch = abs(bench.positive[j] - bench.negative[j]) / (less + SLIGHT)
        if not mismatch <= worst:
            worst = mismatch
    return worst


@kernel
def near_step(matrices, bench, free, short):
    """The Newton step of balances and ionic strength together; returns (found, step of I).

    short is what the ionic strength lacks of the one its species make; the step of the ln activities is
    left in bench.right.  The balances' own matrix is symmetric, so
    Cholesky serves; the ionic strength joins as a rank-one correction (Sherman & Morrison 1950).
    """
    matrix, right, side, weight = bench.matrix, bench.right, bench.side, bench.weight
    for j in range(free):
        right[j] = bench.negative[j] - bench.positive[j]
        side[j] = 0.0
        weight[j] = 0.0
        for i in range(j + 1):
            matrix[j, i] = 0.0
    own = 1.0
    for s in range(matrices.ln_k.shape[0]):
        molality = bench.molality[s]
        if molality == 0.0:
            continue
        slope = bench.slope[matrices.kind[s]]
        half = 0.5 * matrices.charge_squared[s] * molality
        own += half * slope
        first, last = bench.reduced_start[s], bench.reduced_start[s + 1]
        for e in range(first, last):
            j = bench.reduced_member[e]
            value = bench.reduced_coefficient[e]
            side[j] -= value * molality * slope
            weight[j] += value * half
            for d in range(first, e + 1):
                matrix[j, bench.reduced_member[d]] += value * molality * bench.reduced_coefficient[d]
    if own < 0.2:
        own = 0.2  # highly charged brines: a shorter step in I instead of one the wrong way
    for j in range(free):
        right[j] -= side[j] * short / own
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


@kernel
def convex_step(matrices, bench, free):
    """The Newton step of the convex dual of the Gibbs energy at a given ionic strength.

    Left in bench.right.  With a step short enough to lower dual_energy it comes home from anywhere,
    slowly; the diagonal is raised by a trace so that flat directions cannot break it.
    """
    matrix, right = bench.matrix, bench.right
    for j in range(free):
        right[j] = bench.negative[j] - bench.positive[j]
        for i in range(j):
            matrix[j, i] = 0.0
        matrix[j, j] = 1e-12 * (bench.negative[j] + bench.positive[j]) + SLIGHT
    for s in range(matrices.ln_k.shape[0]):
        molality = bench.molality[s]
        first, last = bench.reduced_start[s], bench.reduced_start[s + 1]
        for e in range(first, last):
            value = bench.reduced_coefficient[e] * molality
            for d in range(first, e + 1):
                matrix[bench.reduced_member[e], bench.reduced_member[d]] += (
                    value * bench.reduced_coefficient[d]
                )
    if not factor_cholesky(matrix, free):
        return False
    solve_cholesky(matrix, free, right)
    return True


@kernel
def dual_energy(matrices, bench, free):
    """The convex function whose lowest point is the equilibrium: sum of molalities - totals . x."""
    value = 0.0
    for s in range(matrices.ln_k.shape[0]):
        value += bench.molality[s]
    for j in range(free):
        value -= bench.reduced_total[j] * bench.ln_activity[bench.free[j]]
    return value


@kernel
def far_merit(bench, free):
    """The sum of squares of ln(positive / negative), which a good far step makes smaller."""
    merit = 0.0
    for j in range(free):
        ratio = math.log((bench.negative[j] + SLIGHT) / (bench.positive[j] + SLIGHT))
        merit += ratio * ratio
    return merit


@kernel
def far_step(matrices, bench, free):
    """The Newton step of ln(positive / negative) = 0, which reaches far; left in bench.right."""
    matrix, right = bench.matrix, bench.right
    for j in range(free):
        right[j] = math.log((bench.negative[j] + SLIGHT) / (bench.positive[j] + SLIGHT))
        for i in range(free):
            matrix[j, i] = 0.0
    for s in range(matrices.ln_k.shape[0]):
        molality = bench.molality[s]
        if molality == 0.0:
            continue
        first, last = bench.reduced_start[s], bench.reduced_start[s + 1]
        for e in range(first, last):
            j = bench.reduced_member[e]
            value = bench.reduced_coefficient[e]
            side = bench.positive[j] if value > 0.0 else bench.negative[j]
            share = value * molality / (side + SLIGHT)
            for d in range(first, last):
                matrix[j, bench.reduced_member[d]] += share * bench.reduced_coefficient[d]
    return solve_general(matrix, free, right)
