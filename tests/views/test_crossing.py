"""Crossings between records: closer the smoother they are, and no closer than they are known."""

from __future__ import annotations

import numpy as np
import pytest

from gossan.views.crossing import SURE, closer, error_of_steps, first_outside

INF = np.inf


def test_a_front_between_two_records_lies_anywhere_between_them():
    time = np.array([0.0, 10.0, 30.0, 40.0, 50.0])
    rising = np.array([1.0, 1.0, 2.0, 2.0, 2.0])
    assert first_outside(time, rising, -INF, 1.5) == (20.0, 10.0)
    assert first_outside(time, rising, -INF, 2.0) is None  # a limit that is met is kept
    assert first_outside(time, rising, -INF, 0.5) == (0.0, 0.0)


def test_a_range_can_be_left_at_either_end():
    time = np.array([0.0, 10.0])
    assert first_outside(time, np.array([7.0, 6.0]), 6.5, 9.0) == (5.0, 5.0)
    assert first_outside(time, np.array([8.0, 10.0]), 6.5, 9.0) == (5.0, 5.0)


@pytest.mark.parametrize("edge", [0.1, 0.3, 0.5, 0.77])
@pytest.mark.parametrize("shift", [0.0, 0.31, 0.64])
def test_the_error_covers_the_truth_and_not_much_more(edge, shift):
    """A smooth front over five records, exact: (1 + tanh(t / 2)) / 2."""
    time = np.arange(-8.0, 9.0) + shift
    exact = 2.0 * np.arctanh(2.0 * edge - 1.0)
    when, error = first_outside(time, 0.5 * (1.0 + np.tanh(time / 2.0)), -INF, edge)
    assert abs(when - exact) < 0.02
    assert abs(when - exact) <= 2.0 * error + 6e-3  # less no curve through records can know
    assert error < 0.1, "of the interval between records"


def test_only_the_first_crossing_counts():
    time = np.arange(8.0)
    when, error = first_outside(time, np.array([0.0, 0.0, 2.0, 0.0, 2.0, 0.0, 2.0, 0.0]), -INF, 1.0)
    assert 1.0 < when < 2.0
    assert error <= 0.5


def test_the_steps_error_is_a_share_of_what_was_carried():
    """Values less their errors are late by 0.2 s: what was told is three times that."""
    time = np.linspace(0.0, 10.0, 101)
    values, errors = 0.1 * time, np.full(101, 0.02)
    when, _ = first_outside(time, values, -INF, 0.5)
    assert error_of_steps(time, values, errors, -INF, 0.5, when) == pytest.approx(SURE * 0.2)
    assert error_of_steps(time, values, np.full(101, 1.0), -INF, 0.5, when) == INF, "never, in the shadow"


def test_what_the_steps_saw_is_off_by_both():
    assert closer((100.0, 2.0, 101.0)) == (100.0, 2.0 + SURE)
    assert closer((100.0, 2.0, None)) == (100.0, INF)
