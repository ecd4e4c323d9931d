"""What passes through every face of the column in one step, and how long that step may be.

A step has two stages (Heun), so that the caller can let chemistry act between them:

    first = passages(transport, dissolved, water, darcy_flux, inflow, dt, theta)
    ... amounts plus the net of first.passed, equilibrium: predicted ...
    passed = corrected(transport, first, dissolved, predicted)
    passed = kept_positive(transport, first, dissolved, water, amount, passed, positive)
    ... amounts of the start plus the net of passed, equilibrium ...

One-step schemes stop at first.passed. Averaging two one-step results instead would leave a first-order error
where dispersion is implicit: each stage has then already gone half-way to its own end.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gossan.transport.grid import Grid
from gossan.transport.kernel.advect import BLOCK, FIRST_ORDER, MINMOD, VAN_LEER, Slopes, carry
from gossan.transport.kernel.disperse import LANES, conduct, factor, spread

LIMITERS = {"van-leer": VAN_LEER, "minmod": MINMOD, "none": FIRST_ORDER}


@dataclass(frozen=True, slots=True)
class Transport:
    """All of transport that stays fixed during a run."""

    grid: Grid
    bounds: np.ndarray  # (group + 1,) int: solutes bounds[g] to bounds[g + 1] share one limiter value
    first_type: bool  # the inlet holds the concentration (True) or takes a flux (third type)
    uneven: np.ndarray  # (n,) int: the first cell, and those at a boundary of layers
    limiter: int


@dataclass(frozen=True, slots=True)
class Elimination:
    """The factored matrix of implicit dispersion, see `factor`."""

    hold: np.ndarray  # (face,) m
    inverse: np.ndarray  # (cell,) m-1
    lower: np.ndarray  # (cell,) 1
    upper: np.ndarray  # (cell,) 1


@dataclass(frozen=True, slots=True)
class Passages:
    """What the first stage sends through the faces, and what the second needs to know of it."""

    passed: np.ndarray  # (solute, face) mol m-2 over dt, positive downstream
    explicit: np.ndarray  # (solute, face) the same, from the concentrations of the start alone
    conductance: np.ndarray  # (face,) m s-1
    bias: np.ndarray  # (cell,) 1
    slopes: Slopes
    darcy_flux: np.ndarray  # (face,) m s-1
    inflow: np.ndarray  # (solute,) mol m-3
    dt: float
    theta: float
    elimination: Elimination | None  # None where dispersion is explicit


def transport_of(grid: Grid, group: np.ndarray, inlet: str = "flux", limiter: str = "van-leer") -> Transport:
    """Prepare transport on a grid.

    group    (solute,) int: one number for all components of the chemistry, each tracer a number of its own;
             neighbours with the same number share one limiter value, or charge would break inside a front
    inlet    "flux" (third type: water brings its solutes in) or "concentration" (first type: held there)
    limiter  "van-leer", "minmod" or "none" (first order)
    """
    between = np.flatnonzero(np.diff(grid.layer))
    uneven = np.unique(np.concatenate(([0], between, between + 1)))
    group = np.asarray(group)
    bounds = np.concatenate(([0], np.flatnonzero(np.diff(group)) + 1, [group.size]))
    return Transport(grid, bounds, inlet == "concentration", uneven, LIMITERS[limiter])


def passages(
    transport: Transport,
    dissolved: np.ndarray,
    water: np.ndarray,
    darcy_flux: np.ndarray,
    inflow: np.ndarray,
    dt: float,
    theta: float | None = None,
    made: np.ndarray | None = None,
) -> Passages:
    """The first stage of a step, or the whole of a one-step scheme (equations.md, 21 to 25).

    dissolved   (solute, cell) mol m-3 of water; water (cell,) m3 m-3, > 0
    darcy_flux  (face,) m s-1; inflow (solute,) mol m-3, in the entering water, or held at the inlet
    dt          s; explicit dispersion is stable up to `explicit_limit`
    theta       None: explicit dispersion. Else implicit, with this weight on the end of the step: 1/2 for
                second order, 1 for the first steps after the inflow has jumped (Rannacher 1984, from memory)
    made        (solute, cell) mol m-2 that reactions make meanwhile, as far as it is known: what they take
                away again must not disperse
    """
    conductance, slopes = _of_the_moment(transport, water, darcy_flux)
    explicit = np.empty((dissolved.shape[0], dissolved.shape[1] + 1))
    bias = _slope_bias(transport, water, darcy_flux, dt)
    carry(dissolved, inflow, transport.bounds, darcy_flux, conductance, bias, slopes, dt,
          np.empty((6, BLOCK + 1)), explicit)
    if theta is None:
        return Passages(explicit, explicit, conductance, bias, slopes, darcy_flux, inflow, dt, 0.5, None)
    storage = water * transport.grid.width
    elimination = Elimination(np.empty_like(conductance), *np.empty((3, storage.size)))
    factor(storage, conductance, theta * dt, elimination.hold, elimination.inverse, elimination.lower,
           elimination.upper)
    passed = explicit.copy()
    surplus = explicit
    if made is not None:  # as if it came through the faces upstream
        surplus = explicit.copy()
        surplus[:, 1:] -= np.cumsum(made, axis=1)
    _disperse(elimination, dissolved, dt * (darcy_flux[:-1] - darcy_flux[1:]), surplus, passed)
    return Passages(passed, explicit, conductance, bias, slopes, darcy_flux, inflow, dt, theta, elimination)


def corrected(
    transport: Transport, first: Passages, dissolved: np.ndarray, predicted: np.ndarray
) -> np.ndarray:
    """What passes over the whole step, from its start and what the first stage led to (equations.md, 26).

    dissolved, predicted (solute, cell) mol m-3 of water; returns (solute, face) mol m-2.

    Explicit: the mean of both ends' passages. Implicit: the same, plus what disperses of the change that the
    predicted state still lacks; without sorption that is Crank and Nicolson's dispersion.
    """
    passed = np.empty_like(first.explicit)
    carry(predicted, first.inflow, transport.bounds, first.darcy_flux, first.conductance, first.bias,
          first.slopes, first.dt, np.empty((6, BLOCK + 1)), passed)
    passed += first.explicit
    passed *= 0.5
    if first.elimination is not None:
        if first.theta != 0.5:
            hold = (first.theta - 0.5) * first.dt * first.conductance
            change = predicted - dissolved
            passed[:, 1:-1] += hold[1:-1] * (change[:, :-1] - change[:, 1:])
            passed[:, 0] -= hold[0] * change[:, 0]
        _disperse(first.elimination, predicted, np.zeros(predicted.shape[1]), passed - first.passed, passed)
    return passed


def kept_positive(
    transport: Transport,
    first: Passages,
    dissolved: np.ndarray,
    water: np.ndarray,
    amount: np.ndarray,
    passed: np.ndarray,
    positive: np.ndarray,
) -> np.ndarray:
    """The passages, held back where they would take more from a cell than there is (equations.md, 27).

    Explicit steps within their limits never do. Implicit ones can, beside a front of a solute that a solid
    holds back: it is first spread as if nothing held it. Then as much of the second order is added to one
    stage of backward Euler as every cell can give, the same share for a group (Zalesak 1979, J. Comput. Phys.
    31, 335-362, from memory).

    amount    (solute, cell) mol m-3 of bulk at the start of the step, solids included
    positive  (solute,) bool, False for what may be negative (excess H+)
    """
    width = transport.grid.width
    after = amount * width + passed[:, :-1] - passed[:, 1:]
    if (after[positive] >= 0.0).all():
        return passed
    low = passages(transport, dissolved, water, first.darcy_flux, first.inflow, first.dt, 1.0).passed
    spare = np.maximum(amount * width + low[:, :-1] - low[:, 1:], 0.0)
    more = passed - low
    taken = np.maximum(more[:, 1:], 0.0) + np.maximum(-more[:, :-1], 0.0)
    share = np.ones_like(spare)
    np.divide(spare, taken, out=share, where=(taken > spare) & positive[:, None])
    held = np.ones_like(more)  # the share of the cell that gives: upstream where more > 0
    held[:, 1:] = np.where(more[:, 1:] > 0.0, share, 1.0)
    held[:, :-1] = np.where(more[:, :-1] < 0.0, share, held[:, :-1])
    held = np.minimum.reduceat(held, transport.bounds[:-1], axis=0)
    return low + np.repeat(held, np.diff(transport.bounds), axis=0) * more


def courant(transport: Transport, water: np.ndarray, darcy_flux: np.ndarray, dt: float) -> float:
    """The largest number of cells that water crosses in dt; second order overshoots a step above 1/2."""
    speed = np.maximum(np.abs(darcy_flux[:-1]), np.abs(darcy_flux[1:]))
    return float(np.max(dt * speed / (water * transport.grid.width)))


def explicit_limit(transport: Transport, water: np.ndarray, darcy_flux: np.ndarray) -> float:
    """The longest step, s, in which explicit transport cannot take more from a cell than it holds.

    In one stage a limited face carries at most twice the difference that a plain one does, hence the 2:
    dt (2 flux + conductances) <= water width. Infinite where nothing moves.
    """
    conductance, _ = _of_the_moment(transport, water, darcy_flux)
    speed = np.maximum(np.abs(darcy_flux[:-1]), np.abs(darcy_flux[1:]))
    rate = np.max((2.0 * speed + conductance[:-1] + conductance[1:]) / (water * transport.grid.width))
    return float(1.0 / rate) if rate > 0.0 else float("inf")


def _of_the_moment(
    transport: Transport, water: np.ndarray, darcy_flux: np.ndarray
) -> tuple[np.ndarray, Slopes]:
    """Conductances of the faces, and slopes that follow from them where materials meet."""
    grid = transport.grid
    conductance, lean_left, lean_right = np.empty_like(darcy_flux), np.empty_like(water), np.empty_like(water)
    conduct(darcy_flux, water, grid.width, grid.dispersivity, grid.tortuosity, grid.diffusion,
            transport.first_type, conductance, lean_left, lean_right)
    return conductance, Slopes(lean_left, lean_right, transport.uneven, transport.limiter)


def _slope_bias(transport: Transport, water: np.ndarray, darcy_flux: np.ndarray, dt: float) -> np.ndarray:
    """The weight in the slopes with which the leading errors of space and of two-stage time cancel.

    With bias b the profile's third derivative is advected wrongly by h^2 ((1/3 - b)/4 + Courant^2/6).
    """
    number = np.abs(darcy_flux[1:]) * dt / (water * transport.grid.width)
    return (1.0 + 2.0 * np.minimum(number, 1.0) ** 2) / 3.0


def _disperse(
    made: Elimination, dissolved: np.ndarray, swelling: np.ndarray, surplus: np.ndarray, passed: np.ndarray
) -> None:
    change = np.empty((LANES, swelling.size))
    spread(dissolved, swelling, surplus, made.hold, made.inverse, made.lower, made.upper, change, passed)
