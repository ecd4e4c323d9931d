"""Marks on a clock of seconds or of pore volumes."""

from __future__ import annotations

import math

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from gossan.coupling.schedule import Schedule, every


def test_a_schedule_reads_its_own_clock():
    assert Schedule(np.array([0.0])).clock(5.0, 0.1) == 5.0
    assert Schedule(np.array([0.0]), by_volume=True).clock(5.0, 0.1) == 0.1


def test_a_mark_has_come_when_rounding_alone_is_missing():
    schedule = Schedule(np.array([0.0, 0.3, 1.0]))
    assert [schedule.passed(now) for now in (0.0, 0.1 + 0.2, 0.3 - 1e-9, 1.0)] == [1, 2, 1, 3]
    assert schedule.ahead(0.1) == pytest.approx(0.2)
    assert schedule.ahead(0.3 * (1.0 - 1e-15)) == pytest.approx(0.7)
    assert schedule.ahead(1.0) == math.inf


def test_every_ends_at_the_end_whether_or_not_the_interval_fits():
    assert every(0.5, 1.6).marks == pytest.approx([0.0, 0.5, 1.0, 1.5, 1.6])
    assert every(0.1, 0.3).marks == pytest.approx([0.0, 0.1, 0.2, 0.3])
    assert every(0.1, 0.3).marks[-1] == 0.3
    assert every(9.0, 0.3).marks.tolist() == [0.0, 0.3]


@given(st.floats(1e-3, 1e3), st.integers(1, 500), st.floats(0.0, 0.999))
def test_marks_rise_and_none_is_lost(interval, count, rest):
    end = interval * (count + rest)
    marks = every(interval, end).marks
    assert marks[0] == 0.0
    assert marks[-1] == end
    assert (np.diff(marks) > 0.0).all()
    assert len(marks) in (count + 1, count + 2)
