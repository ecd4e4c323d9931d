"""Rows that hold take the scarce out of the problem, in pairs of doubles (equations.md, 10 and 80)."""

from __future__ import annotations

from gossan.base.jit import kernel
from gossan.chemistry.kernel.doubled import add, over, times

NOTHING = 1e-20  # a coefficient that is left of ones which cancelled
GONE = -1e5  # ln activity below which a component is not there
LAW = 1e-15  # what a ln activity coefficient of size 1 is worth: half a dozen roundings, one in a difference
DOUBLED = 1e-30  # what a term is worth in doubled precision, over a sum of hundreds


@kernel(inner=True)
def sort_by_abundance(matrices, desk):
    """Fill desk.order: the basis, the scarcest in solution first; what is not there is left out.

    Returns how many there are.
    """
    count = 0
    for b in range(desk.x.shape[0] - matrices.given):
        if desk.x[b] < GONE:
            continue
        abundance = 0.0
        for s in range(desk.molality.shape[0]):
            abundance += abs(matrices.stoichiometry[b, s]) * desk.molality[s]
        desk.abundance[b] = abundance
        place = count
        while place > 0 and desk.abundance[desk.order[place - 1]] > abundance:
            desk.order[place] = desk.order[place - 1]
            place -= 1
        desk.order[place] = b
        count += 1
    return count


@kernel(inner=True)
def eliminate_tied(desk, count):
    """Solve the tied rows for the scarcest of the basis (Gauss-Jordan); returns how many stay free."""
    free = 0
    for place in range(count):
        b = desk.order[place]
        best = -1
        for r in range(desk.pivot.shape[0]):
            size = abs(desk.rows[r, b]) if desk.pivot[r] == -1 else 0.0
            if size > NOTHING and (best < 0 or size > abs(desk.rows[best, b])):
                best = r
        if best < 0:
            desk.free[free] = b
            free += 1
            continue
        desk.pivot[best] = b
        head, head_low = desk.rows[best, b], desk.rows_low[best, b]
        for c in range(desk.rows.shape[1]):
            desk.rows[best, c], desk.rows_low[best, c] = over(
                desk.rows[best, c], desk.rows_low[best, c], head, head_low
            )
        desk.right[best], desk.right_low[best] = over(desk.right[best], desk.right_low[best], head, head_low)
        for r in range(desk.pivot.shape[0]):
            share, share_low = -desk.rows[r, b], -desk.rows_low[r, b]
            if r == best or desk.pivot[r] == -2 or share == 0.0:
                continue
            for c in range(desk.rows.shape[1]):
                if desk.rows[best, c] != 0.0:
                    term, term_low = times(desk.rows[best, c], desk.rows_low[best, c], share, share_low)
                    value, value_low = add(desk.rows[r, c], desk.rows_low[r, c], term, term_low)
                    there = abs(value) > NOTHING
                    desk.rows[r, c] = value if there else 0.0
                    desk.rows_low[r, c] = value_low if there else 0.0
            term, term_low = times(desk.right[best], desk.right_low[best], share, share_low)
            desk.right[r], desk.right_low[r] = add(desk.right[r], desk.right_low[r], term, term_low)
    return free


@kernel(inner=True)
def follow(desk, free):
    """Set what the tied rows eliminated exactly to what the free ones make of it."""
    for r in range(desk.pivot.shape[0]):
        if desk.pivot[r] < 0:
            continue
        value, value_low = desk.right[r], desk.right_low[r]
        for j in range(free):
            b = desk.free[j]
            if desk.rows[r, b] != 0.0:
                term, term_low = times(desk.rows[r, b], desk.rows_low[r, b], desk.x[b], 0.0)
                value, value_low = add(value, value_low, -term, -term_low)
        desk.x[desk.pivot[r]], desk.x_low[desk.pivot[r]] = value, value_low


@kernel(inner=True)
def reduced_balances(matrices, desk, free):
    """Fill what the balances of the free lack, how well that is known, and the species in the free."""
    for j in range(free):
        b = desk.free[j]
        value, value_low = desk.total[b], desk.total_low[b]
        for r in range(desk.pivot.shape[0]):
            if desk.pivot[r] >= 0 and desk.rows[r, b] != 0.0:
                p = desk.pivot[r]
                term, term_low = times(desk.rows[r, b], desk.rows_low[r, b], desk.total[p], desk.total_low[p])
                value, value_low = add(value, value_low, -term, -term_low)
        size, blurred = abs(value), 0.0
        for s in range(desk.molality.shape[0]):
            part, part_low = matrices.stoichiometry[b, s], 0.0
            for r in range(desk.pivot.shape[0]):
                if desk.pivot[r] >= 0 and desk.rows[r, b] != 0.0:
                    share = matrices.stoichiometry[desk.pivot[r], s]
                    if share != 0.0:
                        term, term_low = times(desk.rows[r, b], desk.rows_low[r, b], share, 0.0)
                        part, part_low = add(part, part_low, -term, -term_low)
            desk.reduced[j, s] = part if abs(part) > NOTHING else 0.0
            if desk.reduced[j, s] != 0.0:
                term, term_low = times(part, part_low, desk.molality[s], desk.molality_low[s])
                value, value_low = add(value, value_low, -term, -term_low)
                size += abs(term)
                blurred += abs(term) * abs(desk.ln_gamma[s])
        desk.short[j] = value
        desk.doubt[j] = DOUBLED * size + LAW * blurred
