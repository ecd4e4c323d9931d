"""Minerals that are present take components out of the problem (equations.md, 10-12).

A mineral at equilibrium ties the activities of its components together.  Gauss-Jordan elimination on the
stoichiometry of the minerals present solves these ties for one component each, the least abundant in
solution, and leaves a smaller problem in the free components.  Totals are subtracted here, once, and not
in every residual: that is what keeps free sulfide right where zinc and sulfide nearly cancel.
"""

from __future__ import annotations

from gossan.base.jit import kernel

GONE = -99  # place of a component that is absent
SIGNED_LAST = 1e6  # H^+ is scarce in neutral water, yet what a new precipitate will leave scarce is its metal
NOTHING = 1e-11  # stoichiometry below this is a rounding remainder


@kernel
def eliminate(matrices, bench, presence, count):
    """Choose a pivot for every mineral marked present and reduce their rows; returns how many stay.

    presence (mineral,) int8 is read (1 = present); one whose ties follow from the others' is set to 0.
    bench.place must hold GONE for absent components; free and place are set for all others.
    """
    solid = matrices.solid
    components = solid.shape[1]
    turns, rows = bench.turns, bench.rows
    for k in range(components):
        if bench.place[k] != GONE:
            bench.place[k] = 0
    n = 0
    for mineral in range(presence.shape[0]):
        if presence[mineral] != 1:
            continue
        for k in range(components):
            rows[n, k] = solid[mineral, k]
        for m in range(count):
            turns[n, m] = 0.0
        turns[n, n] = 1.0
        for r in range(n):
            share = rows[n, bench.pivot[r]]
            if share != 0.0:
                for k in range(components):
                    rows[n, k] -= share * rows[r, k]
                for m in range(n):
                    turns[n, m] -= share * turns[r, m]
                rows[n, bench.pivot[r]] = 0.0
        best, scarcest = -1, 0.0
        for k in range(components):
            if (
                abs(rows[n, k]) > NOTHING
                and bench.place[k] == 0
            ):
                scarcity = bench.abundance[k] * (SIGNED_LAST if k == matrices.signed else 1.0)
                if best < 0 or scarcity < scarcest:
                    best, scarcest = k, scarcity
        if best < 0:
            presence[mineral] = 0
            continue
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
        bench.pivot[n] = best
        bench.place[best] = -1 - n
        n += 1
    f = 0
    for k in range(components):
        if bench.place[k] == 0:
            bench.place[k] = f
            bench.free[f] = k
            f += 1
    return n


@kernel
def reduce_species(matrices, bench, active, free):
    """Write every species in the free components alone: its stoichiometry and its constant."""
    entry = 0
    row = bench.weight
    for s in range(matrices.ln_k.shape[0]):
        bench.reduced_start[s] = entry
        ln_k = matrices.ln_k[s]
        for j in range(free):
            row[j] = 0.0
        for e in range(matrices.start[s], matrices.start[s + 1]):
            value = matrices.coefficient[e]
            place = bench.place[matrices.member[e]]
            if place >= 0:
                row[place] += value
            elif place == GONE:
                ln_k = -1e6  # a species of an absent component: its molality underflows to zero
            else:
                r = -1 - place
                for m in range(active):
                    ln_k += value * bench.turns[r, m] * matrices.solid_ln_k[bench.active[m]]
                for j in range(free):
                    row[j] -= value * bench.rows[r, bench.free[j]]
        bench.reduced_ln_k[s] = ln_k
        for j in range(free):
            if abs(row[j]) > NOTHING:
                bench.reduced_member[entry] = j
                bench.reduced_coefficient[entry] = row[j]
                entry += 1
    bench.reduced_start[matrices.ln_k.shape[0]] = entry


@kernel
def reduce_totals(bench, active, free):
    """Subtract the pivots' totals from the free ones', keeping what rounding would lose (two-sum)."""
    for j in range(free):
        value = bench.total[bench.free[j]]
        lost = 0.0
        for r in range(active):
            term = -bench.rows[r, bench.free[j]] * bench.total[bench.pivot[r]]
            both = value + term
            part = both - value
            lost += (value - (both - part)) + (term - part)
            value = both
        bench.reduced_total[j] = value + lost


@kernel
def pivots_follow(matrices, bench, active, free):
    """Set the ln activities of the pivots from those of the free components."""
    for r in range(active):
        value = 0.0
        for m in range(active):
            value += bench.turns[r, m] * matrices.solid_ln_k[bench.active[m]]
        for j in range(free):
            value -= bench.rows[r, bench.free[j]] * bench.ln_activity[bench.free[j]]
        bench.ln_activity[bench.pivot[r]] = value
