"""What the faces of a column are like: fixed for a run (Transport), and at one moment of it (Faces)."""

from __future__ import annotations

import math
from dataclasses import dataclass

import numpy as np

from gossan.transport.grid import Grid
from gossan.transport.kernel.advect import FIRST_ORDER, MINMOD, UNLIMITED, VAN_LEER
from gossan.transport.kernel.disperse import conduct
from gossan.transport.tortuosity import winding

LIMITERS = {"van-leer": VAN_LEER, "minmod": MINMOD, "none": UNLIMITED, "upwind": FIRST_ORDER}
ALIKE = 1e-9  # cells whose lengths differ by less than this share are equal
RESOLVED = 1e-3  # cells in D / velocity: fewer, and the last profile is a parabola to 1e-4


@dataclass(frozen=True, slots=True)
class Transport:
    """All of transport that stays fixed during a run."""

    grid: Grid
    bounds: np.ndarray  # (group + 1,) int: solutes bounds[g] to bounds[g + 1] share one limiter value
    first_type: bool  # the inlet holds the concentration (True) or takes a flux (third type)
    held_outlet: bool  # the outlet holds the concentration (True) or its gradient
    beyond: np.ndarray  # (2, solute) mol m-3 held at the outlet; mol m-4, the gradient there
    uneven: np.ndarray  # (m,) int: the cells whose neighbours differ from them, the first among them
    runs: np.ndarray  # (n, 2) int: first cell and end of every stretch of these
    limiter: int


@dataclass(frozen=True, slots=True)
class Faces:
    """What transport needs of the column at one moment; see `faces_of`."""

    transport: Transport
    darcy_flux: np.ndarray  # (face,) m s-1
    storage: np.ndarray  # (cell,) m, water content times width
    conductance: np.ndarray  # (face,) m s-1
    lean_left: np.ndarray  # (cell,) 1, see `Slopes`
    lean_right: np.ndarray
    speed: np.ndarray  # (cell,) s-1: the cells that water crosses per second, by its faster face
    outlet_rise: float  # see `Outlet`
    outlet_spread: float

    @property
    def fastest(self) -> float:
        """The largest Courant number of a step of one second, s-1."""
        return float(self.speed.max())

    @property
    def explicit_limit(self) -> float:
        """The longest step, s, in which explicit transport cannot take more from a cell than it holds.

        In one stage a limited face carries at most twice the difference that a plain one does, hence the 2:
        dt (2 flux + conductances) <= water width. Infinite where nothing moves.
        """
        rate = float(np.max(2.0 * self.speed + (self.conductance[:-1] + self.conductance[1:]) / self.storage))
        return 1.0 / rate if rate > 0.0 else math.inf

    def resident(
        self, dissolved: np.ndarray, inflow: np.ndarray, through: np.ndarray, face: int
    ) -> np.ndarray:
        """(solute,) mol m-3 in the pore water at a face (equations.md, 45).

        dissolved (solute, cell), inflow (solute,) mol m-3; through (solute,) mol m-2 s-1, what passes there.
        Between cells the value lies where both half cells pass the same by dispersion, between layers it is
        read downstream; a third-type inflow stands D / velocity before the inlet; at the outlet it is what
        leaves.
        """
        transport, last = self.transport, self.storage.size
        if face == 0:
            return dissolved[:, 0] - self.lean_left[0] * (dissolved[:, 0] - inflow)
        here = dissolved[:, face - 1]
        if self._behind_a_layer(face):
            return self._between(dissolved, through, face)
        if face < last:
            return here + self.lean_right[face - 1] * (dissolved[:, face] - here)
        if transport.held_outlet:
            return transport.beyond[0].copy()
        if self.darcy_flux[last] > 0.0:
            return (through + self.outlet_spread * transport.beyond[1]) / self.darcy_flux[last]
        return here + 0.5 * transport.grid.width[-1] * transport.beyond[1]

    def _behind_a_layer(self, face: int) -> bool:
        """Whether a face has another layer before it, and two cells of one behind it that disperse."""
        layer = self.transport.grid.layer
        if face + 1 >= layer.size or layer[face - 1] == layer[face] or layer[face] != layer[face + 1]:
            return False
        return bool(self.conductance[face] > 0.0 and self.darcy_flux[face] >= 0.0)

    def _between(self, dissolved: np.ndarray, through: np.ndarray, face: int) -> np.ndarray:
        """(solute,) mol m-3 between two layers (equations.md, 81).

        Before the face the profile may bend as sharply as D / velocity of that layer; behind it, it does not.
        """
        width = self.transport.grid.width
        first, second = width[face], width[face + 1]
        spread = 0.5 * first * self.conductance[face] / self.lean_left[face]
        ratio = ((first + second) ** 3 - first**3) / (second * first**2)
        lever = (0.5 * ratio - 1.0) * first - 0.5 * second
        here, behind = dissolved[:, face - 1], dissolved[:, face]
        value = spread * (ratio * behind - dissolved[:, face + 1]) + lever * through
        value /= spread * (ratio - 1.0) + lever * self.darcy_flux[face]
        return np.clip(value, np.minimum(here, behind), np.maximum(here, behind))


