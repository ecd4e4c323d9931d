"""Figures: profiles along the column at a few times, light to dark."""

from __future__ import annotations

import math
from typing import TYPE_CHECKING

import numpy as np

from gossan.case.bounds import PH, Bound
from gossan.store.read import Result
from gossan.views import chosen, style
from gossan.views.scales import Scale, axis_label, length_scale, printed_ion, solute_scale, time_scale

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

PANEL_HEIGHT = 1.75  # inches
HEAD_HEIGHT = 1.1
MOST_PANELS = 12


@style.in_style
def dissolved_profiles(
    result: Result, bounds: list[Bound] | None = None, masses: dict[str, float] | None = None
) -> Figure:
    """Watched solutes and pH along the column.

    bounds  limits, whose solutes are watched too; masses  kg/mol by tracer
    """
    panels: list[tuple[str, np.ndarray]] = []
    components = list(result.axes.component)
    dissolved = result.profiles.dissolved.values
    for name in chosen.metals(result, bounds):
        scale = solute_scale(name, masses)
        values = dissolved[:, components.index(name)] * scale.factor
        panels.append((f"{printed_ion(name)} ({scale.unit})", values))
    panels.append((PH, result.profiles.pH.values))
    says = "profiles of " + axis_label("profiles", "dissolved", Scale("", 1.0)).removeprefix("total ")
    return _panels(result, panels, says)


@style.in_style
def solid_profiles(result: Result) -> Figure:
    """Minerals along the column."""
    minerals = list(result.axes.mineral)
    solid = result.profiles.solid.values
    panels = [(name, solid[:, minerals.index(name)]) for name in chosen.minerals(result)]
    return _panels(result, panels, "profiles of minerals: " + axis_label("profiles", "solid"))


@style.in_style
def retained_profiles(
    result: Result, bounds: list[Bound] | None = None, masses: dict[str, float] | None = None
) -> Figure:
    """What isotherms hold, and watched solutes in immobile water; NaN, and no line, where there is none."""
    panels: list[tuple[str, np.ndarray]] = []
    names = list(result.axes.component)
    if "sorbed" in result.profiles:
        sorbed = result.profiles.sorbed.values
        unit = result.profiles.sorbed.unit
        panels += [(f"{printed_ion(name)} sorbed\n({unit} of bulk)", sorbed[:, k])
                   for k, name in enumerate(names) if sorbed[:, k].any()]
    if "immobile_dissolved" in result.profiles:
        beside = result.profiles.immobile_dissolved.values
        for name in chosen.metals(result, bounds):
            scale = solute_scale(name, masses)
            values = beside[:, names.index(name)] * scale.factor
            panels.append((f"{printed_ion(name)}, immobile\n({scale.unit})", values))
    return _panels(result, panels[:MOST_PANELS], "profiles of what the bed holds back")


def _panels(result: Result, panels: list[tuple[str, np.ndarray]], says: str) -> Figure:
    """Small charts side by side, one per quantity (frame, cell), lines being times."""
    rows = max(1, math.ceil(len(panels) / 2))
    columns = 2 if len(panels) > 1 else 1
    figure, grid = style.sheet_of_paper(rows, columns, HEAD_HEIGHT + PANEL_HEIGHT * rows, sharex=True)
    for number, (ax, (name, values)) in enumerate(zip(grid.flat, panels, strict=False)):
        along_column(ax, result, values, named=number < columns)
        ax.set_ylabel(name)
        if name == PH:
            style.at_least_spanning(ax, style.PH_SPAN)
    scale = length_scale(float(result.axes.face[-1]))
    for ax in grid[-1]:
        ax.set_xlabel(f"distance from the inlet ({scale.unit})")
    if len(panels) < rows * columns:  # rows > 1
        grid[-1, -1].set_visible(False)
        grid[-2, -1].tick_params(labelbottom=True)
        grid[-2, -1].set_xlabel(f"distance from the inlet ({scale.unit})")
    says += style.layer_key(*chosen.layer_edges(result))
    style.headed(figure, result.title, says, result.caution, legend_of=grid.flat[0])
    return figure


def along_column(ax: Axes, result: Result, values: np.ndarray, named: bool) -> None:
    """Lines of a quantity (frame, cell) along the column at the chosen times, layers marked."""
    shown = chosen.frames(result)
    times = result.profiles.time.values
    time = time_scale(float(times[-1]))
    scale = length_scale(float(result.axes.face[-1]))
    for number, frame in enumerate(shown):
        label = f"{times[frame] * time.factor:.4g} {time.unit}"  # six of them stand in one row
        label = label if number else f"after {label}"
        style.time_line(ax, result.axes.x * scale.factor, values[frame], number, len(shown), label)
    edges, names = chosen.layer_edges(result)
    style.layers_marked(ax, [edge * scale.factor for edge in edges], names, named)
    ax.set_xlim(0.0, edges[-1] * scale.factor)
