"""What drives a column, from one moment to the next."""

from __future__ import annotations

import math
from dataclasses import replace

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import quad
from tests.support.columns import column, started

from gossan.coupling.drive import Drive, time_to_pass
from gossan.coupling.feeds import Feeds
from gossan.coupling.schedule import Schedule

DAY = 86400.0


def numbers(*pairs: tuple[float, float]) -> np.ndarray:
    return np.array(pairs)


FEEDS = Feeds(
    begins=Schedule(np.array([0.0, 10.0, 20.0])),
    inflow=np.zeros((3, 2, 1)),
    darcy_flux=numbers((1.0, 1.0), (1.0, 3.0), (2.0, 2.0)),
    head_drop=np.full((3, 2), np.nan),
    temperature=numbers((280.0, 280.0), (290.0, 295.0), (281.0, 281.0)),
)


def test_at_a_mark_there_is_what_was_and_what_comes():
    assert [FEEDS.piece(now) for now in (0.0, 9.0, 10.0 - 1e-13, 10.0, 25.0)] == [0, 0, 1, 1, 2]
    assert [FEEDS.piece_before(now) for now in (0.0, 10.0, 10.0 + 1e-13, 10.1, 20.0)] == [0, 0, 0, 1, 1]
    assert [FEEDS.temperature_before(now) for now in (0.0, 10.0, 15.0, 20.0, 30.0)] == [
        280.0, 280.0, 292.5, 295.0, 281.0,
    ]  # fmt: skip
    assert FEEDS.at(FEEDS.darcy_flux, 1, 15.0) == 2.0
    assert FEEDS.slope(FEEDS.darcy_flux, 1) == pytest.approx(0.2)
    assert FEEDS.slope(FEEDS.darcy_flux, 2) == 0.0


@given(st.floats(0.1, 0.7), st.floats(0.0, 1e9))
def test_a_level_piece_is_level_to_the_last_bit(value, now):
    """A temperature that moved by a bit would cost a new system at every step."""
    held = numbers((value, value), (1.0, 1.0))
    level = Feeds(Schedule(np.array([0.0, 2e9])), np.zeros((2, 2, 1)), held, held, held)
    assert level.temperature_before(now) == value


@given(st.just(0.0) | st.floats(1e-9, 2.0), st.just(0.0) | st.floats(-0.1, 0.1), st.floats(1e-3, 10.0))
def test_the_time_to_pass_a_volume(flux, rise, volume):
    found = time_to_pass(volume, (flux, rise))
    if math.isinf(found):
        assert flux * flux + 2.0 * rise * volume < 0.0 or flux == rise == 0.0
    else:
        assert flux * found + 0.5 * rise * found**2 == pytest.approx(volume, rel=1e-9)
        assert found > 0.0


WATERS = """
[waters.feed.tracers]
a = "1 mol/m3"
[waters.pore.tracers]
a = "0.2 mol/m3"
"""


@given(st.floats(0.0, 2.0), st.floats(0.0, 2.0), st.floats(0.0, 0.9), st.floats(0.01, 1.0))
def test_the_mean_of_what_enters_is_the_integral(first, last, begun, part):
    """Of a straight flux times a straight concentration, by quadrature."""
    feed = (
        f'{{from = "0 d", water = "pore", darcy_flux = "{first!r} m/d"}}, '
        f'{{from = "1 d", water = "feed", darcy_flux = "{last!r} m/d", over = "1 d"}}'
    )
    problem, state = started(column(WATERS, feed=feed, cells=2, duration="9 d", diffusion="1e-9 m2/s"))
    state = replace(state, time=DAY * (1.0 + begun))
    dt = DAY * (1.0 - begun) * part
    drive = Drive(problem, state)
    inlet = float(drive.flow(1.0, 0.0)[0][0]), drive.rise(1.0)

    def flux(time: float) -> float:
        return (first + (last - first) * (begun + time / DAY)) / DAY

    def entering(time: float) -> float:
        return 0.2 + 0.8 * (begun + time / DAY)

    assert drive.flow(1.0, dt)[0][0] * dt == pytest.approx(quad(flux, 0.0, dt)[0], rel=1e-9, abs=1e-15)
    found = drive.mean_inflow(dt, inlet)[-1] * drive.flow(1.0, dt)[0][0] * dt
    whole = quad(lambda time: flux(time) * entering(time), 0.0, dt)[0]
    assert found == pytest.approx(whole, rel=1e-9, abs=1e-15)
