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
from gossan.chemistry.kernel.activity import SIT
from gossan.chemistry.kernel.cold import ABSENT, LITTLE, add_up, approach, survey
from gossan.chemistry.kernel.easing import ease, fullness, nearer
from gossan.chemistry.kernel.marks import fill_totals, lacking, mark, set_totals, weigh
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
    RUNG,
    eliminate,
    pivots_follow,
    reduce_species,
    reduce_totals,
    scarcer_free,
)
from gossan.chemistry.kernel.paired import paired_step, see, see_again, see_ahead, unseen

# a last step below this leaves an error of about its square, times that of a formula's largest number
SETTLED = 1e-7
EXACT = 8e-16  # the balances agree to the last digit: no step can improve on it
NEAR = 0.3  # mismatch below which the balances' own Newton step converges
BLOWN = 10.0  # mismatch after a near step that is taken back: two balances said nearly the same
LOOK = 1e-2  # mismatch below which wrong marks already show
NEWTON_LIMIT = 300  # steps for one set of marks, or for one stage on the way to it
STAGES = 10  # times as many steps are for all of them
BRIM = 100.0  # mol/kg: no water holds more; far from the answer the sums may claim it
CHOICES = 5  # of pivots once the answer shows what is scarce
BEYOND = 1e30  # of ln activity: the step of a matrix that is as good as singular
SWIFT = 10  # steps within which a warm water settles: it is spared what only the wayward need
ROUNDING = 4e-16  # relative: marks that go round must not hang on the last digit of a total
REVIEW = 25  # far steps after which the pivots are looked at again
CROWDED = 1e4  # mol/kg: from there on a far step may only lead back; at infinity all sides look even
DOUBTS = 20  # choices of pivots where the walk came to a stop
DOUBTFUL = 2.0  # times scarcer than its pivot: a free one that may have stopped a walk
UNFIT = -1  # the outcome of a walk that wants other pivots
LEAST_SHARE = 0.1  # of a step: less is not worth trying
STALLED = 0.9  # a far step that leaves more of its merit than this was hardly worth it
FAR, CONVEX = 0, 1  # the two ways from afar


@kernel(inner=True, forceinline=True)
def reduce_all(matrices, bench, dissolved, solid, upper, presence, entering):
    """Eliminate ties and present minerals, reduce totals and species; returns (rows, free ones)."""
    active, free = eliminate(matrices, bench, presence, entering)
    # minerals that found no room were marked absent or full: what they hold belongs to the totals now
    fill_totals(matrices, bench, dissolved, solid, upper, presence)
    reduce_species(matrices, bench, active, free)
    reduce_totals(matrices, bench, active, free)
    return active, free


@kernel(inner=True)
def begin(matrices, bench, dissolved, solid, upper, presence):
    """Mark what is there, bring a cold water near its balances and survey it; returns the ionic strength."""
    for mineral in range(solid.shape[0]):
        presence[mineral] = 1 if solid[mineral] > 0.0 else 0
    set_totals(matrices, bench, dissolved, solid, upper, presence)
    for k in range(dissolved.shape[0]):
        if bench.place[k] != GONE and bench.total[k] <= ABSENT and k != matrices.signed:
            bench.total[k] = LITTLE
    ionic_strength = approach(matrices, bench, dissolved)
    set_totals(matrices, bench, dissolved, solid, upper, presence)
    if matrices.model == SIT:
        see(bench, 0.0)
    made = survey(matrices, bench, ionic_strength)
    if matrices.model == SIT:
        see(bench, ionic_strength / made if made > ionic_strength else 1.0)
    return ionic_strength


@kernel(inner=True, forceinline=True)
def take_step(bench, free, newton):
    """Add bench.right to the free ln activities, or the share of it that is allowed so late in the walk.

    Returns (largest component of the whole step, the share); what was added is left in bench.taken.  Of a
    step beyond all bounds nothing is.
    """
    largest = 0.0
    for j in range(free):
        size = abs(bench.right[j])
        if not size <= largest:
            largest = size
    cap = 30.0 if newton < 25 else (3.0 if newton < 50 else 1.0)
    share = cap / largest if largest > cap else 1.0
    if not largest < BEYOND:
        return largest, 0.0
    for j in range(free):
        bench.taken[j] = share * bench.right[j]
        bench.ln_activity[bench.free[j]] += bench.taken[j]
    return largest, share


@kernel(inner=True, forceinline=True)
def take_back(bench, free, shrink):
    """Undo a share of the last step."""
    for j in range(free):
        bench.ln_activity[bench.free[j]] -= shrink * bench.taken[j]
        bench.taken[j] *= 1.0 - shrink


