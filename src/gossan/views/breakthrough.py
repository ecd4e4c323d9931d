"""Figure: what comes out at a port against time and pore volumes, and the limits."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from gossan.case.bounds import PH, Bound
from gossan.store.read import Group, Result
from gossan.views import chosen, style
from gossan.views.crossing import first_outside
from gossan.views.scales import TRACE, Scale, axis_label, printed_ion, solute_scale, time_scale

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

DECADES = 6.0  # shown below the largest value of a log axis, unless a limit lies lower
MARKED = 5  # pore volumes marked on the upper axis, about


@style.in_style
def breakthrough(
    result: Result, port: str = "outlet", bounds: list[Bound] | None = None,
    masses: dict[str, float] | None = None,
) -> Figure:
    """Concentrations at a port: watched solutes linear and log, the other solutes, the pH.

    bounds  limits to draw (`case.bounds.bounds_of`); masses  kg/mol by tracer
    """
    group = result.ports[port]
    own = [bound for bound in bounds or () if bound.port == port]
    watched = chosen.metals(result, own)
    others = chosen.majors(result, watched)
    figure, grid = style.sheet_of_paper(4, 1, 8.6, sharex=True, height_ratios=(3, 3, 2.4, 1.7))
    linear, log, major, ph = grid[:, 0]
    time = time_scale(float(group.time.values[-1]))
    _solutes(linear, group, watched, time, masses)
    _solutes(log, group, watched, time, masses)
    _on_log_axis(log)
    for bound in own:
        if bound.quantity in watched:
            colour = style.colour_of(watched.index(bound.quantity))
            scale = solute_scale(bound.quantity, masses)
            _limit(log, bound, colour, scale)
            _crossing(log, group, bound, colour, scale, time)
    _solutes(major, group, others, time, masses)
    _on_log_axis(major)
    style.line(ph, group.time.values * time.factor, group.pH.values, 5, "pH", marked=False)
    for bound in own:
        if bound.quantity == PH:
            ph.axhspan(bound.low, bound.high, color="#e9e4d6", zorder=0, label="limits")
    for ax in (linear, major, ph):
        if ax.get_legend_handles_labels()[0]:
            ax.legend(loc="center left", bbox_to_anchor=(1.01, 0.5))
    style.at_least_spanning(ph, style.PH_SPAN)
    ph.set_ylabel(axis_label("ports/NAME", "pH"))
    ph.set_xlabel(axis_label("ports/NAME", "time", time))
    ph.set_xlim(0.0, max(float(group.time.values[-1]) * time.factor, 1e-30))
    _pore_volumes(linear, group, time)
    x = result.axes.ports[port]
    concentration = axis_label("ports/NAME", "dissolved", Scale("", 1.0))
    says = f"port {port} at {x:.4g} m, {concentration}"
    style.headed(figure, result.title, says, result.caution)
    return figure


def _solutes(ax: Axes, group: Group, names: list[str], time: Scale, masses: dict[str, float] | None) -> None:
    """Lines of solutes, in mg/L where all have a mass, else in mmol/L."""
    known = [str(name) for name in group.component.values]
    values = group.dissolved.values
    units = set()
    for number, name in enumerate(names):
        scale = solute_scale(name, masses)
        units.add(scale.unit)
        label = printed_ion(name) + ("" if scale.unit == "mg/L" else f" ({scale.unit})")
        drawn = values[:, known.index(name)] * scale.factor
        style.line(ax, group.time.values * time.factor, drawn, number, label)
    ax.set_ylabel(f"concentration\n({' or '.join(sorted(units)) or 'mg/L'})")


def _on_log_axis(ax: Axes) -> None:
    """A log axis of some decades below the largest value: nothing real is read off below."""
    drawn = np.concatenate([np.asarray(line.get_ydata(), float) for line in ax.get_lines()] or [np.ones(1)])
    drawn = drawn[np.isfinite(drawn) & (drawn > 0.0)]
    least, top = (drawn.min(), drawn.max()) if len(drawn) else (1.0, 1.0)
    ax.set_yscale("log", nonpositive="mask")
    ax.set_ylim(max(top * 10.0**-DECADES, least / 3.0, TRACE), top * 3.0)


def _limit(ax: Axes, bound: Bound, colour: str, scale: Scale) -> None:
    value = bound.high * scale.factor
    ax.axhline(value, color=colour, linewidth=0.9, linestyle=(0, (1, 1)))
    low, high = ax.get_ylim()
    if value < 3.0 * low:
        ax.set_ylim(value / 10.0, high)
    ax.annotate(
        f"limit {printed_ion(bound.quantity)} {bound.text}", (0.005, value), (0, 2),
        xycoords=ax.get_yaxis_transform(), textcoords="offset points", fontsize=7, color=colour, va="bottom",
    )  # fmt: skip


def _crossing(ax: Axes, group: Group, bound: Bound, colour: str, scale: Scale, time: Scale) -> None:
    """A mark where the limit is first exceeded."""
    known = [str(name) for name in group.component.values]
    values = group.dissolved.values[:, known.index(bound.quantity)]
    finite = np.isfinite(values)
    found = first_outside(group.time.values[finite], values[finite], bound.low, bound.high)
    if found:
        at = found[0] * time.factor
        ax.plot([at], [bound.high * scale.factor], "o", color=colour, markersize=6, clip_on=False, zorder=4)


def _pore_volumes(ax: Axes, group: Group, time: Scale) -> None:
    """A second axis on top that counts pore volumes, whatever the flow did meanwhile."""
    from matplotlib.ticker import MaxNLocator

    volumes, times = group.pore_volumes.values, group.time.values * time.factor
    upper = ax.twiny()
    upper.set_xlim(ax.get_xlim())
    upper.spines["top"].set_visible(True)
    if volumes[-1] > 0.0:
        most = float(volumes[-1])
        even = MaxNLocator(MARKED, steps=[1, 2, 5, 10]).tick_values(0.0, most)
        marks = [mark for mark in even if mark <= most]
        upper.set_xticks(np.interp(marks, volumes, times), [f"{mark:g}" for mark in marks])
    upper.set_xlabel("pore volumes")
    upper.grid(False)