def transport_of(
    grid: Grid,
    group: np.ndarray,
    inlet: str = "flux",
    limiter: str = "van-leer",
    outlet: np.ndarray | None = None,
    gradient: np.ndarray | None = None,
) -> Transport:
    """Prepare transport on a grid.

    group     (solute,) int: one number for all components of the chemistry, each tracer a number of its own;
              neighbours with the same number share one limiter value, or charge would break inside a front
    inlet     "flux" (third type: water brings its solutes in) or "concentration" (first type: held there)
    limiter   "van-leer", "minmod", "none" (slopes as they are: fronts overshoot) or "upwind" (first order)
    outlet    (solute,) mol m-3, the concentrations held at the outlet; or
    gradient  (solute,) mol m-4, their gradients at the outlet; without either they are nil
    """
    width, layer = grid.width, grid.layer
    unlike = (np.abs(width[1:] / width[:-1] - 1.0) > ALIKE) | (layer[1:] != layer[:-1])
    uneven = np.concatenate(([True], unlike)) | np.concatenate((unlike, [False]))
    ends = np.flatnonzero(np.diff(np.concatenate(([False], uneven, [False])).astype(int)))
    group = np.asarray(group)
    bounds = np.concatenate(([0], np.flatnonzero(np.diff(group)) + 1, [group.size]))
    beyond = np.zeros((2, group.size))
    if outlet is not None:
        beyond[0] = outlet
    elif gradient is not None:
        beyond[1] = gradient
    return Transport(
        grid, bounds, inlet == "concentration", outlet is not None, beyond, np.flatnonzero(uneven),
        ends.reshape(-1, 2), LIMITERS[limiter],
    )


def faces_of(
    transport: Transport, water: np.ndarray, darcy_flux: np.ndarray, warmth: float = 1.0
) -> Faces:
    """The faces at one moment: conductances, slopes that follow from them, how fast cells are crossed.

    water (cell,) m3 m-3, > 0; darcy_flux (face,) m s-1
    warmth  1, diffusion in the water over that of the grid: what temperature makes of it
    """
    grid = transport.grid
    diffusion = grid.diffusion * warmth
    conductance, lean_left, lean_right = np.empty_like(darcy_flux), np.empty_like(water), np.empty_like(water)
    factor = winding(grid.tortuosity, grid.layer, water)
    conduct(darcy_flux, water, grid.width, grid.dispersivity, factor, diffusion, transport.first_type,
            transport.held_outlet, conductance, lean_left, lean_right)
    storage = water * grid.width
    speed = np.maximum(np.abs(darcy_flux[:-1]), np.abs(darcy_flux[1:])) / storage
    flux = max(float(darcy_flux[-1]), 0.0)
    mean = 0.5 * abs(float(darcy_flux[-2] + darcy_flux[-1]))
    spread = float(grid.dispersivity[-1] * mean + water[-1] * factor[-1] * diffusion[-1])
    rise = 0.0
    if flux > 0.0 and not transport.held_outlet and grid.width.size > 1:
        rise = outlet_rise(float(grid.width[-1]), float(grid.width[-2]), spread / flux)
    return Faces(transport, darcy_flux, storage, conductance, lean_left, lean_right, speed, rise, spread)


def outlet_rise(last: float, before: float, layer: float) -> float:
    """The rise from the last cell's mean to an outlet without gradient (equations.md, 68).

    last, before  m, lengths of the last two cells; layer m, D / velocity: how thick the layer is in which the
                  gradient vanishes
    Returns       1, the rise over the difference of the two cells: from 1/6 of it (equal cells, a layer that
                  they resolve) to 1/2 (none)

    >>> [round(outlet_rise(0.01, 0.01, d), 4) for d in (0.0, 0.01, 1e9)]
    [0.5, 0.22, 0.1667]
    """
    if layer <= 0.0:
        return last / (last + before)
    if last <= RESOLVED * layer:
        return last * last / ((2.0 * last + before) * (last + before))
    faded = -math.expm1(-last / layer)
    here = layer * layer / last * faded
    there = layer * layer / before * (1.0 - faded) * -math.expm1(-before / layer)
    return (0.5 * last - layer + here) / (0.5 * (last + before) - here + there)
