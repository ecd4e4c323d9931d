"""A block of cells brought to equilibrium, each on its own."""

from __future__ import annotations

from gossan.base.jit import kernel
from gossan.base.outcome import SOLVED
from gossan.chemistry.kernel.complement import settle
from gossan.chemistry.kernel.nullspace import GONE
from gossan.chemistry.kernel.vectors import row_dot

WARM, COLD, MARKED = 0, 1, 2
REMAINDER = 1e-6  # of what solids took: below, subtraction has lost more digits than the balances have
SHOWN = 1e-11  # relative: what a balance may lack; to trim less would be to trim rounding
ROUNDED = 1e-14  # of the largest total: no more of it than its rounding is trimmed
BESIDE = 1e-5  # of the largest total: of less, the rounding of that total shows among the digits asked for


@kernel
def settle_cells(
    matrices, bench, kilograms, amount, solid, upper, presence, ln_activity, ionic_strength,
    solved, given, seen, skip, start, outcome, steps, first, last,
):
    """Equilibrate cells first to last (equations.md, 7-18); returns how many failed.

    kilograms (cell,) kg of water per m3 of bulk
    amount (component, cell) mol m-3 of bulk dissolved; solid, upper (mineral, cell) mol m-3 of bulk
    presence (mineral, cell) int8; ln_activity (basis, cell); ionic_strength (cell,) mol/kg
    solved (component, cell) mol/kg: what was dissolved after the last solve; a cell whose dissolved
        amounts all stand within skip of it (relative) is left alone
    given (open gas, cell) mol m-3 of bulk that each gave, overwritten
    seen (species, cell) mol/kg, the molalities that the sums of SIT were taken with; (0, cell) without it
    start: WARM, COLD (from nothing) or MARKED (warm, with the marks as they stand)
    outcome (cell,) int64 and steps (cell,) int64 are overwritten
    All state arrays are changed in place, a failed cell's are left as they were.
    """
    components, minerals, gases = amount.shape[0], solid.shape[0], given.shape[0]
    endless = matrices.solid.shape[0] - gases  # the first row of an open gas
    failed = 0
    for i in range(first, last):
        steps[i] = 0
        outcome[i] = SOLVED
        for g in range(gases):
            given[g, i] = 0.0
        weight = kilograms[i]
        same = start == WARM
        for k in range(components):
            now = amount[k, i] / weight
            bench.dissolved[k] = now
            if not abs(now - solved[k, i]) <= skip * abs(solved[k, i]):
                same = False
        for m in range(minerals):
            # a mineral that an earlier stage used up is back: its cell has something to settle
            if (presence[m, i] == 0 and solid[m, i] > 0.0) or (presence[m, i] == 1 and solid[m, i] <= 0.0):
                same = False
        if same:
            continue
        for m in range(minerals):
            bench.solid[m] = solid[m, i] / weight
            bench.upper[m] = upper[m, i] / weight
            bench.presence[m] = presence[m, i]
            if start != MARKED and bench.presence[m] == 0 and bench.solid[m] > 0.0:
                bench.presence[m] = 1
        for k in range(ln_activity.shape[0]):
            bench.ln_activity[k] = ln_activity[k, i]
        for k in range(components):
            bench.abundance[k] = abs(solved[k, i])
        for s in range(seen.shape[0]):
            bench.seen[s] = seen[s, i]
        outcome[i], strength, steps[i] = settle(
            matrices, bench, bench.dissolved, bench.solid, bench.upper, bench.presence,
            ionic_strength[i], start == COLD,
        )
        if outcome[i] != SOLVED:
            failed += 1
            continue
        ionic_strength[i] = strength
        for s in range(seen.shape[0]):
            seen[s, i] = bench.seen[s]
        for k in range(ln_activity.shape[0]):
            ln_activity[k, i] = bench.ln_activity[k]
        for k in range(components):
            bench.right[k] = 0.0  # what is taken from or given to the water, without its sign
        for m in range(minerals):
            gained = bench.gained[m] * weight
            mark = bench.presence[m]
            presence[m, i] = mark
            if mark == 0:
                gained = -solid[m, i]
                solid[m, i] = 0.0
            elif mark == 2:
                gained = upper[m, i] - solid[m, i]
                solid[m, i] = upper[m, i]
            else:
                # what rounding let pass the bounds stays in the water
                if solid[m, i] + gained < 0.0:
                    gained = -solid[m, i]
                elif solid[m, i] + gained > upper[m, i]:
                    gained = upper[m, i] - solid[m, i]
                solid[m, i] = min(solid[m, i] + gained, upper[m, i])
            take(matrices, bench, amount, m, i, gained)
        for g in range(gases):
            given[g, i] = -bench.gained[endless + g] * weight
            take(matrices, bench, amount, endless + g, i, -given[g, i])
        trim(matrices, bench, amount, solid, upper, presence, i, weight)
        # What little is left in the water is known from speciation, to its last digit; by subtraction from
        # what the solids hold it would be noise.
        for k in range(components):
            pivot = matrices.first.shape[0] == 0 and GONE < bench.place[k] < 0
            if pivot or abs(amount[k, i]) < REMAINDER * bench.right[k]:
                amount[k, i] = row_dot(matrices.conserved, k, bench.molality) * weight
            solved[k, i] = amount[k, i] / weight
    return failed


@kernel(inner=True)
def take(matrices, bench, amount, row, i, gained):
    """Take from the water of cell i what a solid or a gas gained, and note in bench.right how much."""
    if gained != 0.0:
        for k in range(amount.shape[0]):
            part = matrices.supplied[row, k] * gained
            amount[k, i] -= part
            bench.right[k] += abs(part)


@kernel(inner=True)
def trim(matrices, bench, amount, solid, upper, presence, i, weight):
    """Correct the solids that hold scarce components by what the largest total's rounding left there.

    bench.right holds what solids took of each component, without its sign.  A solid that gained its zinc as
    the rest of five moles of sulfide is off by the sulfide's last digit, and zinc's own balance shows it
    (equations.md, 18).
    """
    components = amount.shape[0]
    largest, taken = 0.0, 0.0
    for k in range(components):
        taken = max(taken, bench.right[k])
        bench.weight[k] = abs(amount[k, i]) + bench.right[k]
        largest = max(largest, bench.weight[k])
    if taken == 0.0:
        return
    for m in range(solid.shape[0]):
        if presence[m, i] != 1:
            continue
        scarce = -1
        for k in range(components):
            if matrices.supplied[m, k] != 0.0 and k != matrices.signed and k != matrices.electron:
                scarce = k if scarce < 0 or bench.weight[k] < bench.weight[scarce] else scarce
        if scarce < 0 or not bench.weight[scarce] < BESIDE * largest:
            continue
        over = amount[scarce, i] - row_dot(matrices.conserved, scarce, bench.molality) * weight
        gained = over / matrices.supplied[m, scarce]
        shown = SHOWN * bench.weight[scarce] < abs(over) < ROUNDED * largest
        if shown and 0.0 <= solid[m, i] + gained < upper[m, i]:
            solid[m, i] += gained
            take(matrices, bench, amount, m, i, gained)