@kernel(inner=True, forceinline=True)
def risen_strength(ionic_strength, rise, brim):
    """The ionic strength after a step, at most five times more or less, and no more than brim."""
    risen = ionic_strength + rise
    if risen > 5.0 * ionic_strength:
        risen = 5.0 * ionic_strength
    if risen < 0.2 * ionic_strength:
        risen = 0.2 * ionic_strength
    risen = risen if risen > 1e-12 else 1e-12
    return risen if risen < brim else brim


@kernel(inner=True, forceinline=True)
def close_balances(
    matrices, bench, active, free, solid, upper, presence, ionic_strength, patient, doubts
):
    """Walk to where the balances of the free components close, with the marks as they stand.

    patient: judge the marks only once all is settled; else a look half-way may end the walk.
    doubts: how often other pivots may still be asked for.
    Returns (outcome, ionic strength, steps, then as weigh does: mark to drop, to add, first at fault);
    the outcome is CYCLING where marks have to change before going on, UNFIT where pivots have to.
    """
    drop, add, first = -1, -1, -1
    last, best, factor, before, most = 1.0, math.inf, 1.0, ionic_strength, math.inf
    mode, near, worse, slow = FAR, NEAR, math.inf, 0
    looked, review = patient, REVIEW
    steps, left = 0, 0.0
    newton = -1  # of this stage
    for step in range(STAGES * NEWTON_LIMIT):
        newton += 1
        if newton >= NEWTON_LIMIT:
            break
        made = molalities(matrices, bench, free, ionic_strength)
        mismatch = balances(bench, free)
        if (step == 0 and not fullness(bench) <= BRIM) or (left > 0.0 and mismatch < NEAR):
            newton = 0
            if step == 0:
                left = 1.0
                ease(matrices, bench, active)
            else:
                left = nearer(bench, free, left)
            made = molalities(matrices, bench, free, ionic_strength)
            mismatch = balances(bench, free)
            last, best, factor, mode, near, worse, slow = 1.0, math.inf, 1.0, FAR, NEAR, math.inf, 0
            most, review = math.inf, REVIEW
        done = last < SETTLED or (
            mismatch < EXACT
            and abs(made - ionic_strength) < 1e-13 * made + 1e-30
            and (matrices.model != SIT or unseen(matrices, bench) < 1e-13)
        )
        # balances that close at a thousand kilograms of solutes do so for marks that are no water's
        absurd = mismatch < LOOK and newton > SWIFT and not fullness(bench) <= CROWDED
        if left == 0.0 and (done or absurd or (mismatch < LOOK and not looked)):
            looked = True
            pivots_follow(matrices, bench, active, free)
            drop, add, first = weigh(
                matrices, bench, active, solid, upper, presence, ROUNDING if patient else 0.0
            )
            if done:
                return SOLVED, ionic_strength, steps, drop, add, first
            if drop >= 0 or (add >= 0 and abs(bench.saturation[add]) > 0.1):
                return CYCLING, ionic_strength, steps, drop, add, first
        steps += 1
        brim = BRIM if mismatch > LOOK else math.inf  # where the balances all but close, it is what it is
        rise = made - ionic_strength if made < brim else 0.0
        found = False
        if mismatch > worse:
            near *= 0.1  # the near step was not near enough
            if mismatch > BLOWN and doubts > 0:
                ionic_strength = before
                if matrices.model == SIT:
                    see_again(bench)
                take_back(bench, free, 1.0)
                if unfit(matrices, bench, active, free, ionic_strength, left):
                    return UNFIT, ionic_strength, steps, drop, add, first
                worse = math.inf
                continue
        worse = math.inf
        if mismatch < near:
            if matrices.model == SIT:
                found, rise = paired_step(matrices, bench, free, rise, ionic_strength)
            else:
                found, rise = near_step(matrices, bench, free, rise)
            mode, worse = FAR, mismatch
        if not found:
            merit, lost, whole = far_merit(bench, free), 0.0, fullness(bench)
            if mode == CONVEX:
                merit, lost = dual_energy(bench, free)
            elif whole > CROWDED and whole > most:
                merit = math.inf
            if merit > best + lost:
                # the step went too far: back by half of it, or over to the way that always descends
                ionic_strength = before
                if matrices.model == SIT:
                    see_again(bench)
                if factor > LEAST_SHARE:
                    take_back(bench, free, 0.5)
                    factor *= 0.5
                else:
                    take_back(bench, free, 1.0)
                    best, factor = math.inf, 1.0
                    mode = CONVEX if mode == FAR else FAR
                continue
            if mode == FAR:
                slow = slow + 1 if merit > STALLED * best else 0
                if slow >= 3:
                    mode, slow = CONVEX, 0
                    merit, lost = dual_energy(bench, free)
            best, factor, most = merit, 1.0, whole
            if newton >= review and doubts > 0 and whole <= CROWDED:
                review += REVIEW
                if unfit(matrices, bench, active, free, ionic_strength, left):
                    return UNFIT, ionic_strength, steps, drop, add, first
                balances(bench, free)  # whose two sides the survey has overwritten
            going = far_step(bench, free) if mode == FAR else convex_step(bench, free)
            if not going:
                if doubts > 0 and unfit(matrices, bench, active, free, ionic_strength, left):
                    return UNFIT, ionic_strength, steps, drop, add, first
                return SINGULAR, ionic_strength, steps, drop, add, first
            if mode == CONVEX:
                rise = 0.0
        largest, share = take_step(bench, free, newton)
        if not largest < BEYOND:
            if doubts > 0 and unfit(matrices, bench, active, free, ionic_strength, left):
                return UNFIT, ionic_strength, steps, drop, add, first
            return DIVERGED, ionic_strength, steps, drop, add, first
        risen = risen_strength(ionic_strength, share * rise, brim)
        move = abs(risen - ionic_strength) / (ionic_strength + 1e-6)
        before, ionic_strength = ionic_strength, risen
        if matrices.model == SIT:
            if not found:
                share = 0.0 if mode == CONVEX else 1.0
                fill = risen / made if made > risen else 1.0
                for s in range(bench.seen.shape[0]):
                    bench.seen_step[s] = fill * bench.molality[s] - bench.seen[s]
            sums = see_ahead(matrices, bench, share)
            move = sums if sums > move else move
        last = 1.0
        if found:
            last = largest if largest > move else move
            best = math.inf
    return ITERATIONS, ionic_strength, steps, drop, add, first


