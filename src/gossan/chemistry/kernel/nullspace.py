"""Minerals that are present take components out of the problem (equations.md, 10-12).

A mineral at equilibrium ties the activities of its components together.  Gauss-Jordan elimination on the
stoichiometry of the minerals present solves these ties for one component each, the least abundant in
solution, and leaves a smaller problem in the free components.  Totals are subtracted here, once, and not
in every residual: that is what keeps free sulfide right where zinc and sulfide nearly cancel.

A redox couple is such a tie too, one that always holds: it takes out the scarcer valence, so that the
electron balance is left in terms of what is scarce, and not as a difference of what is plentiful
(equations.md, 51).
"""

from __future__ import annotations

import math

import numpy as np

from gossan.base.jit import kernel
from gossan.chemistry.kernel.doubled import two_product, two_sum
from gossan.chemistry.kernel.vectors import add_row

GONE = -99  # place of a component that is absent
GIVEN = -98  # place of water where its activity is given
NOWHERE = -1e6  # ln activity of an absent component: whatever is made of it vanishes
SIGNED_LAST = 1e6  # H^+ is scarce in neutral water, yet what a new precipitate leaves scarce is its metal
NOTHING = 1e-11  # stoichiometry below this is a rounding remainder
RUNG = 1e4  # digits that a badly chosen pivot may cost, as a factor


@kernel(inner=True, forceinline=True)
def eliminate(matrices, bench, presence, entering):
    """Choose a pivot for every tie and every mineral marked present and reduce their rows.

    presence (mineral,) int8 is read (1 = present); bench.place must hold GONE for what is absent of the
    basis; free and place are set for all others.  entering: the mineral that was marked last, -1 for none.
    Where the phase rule leaves no room for it, one of those it can replace goes (see `leaving`); any other
    mineral whose ties follow from the rest is marked absent.
    Returns (rows that hold, free ones of the basis).
    """
    place = bench.place
    n = np.int64(-1)  # a literal would have numba compile everything below once more for it
    while n < 0:
        n = tie_all(matrices, bench, presence, entering)
    f = 0
    for k in range(place.shape[0]):
        if place[k] == 0:
            place[k] = f
            bench.free[f] = k
            f += 1
    if matrices.given:
        bench.free[f] = place.shape[0] - 1  # beside the free ones: its activity counts, its balance does not
    return n, f


@kernel(inner=True, forceinline=True)
def tie_all(matrices, bench, presence, entering):
    """Tie what always holds, then every mineral marked present, the entering one last.

    Returns the number of rows tied, -1 where a mineral had to leave.
    """
    place = bench.place
    for k in range(place.shape[0]):
        if place[k] > GIVEN:
            place[k] = 0
    n = np.int64(0)
    for row in range(matrices.minerals, matrices.solid.shape[0]):
        if bench.tied[row] and tie(matrices, bench, row, n):
            n += 1
    for mineral in range(presence.shape[0]):
        if presence[mineral] == 1 and mineral != entering:
            if tie(matrices, bench, mineral, n):
                n += 1
            else:
                presence[mineral] = 0
    if entering >= 0 and presence[entering] == 1:
        if tie(matrices, bench, entering, n):
            n += 1
        else:
            out = leaving(bench, n, entering)
            if out < 0:
                presence[entering] = 0
            elif out == n:
                presence[entering] = bench.exit[0]
            else:
                presence[bench.active[out]] = bench.exit[0]
                return -1
    return n


@kernel(inner=True, forceinline=True)
def tie(matrices, bench, mineral, n):
    """Add one row to the n that are eliminated; False where it follows from theirs.

    Then turns[n] holds what combination of the rows before it undoes it.
    """
    solid, turns, rows, place, pivot = matrices.solid, bench.turns, bench.rows, bench.place, bench.pivot
    components = solid.shape[1]
    for k in range(components):
        rows[n, k] = solid[mineral, k]
    for m in range(n):
        turns[n, m] = 0.0
    turns[n, n] = 1.0
    for r in range(n):
        share = rows[n, pivot[r]]
        if share != 0.0:
            for k in range(components):
                rows[n, k] -= share * rows[r, k]
            for m in range(n):
                turns[n, m] -= share * turns[r, m]
            rows[n, pivot[r]] = 0.0
    best, scarcest = -1, 0.0
    for k in range(components):
        if abs(rows[n, k]) > NOTHING and place[k] == 0:
            # what runs out first as the mineral forms
            scarcity = bench.abundance[k] / abs(rows[n, k])
            if k == matrices.signed:
                scarcity *= SIGNED_LAST
            if best < 0 or scarcity < scarcest:
                best, scarcest = k, scarcity
    if best < 0:
        return False
    scale = 1.0 / rows[n, best]
    for k in range(components):
        value = rows[n, k] * scale
        rows[n, k] = value if abs(value) > NOTHING else 0.0
    for m in range(n + 1):
        turns[n, m] *= scale
    for r in range(n):
        share = rows[r, best]
        turns[r, n] = 0.0
        if share != 0.0:
            for k in range(components):
                value = rows[r, k] - share * rows[n, k]
                rows[r, k] = value if abs(value) > NOTHING else 0.0
            for m in range(n + 1):
                turns[r, m] -= share * turns[n, m]
    bench.active[n] = mineral
    pivot[n] = best
    place[best] = -1 - n
    return True


