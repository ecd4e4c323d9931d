"""Limits watched from step to step, on courses whose crossing is known exactly."""

from __future__ import annotations

from itertools import pairwise
from types import SimpleNamespace

import numpy as np
import pytest

from gossan.chemistry.equilibrium import LN10
from gossan.coupling.problem import Watched
from gossan.coupling.watching import OFF, WHEN, nothing_seen, seen

FLUX = np.array([2.0, 2.0])
ENDS = np.array([0.0, 1.0, 2.5, 3.0, 4.0, 6.0])  # s, of steps of unlike length


def watched(limit: Watched, passed, ph=None) -> np.ndarray:
    """What is known at the end of a course; passed(time) mol m-2 through the port, ph(time) beside it."""
    problem = SimpleNamespace(ports=[SimpleNamespace(face=1)], watched=(limit,))
    states = [
        SimpleNamespace(time=t, passed=np.array([[[0.0, 0.0]], [[0.0, 0.0]], [[passed(t), 0.0]]]),
                        ln_activity=np.array([[-LN10 * (ph(t) if ph else 7.0)]]))
        for t in ENDS.tolist()
    ]  # fmt: skip
    known = nothing_seen(1)
    for before, after in pairwise(states):
        known = seen(problem, known, before, after, FLUX)
    return known[0]


def test_a_ramp_is_met_to_the_bit_of_its_middle():
    """c = t: what passes in a step over its water is c in the middle of the step, exactly."""
    known = watched(Watched(0, 0, -np.inf, 3.1), lambda t: FLUX[1] * t * t / 2.0)
    assert known[WHEN] == pytest.approx(3.1, rel=1e-14)


def test_a_bent_course_is_off_by_no_more_than_it_says():
    """c = t^2, passed = q t^3 / 3, in steps that grow; and not by ten times less, either."""
    known = watched(Watched(0, 0, -np.inf, 9.5), lambda t: FLUX[1] * t**3 / 3.0)
    assert 0.1 * known[OFF] < abs(known[WHEN] - 9.5**0.5) <= known[OFF] < 0.1


def test_ph_is_that_of_the_end_of_a_step():
    known = watched(Watched(0, -1, 5.0, 9.0), lambda _: 0.0, lambda t: 7.0 - 0.5 * t)
    assert known[WHEN] == pytest.approx(4.0, abs=1e-12)


def test_what_is_outside_at_first_has_not_crossed():
    known = watched(Watched(0, 0, -np.inf, 1.0), lambda t: FLUX[1] * 5.0 * t)
    assert np.isnan(known[WHEN])


def test_no_water_no_concentration():
    problem = SimpleNamespace(ports=[SimpleNamespace(face=1)], watched=(Watched(0, 0, -np.inf, 1.0),))
    state = SimpleNamespace(time=0.0, passed=np.zeros((3, 1, 2)))
    later = SimpleNamespace(time=1.0, passed=np.ones((3, 1, 2)))
    assert np.isnan(seen(problem, nothing_seen(1), state, later, np.zeros(2))).all()
