"""Which minerals are present, and how much of each: complementarity in one water (equations.md, 9).

Every mineral is absent (0, and then undersaturated), present (1, and then saturated) or full (2: it may
only dissolve, has lost nothing, and may be supersaturated).  An active set of these marks is guessed, the
water solved with it, and the marks that contradict the answer are changed, until none does.
"""

from __future__ import annotations

import math

import numpy as np

from gossan.base.jit import kernel
from gossan.base.outcome import CYCLING, DIVERGED, ITERATIONS, LACKING, SINGULAR, SOLVED
from gossan.chemistry.kernel.activity import activity_coefficients
from gossan.chemistry.kernel.newton import (
    balances,
    convex_step,
    dual_energy,
    far_merit,
    far_step,
    molalities,
    near_step,
)
from gossan.chemistry.kernel.nullspace import (
    GONE,
    NOWHERE,
    eliminate,
    pivots_follow,
    reduce_species,
    reduce_totals,
)
from gossan.chemistry.kernel.vectors import add_row, both_sums, dot, exponentials

ABSENT = 1e-40  # mol/kg: less than one molecule in a lake; below, a component is left out of the solve
OWED = 1e-12  # mol/kg: an absent component may be negative by what rounding leaves of 100 mol/kg, no more
SETTLED = 1e-6  # a last step below this leaves an error of about its square
EXACT = 8e-16  # the balances agree to the last digit: no step can improve on it
NEAR = 0.3  # mismatch below which the balances' own Newton step converges
LOOK = 1e-2  # mismatch below which wrong marks already show
SLACK = 1e-11  # ln of a saturation ratio that counts as none: between rounding and what is asked for
PASSES = 12  # of the continued fraction in a cold start
NEWTON_LIMIT = 300  # steps for one set of marks
BRIM = 100.0  # mol/kg: no water holds more; far from the answer the sums may claim it
LEAST_SHARE = 0.1  # of a step: less is not worth trying
STALLED = 0.9  # a far step that leaves more of its merit than this was hardly worth it
FAR, CONVEX = 0, 1  # the two ways from afar


@kernel(inner=True)
def survey(matrices, bench, ionic_strength):
    """Fill bench.molality, sums and abundance from all ln activities; returns the ionic strength made."""
    activity_coefficients(
        matrices.model, matrices.debye_hueckel, matrices.charge_squared, matrices.neutral, matrices.size,
        ionic_strength, bench.ln_gamma, bench.slope,
    )  # fmt: skip
    exponent, ln_k, ln_gamma = bench.exponent, matrices.ln_k, bench.ln_gamma
    for s in range(exponent.shape[0]):
        exponent[s] = ln_k[s] - ln_gamma[s]
    for k in range(bench.sums.shape[0]):
        add_row(exponent, bench.ln_activity[k], matrices.stoichiometry, k)
    exponentials(exponent, bench.bits, bench.molality)
    add_up(matrices, bench)
    return 0.5 * dot(matrices.charge_squared, bench.molality)


@kernel(inner=True)
def add_up(matrices, bench):
    """Fill bench.sums, abundance, positive and negative (by component) from bench.molality."""
    for k in range(bench.sums.shape[0]):
        made, unmade = both_sums(matrices.stoichiometry, k, bench.molality)
        bench.sums[k] = made - unmade
        bench.abundance[k] = made + unmade
        bench.positive[k] = made
        bench.negative[k] = unmade


@kernel(inner=True)
def approach(matrices, bench, dissolved):
    """Bring a cold water near its balances (equations.md, 19); returns the ionic strength.

    Damped continued fractions: every component is multiplied by the ratio of the two sides of its balance,
    all at once, the logarithm divided by how crowded its species are.
    Source: after Carrayrou, Mose & Behra (2002), AIChE J. 48, 894-904, who damp the ratio otherwise.
    """
    components = bench.ln_activity.shape[0]
    for k in range(components):
        if k == matrices.signed:
            bench.ln_activity[k] = math.log(1e-7)
        elif bench.total[k] > ABSENT:
            bench.ln_activity[k] = math.log(dissolved[k] if dissolved[k] > 1e-12 else 1e-12)
        else:
            bench.ln_activity[k] = NOWHERE
    made = 0.0
    for _ in range(PASSES):
        made = survey(matrices, bench, 0.0)
        # a component of crowded species moves less: all components of a species move at once
        share = bench.share
        for s in range(share.shape[0]):
            share[s] = 0.0
        for k in range(components):
            for s in range(share.shape[0]):
                share[s] += abs(matrices.stoichiometry[k, s]) * bench.molality[s]
        for k in range(components):
            crowd = 0.0
            for s in range(share.shape[0]):
                crowd += abs(matrices.stoichiometry[k, s]) * share[s]
            bench.weight[k] = crowd
        for k in range(components):
            if bench.ln_activity[k] == NOWHERE:
                continue
            total = dissolved[k] if dissolved[k] > 1e-12 or k == matrices.signed else 1e-12
            positive = bench.positive[k] - (total if total < 0.0 else 0.0)
            negative = bench.negative[k] + (total if total > 0.0 else 0.0)
            ratio = math.log((negative + 1e-300) / (positive + 1e-300))
            crowd = bench.weight[k] / bench.abundance[k] if bench.abundance[k] > 0.0 else 1.0
            bench.ln_activity[k] += ratio / crowd
    return made if made < 1.0 else 1.0


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


@kernel(inner=True, forceinline=True)
def reduce_all(matrices, bench, dissolved, solid, upper, presence, entering):
    """Eliminate the present minerals and reduce totals and species; returns (minerals, free components)."""
    active, free = eliminate(matrices, bench, presence, entering)
    # minerals that found no room were marked absent or full: what they hold belongs to the totals now
    fill_totals(matrices, bench, dissolved, solid, upper, presence)
    reduce_species(matrices, bench, active, free)
    reduce_totals(bench, active, free)
    return active, free


