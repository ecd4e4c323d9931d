"""Columns whose feed, flow and temperature change: nothing lost, nothing overshot, resumed bit for bit."""

from __future__ import annotations

import os
import signal

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from tests.support.columns import assert_at_equilibrium, case_of, column, started, walk, watched
from tests.support.killing import contents
from tests.support.orders import observed_order

from gossan import recording
from gossan.coupling.pores import pore_space
from gossan.store.read import open_result

WATERS = """
[waters.feed]
pH = 3.2
balance_on = "Cl"
analysis = {Na = "5 mmol/L"}
tracers = {even = "1 mol/m3", front = "1 mol/m3"}
[waters.second]
pH = 6.0
balance_on = "Cl"
analysis = {Ca = "4 mmol/L"}
tracers = {even = "1 mol/m3", front = "0.3 mol/m3"}
[waters.pore]
balance_on = "Cl"
analysis = {Na = "1 mmol/L"}
saturated_with = {calcite = 0.0}
tracers = {even = "1 mol/m3"}
"""
EVEN = 1e-11  # rounding of some hundred implicit steps; what a step pushes out is some 1e-4 of a pore
# Beside immobile water an implicit step spreads a little of what the solids squeeze from one water into the
# other before its water is counted: seen up to 2e-11, in proportion to the pores that a step fills or opens.
EVEN_BESIDE = 1e-8
FLAT = 1e-10  # the limiter's own: variation below this share of a value is rounding to it


@st.composite
def schedules(draw, drives: st.SearchStrategy[str]) -> str:
    """Up to five entries, most of them ramps, with flows and temperatures of their own."""
    entries, now = ['{from = "0 d", water = "second"}'], 0.0
    for _ in range(draw(st.integers(1, 4))):
        now += draw(st.sampled_from([0.1, 0.25, 0.6]))
        entry = f'from = "{now!r} d", water = "{draw(st.sampled_from(["feed", "second"]))}"'
        if draw(st.booleans()):
            over = draw(st.sampled_from([0.05, 0.2]))
            entry += f', over = "{over} d"'
            now += over
        entry += draw(drives)
        entry += draw(st.sampled_from(["", ', temperature = "3 degC"', ', temperature = "40 degC"']))
        entries.append("{" + entry + "}")
    return ", ".join(entries)


BEDS = [
    "", "", 'immobile = {fraction = 0.3, transfer = "2e-6 1/s"}',
    'sorption = {front = {law = "linear", kd = "0.2 L/kg"}}',
]
FLUXES = st.sampled_from(["", ', darcy_flux = "0 m/d"', ', darcy_flux = "0.4 m/d"'])
HEADS = st.sampled_from(["", ', head_drop = "0 m"', ', head_drop = "8 cm"'])


@st.composite
def columns(draw) -> str:
    flux = draw(st.booleans())
    return column(
        WATERS, minerals=f'calcite = "{draw(st.sampled_from(["0.02 wt%", "3 wt%"]))}"',
        forms=draw(st.sampled_from(["[]", '["calcite"]'])), cells=draw(st.integers(2, 6)), length="20 cm",
        layer='conductivity = "1 m/d"\n' + draw(st.sampled_from(BEDS)),
        flow='darcy_flux = "0.1 m/d"' if flux else 'head_drop = "2 cm"',
        feed=draw(schedules(FLUXES if flux else HEADS)), duration="3 d",
        dispersivity=draw(st.sampled_from(["0 m", "1 cm", "20 cm"])),
        diffusion=draw(st.sampled_from(["1e-9 m2/s", "1e-8 m2/s"])),
        run=f'coupling = "{draw(st.sampled_from(["two-stage", "lie"]))}"\n'
        'profiles_every = "1 d"\nports_every = "0.5 d"',
    )  # fmt: skip


@settings(max_examples=25, suppress_health_check=[HealthCheck.too_slow])
@given(columns())
def test_nothing_is_lost_or_overshot_whatever_the_schedule(text):
    """The books close after every step; an even tracer stays even, so water is balanced in every cell.

    Calcite holds no water: what dissolves of it opens pores that inflow must fill, with tracer in it.
    """
    problem, _ = started(text)
    even, front = (problem.solutes.index(name) for name in ("even", "front"))
    for stride in watched(problem):
        state = stride.state
        assert np.abs(state.dissolved[even] - 1.0).max() < (EVEN if state.still is None else EVEN_BESIDE)
        assert state.dissolved[front].min() >= 0.0
        assert state.dissolved[front].max() <= 1.0 + FLAT
        assert_at_equilibrium(problem, state)
    drift = state.water - pore_space(problem, state.solid)
    assert np.abs(drift).max() < 1e-3  # what one step pushed out, never a sum over steps


CHANGING = column(
    WATERS, minerals='calcite = "2 g/kg"', cells=8, length="20 cm", dispersivity="1 cm",
    diffusion="1e-9 m2/s", flow='darcy_flux = "8 cm/d"', duration="3 d",
    feed='{from = "0 d", water = "second", temperature = "20 degC"}, '
    '{from = "0.3 d", water = "feed", over = "1 d", temperature = "4 degC", darcy_flux = "20 cm/d"}, '
    '{from = "1.5 d", water = "second", darcy_flux = "0 m/d", temperature = "10 degC"}, '
    '{from = "1.8 d", series = "feed.csv"}',
    run='profiles_every = "0.5 d"\nports_every = "0.13 d"',
)  # fmt: skip
SERIES = """\
time (d),water,temperature (degC),darcy_flux (m/d)
0,second,10,0
0.4,feed,18,0.2
2,second,6,0.1
"""


