"""What stands in a result file: one row per variable, its only name, unit and long name.

The writer, the reader, docs/result-file.md, CSV headers and axis labels all derive from VARIABLES.
"""

from __future__ import annotations

from dataclasses import dataclass
from typing import Literal

CONVENTIONS = "CF-1.11"

Kind = Literal["axis", "frame", "port", "ledger", "step"]


@dataclass(frozen=True, slots=True)
class Variable:
    """One variable of the result file.

    group  where it stands; "ports/NAME" stands for one group per port
    dims   its dimensions, the slowest first; () for a single number
    unit   as UDUNITS spells it; "1" for pure numbers and for names
    kind   what it belongs to: an axis, or the frame, port, ledger or step that records it
    part   only in the file of a case that has this part, one of PARTS; "" for all
    """

    group: str
    name: str
    dims: tuple[str, ...]
    unit: str
    long_name: str
    kind: Kind
    part: str = ""

    @property
    def header(self) -> str:
        """The head of a column in a table: `dissolved (mol m-3)`, `pH`."""
        return self.name if self.unit == "1" else f"{self.name} ({self.unit})"

    @property
    def label(self) -> str:
        """The title of an axis in a figure: `head (m)`, spelled out."""
        return self.long_name if self.unit == "1" else f"{self.long_name} ({self.unit})"


PORT = "ports/NAME"
PARTS = {
    "isotherms": "a case with isotherms",
    "immobile": "a case with immobile water",
    "errors": 'a case with run.errors = "carried", the default',
}

_COMPONENT = "name of the component or tracer"

VARIABLES: tuple[Variable, ...] = (
    Variable("profiles", "time", ("time",), "s", "time since the start", "axis"),
    Variable("profiles", "x", ("x",), "m", "distance of the cell's centre from the inlet", "axis"),
    Variable("profiles", "face", ("face",), "m", "distance of the cell's face from the inlet", "axis"),
    Variable("profiles", "layer", ("x",), "1", "name of the layer around the cell", "axis"),
    Variable("profiles", "component", ("component",), "1", _COMPONENT, "axis"),
    Variable("profiles", "mineral", ("mineral",), "1", "name of the mineral", "axis"),
    Variable("profiles", "species", ("species",), "1", "name of the dissolved species", "axis"),
    Variable("profiles", "dissolved", ("time", "component", "x"), "mol m-3",
             "total dissolved amount per volume of flowing water", "frame"),
    Variable("profiles", "solid", ("time", "mineral", "x"), "mol m-3",
             "amount of the mineral per bulk volume", "frame"),
    Variable("profiles", "saturation", ("time", "mineral", "x"), "1",
             "saturation index, log10 of the ion activity product over Ksp", "frame"),
    Variable("profiles", "activity", ("time", "species", "x"), "1", "log10 of the activity", "frame"),
    Variable("profiles", "immobile_dissolved", ("time", "component", "x"), "mol m-3",
             "total dissolved amount per volume of immobile water", "frame", "immobile"),
    Variable("profiles", "sorbed", ("time", "component", "x"), "mol m-3",
             "amount sorbed by an isotherm per bulk volume", "frame", "isotherms"),
    Variable("profiles", "porosity", ("time", "x"), "1",
             "water-filled fraction of the bulk, flowing and immobile", "frame"),
    Variable("profiles", "conductivity", ("time", "x"), "m s-1",
             "saturated hydraulic conductivity", "frame"),
    Variable("profiles", "pH", ("time", "x"), "1", "pH", "frame"),
    Variable("profiles", "pe", ("time", "x"), "1", "pe", "frame"),
    Variable("profiles", "ionic_strength", ("time", "x"), "mol kg-1",
             "ionic strength per mass of water", "frame"),
    Variable("profiles", "darcy_flux", ("time", "face"), "m s-1", "Darcy flux through the face", "frame"),
    Variable("profiles", "head", ("time", "face"), "m", "hydraulic head at the face", "frame"),
    Variable("profiles", "temperature", ("time",), "K",
             "temperature of the column; where it jumps, the one before the jump", "frame"),
    Variable(PORT, "time", ("time",), "s", "time since the start", "axis"),
    Variable(PORT, "component", ("component",), "1", _COMPONENT, "axis"),
    Variable(PORT, "x", (), "m", "distance of the port from the inlet", "axis"),
    Variable(PORT, "pore_volumes", ("time",), "1",
             "water passed through the inlet over the column's first pore volume", "port"),
    Variable(PORT, "darcy_flux", ("time",), "m s-1", "Darcy flux at the port", "port"),
    Variable(PORT, "pH", ("time",), "1", "pH at the port", "port"),
    Variable(PORT, "pe", ("time",), "1", "pe at the port", "port"),
    Variable(PORT, "dissolved", ("time", "component"), "mol m-3",
             "flux-averaged concentration, (advective + dispersive flux) / Darcy flux", "port"),
    Variable(PORT, "resident", ("time", "component"), "mol m-3",
             "concentration in the pore water at the port", "port"),
    Variable(PORT, "passed", ("time", "component"), "mol m-2",
             "amount passed so far per cross-section of the column", "port"),
    Variable(PORT, "dissolved_error", ("time", "component"), "mol m-3",
             "estimated error of dissolved in time and splitting, with its sign", "port", "errors"),
    Variable(PORT, "pH_error", ("time",), "1",
             "estimated error of pH in time and splitting, with its sign", "port", "errors"),
    Variable("ledger", "time", ("time",), "s", "time since the start", "axis"),
    Variable("ledger", "component", ("component",), "1", _COMPONENT, "axis"),
    Variable("ledger", "entered", ("time", "component"), "mol m-2",
             "amount entered so far per cross-section of the column", "ledger"),
    Variable("ledger", "left", ("time", "component"), "mol m-2",
             "amount left so far per cross-section of the column", "ledger"),
    Variable("ledger", "stored", ("time", "component"), "mol m-2",
             "amount stored in the column less the amount at the start, per cross-section", "ledger"),
    Variable("ledger", "made", ("time", "component"), "mol m-2",
             "amount made by decay or given by open gases so far per cross-section of the column", "ledger"),
    Variable("ledger", "error", ("time", "component"), "1",
             "entered - left - stored + made over the largest amount so far", "ledger"),
    Variable("ledger", "splitting_error", ("time", "component"), "1",
             "estimated error in time and splitting: all that is elsewhere over the largest amount so far",
             "ledger", "errors"),
    Variable("ledger", "water_error", ("time",), "1", "error of the water balance", "ledger"),
    Variable("ledger", "charge_error", ("time",), "1", "error of the charge balance", "ledger"),
    Variable("steps", "step", ("step",), "1", "number of the accepted step", "axis"),
    Variable("steps", "time", ("step",), "s", "time at the end of the step", "step"),
    Variable("steps", "dt", ("step",), "s", "length of the step", "step"),
    Variable("steps", "courant", ("step",), "1", "largest Courant number of the step", "step"),
    Variable("steps", "iterations", ("step",), "1", "iterations of the coupling in the step", "step"),
    Variable("steps", "splitting_error", ("step",), "1",
             "estimated relative error of the step in time and splitting", "step"),
    Variable("steps", "seconds", ("step",), "s", "wall-clock time spent on the step", "step"),
)

