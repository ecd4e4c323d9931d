"""What passes through every face of the column in one step, and how long that step may be.

A step has two stages (Heun), so that the caller can let chemistry act between them:

    first = passages(transport, dissolved, water, darcy_flux, inflow, dt, theta)
    ... amounts plus the net of first.passed, equilibrium: predicted ...
    passed = corrected(transport, first, dissolved, predicted)
    ... amounts of the start plus the net of passed, equilibrium ...

One-step schemes stop at first.passed. Averaging two one-step results instead would leave a first-order error
where dispersion is implicit: each stage has then already gone half-way to its own end.
"""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gossan.transport.grid import Grid
from gossan.transport.kernel.advect import FIRST_ORDER, MINMOD, VAN_LEER, Slopes, carry
from gossan.transport.kernel.disperse import conduct, factor, spread

LIMITERS = {"van-leer": VAN_LEER, "minmod": MINMOD, "none": FIRST_ORDER}


@dataclass(frozen=True, slots=True)
class Transport:
    """All of transport that stays fixed during a run."""

    grid: Grid
    bounds: np.ndarray  # (group + 1,) int: solutes bounds[g] to bounds[g + 1] share one limiter value
    first_type: bool  # the inlet holds the concentration (True) or takes a flux (third type)
    slopes: Slopes


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
    inlet    "flux" (third type: water brings its solutes in) or "concentration" (first type: held at the face)
    limiter  "van-leer", "minmod" or "none" (first order)
    """
    half, reach = 0.5 * grid.width, 0.5 * (grid.width[:-1] + grid.width[1:])
    lean_left, lean_right = np.full(half.size, 1.0), np.full(half.size, 0.5)
    lean_left[1:], lean_right[:-1] = half[1:] / reach, half[:-1] / reach
    uneven = np.flatnonzero((lean_left != 0.5) | (lean_right != 0.5))
    slopes = Slopes(lean_left, lean_right, uneven, LIMITERS[limiter])
    group = np.asarray(group)
    bounds = np.concatenate(([0], np.flatnonzero(np.diff(group)) + 1, [group.size]))
    return Transport(grid, bounds, inlet == "concentration", slopes)


def passages(
    transport: Transport,
    dissolved: np.ndarray,
    water: np.ndarray,
    darcy_flux: np.ndarray,
    inflow: np.ndarray,
    dt: float,
    theta: float | None = None,
) -> Passages:
    """The first stage of a step, or the whole of a one-step scheme (equations.md, 21 to 26).

    dissolved   (solute, cell) mol m-3 of water; water (cell,) m3 m-3, > 0
    darcy_flux  (face,) m s-1; inflow (solute,) mol m-3, in the entering water, or held at the inlet
    dt          s; explicit dispersion is stable up to `explicit_limit`
    theta       None: explicit dispersion. Else implicit, with this weight on the end of the step: 1/2 for
                second order, 1 for the first steps after the inflow has jumped (Rannacher 1984, from memory)
    """
    conductance, slopes = _of_the_moment(transport, water, darcy_flux)
    explicit = np.empty((dissolved.shape[0], dissolved.shape[1] + 1))
    bias = _slope_bias(transport, water, darcy_flux, dt)
    carry(dissolved, inflow, transport.bounds, darcy_flux, conductance, bias, slopes, dt, explicit)
    if theta is None:
        return Passages(explicit, explicit, conductance, bias, slopes, darcy_flux, inflow, dt, 0.5, None)
    storage = water * transport.grid.width
    elimination = Elimination(np.empty_like(conductance), *np.empty((3, storage.size)))
    factor(storage, conductance, theta * dt, elimination.hold, elimination.inverse, elimination.lower,
           elimination.upper)  # fmt: skip
    passed = explicit.copy()
    _disperse(elimination, dissolved, dt * (darcy_flux[:-1] - darcy_flux[1:]), explicit, passed)
    return Passages(passed, explicit, conductance, bias, slopes, darcy_flux, inflow, dt, theta, elimination)


def corrected(
    transport: Transport, first: Passages, dissolved: np.ndarray, predicted: np.ndarray
) -> np.ndarray:
    """What passes over the whole step, from its start and the state that the first stage led to.

    dissolved, predicted (solute, cell) mol m-3 of water; returns (solute, face) mol m-2.

    Explicit: the mean of both ends' passages. Implicit: the same, plus what disperses of the change that is
    still missing from the predicted state; no solute is taken to be as mobile as its dissolved part.
    """
    passed = np.empty_like(first.explicit)
    carry(predicted, first.inflow, transport.bounds, first.darcy_flux, first.conductance, first.bias, first.slopes,
          first.dt, passed)  # fmt: skip
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


def _of_the_moment(transport: Transport, water: np.ndarray, darcy_flux: np.ndarray) -> tuple[np.ndarray, Slopes]:
    """Conductances, and slopes that know how far upstream of the first cell the inflow's own value is met.

    At a third-type inlet the profile is c_in + (D/v) dc/dx there: as if the inflow stood D/v before the face.
    """
    grid = transport.grid
    conductance = np.empty_like(darcy_flux)
    inlet = conduct(darcy_flux, water, grid.width, grid.dispersivity, grid.tortuosity, grid.diffusion, conductance)
    if transport.first_type:
        conductance[0] = inlet
        return conductance, transport.slopes
    lean_left = transport.slopes.lean_left.copy()
    lean_left[0] = darcy_flux[0] / (darcy_flux[0] + inlet) if darcy_flux[0] > 0.0 else 0.0
    return conductance, transport.slopes._replace(lean_left=lean_left)


def _slope_bias(transport: Transport, water: np.ndarray, darcy_flux: np.ndarray, dt: float) -> np.ndarray:
    """The weight in the slopes with which the leading errors of space and of two-stage time cancel.

    With bias b the profile's third derivative is advected wrongly by h^2 ((1/3 - b)/4 + Courant^2/6).
    """
    number = np.abs(darcy_flux[1:]) * dt / (water * transport.grid.width)
    return (1.0 + 2.0 * np.minimum(number, 1.0) ** 2) / 3.0


def _disperse(
    elimination: Elimination, dissolved: np.ndarray, swelling: np.ndarray, surplus: np.ndarray, passed: np.ndarray
) -> None:
    spread(dissolved, swelling, surplus, elimination.hold, elimination.inverse, elimination.lower,
           elimination.upper, passed)  # fmt: skip