@kernel(inner=True, forceinline=True)
def leaving(bench, n, entering):
    """Which of n rows runs out (or fills up) first as a mineral made of them enters; -1 for none.

    turns[n] holds the combination that undoes the entering one, which grows from nothing or, where
    bench.exit[1] says that it was full, shrinks.  The answer is a row, n where the entering one itself comes
    to its other end first, and bench.exit[0] the mark that its mineral gets: 0 absent, 2 full.
    """
    out, least, grows = -1, 0.0, 1.0
    if bench.exit[1] == 2:
        grows = -1.0
    if bench.upper[entering] < 1e300:
        out, least = n, bench.upper[entering]
        bench.exit[0] = 2 if grows > 0.0 else 0
    for m in range(n):
        spent = -grows * bench.turns[n, m]
        mineral = bench.active[m]
        if mineral >= bench.solid.shape[0]:
            continue  # a tie always holds
        amount = bench.solid[mineral] + bench.gained[mineral]
        if spent > NOTHING:
            reach, mark = amount / spent, 0
        elif spent < -NOTHING and bench.upper[mineral] < 1e300:
            reach, mark = (bench.upper[mineral] - amount) / -spent, 2
        else:
            continue
        if out < 0 or reach < least:
            out, least = m, reach
            bench.exit[0] = mark
    return out


@kernel(inner=True, forceinline=True)
def reduce_species(matrices, bench, active, free):
    """Write every species in the free components alone: its stoichiometry and its constant."""
    stoichiometry, ln_k = matrices.stoichiometry, matrices.ln_k
    reduced, reduced_ln_k, rows = bench.reduced, bench.reduced_ln_k, bench.rows
    species = ln_k.shape[0]
    for s in range(species):
        reduced_ln_k[s] = ln_k[s]
    for k in range(stoichiometry.shape[0]):
        if bench.place[k] == GONE:
            add_row(reduced_ln_k, NOWHERE, stoichiometry, k)
    for r in range(active):
        add_row(reduced_ln_k, pivot_constant(matrices, bench, active, r), stoichiometry, bench.pivot[r])
    for j in range(free + matrices.given):
        k = bench.free[j]
        for s in range(species):
            reduced[j, s] = stoichiometry[k, s]
        for r in range(active):
            share = rows[r, k]
            if share != 0.0:
                p = bench.pivot[r]
                for s in range(species):
                    value = reduced[j, s] - share * stoichiometry[p, s]
                    reduced[j, s] = value if abs(value) > NOTHING else 0.0


@kernel(inner=True, forceinline=True)
def pivot_constant(matrices, bench, active, row):
    """The ln activity of a pivot where all free components have ln activity 0."""
    value = 0.0
    for m in range(active):
        value += bench.turns[row, m] * matrices.solid_ln_k[bench.active[m]]
    return value


@kernel(inner=True, forceinline=True)
def reduce_totals(matrices, bench, active, free):
    """Subtract the pivots' totals from the free ones', keeping what rounding would lose."""
    rows, total, missed = bench.rows, bench.total, bench.right
    for j in range(free):
        k = bench.free[j]
        whole = True
        for r in range(active):
            twice = 2.0 * rows[r, k]
            whole = whole and twice == math.floor(twice)
            missed[r] = 0.0
        if not whole:
            refine_column(matrices, bench, active, k)
        value = total[k]
        lost = 0.0
        for r in range(active):
            amount = total[bench.pivot[r]]
            term, rest = two_product(-rows[r, k], amount)
            value, rounded = two_sum(value, term)
            lost += rounded + rest - missed[r] * amount
        bench.reduced_total[j] = value + lost


@kernel(inner=True)
def refine_column(matrices, bench, active, k):
    """Fill bench.right with what the reduced rows' coefficients of one of the basis lost in rounding.

    Thirds and tenths are no doubles, and their totals may cancel to a ten thousandth. The exact coefficients
    R give S = S_pivot R with the minerals' own S, of small numbers; what is left of that, times the turns.
    """
    for a in range(active):
        mineral = bench.active[a]
        left, lost = matrices.solid[mineral, k], 0.0
        for r in range(active):
            term, rest = two_product(-matrices.solid[mineral, bench.pivot[r]], bench.rows[r, k])
            left, rounded = two_sum(left, term)
            lost += rounded + rest
        bench.side[a] = left + lost
    for r in range(active):
        bench.right[r] = 0.0
        for a in range(active):
            bench.right[r] += bench.turns[r, a] * bench.side[a]


@kernel(inner=True, forceinline=True)
def pivots_follow(matrices, bench, active, free):
    """Set the ln activities of the pivots from those of the free components."""
    for r in range(active):
        value = pivot_constant(matrices, bench, active, r)
        for j in range(free + matrices.given):
            value -= bench.rows[r, bench.free[j]] * bench.ln_activity[bench.free[j]]
        bench.ln_activity[bench.pivot[r]] = value


@kernel(inner=True, forceinline=True)
def scarcer_free(matrices, bench, active, free, rung):
    """Whether a free one is scarcer, by the factor rung, than a pivot it is tied to."""
    for r in range(active):
        pivot = bench.abundance[bench.pivot[r]]
        for j in range(free):
            k = bench.free[j]
            share = abs(bench.rows[r, k])
            if k != matrices.signed and share != 0.0 and bench.abundance[k] * rung < share * pivot:
                return True
    return False
