"""How figures look: colours, lines and marks that stay apart in grey print and for colour-blind readers.

Series differ three times over: in colour, in lightness and in the pattern of line and mark. Times of one
quantity run from light to dark. Nothing here touches the state of matplotlib's pyplot.
"""

from __future__ import annotations

from collections.abc import Callable
from functools import wraps
from itertools import pairwise
from typing import TYPE_CHECKING, Any, ParamSpec

import numpy as np

if TYPE_CHECKING:
    from matplotlib.axes import Axes
    from matplotlib.figure import Figure

_Given = ParamSpec("_Given")

PIXELS_PER_INCH = 160
PAGE_WIDTH = 7.2  # inches: the text width of an A4 page
INK, FAINT = "#1b1b22", "#8d8d99"
MARKS_PER_LINE = 9
PH_SPAN = 0.1  # of its mean, about 0.7: hundredths of a pH do not fill an axis
LETTERS_ACROSS = 44  # of a layer's name, along the axes of a figure with two columns
HEAD_HEIGHT = 0.34  # inches that a title of two lines takes

# colour, lightness falling and rising in turn so that neighbours differ; line; mark
SERIES: tuple[tuple[str, Any, str], ...] = (
    ("#b3541e", "-", "o"),
    ("#1d3f72", (0, (5, 1.6)), "s"),
    ("#3aa17e", (0, (1.2, 1.2)), "^"),
    ("#6b2a5b", (0, (7, 1.5, 1.5, 1.5)), "D"),
    ("#d9a321", "-", "v"),
    ("#20242b", (0, (2.5, 1.2)), "x"),
    ("#6fa8dc", (0, (6, 1, 1, 1, 1, 1)), "P"),
    ("#8a7a5c", "-", "*"),
)
TIMES = ("#d8b26e", "#c58a4a", "#a56345", "#7c4249", "#4f2a48", "#1f1730")  # light to dark
TIME_LINES: tuple[Any, ...] = ("-", (0, (5, 1.5)), (0, (1.2, 1.2)), (0, (7, 1.5, 1.5, 1.5)), (0, (3, 1)), "-")

RC: Any = {
    "font.family": "DejaVu Sans", "font.size": 8.5, "axes.titlesize": 8.5, "axes.labelsize": 8.5,
    "xtick.labelsize": 8, "ytick.labelsize": 8, "legend.fontsize": 8, "text.color": INK,
    "axes.edgecolor": INK, "axes.labelcolor": INK, "xtick.color": INK, "ytick.color": INK,
    "axes.linewidth": 0.7, "lines.linewidth": 1.4, "lines.markersize": 3.2, "axes.spines.top": False,
    "axes.spines.right": False, "axes.formatter.useoffset": False, "axes.formatter.limits": (-3, 5),
    "legend.frameon": False, "legend.handlelength": 3.4, "axes.unicode_minus": True, "svg.fonttype": "path",
}  # fmt: skip


def in_style(draw: Callable[_Given, Figure]) -> Callable[_Given, Figure]:
    """A function that makes a figure, in the project's look and without trace in matplotlib's settings."""

    @wraps(draw)
    def drawn(*given: _Given.args, **named: _Given.kwargs) -> Figure:
        import matplotlib

        with matplotlib.rc_context(RC):
            return draw(*given, **named)

    return drawn


def sheet_of_paper(rows: int, columns: int, height: float, **sharing: Any) -> tuple[Figure, np.ndarray]:
    """A figure of page width with a grid of axes, (row, column); height in inches."""
    from matplotlib.backends.backend_agg import FigureCanvasAgg
    from matplotlib.figure import Figure

    figure = Figure(figsize=(PAGE_WIDTH, height), layout="constrained")
    FigureCanvasAgg(figure)
    axes = figure.subplots(rows, columns, squeeze=False, **sharing)
    for ax in axes.flat:
        ax.grid(True, color="#e4e4ea", linewidth=0.5)
        ax.set_axisbelow(True)
    return figure, axes


def line(ax: Axes, x: np.ndarray, y: np.ndarray, number: int, label: str, marked: bool = True) -> None:
    """One of several series, told apart by its number."""
    colour, dashes, mark = SERIES[number % len(SERIES)]
    marks = _marks(mark if marked else "", len(x), number)
    ax.plot(x, y, color=colour, linestyle=dashes, label=label, **marks)


