"""What a column shows: its profiles, its ports, and the axes they stand along."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

import numpy as np

from gossan.chemistry.equilibrium import LN10, log10_activity, mineral_saturation, pe_of
from gossan.coupling.drive import Drive, pore_volumes, settled
from gossan.coupling.pores import conductivity
from gossan.coupling.problem import Port, Problem
from gossan.coupling.state import State
from gossan.store.file import Axes
from gossan.transport.faces import Faces
from gossan.transport.step import passages


def axes_of(problem: Problem) -> Axes:
    """What stands along the axes of a result file of this problem."""
    grid = problem.grid
    names = [layer.name for layer in grid.layers]
    return Axes(
        component=problem.solutes,
        mineral=problem.system.minerals,
        species=problem.system.species,
        x=grid.centres,
        face=grid.edges,
        layer=tuple(names[i] for i in grid.layer),
        ports={port.name: port.x for port in problem.ports},
        parts=frozenset(_parts(problem)),
    )


def _parts(problem: Problem) -> Iterator[str]:
    if problem.isotherms is not None:
        yield "isotherms"
    if problem.stagnant is not None:
        yield "immobile"
    if problem.errors_carried:
        yield "errors"


def settled_dt(state: State) -> float:
    """A time over which the last step's surplus of water counts as spread, for a flux to report, s."""
    return state.time / state.step if state.step else 1.0


def frame_of(problem: Problem, state: State) -> dict[str, Any]:
    """The profiles of a state."""
    system = settled(problem, state).system
    darcy_flux, head = Drive(problem, state).flow(settled_dt(state), 0.0)
    activity = log10_activity(system, state.ln_activity)
    retained: dict[str, np.ndarray] = {}
    if problem.isotherms is not None:
        retained["sorbed"] = np.zeros_like(state.dissolved)
        retained["sorbed"][problem.sorbates] = problem.sorbed(state)
    if problem.stagnant is not None and state.still is not None:
        retained["immobile_dissolved"] = np.full_like(state.dissolved, np.nan)
        retained["immobile_dissolved"][:, problem.stagnant.cells] = state.still.dissolved
    return {
        **retained,
        "dissolved": state.dissolved,
        "solid": problem.solid(state),
        "saturation": mineral_saturation(system, state.ln_activity),
        "activity": activity,
        "porosity": problem.water(state),
        "conductivity": conductivity(problem, problem.water(state), system.temperature),
        "pH": -state.ln_activity[0] / LN10,
        "pe": pe_of(system, state.ln_activity),
        "ionic_strength": state.ionic_strength,
        "darcy_flux": darcy_flux,
        "head": head,
        "temperature": system.temperature,
    }


def ports_of(problem: Problem, state: State) -> list[dict[str, Any]]:
    """What every port shows at a state."""
    drive = Drive(problem, state)
    inflow = drive.inflow
    darcy_flux, _ = drive.flow(settled_dt(state), 0.0)
    faces = drive.faces(darcy_flux)
    through = passages(faces, state.dissolved, inflow, 1.0).passed
    return [
        port_of(problem, state, port, index, faces, inflow, through)
        for index, port in enumerate(problem.ports)
    ]


def port_of(
    problem: Problem, state: State, port: Port, index: int, faces: Faces, inflow: np.ndarray,
    through: np.ndarray,
) -> dict[str, Any]:
    """What a port shows (equations.md, 45).

    inflow (solute,) mol m-3; through (solute, face) mol m-2 s-1 is what passes every face at this instant
    """
    flux, before = faces.darcy_flux[port.face], max(port.face - 1, 0)
    passing = through[:, port.face]
    return {
        "pore_volumes": pore_volumes(problem, state),
        "darcy_flux": flux,
        "pH": -state.ln_activity[0, before] / LN10,
        "pe": pe_of(problem.system, state.ln_activity)[before],
        # flux-averaged; where no water passes there is none
        "dissolved": passing / flux if flux != 0.0 else np.full(len(through), np.nan),
        "resident": faces.resident(state.dissolved, inflow, passing, port.face),
        "passed": state.passed[2 + index].sum(axis=-1),
    }