@kernel(inner=True)
def unfit(matrices, bench, active, free, ionic_strength, left):
    """Survey the water where it stands; whether a free one is scarcer than a pivot it is tied to.

    left: of the way of the constants.  Where it is so, two balances may say nearly the same, and the water
    hangs on their difference: of Fe(II) and Fe(III) the scarcer one must be the pivot.
    """
    molalities(matrices, bench, free, ionic_strength)
    pivots_follow(matrices, bench, active, free)
    for r in range(active):
        bench.ln_activity[bench.pivot[r]] += left * bench.eased[bench.pivot[r]]
    add_up(matrices.stoichiometry, bench)
    return scarcer_free(matrices, bench, active, free, DOUBTFUL)


@kernel(inner=True)
def settle(matrices, bench, dissolved, solid, upper, presence, ionic_strength, cold):
    """Bring one water to equilibrium with its minerals; returns (outcome, ionic strength, steps).

    dissolved (component,) mol/kg; solid, upper (mineral,) mol/kg; presence (mineral,) int8 and
    bench.ln_activity are the start (unless cold) and the answer; bench.gained and bench.sums hold what
    each mineral gained and what is dissolved afterwards.
    """
    if cold:
        ionic_strength = begin(matrices, bench, dissolved, solid, upper, presence)
    elif matrices.first.shape[0] > 0:
        # which valence is the scarce one, the dissolved totals do not tell
        set_totals(matrices, bench, dissolved, solid, upper, presence)
        survey(matrices, bench, ionic_strength)
    steps, changes, entering, chosen_again, doubts = 0, 0, np.int64(-1), 0, DOUBTS
    patience = 2 * (solid.shape[0] + 2)
    while changes < 40 * patience:
        set_totals(matrices, bench, dissolved, solid, upper, presence)
        if lacking(bench):
            return LACKING, ionic_strength, steps
        active, free = reduce_all(matrices, bench, dissolved, solid, upper, presence, entering)
        # Going round: from now on one change at a time, of the first mark at fault, once all is settled.
        # For linear problems of this kind that ends (Murty 1974).
        one_by_one = changes > patience
        code, ionic_strength, taken, drop, add, first = close_balances(
            matrices, bench, active, free, solid, upper, presence, ionic_strength, one_by_one, doubts
        )
        steps += taken
        if code == SOLVED:
            if drop < 0 and add < 0:
                if chosen_again < CHOICES and scarcer_free(matrices, bench, active, free, RUNG):
                    chosen_again += 1
                    continue
                return SOLVED, ionic_strength, steps
        elif code == UNFIT:
            doubts -= 1
            continue
        elif code != CYCLING:
            return code, ionic_strength, steps
        if one_by_one:
            drop, add = (first, -1) if presence[first] == 1 else (-1, first)
        entering = mark(drop, add, solid, presence, bench)
        changes += 1
    return CYCLING, ionic_strength, steps