def colour_of(number: int) -> str:
    """The colour of a series."""
    return SERIES[number % len(SERIES)][0]


def time_line(ax: Axes, x: np.ndarray, y: np.ndarray, number: int, count: int, label: str) -> None:
    """One time of several, the later the darker."""
    step = (len(TIMES) - 1) / max(count - 1, 1)
    index = round(number * step) if count > 1 else len(TIMES) - 1
    marks = _marks("osv^Dx"[index], len(x), number)
    ax.plot(x, y, color=TIMES[index], linestyle=TIME_LINES[index], label=label, **marks)


def _marks(mark: str, points: int, number: int) -> dict[str, Any]:
    """Marks on a few points only, shifted from line to line so that they do not hide each other."""
    apart = max(1, points // MARKS_PER_LINE)
    shift = (number * max(1, apart // 3)) % apart if apart > 1 else 0
    return {"marker": mark, "markevery": (shift, apart), "markerfacecolor": "white", "markeredgewidth": 0.9}


def headed(figure: Figure, title: str, says: str, caution: str, legend_of: Axes | None = None) -> None:
    """Title and what is shown at the top left, the caution in small print below the axes.

    legend_of  axes whose lines are named in one row below the title, for all axes of the figure
    """
    text = f"{title}\n{says}"
    if legend_of:
        handles, labels = legend_of.get_legend_handles_labels()
        below = 1.0 - HEAD_HEIGHT / float(figure.get_size_inches()[1])
        place: dict[str, Any] = {"loc": "upper left", "bbox_to_anchor": (0.0, below), "handlelength": 2.8}
        figure.legend(handles, labels, ncols=len(labels), columnspacing=1.2, **place)
        text += "\n "  # room for that row
    figure.suptitle(text, x=0.01, ha="left", fontsize=9.5, color=INK)
    first = caution.partition(";")[0].strip()
    if first:
        figure.supxlabel(first.rstrip(".") + ".", x=0.01, ha="left", fontsize=6.5, color=FAINT)


def layers_marked(ax: Axes, edges: list[float], names: list[str], named: bool) -> None:
    """Boundaries between layers, and their names (or numbers, `layer_key`) above the axes."""
    for edge in edges[1:-1]:
        ax.axvline(edge, color=FAINT, linewidth=0.8, linestyle=(0, (1, 2)), zorder=0.5)
    if named and len(names) > 1:
        heads = _layer_heads(edges, names)
        for head, left, right in zip(heads, edges[:-1], edges[1:], strict=True):
            ax.text(
                0.5 * (left + right), 1.015, head, transform=ax.get_xaxis_transform(),
                ha="center", va="bottom", fontsize=7, color=FAINT,
            )  # fmt: skip


def layer_key(edges: list[float], names: list[str]) -> str:
    """What the numbers above the axes stand for; "" where the names themselves stand there."""
    heads = _layer_heads(edges, names)
    if len(names) < 2 or heads[0] != "1":
        return ""
    return "; layers: " + ", ".join(f"{head} {name}" for head, name in zip(heads, names, strict=True))


def _layer_heads(edges: list[float], names: list[str]) -> list[str]:
    """Names broken over two lines at the most, or numbers where a layer is too short for its name."""
    import textwrap

    whole = edges[-1] - edges[0]
    shares = [(right - left) / whole for left, right in pairwise(edges)]
    lines = [
        textwrap.wrap(name, max(1, int(LETTERS_ACROSS * share)))
        for name, share in zip(names, shares, strict=True)
    ]
    broken = any(" ".join(each) != name for each, name in zip(lines, names, strict=True))
    if broken or max(map(len, lines)) > 2:
        return [str(number) for number in range(1, len(names) + 1)]
    return ["\n".join(each) for each in lines]


def at_least_spanning(ax: Axes, share: float) -> None:
    """Widen the y axis to a share of its mean, so that what hardly changes looks as if it hardly changed."""
    low, high = ax.get_ylim()
    middle, half = 0.5 * (low + high), 0.5 * max(high - low, share * abs(low + high) / 2)
    ax.set_ylim(middle - half, middle + half)
