"""What a case would run, found without running it."""

from __future__ import annotations

import math
import time as wall
from dataclasses import dataclass
from itertools import islice
from typing import Any

import numpy as np

from gossan.base.errors import SolveError
from gossan.case.build import build, first_pace
from gossan.case.model import Case
from gossan.case.waters import read_waters
from gossan.chemistry.equilibrium import Solver
from gossan.chemistry.validity import validity_note
from gossan.coupling.drive import Drive
from gossan.coupling.march import Solvers, march
from gossan.coupling.problem import Problem
from gossan.coupling.shadow import followed, shadow_of
from gossan.views.assay import assay
from gossan.views.extent import extent_of

TRIED = 6  # first steps that are timed, and forgotten
WARMING = 2  # of them that are not counted: compiled code is being loaded


@dataclass(frozen=True)
class Plan:
    """A column that would be run."""

    case: Case
    problem: Problem
    darcy_flux: float  # m s-1 at the start
    residence: float  # s, of one pore volume at that flux
    duration: float  # s; under a held head as if no pore closed
    pore_volumes: float
    records: int
    steps: int
    seconds: float | None  # of wall clock; None where the first steps found no solution
    warnings: dict[str, tuple[str, ...]]  # by water
    column_warnings: tuple[str, ...]

    @property
    def may_form(self) -> list[str]:
        """The minerals that may form and dissolve."""
        system = self.problem.system
        return [name for name, may in zip(system.minerals, system.may_form, strict=True) if may]

    @property
    def may_dissolve(self) -> list[str]:
        """The minerals of the start that may only dissolve."""
        system = self.problem.system
        return [name for name, may in zip(system.minerals, system.may_form, strict=True) if not may]


def has_column(case: Case) -> bool:
    """Whether a case says anything of a column, or is one of waters alone."""
    return bool(case.layers or case.flow or case.run)


def water_warnings(case: Case) -> dict[str, tuple[str, ...]]:
    """What is to be said of every water of a case, by water; raises InputError."""
    return _told({name: one.warnings for name, one in assay(case).waters.items()})


def _told(warnings: dict[str, tuple[str, ...]]) -> dict[str, tuple[str, ...]]:
    return {name: said for name, said in warnings.items() if said}


def plan_of(case: Case) -> Plan:
    """Work out what a case would run; raises InputError with all that is wrong."""
    case.require_column()
    read_waters(case)  # all faults of all waters at once, before the column meets the first
    problem = build(case)
    assert case.run is not None
    flux = float(_first_flow(problem)[0])
    residence = problem.pore_volume / flux if flux > 0.0 else math.inf
    extent = extent_of(problem)
    each = _seconds_per_step(problem)
    # once for the column, which holds all that its waters hold, and not again for each of them
    temperature = problem.feeds.temperature
    extremes = dict.fromkeys((float(temperature.min()), float(temperature.max())))
    validity = [validity_note(case.table, problem.system, each) for each in extremes]
    return Plan(
        case=case,
        problem=problem,
        darcy_flux=flux,
        residence=residence,
        duration=extent.seconds,
        pore_volumes=extent.water / problem.pore_volume,
        records=len(problem.records.marks),
        steps=extent.steps,
        seconds=None if each is None else extent.steps * each,
        warnings=_told({name: one.said for name, one in assay(case).waters.items()}),
        column_warnings=(*filter(None, validity), *_long_cells(problem)),
    )


def _long_cells(problem: Problem) -> list[str]:
    """A sentence for every layer whose cells are longer than fronts in it are wide (equations.md, 38)."""
    grid, said = problem.grid, []
    for number, layer in enumerate(grid.layers):
        here = grid.layer == number
        longest, dispersivity = float(grid.width[here].max()), float(grid.dispersivity[here][0])
        if 0.0 < 2.0 * dispersivity < longest * (1.0 - 1e-9):
            said.append(
                f"layer {layer.name}: cells of {longest:.3g} m are longer than twice the dispersivity, "
                f"{dispersivity:.3g} m: fronts come out wider than they are; give it "
                f"{math.ceil(layer.length / (2.0 * dispersivity))} cells, or see what --grid-check says"
            )
    return said


def _first_flow(problem: Problem) -> np.ndarray:
    """(face,) m s-1 at the start."""
    return Drive(problem, problem.initial).flow(1.0)[0]


def _seconds_per_step(problem: Problem) -> float | None:
    """Time of a step on one processor, from the first few, which nobody keeps."""
    ends = []
    try:
        shadow, solvers = shadow_of(problem, problem.initial), Solvers(Solver(problem.system))
        for stride in islice(march(problem, problem.initial, first_pace(problem)), TRIED):
            if problem.errors_carried:
                shadow = followed(shadow, stride, solvers)
            ends.append(wall.perf_counter())
    except SolveError:
        return None
    counted = ends[WARMING - 1 :]
    return (counted[-1] - counted[0]) / (len(counted) - 1) if len(counted) > 1 else 0.0


def plan_json(plan: Plan) -> dict[str, Any]:
    """The machine-readable result of `gossan check` of a column, SI inside."""
    problem, grid = plan.problem, plan.problem.grid
    return {
        "file": plan.case.file,
        "title": plan.case.title,
        "cells": len(grid.width),
        "length_m": grid.length,
        "layers": [
            {"name": layer.name, "from_m": layer.start, "length_m": layer.length, "cells": layer.cells,
             "porosity": said.porosity,
             "conductivity_m_s": said.conductivity.si if said.conductivity else None}
            for layer, said in zip(grid.layers, plan.case.layers, strict=True)
        ],
        "pore_volume_m": problem.pore_volume,
        "darcy_flux_m_s": plan.darcy_flux,
        "residence_s": plan.residence,
        "duration_s": plan.duration,
        "pore_volumes": plan.pore_volumes,
        "steps": plan.steps,
        "seconds": plan.seconds,
        "components": list(problem.solutes),
        "may_form": plan.may_form,
        "may_dissolve": plan.may_dissolve,
        "ports": {port.name: port.x for port in problem.ports},
        "column_warnings": list(plan.column_warnings),
        "warnings": {name: list(said) for name, said in plan.warnings.items()},
    }  # fmt: skip