def stopping_after(steps: int):
    """Progress that asks for a stop, as Ctrl-C does."""
    count = 0

    def progress(share, state):
        nonlocal count
        count += 1
        if count == steps:
            os.kill(os.getpid(), signal.SIGINT)

    return progress


def test_a_run_stopped_within_a_ramp_goes_on_to_the_same_bits(tmp_path):
    """Also without the series' file: the result keeps its text."""
    (tmp_path / "feed.csv").write_text(SERIES, encoding="utf-8")
    case = case_of(CHANGING, tmp_path)
    (tmp_path / "feed.csv").unlink()
    whole, pieces = tmp_path / "whole.h5", tmp_path / "pieces.h5"
    assert recording.run_case(case, whole).status == "finished"
    ending = recording.run_case(case, pieces, progress=stopping_after(31))
    count = 0
    while ending.status == "stopped":
        ending = recording.resume(pieces, progress=stopping_after(31))
        count += 1
    assert count > 2
    assert ending.status == "finished"
    assert contents(pieces) == contents(whole)
    found = open_result(whole)
    assert found.steps.count > 100
    temperature = found.profiles.temperature.values - 273.15
    # a ramp from 0.3 to 1.3 d; the jump at 1.5 d is still to come; the series' second ramp from 2.2 to 3.8 d
    expected = [20.0, 16.8, 8.8, 4.0, 14.0, 15.75, 12.0]
    assert temperature == pytest.approx(expected, abs=1e-9)
    assert np.abs(found.ledger.error.values).max() < 1e-12
    assert np.abs(found.ledger.water_error.values).max() < 1e-12


def test_steps_land_on_every_mark_of_a_held_head_that_counts_volumes():
    """The head has a schedule of its own in no other unit: what the water has brought decides."""
    feed = (
        '{from = "0 PV", water = "second"}, {from = "0.7 PV", water = "feed", over = "0.4 PV", '
        'temperature = "5 degC"}, {from = "1.9 PV", water = "second"}'
    )
    text = column(
        WATERS, minerals='calcite = "3 wt%"', cells=6, length="20 cm", flow='head_drop = "5 cm"',
        layer='conductivity = "1 m/d"', feed=feed, duration="2.5 PV", dispersivity="1 cm",
        run='profiles_every = "0.5 PV"\nports_every = "0.25 PV"',
    )  # fmt: skip
    run = walk(text)
    problem = run.problem
    assert problem.feeds.begins.by_volume
    row = problem.solutes.index("front")
    # second, a mean of both while it changes, feed, second
    brought = 0.3 * 0.7 + 0.65 * 0.4 + 1.0 * 0.8 + 0.3 * 0.6
    assert run.last.passed[0, row].sum() / problem.pore_volume == pytest.approx(brought, rel=1e-12)


COURANT = (0.32, 0.16, 0.08)


def in_time(text: str, number: float) -> np.ndarray:
    """(solute, cell) totals at the end, by steps of one Courant number."""
    run = walk(text.replace("NUMBER", repr(number)))
    held = run.last.dissolved * run.last.water
    held[: run.problem.chemical] += run.problem.system.mineral_stoichiometry.T @ run.last.solid
    return held


def test_ramps_of_feed_and_flux_are_of_second_order_in_time():
    text = column(
        WATERS.replace('pH = 3.2\n', "").replace("saturated_with = {calcite = 0.0}", ""), cells=20,
        length="50 cm", dispersivity="5 mm", forms="[]", flow='darcy_flux = "0.2 m/d"', duration="0.6 d",
        feed='{from = "0 d", water = "second", darcy_flux = "0.1 m/d"}, '
        '{from = "0.1 d", water = "feed", over = "0.7 d", darcy_flux = "0.3 m/d"}',
        run='accuracy = 0.9\nmax_courant = NUMBER\nports_every = "0.6 d"\nprofiles_every = "0.6 d"',
    )  # fmt: skip
    exact = in_time(text, 0.0125)
    errors = [float(np.abs(in_time(text, number) - exact)[-1].sum()) for number in COURANT]
    assert observed_order([1.0 / number for number in COURANT], errors) == pytest.approx(2.0, abs=0.25)


def test_a_ramp_of_temperature_is_of_second_order_in_time():
    """Gypsum that the warming water goes on dissolving all along the bed."""
    text = column(
        "[waters.feed]\n[waters.pore]\nsaturated_with = {gypsum = 0.0}", minerals='gypsum = "2 wt%"',
        cells=10, length="50 cm", dispersivity="5 mm", forms='["gypsum"]', flow='darcy_flux = "0.2 m/d"',
        duration="0.6 d", feed='{from = "0 d", water = "pore", temperature = "1 degC"}, '
        '{from = "0.1 d", water = "pore", over = "0.7 d", temperature = "30 degC"}',
        run='accuracy = 0.9\nmax_courant = NUMBER\nports_every = "0.6 d"\nprofiles_every = "0.6 d"',
    )  # fmt: skip
    exact = in_time(text, 0.0125)
    errors = [float(np.abs(in_time(text, number) - exact)[1:].sum()) for number in COURANT]
    assert observed_order([1.0 / number for number in COURANT], errors) == pytest.approx(2.0, abs=0.25)
