"""What drives a column, from the feed of its case."""

from __future__ import annotations

import numpy as np

from gossan.case.course import Course
from gossan.case.model import Case
from gossan.coupling.feeds import Feeds
from gossan.coupling.schedule import Schedule, every

FRAMES, RECORDS = 100, 1000  # default divisions of a run


def waters_entering(course: Course) -> dict[str, None]:
    """Names of the waters that enter, each once, in order."""
    return dict.fromkeys(values.water for piece in course.pieces for values in (piece.first, piece.last))


def feeds_of(course: Course, composition: dict[str, np.ndarray]) -> Feeds:
    """The pieces of a course as arrays; composition (solute,) mol m-3 by water."""
    ends = [(piece.first, piece.last) for piece in course.pieces]

    def numbers(name: str) -> np.ndarray:
        both = [[getattr(values, name) for values in pair] for pair in ends]
        return np.array(both, float)  # None becomes NaN

    return Feeds(
        begins=Schedule(np.array([piece.start for piece in course.pieces]), course.by_volume),
        inflow=np.array([[composition[values.water] for values in pair] for pair in ends]),
        darcy_flux=numbers("darcy_flux"),
        head_drop=numbers("head_drop"),
        temperature=numbers("temperature"),
    )


def frames_of(case: Case, course: Course) -> Schedule:
    """When profiles are recorded."""
    return _interval(case, course, "profiles_every", FRAMES)


def records_of(case: Case, course: Course) -> Schedule:
    """When ports and ledger are recorded."""
    return _interval(case, course, "ports_every", RECORDS)


def _interval(case: Case, course: Course, key: str, divisions: int) -> Schedule:
    """When to record: every so often, on the clock of the interval; at the end it is due anyway."""
    assert case.run is not None
    duration, interval = case.run.duration, getattr(case.run, key)
    if interval is None:
        return every(duration.si / divisions, duration.si, duration.unit == "PV")
    if interval.unit == duration.unit:
        return every(interval.si, duration.si, interval.unit == "PV")
    if not course.held_flux:
        return every(interval.si, 1e6 * interval.si, interval.unit == "PV")
    seconds = course.seconds(duration)
    if course.steady_flux and seconds < np.inf:
        return every(course.seconds(interval), seconds)
    if interval.unit == "s":
        return every(interval.si, seconds)
    volumes = course.volumes(seconds)
    return every(interval.si, volumes, by_volume=True) if volumes > 0.0 else Schedule(np.zeros(1), True)
