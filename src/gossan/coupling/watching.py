"""Limits watched from step to step: when each is first exceeded, closer than records can tell."""

from __future__ import annotations

import numpy as np

from gossan.chemistry.equilibrium import LN10
from gossan.coupling.problem import Problem, Watched
from gossan.coupling.state import State

TIME, VALUE, SPAN, SLOPE, WHEN, OFF = range(6)


def nothing_seen(limits: int) -> np.ndarray:
    """(limit, 6): what `seen` hands on from step to step, before the first.

    Columns: time (s) and value of the last step; how long ago the one before it was (s) and the slope from
    there; when the value first left its range (s) and how far off that may be between steps (s); NaN for what
    is not known.
    """
    return np.full((limits, 6), np.nan)


def seen(
    problem: Problem, known: np.ndarray, before: State, after: State, darcy_flux: np.ndarray
) -> np.ndarray:
    """The same after one more step.

    darcy_flux (face,) m s-1 of the step. What passed in a step over the water that did is the concentration
    of its middle to second order; pH is that of its end. Values are taken to change evenly between; how far
    that is off, the change of the slope tells (equations.md, 46).
    """
    found = known.copy()
    for row, limit in zip(found, problem.watched, strict=True):
        time, value = _value(problem, limit, before, after, darcy_flux)
        if value != value:
            continue
        span = time - row[TIME]
        slope = (value - row[VALUE]) / span
        out, was_out = (not limit.low <= v <= limit.high for v in (value, row[VALUE]))
        if out and not was_out and row[VALUE] == row[VALUE] and row[WHEN] != row[WHEN]:
            edge = limit.high if value > limit.high else limit.low
            row[WHEN] = row[TIME] + (edge - row[VALUE]) / slope
            bend = span / (span + row[SPAN]) * abs(slope - row[SLOPE]) / (3.0 * abs(slope))
            row[OFF] = span * (min(bend, 0.5) if bend == bend else 0.5)
        row[TIME], row[VALUE], row[SPAN], row[SLOPE] = time, value, span, slope
    return found


def _value(
    problem: Problem, limit: Watched, before: State, after: State, darcy_flux: np.ndarray
) -> tuple[float, float]:
    """Time and value of one limited quantity; NaN where no water passes."""
    face = problem.ports[limit.port].face
    if limit.solute < 0:
        return after.time, -float(after.ln_activity[0, max(face - 1, 0)]) / LN10
    water = float(darcy_flux[face]) * (after.time - before.time)
    (now, now_lost), (then, then_lost) = (
        state.passed[2 + limit.port, limit.solute] for state in (after, before)
    )
    passed = float((now - then) + (now_lost - then_lost))
    return 0.5 * (before.time + after.time), passed / water if water > 0.0 else np.nan
