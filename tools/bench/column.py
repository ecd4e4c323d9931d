"""The column of the benchmark: acid metal-sulfate water into calcite and iron sulfide.

Eleven components, 45 dissolved species and eight minerals, the system of the battery of waters.
"""

from __future__ import annotations

from pathlib import Path

from tests.support.small_systems import MINE_COMPLEXES, MINE_COMPONENTS, MINE_MINERALS

from gossan.case.build import build
from gossan.case.model import Case
from gossan.case.read import case_from_text
from gossan.constants.load import load_table
from gossan.coupling.problem import Problem

TEXT = """\
title = "acid mine water into calcite and iron sulfide"
temperature = "25 degC"
[waters.acid]
pH = 3.2
balance_on = "SO4"
[waters.acid.analysis]
Na = "30 mg/L"
Ca = "120 mg/L"
Mg = "60 mg/L"
Fe = "40 mg/L"
Zn = "60 mg/L"
Cu = "20 mg/L"
SO4 = "900 mg/L"
Cl = "40 mg/L"
HS = "1e-6 mg/L"
CO3 = "10 mg/L"
[waters.pore]
pH = 7.6
balance_on = "Ca"
[waters.pore.analysis]
Na = "20 mg/L"
Ca = "60 mg/L"
Mg = "10 mg/L"
Fe = "0.01 mg/L"
Zn = "1e-6 mg/L"
Cu = "1e-9 mg/L"
SO4 = "30 mg/L"
Cl = "30 mg/L"
HS = "0.01 mg/L"
CO3 = "90 mg/L"
[[layers]]
name = "gate"
length = "1 m"
cells = {cells}
porosity = 0.4
dispersivity = "{dispersivity} m"
conductivity = "10 m/d"
water = "pore"
[layers.minerals]
calcite = "0.3 wt%"
mackinawite = "4 umol/g"
[flow]
darcy_flux = "0.1 m/d"
[[flow.feed]]
from = "0 d"
water = "acid"
[chemistry]
minerals = [{minerals}]
exclude = [{exclude}]
[run]
duration = "{volumes} PV"
profiles_every = "{every} PV"
ports_every = "{every} PV"
coupling = "{coupling}"
max_courant = {courant}
"""
COURANT = {"lie": 0.9, "two-stage": 0.5}


def case_of(cells: int, coupling: str, volumes: float, every: float) -> Case:
    """The case with so many cells, pore volumes, and pore volumes between two frames."""
    table = load_table()
    wanted = {*MINE_COMPONENTS, *MINE_COMPLEXES}
    exclude = [
        name
        for name, species in table.species.items()
        if name not in wanted and set(species.reaction.components) <= wanted
    ]
    text = TEXT.format(
        cells=cells, coupling=coupling, volumes=volumes, every=every, courant=COURANT[coupling],
        dispersivity=0.5 / cells, minerals=_quoted(MINE_MINERALS), exclude=_quoted(exclude),
    )  # fmt: skip
    return case_from_text(text, "column.toml", Path("."))


def problem_of(cells: int, coupling: str, volumes: float = 20.0, every: float = 5.0) -> Problem:
    """The same, ready to march."""
    problem = build(case_of(cells, coupling, volumes, every))
    found = (len(problem.system.components), len(problem.system.species), len(problem.system.minerals))
    if found != (11, 45, 8):
        raise ValueError(f"the benchmark's system has changed: {found} components, species, minerals")
    return problem


def _quoted(names) -> str:
    return ", ".join(f'"{name}"' for name in names)
