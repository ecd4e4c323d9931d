"""What passes through every face of the column in one step.

A step has two stages, so that the caller can let chemistry act between them:

    faces = faces_of(transport, water, darcy_flux)
    first = passages(faces, dissolved, inflow, dt, theta)
    ... amounts plus the net of first.passed, equilibrium: predicted ...
    passed = corrected(first, dissolved, predicted)
    passed = kept_positive(first, dissolved, amount, passed, positive)
    ... amounts of the start plus the net of passed, equilibrium ...

One-step schemes stop at first.passed. Explicit, the two stages are Heun's method. Implicit, they are a
Rosenbrock method of second order: it stays of second order whatever the matrix leaves out (limited slopes,
what solids hold), and damps what is too fast for the step.
"""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from gossan.transport.faces import Faces
from gossan.transport.kernel.advect import BLOCK, FIRST_ORDER, ROWS, UNLIMITED, Outlet, Slopes, carry
from gossan.transport.kernel.disperse import LANES, factor, spread

# The weight of the step's end with which two stages let the fastest modes die out at once (equations.md, 26)
DAMPING = 1.0 - math.sqrt(0.5)
CROSSED = 0.5  # cells that explicit advection may cross in a step; beyond it overshoots
ROUNDING = 1e-9  # by so much a step of just that length may seem longer


@dataclass(frozen=True, slots=True)
class Elimination:
    """The factored matrix of an implicit step, see `factor`."""

    down: np.ndarray  # (face,) m
    up: np.ndarray  # (face,) m
    inverse: np.ndarray  # (cell,) m-1
    lower: np.ndarray  # (cell,) 1
    upper: np.ndarray  # (cell,) 1


@dataclass(frozen=True, slots=True)
class Passages:
    """What the first stage sends through the faces, and what the second needs to know of it."""

    passed: np.ndarray  # (solute, face) mol m-2 over dt, positive downstream
    explicit: np.ndarray  # (solute, face) the same, from the concentrations of the start alone
    faces: Faces
    slopes: Slopes
    outlet: Outlet
    inflow: np.ndarray  # (solute,) mol m-3
    dt: float
    elimination: Elimination | None  # None where all is explicit


def passages(
    faces: Faces, dissolved: np.ndarray, inflow: np.ndarray, dt: float, theta: float | None = None,
    made: np.ndarray | None = None, shaped: float | None = None,
) -> Passages:
    """The first stage of a step, or the whole of a one-step scheme (equations.md, 21 to 25).

    dissolved   (solute, cell) mol m-3 of water
    inflow      (solute,) mol m-3, in the entering water, or held at the inlet
    dt          s; explicit transport is stable up to `Faces.explicit_limit`
    theta       None: explicit. Else dispersion is implicit, and advection where water crosses more than half
                a cell in the step, with this weight on the step's end: DAMPING where a second stage follows,
                1 (backward Euler) where none does
    made        (solute, cell) mol m-2 that reactions make meanwhile, as far as it is known: what they take
                away again must not disperse
    shaped      s, the step for which slopes are shaped (equations.md, 23); default dt
    """
    transport = faces.transport
    slopes, crossing = _slopes(faces, dt, theta, dt if shaped is None else shaped)
    half, before = 0.5 * transport.grid.width[-1], 0.5 * transport.grid.width[-2:][0]
    outlet = Outlet(faces.outlet_rise, float(half), float(half + before), faces.outlet_spread,
                    transport.held_outlet, transport.beyond)
    explicit = np.empty((dissolved.shape[0], dissolved.shape[1] + 1))
    carry(dissolved, inflow, transport.bounds, faces.darcy_flux, faces.conductance, slopes, outlet, dt,
          np.empty((ROWS, BLOCK + 1)), explicit)
    if theta is None:
        return Passages(explicit, explicit, faces, slopes, outlet, inflow, dt, None)
    elimination = Elimination(np.empty_like(faces.darcy_flux), np.empty_like(faces.darcy_flux),
                              *np.empty((3, dissolved.shape[1])))
    factor(faces.storage, faces.conductance, crossing, theta * dt, elimination.down, elimination.up,
           elimination.inverse, elimination.lower, elimination.upper)
    passed = explicit.copy()
    surplus = explicit
    if made is not None:  # as if it came through the faces upstream
        surplus = explicit.copy()
        surplus[:, 1:] -= np.cumsum(made, axis=1)
    _spread(elimination, dissolved, dt * (faces.darcy_flux[:-1] - faces.darcy_flux[1:]), surplus, passed)
    return Passages(passed, explicit, faces, slopes, outlet, inflow, dt, elimination)


