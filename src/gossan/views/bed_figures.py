"""Figures: pores and conductivity, capacity and ledger."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from gossan.recording import case_of
from gossan.store.layout import variable
from gossan.store.read import Result
from gossan.views import chosen, style
from gossan.views.bed import LEVELS, bed_of
from gossan.views.profile_figures import along_column
from gossan.views.scales import axis_label, length_scale, time_scale

if TYPE_CHECKING:
    from matplotlib.figure import Figure

LEAST_SPAN = 0.02  # of its mean: an axis does not blow up smaller changes
ROUND_OFF = 1e-17  # an error below this is drawn here


@style.in_style
def pores(result: Result) -> Figure:
    """Porosity and conductivity along the column at a few times, and their least through time."""
    profiles = result.profiles
    time = time_scale(float(profiles.time.values[-1]))
    times = profiles.time.values * time.factor
    x = length_scale(float(result.axes.face[-1]))
    bed = bed_of(result, case_of(result))
    left, known = bed.cells, bed.known
    figure, grid = style.sheet_of_paper(2 if known else 1, 2, 5.2 if known else 3.1, sharex="col")
    quantities = [(profiles.porosity.values, "porosity")]
    if known:
        quantities.append((left, "conductivity\nover that of the start"))
    for row, (values, name) in enumerate(quantities):
        along, through = grid[row]
        along_column(along, result, values, named=row == 0)
        along.set_ylabel(name)
        style.line(through, times, np.nanmin(values, axis=1), 0, "least of all cells")
        style.line(through, times, values[:, 0], 1, "cell at the inlet")
        through.set_xlim(0.0, times[-1] or 1.0)
        through.set_ylabel(name)
        for ax in (along, through):
            style.at_least_spanning(ax, LEAST_SPAN)
    if known:
        grid[1, 1].axhline(LEVELS["half"], color=style.FAINT, linewidth=0.9, linestyle=(0, (1, 1)))
    grid[-1, 0].set_xlabel(f"distance from the inlet ({x.unit})")
    grid[-1, 1].set_xlabel(axis_label("profiles", "time", time))
    grid[0, 1].legend(loc="best")
    says = "porosity and conductivity" if known else "porosity; no conductivity is given in the case"
    says += style.layer_key(*chosen.layer_edges(result))
    style.headed(figure, result.title, says, result.caution, legend_of=grid[0, 0])
    return figure


@style.in_style
def books(result: Result) -> Figure:
    """Minerals left through time, and the errors of the ledger."""
    figure, grid = style.sheet_of_paper(2, 1, 5.4, sharex=True)
    stock, ledger = grid[:, 0]
    profiles = result.profiles
    time = time_scale(float(profiles.time.values[-1]))
    width = np.diff(result.axes.face)
    solid = profiles.solid.values @ width
    minerals = list(result.axes.mineral)
    for number, name in enumerate(chosen.minerals(result)):
        style.line(stock, profiles.time.values * time.factor, solid[:, minerals.index(name)], number, name)
    stock.set_ylabel(f"in the whole column\n({variable('ledger', 'stored').unit} of cross-section)")
    stock.set_ylim(bottom=0.0)
    books_of = result.ledger
    lines = {
        "largest of all solutes": np.abs(books_of.error.values).max(axis=1, initial=0.0),
        "water": np.abs(books_of.water_error.values),
        "charge": np.abs(books_of.charge_error.values),
    }
    for number, (name, values) in enumerate(lines.items()):
        largest = np.maximum(np.maximum.accumulate(values), ROUND_OFF)
        style.line(ledger, books_of.time.values * time.factor, largest, number, name)
    ledger.set_yscale("log")
    ledger.set_ylim(ROUND_OFF, max(1e-12, 3.0 * max(values.max() for values in lines.values())))
    ledger.set_ylabel("error of the ledger,\nthe largest so far")
    ledger.set_xlabel(axis_label("ledger", "time", time))
    ledger.set_xlim(0.0, float(books_of.time.values[-1]) * time.factor or 1.0)
    for ax in (stock, ledger):
        if ax.get_lines():
            ax.legend(loc="center left", bbox_to_anchor=(1.01, 0.5))
    style.headed(figure, result.title, "minerals left, and what the books do not account for", result.caution)
    return figure
