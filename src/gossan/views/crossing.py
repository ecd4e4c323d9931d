"""When recorded values first leave a range, and how sure that is."""

from __future__ import annotations

from typing import TYPE_CHECKING

import numpy as np

if TYPE_CHECKING:
    from scipy.interpolate import PPoly

    from gossan.store.read import Crossing

AROUND = 3  # records on either side of a crossing that shape the curve through it
RESOLVED = 0.5  # of the change around it: more of it between two records, and nothing tells where
SURE = 3.0  # times what was carried: on fronts that was half to all of the true error (docs/decisions.md)


def first_outside(
    time: np.ndarray, values: np.ndarray, low: float, high: float
) -> tuple[float, float] | None:
    """When values first leave [low, high], and how far off that may be by recording (equations.md, 46).

    time    (record,) s, rising
    Returns None where they never do; (time of the first record, 0) where they start outside

    >>> time, _ = first_outside(np.array([0.0, 10.0, 20.0]), np.array([0.0, 1.0, 3.0]), -np.inf, 2.0)
    >>> round(time, 3)
    15.0
    """
    outside = np.flatnonzero((values < low) | (values > high))
    if not len(outside):
        return None
    i = int(outside[0])
    if i == 0:
        return float(time[0]), 0.0
    edge = high if values[i] > high else low
    here = slice(max(i - AROUND, 0), i + AROUND)
    return _between(time[here], values[here], i - here.start, edge)


def error_of_steps(
    time: np.ndarray, values: np.ndarray, errors: np.ndarray, low: float, high: float, when: float
) -> float:
    """By how much when, s, may be off because of what the steps missed, s (equations.md, 90).

    errors  (record,) of the values, with their signs
    Returns SURE times how much later or earlier the values less their errors leave the range; inf where they
            never do
    """
    found = first_outside(time, values - errors, low, high)
    return np.inf if found is None else SURE * abs(found[0] - when)


def closer(crossing: Crossing) -> tuple[float, float]:
    """When a limit was exceeded as the steps saw it, and how far off that may be, s; inf: not known.

    crossing  when, by how much that may be off between steps, when in the column that carries the errors, s
    """
    when, off, shadow = crossing
    return when, off + (np.inf if shadow is None else SURE * abs(shadow - when))


def _between(time: np.ndarray, values: np.ndarray, i: int, edge: float) -> tuple[float, float]:
    """Where values reach edge between records i - 1 and i, and how far two curves through them differ."""
    half = 0.5 * float(time[i] - time[i - 1])
    share = (edge - values[i - 1]) / (values[i] - values[i - 1])
    straight = float(time[i - 1] + share * 2.0 * half)
    changes = np.abs(np.diff(values))
    if len(time) < 4 or changes[i - 1] > RESOLVED * changes.sum():
        return straight, half
    from scipy.interpolate import CubicSpline, PchipInterpolator

    monotone, smooth = (
        _root(curve(time, values - edge), float(time[i - 1]), float(time[i]))
        for curve in (PchipInterpolator, CubicSpline)
    )
    if monotone is None or smooth is None:
        return straight, half
    return monotone, min(abs(smooth - monotone), half)


def _root(curve: PPoly, start: float, end: float) -> float | None:
    """The only zero of a piecewise cubic from start to end, None where it has several."""
    roots = curve.roots(extrapolate=False)
    found = roots[(roots >= start) & (roots <= end)]
    return float(found[0]) if len(found) == 1 else None
