"""The length of the next step, from the error of the last."""

from __future__ import annotations

import pytest

from gossan.coupling.pace import Pace, acceptable


def test_a_perfect_step_is_doubled_up_to_the_stable_one():
    assert Pace(1.0).after(1.0, 0.0, 0.0, 1e-3, longest=9.0).dt == 2.0
    assert Pace(1.0).after(1.0, 0.0, 0.0, 1e-3, longest=1.5).dt == 1.5


def test_the_next_step_aims_a_little_below_the_target():
    """The error of a step goes with its square: four times too much, half the step."""
    assert Pace(1.0).after(1.0, 4e-3, 0.0, 1e-3, longest=9.0).dt == pytest.approx(0.45)
    assert Pace(1.0).after(1.0, 1e-3, 0.0, 1e-3, longest=9.0).dt == pytest.approx(0.9)
    assert Pace(1.0).after(1.0, 1.0, 0.0, 1e-3, longest=9.0).dt == pytest.approx(0.3), "never far at once"


def test_pores_that_change_fast_shorten_the_step():
    assert Pace(1.0).after(1.0, 0.0, 0.02, 1e-3, longest=9.0).dt == pytest.approx(0.45)
    assert acceptable(1e-3, 0.05, 1e-3)
    assert not acceptable(1.1e-3, 0.0, 1e-3)
    assert not acceptable(0.0, 0.051, 1e-3)
