"""The marks of minerals: the totals they leave, what contradicts them, how they change (equations.md, 9)."""

from __future__ import annotations

import math

from gossan.base.jit import kernel
from gossan.chemistry.kernel.cold import ABSENT, add_up
from gossan.chemistry.kernel.nullspace import GONE, NOWHERE

OWED = 1e-12  # mol/kg: an absent component may be negative by what rounding leaves of 100 mol/kg, no more
SLACK = 1e-11  # ln of a saturation ratio that counts as none: between rounding and what is asked for


@kernel(inner=True)
def fill_totals(matrices, bench, dissolved, solid, upper, presence):
    """Fill bench.total with what is dissolved or must dissolve under these marks.

    A mineral that is present adds nothing: its own formula drops out of the reduced totals exactly.
    """
    for k in range(dissolved.shape[0]):
        bench.total[k] = dissolved[k]
    for mineral in range(solid.shape[0]):
        given = 0.0
        if presence[mineral] == 0:
            given = solid[mineral]
        elif presence[mineral] == 2:
            given = solid[mineral] - upper[mineral]
        if given != 0.0:
            for k in range(dissolved.shape[0]):
                bench.total[k] += matrices.solid[mineral, k] * given


@kernel(inner=True)
def set_totals(matrices, bench, dissolved, solid, upper, presence):
    """Fill bench.total and mark the components that are absent under these marks."""
    fill_totals(matrices, bench, dissolved, solid, upper, presence)
    for k in range(dissolved.shape[0]):
        bench.place[k] = 0
        if k == matrices.signed or bench.total[k] > ABSENT:
            continue
        held = False
        for mineral in range(solid.shape[0]):
            held = held or (presence[mineral] == 1 and matrices.solid[mineral, k] != 0.0)
        if held:
            continue
        for mineral in range(solid.shape[0]):
            if presence[mineral] == 2 and matrices.solid[mineral, k] != 0.0:
                presence[mineral] = 1  # nothing else brings this component into the water: it must dissolve
                held = True
        if not held:
            bench.place[k] = GONE
    for k in range(dissolved.shape[0]):
        if bench.place[k] == GONE:
            bench.ln_activity[k] = NOWHERE
        elif not bench.ln_activity[k] > -1e5:
            total = bench.total[k]
            bench.ln_activity[k] = math.log(total if total > 1e-12 else 1e-12)


@kernel(inner=True, forceinline=True)
def lacking(bench):
    """Whether a component that counts as absent is in truth owed, or no number at all."""
    for k in range(bench.total.shape[0]):
        if bench.place[k] == GONE and not bench.total[k] >= -OWED:
            return True
    return False


@kernel(inner=True, forceinline=True)
def weigh(matrices, bench, active, solid, upper, presence):
    """Fill the amounts gained and ln saturation ratios; returns the marks most at fault, -1 for none.

    Returns (mineral to drop or fill, mineral to add or loosen, the first at fault): the largest negative
    amount or excess, the largest contradiction of a saturation ratio, and the least index of all.
    """
    add_up(matrices, bench)
    drop, add, first = -1, -1, presence.shape[0]
    worst_amount, worst_ratio = 0.0, SLACK
    for mineral in range(solid.shape[0]):
        ratio = -matrices.solid_ln_k[mineral]
        for k in range(matrices.solid.shape[1]):
            if matrices.solid[mineral, k] != 0.0:
                ratio += matrices.solid[mineral, k] * bench.ln_activity[k]
        bench.saturation[mineral] = ratio
        bench.gained[mineral] = 0.0
        wrong = SLACK
        if presence[mineral] == 0:
            bench.gained[mineral] = -solid[mineral]
            wrong = ratio if upper[mineral] > 0.0 else SLACK
        elif presence[mineral] == 2:
            bench.gained[mineral] = upper[mineral] - solid[mineral]
            wrong = -ratio
        if wrong > SLACK and mineral < first:
            first = mineral
        if wrong > worst_ratio:
            worst_ratio, add = wrong, mineral
    for m in range(active):
        mineral = bench.active[m]
        gained = 0.0
        for r in range(active):
            p = bench.pivot[r]
            gained += bench.turns[r, m] * (bench.total[p] - bench.sums[p])
        bench.gained[mineral] = gained
        amount = solid[mineral] + gained
        wrong = amount if amount < upper[mineral] - amount else upper[mineral] - amount
        if wrong < 0.0 and mineral < first:
            first = mineral
        if wrong < worst_amount:
            worst_amount, drop = wrong, mineral
    return drop, add, first


@kernel(inner=True, forceinline=True)
def mark(drop, add, solid, presence, bench):
    """Change the marks that weigh found at fault; returns the mineral that enters, -1 for none."""
    if drop >= 0:
        presence[drop] = 0 if solid[drop] + bench.gained[drop] < 0.0 else 2
    if add >= 0:
        presence[add] = 1
    return add
