"""Passages through every face with the moving water and by dispersion: limited, conservative.

Monotonic upwind with linear reconstruction (van Leer 1979, J. Comput. Phys. 32, 101-136). The loops that
count run over contiguous slices, one block at a time: that is what lets them use vector registers and the
fastest cache. The few cells with a neighbour of another size or material, and the first, go one by one.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from gossan.base.jit import kernel

BLOCK = 1024  # cells; the scratch rows of one block stay in the first-level cache
FLAT = 1e-10  # variation below this share of the value is rounding (equilibria are solved to about 1e-12)
FAINT = 1e-280  # mol m-3: the reciprocal of a fainter variation is no number any more

FIRST_ORDER, MINMOD, VAN_LEER = 0, 1, 2  # the limiters


class Slopes(NamedTuple):
    """What slope limiting needs of the grid.

    lean_left, lean_right  (cell,) 1: how much of the difference to a neighbour lies on this side of the face,
                           1/2 between equal cells
    uneven                 (n,) int, rising: the cells to take one by one, at the ends of every layer
    limiter                int, FIRST_ORDER, MINMOD or VAN_LEER
    """

    lean_left: np.ndarray
    lean_right: np.ndarray
    uneven: np.ndarray
    limiter: int


@kernel
def evenness(fall, rise, value):
    """The lesser of two changes over their sum: 1/2 straight, 0 level on one side, below 0 at an extremum.

    fall and rise are the changes from the left and to the right, taken to the cell's own faces. Written so
    that it keeps its digits near 0: a trace beside a high neighbour must not be cut below zero.
    """
    inverse = 1.0 / (fall + rise)
    left, right = fall * inverse, rise * inverse
    lesser = left if left < right else right
    return lesser if abs(fall) + abs(rise) > FLAT * abs(value) + FAINT else 0.5


@kernel
def share_of(even, bias, limiter):
    """The share of its slope that a limiter leaves a cell whose profile is so even (equations.md, 23).

    Van Leer's harmonic mean of two slopes is 4 e (1 - e) of their plain mean, the lesser slope is 2 e of it.
    A biased mean is cut further where it would put the value at the face beyond the neighbour's.
    """
    share = 4.0 * even * (1.0 - even) if limiter == VAN_LEER else 2.0 * even
    cut = 4.0 * even / (1.0 + bias * (1.0 - 2.0 * even))
    share = cut if cut < share else share
    return share if even > 0.0 and limiter != FIRST_ORDER else 0.0


@kernel
def find_least(row, least):
    """Lower `least` to this solute's evenness, in cells between equal neighbours; row (cell + 2,)."""
    for i in range(least.shape[0]):
        even = evenness(row[i + 1] - row[i], row[i + 2] - row[i + 1], row[i + 1])
        least[i] = even if even < least[i] else least[i]


@kernel
def weigh(least, bias, limiter, weight_left, weight_right):
    """From evenness to the weights of the two differences in the rise from a cell's centre to its face."""
    for i in range(least.shape[0]):
        share = 0.25 * share_of(least[i], bias[i], limiter)
        weight_left[i] = share * (1.0 - bias[i])
        weight_right[i] = share * (1.0 + bias[i])


@kernel
def uneven_share(dissolved, inflow, start, end, i, slopes):
    """The share of the central slope in a cell whose neighbours are not its equals, over a group of solutes.

    Besides the limiter, the value at each face stays between the cell's own and that neighbour's.
    """
    share = 1.0
    for k in range(start, end):
        left = inflow[k] if i == 0 else dissolved[k, i - 1]
        drop, climb = dissolved[k, i] - left, dissolved[k, i + 1] - dissolved[k, i]
        fall, rise = slopes.lean_left[i] * drop, slopes.lean_right[i] * climb
        share = min(share, share_of(evenness(fall, rise, dissolved[k, i]), 0.0, slopes.limiter))
        room, middle = min(abs(drop), abs(climb)), 0.5 * abs(fall + rise)
        if share * middle > room > 0.0:
            share = (1.0 - FLAT) * room / middle  # just short of it: rounding must not pass it
    return share


