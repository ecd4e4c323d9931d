"""A slower way to find which minerals are present, for the waters on which the active set goes wrong."""

from __future__ import annotations

import math

from gossan.base.jit import kernel
from gossan.chemistry.kernel.cold import approach, survey_of, valences_follow
from gossan.chemistry.kernel.dense import solve_general
from gossan.chemistry.kernel.interaction import bare_coefficients
from gossan.chemistry.kernel.marks import set_totals
from gossan.chemistry.kernel.nullspace import GONE, NOWHERE
from gossan.chemistry.kernel.vectors import row_dot

LIMIT = 300  # steps
GOOD = 1e-8  # scaled residual at which the marks are certain


@kernel(inner=True)
def fischer_burmeister(a, b):
    """Value and both slopes of a + b - sqrt(a^2 + b^2), zero where a, b >= 0 and a b = 0."""
    size = math.sqrt(a * a + b * b)
    if size < 1e-30:
        return 0.0, 1.0 - math.sqrt(0.5), 1.0 - math.sqrt(0.5)
    # a + b - size loses its digits where one of them is large and positive
    value = 2.0 * a * b / (a + b + size) if a + b > 0.0 else a + b - size
    return value, 1.0 - a / size, 1.0 - b / size


@kernel(inner=True)
def find_minerals(matrices, bench, dissolved, solid, upper, presence, amount, reach):
    """Mark the minerals present by a semismooth Newton iteration on everything (equations.md, 20).

    Balances of all components and, for each mineral, Fischer-Burmeister functions of its amount and its
    saturation (two of them nested where the amount has an upper bound).  bench.ln_activity and presence
    are left near the answer, to be settled from there; returns (found, ionic strength).
    Source: Kraeutle (2011), Adv. Water Resour. 34, 137-151, for the method; Billups (1995) for two bounds.
    amount, reach (row,) are working space.  Everything is counted in conserved components: where couples
    cancel that costs digits, not the marks.  Interactions of ions are left out, and the activity of water is
    1: the marks are settled with them afterwards.
    """
    components, minerals = dissolved.shape[0], solid.shape[0]
    gases = matrices.minerals + matrices.first.shape[0]  # the first row of an open gas
    rows = matrices.solid.shape[0]
    n = components + rows
    for m in range(minerals):
        presence[m] = 0
    set_totals(matrices, bench, dissolved, solid, upper, presence)
    ionic_strength = approach(matrices, bench, bench.total)
    for m in range(minerals):
        reach[m] = 1e300
        for k in range(components):
            if matrices.supplied[m, k] != 0.0 and k != matrices.signed and k != matrices.electron:
                most = 0.0 if bench.place[k] == GONE else bench.total[k] / abs(matrices.supplied[m, k])
                if most < reach[m]:
                    reach[m] = most
        amount[m] = 0.01 * reach[m]
        if amount[m] > upper[m]:
            amount[m] = upper[m]
    for row in range(minerals, rows):
        amount[row], reach[row] = 0.0, 1.0
    matrix, right, stoichiometry = bench.matrix, bench.right, matrices.conserved
    for step in range(LIMIT):
        bare_coefficients(matrices, bench, ionic_strength)
        made = survey_of(matrices, stoichiometry, matrices.conserved_ln_k, bench)
        for i in range(n):
            right[i] = 0.0
            for j in range(n):
                matrix[i, j] = 0.0
        for k in range(components):
            total = bench.total[k]
            bench.positive[k] -= total if total < 0.0 else 0.0
            bench.negative[k] += total if total > 0.0 else 0.0
            for m in range(rows):
                part = matrices.supplied[m, k] * amount[m]
                if part > 0.0:
                    bench.positive[k] += part
                else:
                    bench.negative[k] -= part
        worst = 0.0
        for k in range(components):
            if bench.place[k] == GONE:
                matrix[k, k] = 1.0
                continue
            # far: logarithms reach further; their slope is the balances' own, row by row
            right[k] = math.log((bench.negative[k] + 1e-290) / (bench.positive[k] + 1e-290))
            worst = max(worst, abs(right[k]))
            for m in range(rows):
                value = matrices.supplied[m, k]
                if value != 0.0:
                    side = bench.positive[k] if value * amount[m] > 0.0 else bench.negative[k]
                    matrix[k, components + m] = value * reach[m] / (side + 1e-290)
        for k in range(components):
            if bench.place[k] == GONE:
                continue
            positive, negative = bench.positive[k] + 1e-290, bench.negative[k] + 1e-290
            for s in range(matrices.ln_k.shape[0]):
                value = stoichiometry[k, s] * bench.molality[s]
                bench.share[s] = value / (positive if value > 0.0 else negative)
            for j in range(components):
                matrix[k, j] += row_dot(stoichiometry, j, bench.share)
        for m in range(rows):
            row = components + m
            under = matrices.supplied_ln_k[m]
            for k in range(components):
                if matrices.supplied[m, k] != 0.0:
                    under -= matrices.supplied[m, k] * bench.ln_activity[k]
            if m >= minerals:
                # a tie holds, whatever its amount; a couple has none, and its formula is empty
                right[row] = under
                worst = max(worst, abs(under))
                matrix[row, row] = 0.0 if m >= gases else 1.0
                for k in range(components):
                    if bench.place[k] != GONE:
                        matrix[row, k] = matrices.supplied[m, k]
                continue
            if reach[m] <= 0.0 or upper[m] <= 0.0:
                matrix[row, row] = 1.0
                right[row] = 0.0
                amount[m] = 0.0
                continue
            share = amount[m] / reach[m]
            slack, from_amount, from_under = under, 0.0, 1.0
            if upper[m] < 1e299:
                value, first, second = fischer_burmeister(upper[m] / reach[m] - share, -under)
                slack, from_amount, from_under = -value, first, second
            value, first, second = fischer_burmeister(share, slack)
            right[row] = -value
            worst = max(worst, abs(value))
            matrix[row, row] = first + second * from_amount
            for k in range(components):
                if bench.place[k] != GONE:
                    matrix[row, k] = -second * from_under * matrices.supplied[m, k]
        if worst < GOOD and abs(made - ionic_strength) < 1e-6 * (made + 1e-9):
            for m in range(minerals):
                if reach[m] > 0.0 and amount[m] / reach[m] > 1e-9:
                    presence[m] = 2 if upper[m] - amount[m] < 1e-9 * upper[m] else 1
            valences_follow(matrices, bench)
            return True, ionic_strength
        if not solve_general(matrix, n, right):
            return False, ionic_strength
        largest = 0.0
        for i in range(components):
            largest = max(largest, abs(right[i]))
        if not largest < 1e30:
            return False, ionic_strength
        cap = 5.0 if step < 100 else 1.0
        factor = cap / largest if largest > cap else 1.0
        for k in range(components):
            if bench.place[k] != GONE:
                bench.ln_activity[k] += factor * right[k]
            else:
                bench.ln_activity[k] = NOWHERE
        for m in range(rows):
            amount[m] += factor * right[components + m] * reach[m]
        ionic_strength = min(max(made, 0.2 * ionic_strength), 5.0 * ionic_strength)
        ionic_strength = max(ionic_strength, 1e-12)
    return False, ionic_strength


@kernel
def find_minerals_in(matrices, bench, kilograms, amount, solid, upper, presence, ln_activity, ionic_strength):
    """Mark the minerals present in one cell (arrays as in settle_cells, one cell long), in place."""
    minerals = solid.shape[0]
    for k in range(ln_activity.shape[0]):
        bench.ln_activity[k] = 0.0
    for k in range(amount.shape[0]):
        bench.dissolved[k] = amount[k, 0] / kilograms[0]
    for m in range(minerals):
        bench.solid[m] = solid[m, 0] / kilograms[0]
        bench.upper[m] = upper[m, 0] / kilograms[0]
    found, strength = find_minerals(
        matrices, bench, bench.dissolved, bench.solid, bench.upper, bench.presence, bench.gained, bench.reach
    )
    ionic_strength[0] = strength
    for k in range(ln_activity.shape[0]):
        ln_activity[k, 0] = bench.ln_activity[k]
    for m in range(minerals):
        presence[m, 0] = bench.presence[m]
    return found
