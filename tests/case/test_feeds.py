"""Feeds that change: what every way of writing them becomes, and every way of getting them wrong."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from tests.support.columns import column

from gossan.base.errors import InputError
from gossan.case.build import build
from gossan.case.read import case_from_text
from gossan.coupling.problem import Problem

DAY = 86400.0
WATERS = """
[waters.feed]
balance_on = "Cl"
analysis = {Na = "2 mmol/L", Zn = "0.1 mmol/L"}
tracers = {bromide = "1 mmol/L"}
[waters.pore]
"""


def text_of(feed: str, flow: str = 'darcy_flux = "0.1 m/d"', **more: str) -> str:
    """A metre of sand, 0.4 m of water in its pores: at 0.1 m/d a pore volume takes 4 d."""
    return column(WATERS, feed=feed, flow=flow, cells=5, **{"duration": "40 d", **more})


def problem(feed: str, folder: Path | None = None, series: str = "", **more: str) -> Problem:
    if folder is not None:
        (folder / "feed.csv").write_text(series, encoding="utf-8")
    return build(case_from_text(text_of(feed, **more), folder=folder or "."))


def faults_of(feed: str, folder: Path | None = None, series: str = "", **more: str) -> list[str]:
    if folder is not None:
        (folder / "feed.csv").write_text(series, encoding="utf-8")
    with pytest.raises(InputError) as caught:
        case_from_text(text_of(feed, **more), folder=folder or ".")
    return [str(fault) for fault in caught.value.faults]


def days(found: Problem) -> list[float]:
    assert not found.feeds.begins.by_volume
    return (found.feeds.begins.marks / DAY).tolist()


def test_a_ramp_is_a_piece_from_the_values_before_to_its_own():
    found = problem(
        '{from = "0 d", water = "feed", temperature = "5 degC"}, '
        '{from = "10 d", water = "pore", over = "4 d", darcy_flux = "0.3 m/d"}'
    )
    feeds, bromide = found.feeds, found.solutes.index("bromide")
    assert days(found) == pytest.approx([0.0, 10.0, 14.0])
    assert feeds.inflow[:, :, bromide].tolist() == [[1.0, 1.0], [1.0, 0.0], [0.0, 0.0]]
    assert feeds.darcy_flux * DAY == pytest.approx(np.array([[0.1, 0.1], [0.1, 0.3], [0.3, 0.3]]))
    assert feeds.temperature == pytest.approx(np.array([[278.15] * 2, [278.15, 298.15], [298.15] * 2]))
    assert found.system.temperature == 278.15, "the column starts at the first entry's temperature"


def test_what_an_entry_does_not_say_is_as_the_flow_and_the_case_have_it():
    found = problem(
        '{from = "0 d", water = "feed"}, {from = "1 d", water = "feed", darcy_flux = "0 m/d", '
        'temperature = "1 degC"}, {from = "2 d", water = "pore"}'
    )
    assert found.feeds.darcy_flux[:, 0] * DAY == pytest.approx([0.1, 0.0, 0.1])
    assert found.feeds.temperature[:, 0] == pytest.approx([298.15, 274.15, 298.15])
    assert np.isnan(found.feeds.head_drop).all()


def test_pore_volumes_count_the_water_that_passes_whatever_the_flux():
    """0.1 m/d for 4 d; then a rise to 0.3 m/d over one pore volume, 2 d at 0.2 m/d in the mean; at rest."""
    found = problem(
        '{from = "0 PV", water = "feed"}, {from = "1 PV", water = "feed", over = "1 PV", '
        'darcy_flux = "0.3 m/d"}, {from = "3 PV", water = "pore", darcy_flux = "0 m/d"}, '
        '{from = "20 d", water = "feed"}, {from = "4 PV", water = "pore"}'
    )
    assert days(found) == pytest.approx([0.0, 4.0, 6.0, 6.0 + 4.0 / 3.0, 20.0, 24.0])


def test_intervals_and_durations_in_pore_volumes_follow_a_changing_flux():
    feed = '{from = "0 d", water = "feed"}, {from = "4 d", water = "feed", darcy_flux = "0.4 m/d"}'
    found = problem(feed, duration="3 PV", run='profiles_every = "1 d"\nports_every = "0.5 PV"')
    assert found.end.by_volume
    assert found.frames.marks / DAY == pytest.approx(np.arange(7))  # 4 d and 2 d
    counted = problem(feed, duration="6 d", run='profiles_every = "0.5 PV"')
    assert counted.frames.by_volume
    assert counted.frames.marks == pytest.approx(0.5 * np.arange(7))


HEAD = 'head_drop = "5 cm"'
CLEAN = 'conductivity = "1 m/d"'


def test_under_a_held_head_the_clock_counts_volumes_or_time():
    by_volume = problem('{from = "0 d", water = "feed"}, {from = "2 PV", water = "pore", over = "1 PV"}',
                        flow=HEAD, layer=CLEAN)
    assert by_volume.feeds.begins.by_volume
    assert by_volume.feeds.begins.marks.tolist() == [0.0, 2.0, 3.0]
    by_time = problem('{from = "0 d", water = "feed"}, {from = "2 d", water = "feed", head_drop = "0 m", '
                      'over = "1 d"}', flow=HEAD, layer=CLEAN)
    assert by_time.feeds.head_drop.tolist() == [[0.05, 0.05], [0.05, 0.0], [0.0, 0.0]]
    assert np.isnan(by_time.feeds.darcy_flux).all()


def test_every_entry_may_have_its_own_flow_and_none_is_needed_in_flow():
    found = problem('{from = "0 d", water = "feed", darcy_flux = "0.2 m/d"}, '
                    '{from = "1 d", water = "pore", head_drop = "1 cm"}', flow="", layer=CLEAN)
    assert found.feeds.darcy_flux[0, 0] * DAY == pytest.approx(0.2)
    assert found.feeds.head_drop[1, 0] == 0.01


SERIES = """\
# read by the logger
time (d), Zn (mg/L), bromide (mmol/L), darcy_flux (m/d), temperature (degC)
0, 6.5, 1, 0.1, 4
2.5, <0.13, 2, 0.2, 10