def corrected(
    first: Passages, dissolved: np.ndarray, predicted: np.ndarray, last: np.ndarray | None = None
) -> np.ndarray:
    """What passes over the whole step, from its start and what the first stage led to (equations.md, 26).

    dissolved, predicted (solute, cell) mol m-3 of water; returns (solute, face) mol m-2.
    last      (solute, face) mol m-2, the passages that led to the predicted state; default the first stage's

    The mean of both ends' explicit passages; implicit, besides, what spreads of the change that the predicted
    state still lacks.
    """
    faces = first.faces
    passed = np.empty_like(first.explicit)
    carry(predicted, first.inflow, faces.transport.bounds, faces.darcy_flux, faces.conductance, first.slopes,
          first.outlet, first.dt, np.empty((ROWS, BLOCK + 1)), passed)
    passed += first.explicit
    passed *= 0.5
    made = first.elimination
    if made is not None:
        before = first.passed if last is None else last
        _spread(made, predicted, np.zeros(predicted.shape[1]), passed - before, passed)
    return passed


def kept_positive(
    first: Passages, dissolved: np.ndarray, amount: np.ndarray, passed: np.ndarray, positive: np.ndarray
) -> np.ndarray:
    """The passages, held back where they would take more from a cell than there is (equations.md, 27).

    Explicit limited steps within their limits never do. Implicit ones can, beside a front of a solute that a
    solid holds back: it is first spread as if nothing held it. Then as much of the second order is added to
    one stage of backward Euler as every cell can give, the same share for a group (Zalesak 1979, J. Comput.
    Phys. 31, 335-362, from memory).

    amount    (solute, cell) mol m-3 of bulk at the start of the step, solids included
    positive  (solute,) bool, False for what may be negative (excess H+)
    """
    faces = first.faces
    width, bounds = faces.transport.grid.width, faces.transport.bounds
    after = amount * width + passed[:, :-1] - passed[:, 1:]
    if (after[positive] >= 0.0).all():
        return passed
    safe = faces
    if faces.transport.limiter == UNLIMITED:
        safe = replace(faces, transport=replace(faces.transport, limiter=FIRST_ORDER))
    low = passages(safe, dissolved, first.inflow, first.dt, 1.0).passed
    spare = np.maximum(amount * width + low[:, :-1] - low[:, 1:], 0.0)
    more = passed - low
    taken = np.maximum(more[:, 1:], 0.0) + np.maximum(-more[:, :-1], 0.0)
    share = np.ones_like(spare)
    np.divide(spare, taken, out=share, where=(taken > spare) & positive[:, None])
    held = np.ones_like(more)  # the share of the cell that gives: upstream where more > 0
    held[:, 1:] = np.where(more[:, 1:] > 0.0, share, 1.0)
    held[:, :-1] = np.where(more[:, :-1] < 0.0, share, held[:, :-1])
    held = np.minimum.reduceat(held, bounds[:-1], axis=0)
    return low + np.repeat(held, np.diff(bounds), axis=0) * more


def _slopes(faces: Faces, dt: float, theta: float | None, shaped: float) -> tuple[Slopes, np.ndarray]:
    """Weights of the slopes (equations.md, 23), and the flux (face,) m s-1 whose advection is implicit.

    A parabola through three cell means rises from the middle one's to its face by these weights; the Courant
    number's square in them makes the leading errors of space and of two-stage time cancel.
    """
    transport = faces.transport
    number = faces.speed * dt
    square = np.minimum(faces.speed * shaped, 1.0) ** 2
    rise_left, rise_right = (1.0 - square) / 6.0, (2.0 + square) / 6.0
    here = transport.uneven
    left, right = faces.lean_left[here], faces.lean_right[here]
    whole = left + right - left * right
    whole[whole <= 0.0] = 1.0
    # no more than leaves the weight of the left difference positive
    square = np.minimum(left * right * square[here], left * (1.0 - right))
    rise_left[here] = left * (left * (1.0 - right) - square) / whole
    rise_right[here] = right * (right + square) / whole
    kept, crossing = np.ones_like(number), np.zeros_like(faces.darcy_flux)
    fast = number > CROSSED * (1.0 + ROUNDING)
    if theta is not None and fast.any():
        kept[fast] = CROSSED / number[fast]
        crossing[1:][fast] = np.maximum(faces.darcy_flux[1:][fast], 0.0)
    leans = faces.lean_left, faces.lean_right
    slopes = Slopes(*leans, rise_left, rise_right, kept, transport.runs, transport.limiter)
    return slopes, crossing


def _spread(
    made: Elimination, dissolved: np.ndarray, swelling: np.ndarray, surplus: np.ndarray, passed: np.ndarray
) -> None:
    change = np.empty((LANES, swelling.size))
    spread(dissolved, swelling, surplus, made.down, made.up, made.inverse, made.lower, made.upper, change,
           passed)
