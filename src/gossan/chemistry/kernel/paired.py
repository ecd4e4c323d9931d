"""The near step where every ion changes the activity of others and of the water (equations.md, 67).

The interaction sums and the activity of water are taken with molalities that are unknowns of their own,
bench.seen, beside the ionic strength.  So the balances' own matrix stays symmetric and positive, and Newton's
step stays quadratic however strong the interactions.
"""

from __future__ import annotations

import math

from gossan.base.jit import kernel
from gossan.chemistry.kernel.activity import SIT_SIZE
from gossan.chemistry.kernel.dense import factor_cholesky, solve_cholesky, solve_general
from gossan.chemistry.kernel.interaction import MOLAR_MASS, held_share
from gossan.chemistry.kernel.newton import products_up_to
from gossan.chemistry.kernel.vectors import add_row, dot, row_dot

# What a molality that is not among the unknowns may change an exponent by.  It goes to what there was before
# the step, and so lags behind by the step itself: after a last step of 1e-6 that is far below 1e-12.
LAGGING = 1e-7
MOST = 100.0  # mol/kg of a species: no water holds more


@kernel(inner=True)
def see(bench, share):
    """Take the sums from now on with this share of the molalities that there are."""
    for s in range(bench.seen.shape[0]):
        value = share * bench.molality[s]
        bench.seen[s] = value if value < MOST else MOST
        bench.seen_before[s] = bench.seen[s]


@kernel(inner=True)
def unseen(matrices, bench):
    """The most that an exponent is wrong by, because the sums were taken with other molalities."""
    value = 0.0
    for s in range(bench.seen.shape[0]):
        value += matrices.reach[s] * abs(bench.molality[s] - bench.seen[s])
    return value


@kernel(inner=True)
def see_again(bench):
    """Take the sums as before the last step."""
    for s in range(bench.seen.shape[0]):
        bench.seen[s] = bench.seen_before[s]


@kernel(inner=True)
def see_ahead(matrices, bench, share):
    """Take a share of bench.seen_step, each at most a factor of five; returns the largest change of a sum."""
    move = 0.0
    for s in range(bench.seen.shape[0]):
        now, made = bench.seen[s], bench.molality[s]
        bench.seen_before[s] = now
        most, least = 5.0 * max(now, made), 0.2 * min(now, made)
        value = now + share * bench.seen_step[s]
        value = value if value < most else most
        value = value if value > least else least
        value = value if value < MOST else MOST
        bench.seen[s] = value
        move = max(move, matrices.reach[s] * abs(value - now))
    return move


@kernel(inner=True)
def choose(matrices, bench):
    """List in bench.chosen the species whose molalities are unknowns of the step; returns how many."""
    count = 0
    for s in range(bench.seen.shape[0]):
        bench.seen_step[s] = bench.molality[s] - bench.seen[s]
        if matrices.reach[s] * bench.molality[s] > LAGGING:
            bench.chosen[count] = s
            count += 1
    return count


@kernel(inner=True)
def steepen(matrices, bench, free, count, ionic_strength):
    """Fill bench.steep: slopes of ln molalities against the ionic strength and the chosen molalities.

    The row after them is what the other molalities' moving to what there is changes.
    """
    steep, pull = bench.steep, bench.pull
    share = held_share(ionic_strength)
    held = share < 1.0
    if held:
        weight = 0.0
        for s in range(pull.shape[0]):
            weight += share * bench.seen[s] * (1.0 + pull[s])
        water = MOLAR_MASS * weight / ionic_strength
    else:
        root = math.sqrt(ionic_strength)
        water = MOLAR_MASS * matrices.debye_hueckel * root / (1.0 + SIT_SIZE * root) ** 2
    for s in range(pull.shape[0]):
        steep[0, s] = -bench.slope[s] + (pull[s] / ionic_strength if held else 0.0)
    add_row(steep[0], water, bench.reduced, free)
    for c in range(count):
        k = bench.chosen[c]
        for s in range(pull.shape[0]):
            steep[c + 1, s] = -share * matrices.interaction[k, s]
        add_row(steep[c + 1], -MOLAR_MASS * share * (1.0 + pull[k]), bench.reduced, free)
    last, water, next_chosen = count + 1, 0.0, 0
    for s in range(pull.shape[0]):
        steep[last, s] = 0.0
    for k in range(pull.shape[0]):
        if next_chosen < count and bench.chosen[next_chosen] == k:
            next_chosen += 1
        elif bench.seen_step[k] != 0.0:
            add_row(steep[last], -share * bench.seen_step[k], matrices.interaction, k)
            water -= MOLAR_MASS * share * (1.0 + pull[k]) * bench.seen_step[k]
    add_row(steep[last], water, bench.reduced, free)


@kernel(inner=True)
def paired_step(matrices, bench, free, short, ionic_strength):
    """The Newton step of balances, ionic strength and the molalities that matter; returns (found, step of I).

    short is what the ionic strength lacks; the step of the ln activities is left in bench.right, that of the
    molalities in bench.seen_step (the rest of them go all the way to what there is).
    """
    matrix, right, side, share, molality = bench.matrix, bench.right, bench.side, bench.share, bench.molality
    steep, sides, weights, border, ahead = bench.steep, bench.sides, bench.weights, bench.border, bench.ahead
    count = choose(matrices, bench)
    steepen(matrices, bench, free, count, ionic_strength)
    for j in range(free):
        for s in range(molality.shape[0]):
            share[s] = bench.reduced[j, s] * molality[s]
        products_up_to(bench.reduced, j, share, matrix)
        right[j] = bench.short[j] - row_dot(steep, count + 1, share)
        weights[0, j] = 0.5 * dot(share, matrices.charge_squared)
        for c in range(count + 1):
            sides[c, j] = row_dot(steep, c, share)
        for c in range(count):
            weights[c + 1, j] = share[bench.chosen[c]]
    if not factor_cholesky(matrix, free):
        return False, 0.0
    solve_cholesky(matrix, free, right)
    for c in range(count + 1):
        for j in range(free):
            side[j] = sides[c, j]
        solve_cholesky(matrix, free, side)
        for j in range(free):
            sides[c, j] = side[j]
    for s in range(molality.shape[0]):
        share[s] = 0.5 * matrices.charge_squared[s] * molality[s]
    for a in range(count + 1):
        if a == 0:
            ahead[a] = short + row_dot(steep, count + 1, share)
        else:
            k = bench.chosen[a - 1]
            ahead[a] = bench.seen_step[k] + molality[k] * steep[count + 1, k]
        for j in range(free):
            ahead[a] += weights[a, j] * right[j]
        for b in range(count + 1):
            if a == 0:
                own = row_dot(steep, b, share)
            else:
                k = bench.chosen[a - 1]
                own = molality[k] * steep[b, k]
            value = (1.0 if a == b else 0.0) - own
            for j in range(free):
                value += weights[a, j] * sides[b, j]
            border[a, b] = value
    if not solve_general(border, count + 1, ahead):
        return False, 0.0
    for j in range(free):
        for b in range(count + 1):
            right[j] -= sides[b, j] * ahead[b]
    for c in range(count):
        bench.seen_step[bench.chosen[c]] = ahead[c + 1]
    return True, ahead[0]