5, 0, 0, 0.1, 4
"""
ZN_MASS = 65.38  # g/mol


def test_a_series_is_read_row_by_row(tmp_path):
    found = problem('{from = "0 d", water = "pore"}, {from = "10 d", water = "feed", series = "feed.csv"}',
                    tmp_path, SERIES)
    feeds = found.feeds
    zinc, bromide = (found.solutes.index(name) for name in ("Zn^2+", "bromide"))
    assert days(found) == pytest.approx([0.0, 10.0, 12.5, 15.0])
    assert feeds.inflow[1:, 0, bromide].tolist() == [1.0, 2.0, 0.0]
    assert feeds.inflow[1:, 1, bromide].tolist() == [2.0, 0.0, 0.0]
    # a litre of the report is a litre of the column; below detection counts half
    assert feeds.inflow[1:, 0, zinc] == pytest.approx([6.5 / ZN_MASS, 0.065 / ZN_MASS, 0.0], rel=1e-4)
    charge = found.system.component_charge @ feeds.inflow[:, 0, : found.chemical].T
    assert charge == pytest.approx(np.zeros(4), abs=1e-12), "every row is balanced as its water is"
    assert feeds.temperature[1:, 0] == pytest.approx([277.15, 283.15, 277.15])
    assert feeds.darcy_flux[:, 0] * DAY == pytest.approx([0.1, 0.1, 0.2, 0.1])


def test_a_series_may_name_waters_and_hold_them(tmp_path):
    found = problem('{from = "0 d", series = "feed.csv", between = "held"}', tmp_path,
                    'time [PV],water\n0,pore\n0.5,"feed"\n1.5,pore\n')
    bromide = found.solutes.index("bromide")
    assert days(found) == pytest.approx([0.0, 2.0, 6.0])
    assert found.feeds.inflow[:, :, bromide].tolist() == [[0.0, 0.0], [1.0, 1.0], [0.0, 0.0]]


def test_a_case_with_a_series_can_be_read_again_without_the_file(tmp_path):
    (tmp_path / "feed.csv").write_text(SERIES, encoding="utf-8")
    text = text_of('{from = "0 d", water = "feed", series = "feed.csv"}')
    case = case_from_text(text, folder=tmp_path)
    assert case.files == {"feed.csv": SERIES}
    again = build(case_from_text(text, folder=tmp_path / "elsewhere", files=case.files))
    assert np.array_equal(again.feeds.inflow, build(case).feeds.inflow)


FIRST = '{from = "0 d", water = "feed"}, '
WRONG = [
    (FIRST + '{from = "2 d", water = "pore"}, {from = "2 d", water = "feed"}',
     'flow.feed.3.from is "2 d", not later than the feed before'),
    (FIRST + '{from = "2 d", water = "pore"}, {from = "0.1 PV", water = "feed"}',
     'flow.feed.3.from is "0.1 PV", not later than the feed before'),
    (FIRST + '{from = "2 d", water = "poor"}', 'there is no [waters.poor]: did you mean "pore"?'),
    (FIRST + '{from = "2 d"}', 'flow.feed.2.water is missing: write water = "mine"'),
    (FIRST + '{from = "2 d", water = "pore", over = "3 d"}, {from = "4 d", water = "feed"}',
     'flow.feed.3.from is "4 d", while the feed before is still on its way'),
    ('{from = "0 d", water = "feed", over = "3 d"}', "there is none before to come from: leave it out"),
    (FIRST + '{from = "2 d", water = "pore", over = "0 d"}', "a duration is more than zero"),
    (FIRST + '{from = "2 d", water = "pore", darcy_flux = "0.1 m/d", head_drop = "1 cm"}',
     "flow.feed.2.head_drop stands beside darcy_flux: only one can be held"),
    (FIRST + '{from = "2 d", water = "pore", darcy_flux = "-0.1 m/d"}',
     "a Darcy flux is not negative: water flows from the first layer to the last"),
    (FIRST + '{from = "2 d", water = "pore", head_drop = "-1 cm"}', "a head drop is not negative"),
    (FIRST + '{from = "2 d", water = "pore", temperature = "51 degC"}', "between 0 and 50 degC"),
    (FIRST + '{from = "2 d", water = "pore", temperature = "-1 degC"}', "between 0 and 50 degC"),
    (FIRST + '{from = "2 d", water = "pore", darcy_flux = "0 m/d"}, {from = "3 PV", water = "feed"}',
     'flow.feed.3.from is "3 PV", which never comes: nothing flows before it'),
    (FIRST + '{from = "2 d", water = "pore", darcy_flux = "0 m/d"}, {from = "3 d", water = "feed", '
     'over = "1 PV", darcy_flux = "0 m/d"}', 'flow.feed.3.over is "1 PV", which never comes'),
    (FIRST + '{from = "50 d", water = "pore"}', 'not before the end of the run ("40 d")'),
    (FIRST + '{from = "11 PV", water = "pore"}', 'not before the end of the run ("40 d")'),
    (FIRST + '{from = "2 d", water = "pore", between = "stepped"}', 'which is not a choice'),
    (FIRST + '{from = "2 d", water = "pore", series = "none.csv"}', "which cannot be read"),
]


@pytest.mark.parametrize(("feed", "says"), WRONG, ids=range(len(WRONG)))
def test_a_wrong_feed_is_one_fault(feed, says):
    faults = faults_of(feed, layer=CLEAN)
    assert len(faults) == 1, faults
    assert says in faults[0]


def test_head_and_clock_faults():
    mixed = FIRST + '{from = "2 d", water = "pore"}, {from = "2 PV", water = "feed"}'
    assert "give all of them in one unit" in faults_of(mixed, flow=HEAD, layer=CLEAN)[0]
    ramp = FIRST + '{from = "2 PV", water = "feed", head_drop = "0 m", over = "1 PV"}'
    assert "count time: the flux is not known" in faults_of(ramp, flow=HEAD, layer=CLEAN)[0]
    across = FIRST + '{from = "2 d", water = "feed", head_drop = "1 m", over = "1 d"}'
    assert "such a change is instant" in faults_of(across, layer=CLEAN)[0]
    bare = FIRST + '{from = "2 d", water = "feed", head_drop = "1 m"}'
    assert "with a head_drop every layer needs one" in faults_of(bare)[0]
    without = '{from = "0 d", water = "feed", darcy_flux = "1 m/d"}, {from = "2 d", water = "feed"}'
    assert "[flow] has none for the feeds that have none of their own" in faults_of(without, flow="")[0]


def test_a_run_that_cannot_end_or_in_which_nothing_moves():
    still = FIRST + '{from = "2 d", water = "pore", darcy_flux = "0 m/d"}'
    assert 'run.duration is "1 PV", which never comes' in faults_of(still, duration="1 PV")[0]
    assert 'not before the end of the run ("0.5 PV")' in faults_of(still, duration="0.5 PV")[0]
    none = 'darcy_flux = "0 m/d"'
    assert "nothing moves" in faults_of('{from = "0 d", water = "feed"}', flow=none)[0]
    case_from_text(text_of('{from = "0 d", water = "feed"}', flow=none, diffusion="1e-9 m2/s"))


SERIES_WRONG = [
    ("", "feed.csv: is empty"),
    ("time (d),Zn (mg/L)\n", "feed.csv:1: has a header and no row"),
    ("Zn (mg/L)\n1\n", 'feed.csv:1: time is missing among the columns: write "time (d)"'),
    ("time (d)\n0\n", "feed.csv:1: time is the only column"),
    ("time,Zn (mg/L)\n0,1\n", 'feed.csv:1: time has no unit in the header: write "time (d)"'),
    ("time (m),Zn (mg/L)\n0,1\n", 'feed.csv:1: time has the unit "m", which a time has not'),
    ("time (d),Zn (furlong)\n0,1\n", 'feed.csv:1: Zn has the unit "furlong"'),
    ("time (d),Zm (mg/L)\n0,1\n", "feed.csv:1: Zm is no column of a series"),
    ("time (d),temprature (degC)\n0,1\n", 'did you mean "temperature"?'),
    ("time (d),Zn (mg/L),Zn (mg/L)\n0,1,1\n", "feed.csv:1: Zn is a column twice"),
    ("time (d),Zn (mg/L)\n0,1\n1,high\n", 'feed.csv:3: Zn is "high": a number is needed'),
    ("time (d),Zn (mg/L)\n0,1\n1,\n", "feed.csv:3: Zn is empty: every row has a value"),
    ("time (d),Zn (mg/L)\n0,1\n1,-4\n", "feed.csv:3: Zn is"),
    ("time (d),Zn (mg/L)\n0,1\n1,2,5\n", "feed.csv:3: has 3 cells under a header of 2 columns"),
    ("time (d),Zn (mg/L)\n1,1\n2,1\n", "feed.csv:2: time is \"1 d\" in the first row"),
    ("time (d),Zn (mg/L)\n0,1\n2,1\n2,1\n", 'feed.csv:4: time is "2 d", not later than "2 d"'),
    ("time (d),temperature (degC)\n0,10\n2,60\n", "feed.csv:3: temperature is"),
    ("time (d),darcy_flux (m/d)\n0,0.1\n2,-0.1\n", "turn the column round"),
    ("time (d),darcy_flux (m/d),head_drop (m)\n0,0.1,1\n", "only one can be held"),
    ("time (d),water\n0,feed\n", "stands beside the waters of feed.csv: the same fact twice"),
    ("time (d),bromide (mg/L)\n0,1\n", "feed.csv:2: bromide is \"1 mg/L\", a mass, but the molar mass"),
    ("time (d);Zn (mg/L)\n0;1\n", "columns are separated by commas"),
    ("time (d),pH\n0,77\n", "feed.csv:2: pH is 77; a pH is between -2 and 16"),
    ("time (PV),darcy_flux (m/d)\n0,0\n2,0\n", "feed.csv:3: time is \"2 PV\", which never comes"),
]


@pytest.mark.parametrize(("series", "says"), SERIES_WRONG, ids=range(len(SERIES_WRONG)))
def test_a_wrong_series_is_told_with_line_and_column(series, says, tmp_path):
    faults = faults_of('{from = "0 d", water = "feed", series = "feed.csv"}', tmp_path, series)
    assert any(says in fault for fault in faults), faults


def test_all_faults_of_a_series_come_at_once(tmp_path):
    feed = '{from = "0 d", water = "feed", series = "feed.csv", over = "2 d", darcy_flux = "1 m/d"}'
    series = "time (d),Zn (mg/L),darcy_flux (m/d)\n0,1,1\n1,x,2\n2,1,y\n"
    found = "\n".join(faults_of(feed, tmp_path, series))
    for says in ("over stands beside a series", 'Zn is "x"', 'darcy_flux is "y"'):
        assert says in found
    waters = "time (d),water\n0,feeed\n1,pore\n"
    assert faults_of('{from = "0 d", series = "feed.csv"}', tmp_path, waters) == [
        'feed.csv:2: water is "feeed", but there is no [waters.feeed]: did you mean "feed"?'
    ]
