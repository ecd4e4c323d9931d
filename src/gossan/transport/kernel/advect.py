"""Passages through every face with the moving water and by dispersion: limited, conservative.

Monotonic upwind with a parabola through three cells (van Leer 1979, J. Comput. Phys. 32, 101-136). The
loops that count run over contiguous slices, one block at a time: that is what lets them use vector registers
and the fastest cache. Between equal cells the limiter needs one number for all solutes; where sizes or
materials differ a second one is kept, see `find_uneven`.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from gossan.base.jit import kernel

BLOCK = 1024  # cells; the scratch rows of one block stay in the first-level cache
ROWS = 10  # of scratch
FLAT = 1e-10  # variation below this share of the value is rounding (equilibria are solved to about 1e-12)
FAINT = 1e-100  # mol m-3: two fainter variations have no product that is still a number

FIRST_ORDER, MINMOD, VAN_LEER, UNLIMITED = 0, 1, 2, 3  # the limiters


class Slopes(NamedTuple):
    """What the rise from a cell's centre to its downstream face needs of the grid and the step.

    lean_left, lean_right  (cell,) 1: how much of the difference to a neighbour lies on this side of the face,
                           1/2 between equal cells
    rise_left, rise_right  (cell,) 1, >= 0: weights of both differences in the rise, before it is limited
    kept                   (cell,) 1, in (0, 1]: the share of the rise that implicit advection leaves
    runs                   (n, 2) int, rising: first cell and end of every stretch of unlike neighbours
    limiter                int, FIRST_ORDER, MINMOD, VAN_LEER or UNLIMITED
    """

    lean_left: np.ndarray
    lean_right: np.ndarray
    rise_left: np.ndarray
    rise_right: np.ndarray
    kept: np.ndarray
    runs: np.ndarray
    limiter: int


class Outlet(NamedTuple):
    """What holds at the last face.

    rise      1: the share of the last difference between cells in the rise from the last centre to the face
    half      m, half the last cell; reach m, between the last two centres
    spread    m2 s-1, water content times dispersion coefficient of the last cell
    held      bool, whether the concentration beyond is held; water that comes back brings it
    beyond    (2, solute): mol m-3, that concentration; mol m-4, the gradient at the face where it is not held
    """

    rise: float
    half: float
    reach: float
    spread: float
    held: bool
    beyond: np.ndarray


@kernel(inner=True)
def find_even(row, lesser, whole):
    """Where a solute is less even than `lesser / whole`, put its own lesser change and sum of changes there.

    row (cell + 2,) mol m-3. A change to another sign counts as the lesser one being nil. The two are kept
    apart because a quotient for every solute takes longer than the rest, and because no digit is lost that
    way: a trace beside a high neighbour must not be cut below zero.
    """
    for i in range(lesser.shape[0]):
        fall, rise = row[i + 1] - row[i], row[i + 2] - row[i + 1]
        low = fall if fall < rise else rise
        high = rise if fall < rise else fall
        same = low if low > -high else -high
        less = same if same > 0.0 else 0.0
        both = abs(fall) + abs(rise)
        flat = both <= FLAT * abs(row[i + 1]) + FAINT
        worse = (less * whole[i] < lesser[i] * both) & (not flat)
        lesser[i] = less if worse else lesser[i]
        whole[i] = both if worse else whole[i]


@kernel(inner=True)
def find_uneven(row, lean_left, lean_right, rise_left, rise_right, lesser, whole, room, climbed):
    """The same where neighbours differ: changes are taken to the cell's own faces.

    room and climbed keep the solute whose whole rise is longest against the lesser of its two differences,
    which it may not exceed.
    """
    for i in range(lesser.shape[0]):
        drop, climb = row[i + 1] - row[i], row[i + 2] - row[i + 1]
        fall, rise = lean_left[i] * drop, lean_right[i] * climb
        low = fall if fall < rise else rise
        high = rise if fall < rise else fall
        same = low if low > -high else -high
        less = same if same > 0.0 else 0.0
        both = abs(fall) + abs(rise)
        flat = both <= FLAT * abs(row[i + 1]) + FAINT
        worse = (less * whole[i] < lesser[i] * both) & (not flat)
        lesser[i] = less if worse else lesser[i]
        whole[i] = both if worse else whole[i]
        down, up = abs(drop), abs(climb)
        least = down if down < up else up
        full = rise_left[i] * down + rise_right[i] * up
        longer = (least * climbed[i] < room[i] * full) & (not flat)
        room[i] = least if longer else room[i]
        climbed[i] = full if longer else climbed[i]


@kernel(inner=True)
def share_of(even, limiter):
    """The share of its rise that a limiter leaves a cell whose profile is so even (equations.md, 23).

    even 1: the lesser of two changes over their sum, 1/2 where it is straight. Van Leer's harmonic mean of
    two slopes is 4 e (1 - e) of their plain mean, the lesser slope is 2 e of it.
    """
    share = 4.0 * even * (1.0 - even) if limiter == VAN_LEER else 2.0 * even
    share = 1.0 if limiter == UNLIMITED else share
    return 0.0 if limiter == FIRST_ORDER else share


@kernel(inner=True)
def parabola_of(limiter):
    """`share_of` as base + even (once - twice even), to the same bits, for loops without a branch."""
    base = 1.0 if limiter == UNLIMITED else 0.0
    twice = 4.0 if limiter == VAN_LEER else 0.0
    once = 2.0 if limiter == MINMOD else twice
    return base, once, twice


@kernel(inner=True)
def weigh_even(lesser, whole, slopes, first, weight_left, weight_right):
    """The weights of both differences between equal cells; cut where the rise would pass the lesser one."""
    rise_left, rise_right, kept = slopes.rise_left[first:], slopes.rise_right[first:], slopes.kept[first:]
    base, once, twice = parabola_of(slopes.limiter)
    for i in range(lesser.shape[0]):
        even = lesser[i] / whole[i]
        share = base + even * (once - twice * even)
        cut = even / (rise_left[i] * even + rise_right[i] * (1.0 - even))
        cut = cut if cut > base else base  # nothing is cut without a limiter
        share = kept[i] * (cut if cut < share else share)
        weight_left[i] = share * rise_left[i]
        weight_right[i] = share * rise_right[i]


@kernel(inner=True)
def weigh_uneven(lesser, whole, room, climbed, slopes, first, weight_left, weight_right):
    """The same between unlike neighbours."""
    rise_left, rise_right, kept = slopes.rise_left[first:], slopes.rise_right[first:], slopes.kept[first:]
    base, once, twice = parabola_of(slopes.limiter)
    for i in range(lesser.shape[0]):
        even = lesser[i] / whole[i]
        share = base + even * (once - twice * even)
        short = (1.0 - FLAT) * room[i] / climbed[i]  # of passing it: rounding must not
        longer = (share * climbed[i] > room[i]) & (base == 0.0)
        share = kept[i] * (short if longer else share)
        weight_left[i] = share * rise_left[i]
        weight_right[i] = share * rise_right[i]


@kernel(inner=True)
def cross(row, weight_left, weight_right, forth, hold, passed):
    """What one solute sends through each face downstream and by dispersion, mol m-2.

    row (face + 2,) mol m-3: the cells from two before the first face to the one behind the last
    weights (face,) 1, of the cell before each face; forth, hold (face,) m: flux and conductance times dt
    """
    for f in range(passed.shape[0]):
        fall = row[f + 1] - row[f + 2]
        rise = weight_left[f] * (row[f + 1] - row[f]) - weight_right[f] * fall
        passed[f] = forth[f] * (row[f + 1] + rise) + hold[f] * fall


@kernel(inner=True)
def cross_back(row, flux_dt, passed):
    """Add what backward flow takes along, first order: where pores open under little flow, a trickle."""
    for f in range(passed.shape[0]):
        if flux_dt[f] < 0.0:
            passed[f] += flux_dt[f] * row[f]


@kernel(inner=True)
def set_uneven(dissolved, inflow, start, end, first, last, slopes, scratch, weight_left, weight_right):
    """The weights of one group in the unlike cells first to last; cell 0 has the inflow before it."""
    lesser, whole, room, climbed = scratch[0], scratch[1], scratch[2], scratch[3]
    count = last - first
    lesser[:count], whole[:count], room[:count], climbed[:count] = 0.5, 1.0, 1.0, 0.0
    skip = 1 if first == 0 else 0
    for k in range(start, end):
        if skip:
            scratch[9, 0], scratch[9, 1], scratch[9, 2] = inflow[k], dissolved[k, 0], dissolved[k, 1]
            find_uneven(scratch[9, :3], slopes.lean_left[:1], slopes.lean_right[:1], slopes.rise_left[:1],
                        slopes.rise_right[:1], lesser[:1], whole[:1], room[:1], climbed[:1])
        low = first + skip
        find_uneven(dissolved[k, low - 1 : last + 1], slopes.lean_left[low:last], slopes.lean_right[low:last],
                    slopes.rise_left[low:last], slopes.rise_right[low:last], lesser[skip:count],
                    whole[skip:count], room[skip:count], climbed[skip:count])
    weigh_uneven(lesser[:count], whole[:count], room[:count], climbed[:count], slopes, first,
                 weight_left, weight_right)


@kernel(inner=True)
def set_weights(dissolved, inflow, start, end, first, last, slopes, scratch, weight_left, weight_right):
    """The weights for one group, solutes start to end, in the cells first to last, none of them the last."""
    lesser, whole = scratch[0], scratch[1]
    at = first
    for run in range(slopes.runs.shape[0] + 1):
        inside = run < slopes.runs.shape[0]
        begin = min(max(slopes.runs[run, 0], at), last) if inside else last
        if begin > at:
            count = begin - at
            lesser[:count], whole[:count] = 0.5, 1.0
            for k in range(start, end):
                find_even(dissolved[k, at - 1 : begin + 1], lesser[:count], whole[:count])
            weigh_even(lesser[:count], whole[:count], slopes, at, weight_left[at - first :],
                       weight_right[at - first :])
            at = begin
        stop = min(slopes.runs[run, 1], last) if inside else last
        if stop > at:
            set_uneven(dissolved, inflow, start, end, at, stop, slopes, scratch, weight_left[at - first :],
                       weight_right[at - first :])
            at = stop


@kernel(inner=True)
def outlet_share(dissolved, inflow, start, end, slopes, outlet):
    """The share of the rise to the last face: as even as the cell before it, and no sign is changed."""
    cells = dissolved.shape[1]
    share = 1.0
    for k in range(start, end):
        row = dissolved[k]
        before = row[cells - 3] if cells > 2 else inflow[k]
        last = row[cells - 1] - row[cells - 2]
        fall = slopes.lean_left[cells - 2] * (row[cells - 2] - before)
        rise = slopes.lean_right[cells - 2] * last
        both = abs(fall) + abs(rise)
        if both > FLAT * abs(row[cells - 2]) + FAINT:
            less = min(abs(fall), abs(rise)) if (fall > 0.0) == (rise > 0.0) else 0.0
            share = min(share, share_of(less / both, slopes.limiter))
        full, here = outlet.rise * abs(last), row[cells - 1]
        towards_nil = here == 0.0 or (last > 0.0) != (here > 0.0)
        if towards_nil and share * full > abs(here) and slopes.limiter != UNLIMITED:
            share = (1.0 - FLAT) * abs(here) / full
    return share


@kernel(inner=True)
def leave(dissolved, inflow, bounds, flux, conductance, slopes, outlet, dt, passed):
    """What passes the outlet (equations.md, 68), with the water and by dispersion to what lies beyond."""
    cells = dissolved.shape[1]
    for g in range(bounds.shape[0] - 1):
        start, end = bounds[g], bounds[g + 1]
        share = 0.0
        if cells > 1 and flux > 0.0 and outlet.rise > 0.0 and slopes.limiter != FIRST_ORDER:
            share = outlet.rise * slopes.kept[cells - 1] * outlet_share(
                dissolved, inflow, start, end, slopes, outlet)
        for k in range(start, end):
            here, beyond, gradient = dissolved[k, cells - 1], outlet.beyond[0, k], outlet.beyond[1, k]
            value = here + gradient * outlet.half
            if share > 0.0:
                value += share * (here - dissolved[k, cells - 2] - gradient * outlet.reach)
            if flux < 0.0 and outlet.held:
                value = beyond
            passed[k, cells] = dt * (
                flux * value + conductance * (here - beyond) - outlet.spread * gradient)


@kernel
def carry(dissolved, inflow, bounds, darcy_flux, conductance, slopes, outlet, dt, scratch, passed):
    """Carry every solute through every face for dt (equations.md, 21 to 23).

    dissolved    (solute, cell) mol m-3 of water
    inflow       (solute,) the same, in the entering water
    bounds       (group + 1,) int: solutes bounds[g] to bounds[g + 1] share one limiter value
    darcy_flux   (face,) m s-1, positive downstream; the upstream side of each face is taken by its sign
    conductance  (face,) m s-1, of dispersion; 0 at a closed face, and at an outlet whose gradient is given
    slopes       Slopes; outlet Outlet; dt s; scratch (ROWS, BLOCK + 1)
    passed       (solute, face) mol m-2, positive downstream, overwritten
    """
    solutes, cells = dissolved.shape
    weight_left, weight_right = scratch[4], scratch[5]
    flux_dt, forth, hold = scratch[6], scratch[7], scratch[8]
    for k in range(solutes):
        entering = inflow[k] if darcy_flux[0] > 0.0 else dissolved[k, 0]
        passed[k, 0] = dt * (darcy_flux[0] * entering + conductance[0] * (inflow[k] - dissolved[k, 0]))
    leave(dissolved, inflow, bounds, darcy_flux[cells], conductance[cells], slopes, outlet, dt, passed)
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
            set_weights(dissolved, inflow, start, end, face - 1, face - 1 + count, slopes, scratch,
                        weight_left, weight_right)
            inner_left, inner_right, inner_forth, inner_hold = (
                weight_left[skip:count], weight_right[skip:count], forth[skip:count], hold[skip:count])
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
