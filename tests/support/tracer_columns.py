"""Columns of tracers alone, as textbooks state them: velocity, retardation, decay rate, inlet."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np
from scipy.interpolate import CubicSpline
from tests.support.columns import Walk, column, walk

from gossan.coupling.drive import Drive
from gossan.transport.faces import faces_of
from gossan.transport.step import passages

DAY = 86400.0
POROSITY, GRAIN_DENSITY = 0.3, 2500.0
DRY = GRAIN_DENSITY * (1.0 - POROSITY)  # kg m-3


@dataclass(frozen=True)
class Solute:
    """A tracer: what stands in its `[tracers]` table and its isotherm; concentrations in mol m-3."""

    name: str = "a"
    entering: float = 1.0
    initial: float = 0.0
    rate: float = 0.0  # d-1
    parent: str = ""
    retardation: float = 1.0
    isotherm: str = ""  # TOML, in place of a retardation

    def table(self) -> str:
        text = f"[tracers.{self.name}]\n"
        if self.rate:
            text += f'half_life = "{math.log(2.0) / self.rate!r} d"\n'
        return text + (f'parent = "{self.parent}"\n' if self.parent else "")

    def sorption(self, porosity: float) -> str:
        if self.isotherm:
            return f"[layers.sorption.{self.name}]\n{self.isotherm}\n"
        if self.retardation == 1.0:
            return ""
        kd = (self.retardation - 1.0) * porosity / (GRAIN_DENSITY * (1.0 - porosity))
        return f'[layers.sorption.{self.name}]\nlaw = "linear"\nkd = "{kd!r} m3/kg"\n'


def tracer_column(
    solutes: Sequence[Solute], *, velocity: float, dispersivity: float, length: float, cells: int,
    days: float, inlet: str = "flux", courant: float = 0.5, every: float | None = None,
    pulse: float | None = None, porosity: float = POROSITY, immobile: str = "", accuracy: float = 0.9,
    more: str = "", coupling: str = "two-stage",
) -> str:
    """The case; velocity m/d of all pores, others in m and d. The feed stops after pulse.

    The accuracy is left loose: what limits a step is Courant's number, as the references state it.
    """
    entering = "".join(f'{s.name} = "{s.entering!r} mol/m3"\n' for s in solutes)
    there = "".join(f'{s.name} = "{s.initial!r} mol/m3"\n' for s in solutes)
    waters = f"[waters.feed.tracers]\n{entering}[waters.rinse]\n[waters.pore.tracers]\n{there}"
    feed = '{from = "0 d", water = "feed"}'
    if pulse is not None:
        feed += f', {{from = "{pulse!r} d", water = "rinse"}}'
    text = column(
        waters + "".join(s.table() for s in solutes), cells=cells, length=f"{length!r} m", porosity=porosity,
        grain_density=f"{GRAIN_DENSITY} kg/m3", dispersivity=f"{dispersivity!r} m",
        flow=f'darcy_flux = "{velocity * porosity!r} m/d"\ninlet = "{inlet}"', feed=feed,
        duration=f"{days!r} d",
        run=f'ports_every = "{every or days!r} d"\nprofiles_every = "{days!r} d"\nmax_courant = {courant}\n'
        f'accuracy = {accuracy}\ncoupling = "{coupling}"',
        more=more,
    )  # fmt: skip
    return text.replace("minerals = {}", immobile + "".join(s.sorption(porosity) for s in solutes))


@dataclass(frozen=True, eq=False)
class Profiles:
    """What a walk of a tracer column recorded."""

    walk: Walk

    def at(self, x: float, days: float, name: str = "a", still: bool = False) -> float:
        """The resident concentration, mol m-3, between centres by a cubic spline."""
        state = next(s for s in self.walk.records if abs(s.time - days * DAY) < 1.0)
        problem = self.walk.problem
        row = problem.solutes.index(name)
        values = state.dissolved[row]
        if still:
            assert state.still is not None
            values = state.still.dissolved[row]
        return float(CubicSpline(problem.grid.centres, values)(x))

    def outlet(self, days: float, name: str = "a") -> float:
        """What leaves at that time: the concentration at the last face."""
        state = next(s for s in self.walk.records if abs(s.time - days * DAY) < 1.0)
        problem = self.walk.problem
        drive = Drive(problem, state)
        flux, _ = drive.flow(1.0, 0.0)
        faces = faces_of(problem.transport, state.water, flux)
        passed = passages(faces, state.dissolved, drive.inflow, 1.0).passed
        return float(passed[problem.solutes.index(name), -1] / flux[-1])

    def front(self, value: float, days: float, name: str = "a") -> float:
        """Where a falling profile passes a value, m."""
        state = next(s for s in self.walk.records if abs(s.time - days * DAY) < 1.0)
        values = state.dissolved[self.walk.problem.solutes.index(name)]
        return float(np.interp(-value, -values, self.walk.problem.grid.centres))


def profiles(*args, **kwargs) -> Profiles:  # type: ignore[no-untyped-def]
    """Walk a tracer column with its books closed."""
    return Profiles(walk(tracer_column(*args, **kwargs)))