ATTRIBUTES: dict[str, str] = {
    "Conventions": f"`{CONVENTIONS}`",
    "title": "the title of the case",
    "status": "`running` (also in a file whose run was killed), `finished`, `stopped` or `failed`",
    "reason": "why it stopped or failed; `clogged` where a closed cell ended a finished run; empty otherwise",
    "gossan_version": "the program that wrote the file",
    "case": "the whole TOML text of the case",
    "constants": "the whole text of the user's own constants; empty without",
    "files": "the texts of the other files that the case names, by name, as JSON",
    "caution": "what the numbers must not be used for",
    "warnings": "what the run went beyond, a line each; empty while it runs, or without any",
    "crossings": (
        "once the run has ended, by port and quantity as JSON: when a limit was first exceeded, by how much "
        "that may be off between steps, and when it was in the column that carries the errors, s"
    ),
    "coarse": (
        "after `gossan run --grid-check`: when the limits were first exceeded in half the cells, s, by port "
        "and quantity as JSON; empty otherwise"
    ),
    "started": "when the run began, UTC; it also marks the run's own state files",
}

# The axis along which a group grows. It is extended last: its length is the number of committed rows.
_GROWS = {"steps": "step"}


def pattern(group: str) -> str:
    """The layout's name of a group: `ports/NAME` for `ports/outlet`, any other as it is."""
    return PORT if group.startswith("ports/") else group


def variables(group: str) -> tuple[Variable, ...]:
    """The rows of a group, axes first."""
    wanted = pattern(group)
    return tuple(row for row in VARIABLES if row.group == wanted)


def variable(group: str, name: str) -> Variable:
    """The row of one variable; KeyError where the layout has none.

    >>> variable("ports/outlet", "dissolved").header
    'dissolved (mol m-3)'
    """
    for row in variables(group):
        if row.name == name:
            return row
    raise KeyError(f"{group}/{name}")


def growing_axis(group: str) -> str:
    """The axis whose length is the number of committed rows: `time`, in steps `step`."""
    return _GROWS.get(group, "time")


def recorded(group: str) -> tuple[Variable, ...]:
    """The rows of a group that a record fills, without its axes."""
    return tuple(row for row in variables(group) if row.kind != "axis")
