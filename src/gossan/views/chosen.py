"""Which solutes, minerals and times of a result a figure shows."""

from __future__ import annotations

import numpy as np

from gossan.base.notation import parse_formula
from gossan.case.bounds import Bound
from gossan.store.read import Result
from gossan.views.scales import TRACE

METALS = ("Fe", "Mn", "Zn", "Cu", "Ni", "Co", "Cd", "Pb", "Al")  # what mine water is treated for
MOST_LINES = 8
NEVER = 1e-9  # of the largest amount of any mineral: less is not drawn
TIMES_SHOWN = 6


def metals(result: Result, bounds: list[Bound] | None = None) -> list[str]:
    """The solutes to watch: those with a limit, the metals, the tracers; as many as can be told apart."""
    tracers = [name for name in result.axes.component if not _is_formula(name)]
    limited = [bound.quantity for bound in bounds or ()]
    watched = [*tracers, *limited, *filter(_is_metal, result.axes.component)]
    return _largest(result, [name for name in result.axes.component if name in watched])


def majors(result: Result, watched: list[str]) -> list[str]:
    """The other solutes, protons left out."""
    rest = [name for name in result.axes.component if name not in watched and name not in ("H^+", "e^-")]
    return _largest(result, rest)


def _largest(result: Result, names: list[str]) -> list[str]:
    """Those that are ever there, the most abundant ones where there are too many; in the file's order."""
    components = list(result.axes.component)
    dissolved = result.profiles.dissolved.values
    most = {name: float(np.nanmax(np.abs(dissolved[:, components.index(name)]))) for name in names}
    kept = sorted((name for name in names if most[name] > TRACE), key=lambda name: -most[name])[:MOST_LINES]
    return [name for name in names if name in kept]


def _is_metal(name: str) -> bool:
    return _is_formula(name) and not set(parse_formula(name)).isdisjoint(METALS)


def _is_formula(name: str) -> bool:
    try:
        parse_formula(name)
    except ValueError:
        return False
    return True


def minerals(result: Result, most: int = MOST_LINES) -> list[str]:
    """The minerals that are ever there; of too many, those whose amount in the column changes most.

    Not what any one cell sees of them: a thin front that walks through the bed is less than what it takes up.
    In the file's order.
    """
    solid = result.profiles.solid.values
    if not solid.size:
        return []
    largest = np.abs(solid).max(axis=(0, 2))
    stock = solid @ np.diff(result.axes.face)
    change = np.abs(stock - stock[0]).max(axis=0)
    change[change <= NEVER * stock.max(initial=0.0)] = 0.0
    there = [m for m in range(solid.shape[1]) if largest[m] > NEVER * largest.max() and largest[m] > 0.0]
    kept = sorted(there, key=lambda m: (-change[m], -largest[m]))[:most]
    return [result.axes.mineral[m] for m in sorted(kept)]


def frames(result: Result, count: int = TIMES_SHOWN) -> list[int]:
    """Frames spread evenly over the run, the first and the last among them."""
    time = result.profiles.time.values
    wanted = np.linspace(time[0], time[-1], count)
    return sorted({int(np.abs(time - each).argmin()) for each in wanted})


def layer_edges(result: Result) -> tuple[list[float], list[str]]:
    """Where layers begin and end (m), and their names."""
    layers, faces = result.axes.layer, result.axes.face
    starts = [0] + [i for i in range(1, len(layers)) if layers[i] != layers[i - 1]]
    return [float(faces[i]) for i in (*starts, len(layers))], [layers[i] for i in starts]