@kernel(inner=True)
def begin(matrices, bench, dissolved, solid, upper, presence):
    """Mark what is there, bring a cold water near its balances and survey it; returns the ionic strength."""
    for mineral in range(solid.shape[0]):
        presence[mineral] = 1 if solid[mineral] > 0.0 else 0
    set_totals(matrices, bench, dissolved, solid, upper, presence)
    for k in range(dissolved.shape[0]):
        if bench.place[k] != GONE and bench.total[k] <= ABSENT:
            bench.total[k] = 1e-12
    ionic_strength = approach(matrices, bench, dissolved)
    set_totals(matrices, bench, dissolved, solid, upper, presence)
    survey(matrices, bench, ionic_strength)
    return ionic_strength


@kernel(inner=True)
def settle(matrices, bench, dissolved, solid, upper, presence, ionic_strength, cold):
    """Bring one water to equilibrium with its minerals; returns (outcome, ionic strength, steps).

    dissolved (component,) mol/kg; solid, upper (mineral,) mol/kg; presence (mineral,) int8 and
    bench.ln_activity are the start (unless cold) and the answer; bench.gained and bench.sums hold what
    each mineral gained and what is dissolved afterwards.
    """
    if cold:
        ionic_strength = begin(matrices, bench, dissolved, solid, upper, presence)
    steps, changes, entering = 0, 0, np.int64(-1)
    patience = 2 * (solid.shape[0] + 2)
    while changes < 40 * patience:
        set_totals(matrices, bench, dissolved, solid, upper, presence)
        if lacking(bench):
            return LACKING, ionic_strength, steps
        active, free = reduce_all(matrices, bench, dissolved, solid, upper, presence, entering)
        # Going round: from now on one change at a time, of the first mark at fault, once all is settled.
        # For linear problems of this kind that ends (Murty 1974).
        one_by_one = changes > patience
        looked = one_by_one
        drop, add, first = -1, -1, -1
        last, best, factor, before = 1.0, math.inf, 1.0, ionic_strength
        mode, near, worse, slow = FAR, NEAR, math.inf, 0
        code = ITERATIONS
        for newton in range(NEWTON_LIMIT):
            made = molalities(matrices, bench, free, ionic_strength)
            mismatch = balances(bench, free)
            done = last < SETTLED or (
                mismatch < EXACT and abs(made - ionic_strength) < 1e-13 * made + 1e-30
            )  # fmt: skip
            if done or (mismatch < LOOK and not looked):
                looked = True
                pivots_follow(matrices, bench, active, free)
                drop, add, first = weigh(matrices, bench, active, solid, upper, presence)
                wrong = drop >= 0 or (add >= 0 and abs(bench.saturation[add]) > 0.1)
                if done or wrong:
                    code = SOLVED if done else CYCLING
                    break
            steps += 1
            rise = made - ionic_strength
            found = False
            if mismatch > worse:
                near *= 0.1  # the near step was not near enough
            worse = math.inf
            if mismatch < near:
                found, rise = near_step(matrices, bench, free, rise)
                mode, worse = FAR, mismatch
            if not found:
                merit, lost = far_merit(bench, free), 0.0
                if mode == CONVEX:
                    merit, lost = dual_energy(bench, free)
                if merit > best + lost:
                    # the step went too far: back by half of it, or over to the way that always descends
                    shrink = 0.5 if factor > LEAST_SHARE else 1.0
                    for j in range(free):
                        bench.ln_activity[bench.free[j]] -= shrink * bench.taken[j]
                        bench.taken[j] *= 1.0 - shrink
                    factor *= 0.5
                    ionic_strength = before
                    if shrink == 1.0:
                        best, factor = math.inf, 1.0
                        mode = CONVEX if mode == FAR else FAR
                    continue
                if mode == FAR:
                    slow = slow + 1 if merit > STALLED * best else 0
                    if slow >= 3:
                        mode, slow = CONVEX, 0
                        merit, lost = dual_energy(bench, free)
                best, factor = merit, 1.0
                going = far_step(bench, free) if mode == FAR else convex_step(bench, free)
                if not going:
                    code = SINGULAR
                    break
                if mode == CONVEX:
                    rise = 0.0
            largest = 0.0
            for j in range(free):
                size = abs(bench.right[j])
                if not size <= largest:
                    largest = size
            if not largest < 1e30:
                code = DIVERGED
                break
            cap = 30.0 if newton < 25 else (3.0 if newton < 50 else 1.0)
            share = cap / largest if largest > cap else 1.0
            for j in range(free):
                bench.taken[j] = share * bench.right[j]
                bench.ln_activity[bench.free[j]] += bench.taken[j]
            risen = ionic_strength + share * rise
            if risen > 5.0 * ionic_strength:
                risen = 5.0 * ionic_strength
            if risen < 0.2 * ionic_strength:
                risen = 0.2 * ionic_strength
            risen = risen if risen > 1e-12 else 1e-12
            risen = risen if risen < BRIM else BRIM
            move = abs(risen - ionic_strength) / (ionic_strength + 1e-6)
            before, ionic_strength = ionic_strength, risen
            last = 1.0
            if found:
                last = largest if largest > move else move
                best = math.inf
        if code == SOLVED:
            if drop < 0 and add < 0:
                return SOLVED, ionic_strength, steps
            if one_by_one:
                drop, add = (first, -1) if presence[first] == 1 else (-1, first)
        elif code != CYCLING:
            return code, ionic_strength, steps
        entering = mark(drop, add, solid, presence, bench)
        changes += 1
    return CYCLING, ionic_strength, steps
