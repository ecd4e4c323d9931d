"""What a check foretells of a run, beside the run."""

from __future__ import annotations

import pytest
from tests.support.columns import case_of, column, walk

from gossan.case.build import build
from gossan.views.extent import extent_of

DAY = 86400.0
WATERS = '[waters.feed.tracers]\na = "1 mol/m3"\n[waters.pore]\n'
FEED = '{from = "0 d", water = "feed"}'
HEAD = 'conductivity = "10 m/d"'
SLOW_FAST = (
    '{from = "0 d", water = "feed", darcy_flux = "0.1 m/d"}, '
    '{from = "2 d", water = "feed", darcy_flux = "1 m/d", over = "1 d"}'
)
SLOW_FAST_STILL = SLOW_FAST + ', {from = "5 d", water = "feed", darcy_flux = "0 m/d"}'
WARMER = (
    '{from = "0 PV", water = "feed", temperature = "5 degC"}, '
    '{from = "2 PV", water = "feed", temperature = "30 degC"}'
)
RARELY = 'accuracy = 0.9\nports_every = "10 d"\nprofiles_every = "10 d"'

# the feed, how it is driven, the duration, the layer
RUNS = {
    "steady": (FEED, 'darcy_flux = "0.1 m/d"', "6 PV", ""),
    "slow, then fast": (SLOW_FAST, "", "5 d", ""),
    "counted in volumes": (SLOW_FAST, "", "5 PV", ""),
    "still at last": (SLOW_FAST_STILL, "", "9 d", ""),
    "a head, warmer": (WARMER, 'head_drop = "0.02 m"', "5 PV", HEAD),
    "a head, warmer, for days": (WARMER, 'head_drop = "0.02 m"', "9 d", HEAD),
}


@pytest.mark.parametrize("name", RUNS)
def test_a_run_takes_what_was_foretold(name):
    """Time and water exactly; steps but for those of its first growth and of landing on marks."""
    feed, flow, duration, layer = RUNS[name]
    text = column(
        WATERS, feed=feed, flow=flow, duration=duration, layer=layer, cells=20, dispersivity="2 cm",
        diffusion="1e-10 m2/s", run=RARELY,
    )  # fmt: skip
    found = extent_of(build(case_of(text)))
    run = walk(text)
    assert found.seconds == pytest.approx(run.last.time, rel=1e-6)
    assert found.water == pytest.approx(float(run.last.water_passed[0].sum()), rel=1e-6)
    assert run.strides == pytest.approx(found.steps, rel=0.05, abs=8)


def test_what_is_recorded_asks_for_steps():
    text = column(WATERS, feed=FEED, duration="1 PV", cells=4, run='ports_every = "0.001 PV"')
    assert extent_of(build(case_of(text))).steps == 1000
