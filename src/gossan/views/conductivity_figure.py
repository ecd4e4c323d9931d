"""Figure: what clogging leaves of the column's conductivity by each law, and where the head is lost."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

from gossan.recording import case_of
from gossan.store.read import Result
from gossan.views import style
from gossan.views.bed import LEVELS, SPOKEN, Bed, bed_of, head_loss_of
from gossan.views.scales import axis_label, time_scale

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

LEAST_DRAWN, OFF_THE_PAGE = 1e-4, 1e-9  # of the conductivity: where the axis ends; what nothing is drawn as


def is_worth_a_figure(result: Result) -> bool:
    """Whether the laws have anything to differ about."""
    return bed_of(result, case_of(result)).has_band


@style.in_style
def conductivity(result: Result) -> Figure:
    """Conductivity left of the whole column through time, by the case's law and by others; loss of head."""
    bed = bed_of(result, case_of(result))
    time = time_scale(float(bed.time[-1]))
    times = bed.time * time.factor
    heads = head_loss_of(result)
    figure, grid = style.sheet_of_paper(2 if heads else 1, 1, 5.4 if heads else 3.4, sharex=True)
    left = grid[0, 0]
    _laws(left, bed, times)
    if heads is not None:
        lost = grid[1, 0]
        several = len(heads.layers) > 1
        for number, name in enumerate(heads.layers if several else ()):
            style.line(lost, times, heads.loss[:, number], number + 1, f"layer {name}")
        style.line(lost, times, heads.whole, 0, "whole column")
        lost.set_ylabel("loss of head (m)")
        if heads.whole.min() > 0.0 and heads.whole.max() > 30.0 * heads.whole.min():
            lost.set_yscale("log")
        else:
            lost.set_ylim(bottom=0.0)
    last = grid[-1, 0]
    last.set_xlabel(axis_label("profiles", "time", time))
    last.set_xlim(0.0, times[-1] or 1.0)
    for ax in grid[:, 0]:
        ax.legend(loc="center left", bbox_to_anchor=(1.01, 0.5))
    says = "what the same porosities leave of the whole column, by the case's law and by others"
    style.headed(figure, result.title, says, result.caution)
    return figure


def _laws(ax: Axes, bed: Bed, times: np.ndarray) -> None:
    series = {"as the case says": bed.column, **{SPOKEN[name]: left for name, left in bed.band.items()}}
    for number, (name, left) in enumerate(series.items()):
        style.line(ax, times, np.maximum(left.through_time, OFF_THE_PAGE), number, name)
    ax.set_yscale("log")
    least = min(float(left.through_time.min()) for left in series.values())
    ax.set_ylim(bottom=max(LEAST_DRAWN, 0.5 * least))
    for level in LEVELS.values():
        ax.axhline(level, color=style.FAINT, linewidth=0.9, linestyle=(0, (1, 1)))
    ax.set_ylabel("conductivity of the column\nover that of the start")
