"""The marks of minerals: the totals they leave, what contradicts them, how they change (equations.md, 9)."""

from __future__ import annotations

from gossan.base.jit import kernel
from gossan.chemistry.kernel.cold import ABSENT, add_up, level, valences_follow
from gossan.chemistry.kernel.nullspace import GIVEN, GONE, NOWHERE

OWED = 1e-12  # mol/kg: an absent component may be negative by what rounding leaves of 100 mol/kg, no more
SLACK = 1e-11  # ln of a saturation ratio that counts as none: between rounding and what is asked for


@kernel(inner=True)
def fill_totals(matrices, bench, dissolved, solid, upper, presence):
    """Fill bench.total with what is dissolved or must dissolve under these marks.

    A mineral that is present adds nothing: its own formula drops out of the reduced totals exactly.  All is
    counted in conserved components; the ties share it out among the valences.
    """
    components = matrices.conserved.shape[0]
    for k in range(components):
        bench.total[k] = dissolved[k]
    for k in range(components, bench.total.shape[0]):
        bench.total[k] = 0.0
    for mineral in range(solid.shape[0]):
        given = 0.0
        if presence[mineral] == 0:
            given = solid[mineral]
        elif presence[mineral] == 2:
            given = solid[mineral] - upper[mineral]
        if given != 0.0:
            for k in range(components):
                bench.total[k] += matrices.supplied[mineral, k] * given


@kernel(inner=True)
def set_totals(matrices, bench, dissolved, solid, upper, presence):
    """Fill bench.total, mark what is absent of the basis and which ties hold (equations.md, 50 to 52)."""
    components = matrices.conserved.shape[0]
    fill_totals(matrices, bench, dissolved, solid, upper, presence)
    for k in range(components):
        bench.place[k] = 0
        if k == matrices.signed or k == matrices.electron or bench.total[k] > ABSENT:
            continue
        held = False
        for row in range(matrices.solid.shape[0]):
            always = row >= matrices.minerals or presence[row] == 1
            held = held or (always and matrices.supplied[row, k] != 0.0)
        if held:
            continue
        for mineral in range(solid.shape[0]):
            if presence[mineral] == 2 and matrices.supplied[mineral, k] != 0.0:
                presence[mineral] = 1  # nothing else brings this component into the water: it must dissolve
                held = True
        if not held:
            bench.place[k] = GONE
    if matrices.given:
        bench.place[bench.place.shape[0] - 1] = GIVEN
    for row in range(matrices.minerals, matrices.solid.shape[0]):
        bench.tied[row] = 1
    for v in range(matrices.first.shape[0]):
        first = matrices.first[v]
        absent = first >= 0 and bench.place[first] == GONE
        bench.place[components + v] = GONE if absent else 0
        bench.tied[matrices.minerals + v] = 0 if absent else 1
    arrived = False
    for k in range(components):
        if bench.place[k] == GONE:
            bench.ln_activity[k] = NOWHERE
        elif not bench.ln_activity[k] > -1e5:
            level(matrices, bench, k, bench.total[k])
            arrived = True
    for v in range(matrices.first.shape[0]):
        if bench.place[components + v] == GONE:
            bench.ln_activity[components + v] = NOWHERE
    if arrived:
        valences_follow(matrices, bench)


@kernel(inner=True, forceinline=True)
def lacking(bench):
    """Whether a component that counts as absent is in truth owed, or no number at all."""
    for k in range(bench.dissolved.shape[0]):
        if bench.place[k] == GONE and not bench.total[k] >= -OWED:
            return True
    return False


@kernel(inner=True, forceinline=True)
def weigh(matrices, bench, active, solid, upper, presence, rounding):
    """Fill the amounts gained and ln saturation ratios; returns the marks most at fault, -1 for none.

    Returns (mineral to drop or fill, mineral to add or loosen, the first at fault): the largest negative
    amount or excess, the largest contradiction of a saturation ratio, and the least index of all.
    rounding: relative, of the totals that an amount is the difference of; by so much it may be negative.
    """
    add_up(matrices.stoichiometry, bench)
    drop, add, first = -1, -1, presence.shape[0]
    worst_amount, worst_ratio = 0.0, 0.0
    for mineral in range(solid.shape[0]):
        ratio, ions = -matrices.solid_ln_k[mineral], 0.0
        for k in range(matrices.solid.shape[1]):
            if matrices.solid[mineral, k] != 0.0:
                ratio += matrices.solid[mineral, k] * bench.ln_activity[k]
                ions += abs(matrices.solid[mineral, k])
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
        # an ion's worth, so that of two forms of the same matter the one of larger formula has no advantage
        if wrong > SLACK and wrong / ions > worst_ratio:
            worst_ratio, add = wrong / ions, mineral
    for m in range(active):
        mineral = bench.active[m]
        if matrices.minerals <= mineral < matrices.minerals + matrices.first.shape[0]:
            continue  # a couple: what changed its valence stays dissolved
        gained, size = 0.0, 0.0
        for r in range(active):
            p = bench.pivot[r]
            gained += bench.turns[r, m] * (bench.total[p] - bench.sums[p])
            size += abs(bench.turns[r, m]) * (abs(bench.total[p]) + bench.abundance[p])
        bench.gained[mineral] = gained
        if mineral >= matrices.minerals:
            continue  # there is no end of an open gas
        amount = solid[mineral] + gained
        wrong = amount if amount < upper[mineral] - amount else upper[mineral] - amount
        wrong += rounding * size
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
        bench.exit[1] = presence[add]
        presence[add] = 1
    return add