@kernel
def cross(row, weight_left, weight_right, forth, hold, passed):
    """What one solute sends through each face downstream and by dispersion, mol m-2.

    row (face + 2,) mol m-3: the cells from two before the first face to the one behind the last
    weights (face,) 1, of the cell before each face; forth, hold (face,) m: flux and conductance times dt
    """
    for f in range(passed.shape[0]):
        fall = row[f + 1] - row[f + 2]
        rise = weight_left[f] * (row[f + 1] - row[f]) - weight_right[f] * fall
        passed[f] = forth[f] * (row[f + 1] + rise) + hold[f] * fall


@kernel
def cross_back(row, flux_dt, passed):
    """Add what backward flow takes along, first order: where pores open under little flow, a trickle."""
    for f in range(passed.shape[0]):
        if flux_dt[f] < 0.0:
            passed[f] += flux_dt[f] * row[f]


@kernel
def set_weights(dissolved, inflow, start, end, first, bias, slopes, least, weight_left, weight_right):
    """The weights for one group, solutes start to end, in the cells from `first` on."""
    cells = dissolved.shape[1]
    last = first + least.shape[0]
    least[:] = 0.5
    low, high = max(first, 1), min(last, cells - 1)
    for k in range(start, end):
        find_least(dissolved[k, low - 1 : high + 1], least[low - first : high - first])
    if last == cells:
        least[last - first - 1] = 0.0  # no gradient at the outlet: no slope
    weigh(least, bias[first:last], slopes.limiter, weight_left, weight_right)
    for i in slopes.uneven:
        if first <= i < min(last, cells - 1):
            share = uneven_share(dissolved, inflow, start, end, i, slopes)
            weight_left[i - first] = 0.5 * share * slopes.lean_left[i]
            weight_right[i - first] = 0.5 * share * slopes.lean_right[i]


@kernel
def carry(dissolved, inflow, bounds, darcy_flux, conductance, bias, slopes, dt, scratch, passed):
    """Carry every solute through every face for dt (equations.md, 21 to 23).

    dissolved    (solute, cell) mol m-3 of water
    inflow       (solute,) the same, in the entering water
    bounds       (group + 1,) int: solutes bounds[g] to bounds[g + 1] share one limiter value
    darcy_flux   (face,) m s-1, positive downstream; the upstream side of each face is taken by its sign
    conductance  (face,) m s-1, of dispersion; 0 at a closed face and at the outlet
    bias         (cell,) 1, in [0, 1): the weight of the downstream over the upstream difference in a slope
    slopes       Slopes; dt s; scratch (6, BLOCK + 1)
    passed       (solute, face) mol m-2, positive downstream, overwritten
    """
    solutes, cells = dissolved.shape
    least, weight_left, weight_right = scratch[0], scratch[1], scratch[2]
    flux_dt, forth, hold = scratch[3], scratch[4], scratch[5]
    for k in range(solutes):
        entering = inflow[k] if darcy_flux[0] > 0.0 else dissolved[k, 0]
        passed[k, 0] = dt * (darcy_flux[0] * entering + conductance[0] * (inflow[k] - dissolved[k, 0]))
        passed[k, cells] = dt * darcy_flux[cells] * dissolved[k, cells - 1]
    for face in range(1, cells, BLOCK):
        count = min(BLOCK, cells - face)  # faces of this block, between cells face - 1 and face + count - 1
        backward = False
        for j in range(count):
            flux_dt[j] = darcy_flux[face + j] * dt
            forth[j] = max(flux_dt[j], 0.0)
            hold[j] = conductance[face + j] * dt
            backward |= flux_dt[j] < 0.0
        skip = 1 if face == 1 else 0  # the first cell has no neighbour upstream but the entering water
        for g in range(bounds.shape[0] - 1):
            start, end = bounds[g], bounds[g + 1]
            set_weights(dissolved, inflow, start, end, face - 1, bias, slopes,
                        least[: count + 1], weight_left[: count + 1], weight_right[: count + 1])
            inner_left, inner_right, inner_forth, inner_hold = (
                weight_left[skip:], weight_right[skip:], forth[skip:], hold[skip:])
            for k in range(start, end):
                row, out = dissolved[k], passed[k, face : face + count]
                cross(row[face - 2 + skip : face + count], inner_left, inner_right, inner_forth, inner_hold,
                      out[skip:])
                if skip:
                    fall = row[0] - row[1]
                    rise = weight_left[0] * (row[0] - inflow[k]) - weight_right[0] * fall
                    out[0] = forth[0] * (row[0] + rise) + hold[0] * fall
                if backward:
                    cross_back(row[face : face + count], flux_dt, out)
