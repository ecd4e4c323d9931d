"""From where a water is to where new marks would have it, by stages (equations.md, 66).

A mineral that enters far from saturation ties its components at once, and what is tied to them goes along:
iron hydroxide takes Fe^3+ down, that takes the pe down, and methane goes with its eighth power.  From sums
like that no step leads back.  So the constants of the rows that hold begin where the water stands, and go to
their own only as far at a time as no species grows out of all proportion.
"""

from __future__ import annotations

import math

from gossan.base.jit import kernel
from gossan.chemistry.kernel.vectors import add_row

ROOM = 4.0  # times more than there is that a species may be for a moment
SHORTEST = 0.002  # of the way, at least, in a stage
SLIGHT = 1e-290


@kernel(inner=True)
def ease(matrices, bench, active):
    """Move the reduced constants so that the rows hold as the water stands; the way back is bench.eased."""
    eased, offset = bench.eased, bench.side
    for s in range(eased.shape[0]):
        eased[s] = 0.0
    for m in range(active):
        row = bench.active[m]
        offset[m] = -matrices.solid_ln_k[row]
        for k in range(matrices.solid.shape[1]):
            if matrices.solid[row, k] != 0.0:
                offset[m] += matrices.solid[row, k] * bench.ln_activity[k]
    for r in range(active):
        off = 0.0
        for m in range(active):
            off += bench.turns[r, m] * offset[m]
        add_row(eased, off, matrices.stoichiometry, bench.pivot[r])
    for s in range(eased.shape[0]):
        bench.reduced_ln_k[s] += eased[s]


@kernel(inner=True)
def fullness(bench):
    """The sum of all species, charged or not, mol/kg."""
    whole = 0.0
    for s in range(bench.molality.shape[0]):
        whole += bench.molality[s]
    return whole


@kernel(inner=True)
def nearer(bench, free, left):
    """Go on with the constants, by a stage that the water can follow; returns what is then left of the way.

    No species may grow to more than ROOM times what its free components have for it.
    """
    share = left
    for s in range(bench.molality.shape[0]):
        growth = -bench.eased[s]
        if growth <= 0.0 or bench.molality[s] <= 0.0:
            continue
        there = math.inf
        for j in range(free):
            part = bench.reduced[j, s]
            if part != 0.0:
                side = bench.negative[j] / part if part > 0.0 else bench.positive[j] / -part
                there = side if side < there else there
        if there < math.inf:
            most = math.log(ROOM * (there + SLIGHT) / bench.molality[s]) / growth
            share = most if most < share else share
    if share < SHORTEST:
        share = SHORTEST if left > SHORTEST else left
    for s in range(bench.molality.shape[0]):
        bench.reduced_ln_k[s] -= share * bench.eased[s]
    return left - share if left - share > 1e-12 else 0.0
