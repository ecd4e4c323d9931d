"""Decay, isotherms and immobile water in a march: order in time, limits, and what must never happen."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from hypothesis import HealthCheck, given, settings
from hypothesis import strategies as st
from tests.support.columns import started, walk
from tests.support.orders import observed_order
from tests.support.tracer_columns import DRY, POROSITY, Solute, profiles, tracer_column

from gossan.chemistry.equilibrium import Solver
from gossan.chemistry.isotherm import sorbed_at
from gossan.coupling.attempt import attempt
from gossan.coupling.problem import Problem
from gossan.coupling.splitting import Turn
from gossan.coupling.state import State
from gossan.transport.faces import faces_of
from gossan.transport.step import DAMPING

STEPS, EXACT = (20, 40, 80), 640  # the reference errs by 1/64 of the finest
EMPTIED = 1e-15  # of the most there was: rounding of a cell that gives all it has
IMMOBILE = '[layers.immobile]\nfraction = 0.4\ntransfer = "TRANSFER"\n'
BENT = f'law = "freundlich"\ncoefficient = "{2.0 * POROSITY / DRY!r} mol/kg"\nexponent = 0.7'
BOUNDED = f'law = "langmuir"\ncapacity = "{POROSITY / DRY!r} mol/kg"\naffinity = "2 m3/mol"'

# what slows, how dispersion is taken
RETENTION = {
    "decay": ([Solute(rate=3.0)], ""),
    "chain": ([Solute(rate=3.0), Solute("b", 0.0, rate=8.0, parent="a"), Solute("c", 0.0, parent="b")], ""),
    "linear": ([Solute(retardation=3.0, rate=2.0)], ""),
    "freundlich": ([Solute(isotherm=BENT, rate=1.0)], ""),
    "langmuir": ([Solute(isotherm=BOUNDED)], ""),
    "exchange": ([Solute()], IMMOBILE.replace("TRANSFER", "2 1/d")),
    "all": ([Solute(isotherm=BENT, rate=2.0), Solute("b", 0.0, parent="a", retardation=2.0)],
            IMMOBILE.replace("TRANSFER", "1 1/d")),
}  # fmt: skip


def smooth(name: str, coupling: str) -> tuple[Problem, State]:
    """A bed whose water everywhere bears a smooth wave, steady at the inlet."""
    solutes, immobile = RETENTION[name]
    problem, state = started(tracer_column(solutes, velocity=1.0, dispersivity=0.05, length=1.0, cells=40,
                                           days=1.0, immobile=immobile, coupling=coupling))
    wave = 1.0 + 0.5 * np.tanh((0.4 - problem.grid.centres) / 0.1)
    dissolved = state.dissolved.copy()
    tracers = slice(problem.chemical, None)
    dissolved[tracers] = wave * (0.2 + np.arange(len(dissolved) - problem.chemical))[:, None]
    sorbed = state.sorbed
    if problem.isotherms is not None:
        sorbed = sorbed_at(problem.flowing_isotherms, dissolved[problem.sorbates])
    still = state.still
    if still is not None and problem.stagnant is not None:
        beside = 0.5 * dissolved[:, problem.stagnant.cells]
        held = still.sorbed
        if problem.still_isotherms is not None:
            held = sorbed_at(problem.still_isotherms, beside[problem.sorbates])
        still = replace(still, dissolved=beside, sorbed=held)
    return problem, replace(state, dissolved=dissolved, sorbed=sorbed, still=still)


def totals(problem: Problem, state: State) -> np.ndarray:
    """(solute, cell) mol m-3 of bulk in flowing water and on its solids, those of immobile water beside."""
    held = state.dissolved * state.water
    held[problem.sorbates] += state.sorbed
    if state.still is None:
        return held
    beside = state.still.dissolved * state.still.water
    beside[problem.sorbates] += state.still.sorbed
    return np.concatenate([held, beside], axis=1)


def marched(problem: Problem, state: State, steps: int, theta: float | None) -> np.ndarray:
    """Totals after a fifth of a day in equal steps."""
    flux = np.full(len(problem.grid.width) + 1, problem.feeds.darcy_flux[0, 0])
    inflow = state.dissolved[:, 0]
    solver = Solver(problem.system)
    for _ in range(steps):
        dt = 0.2 * 86400.0 / steps
        faces = faces_of(problem.transport, state.water, flux)
        state = attempt(Turn(problem, solver, state, faces, inflow, dt, theta)).state
    return totals(problem, state)


@pytest.mark.parametrize("theta", [None, DAMPING], ids=["explicit", "implicit"])
@pytest.mark.parametrize("name", RETENTION)
def test_two_stage_is_second_order_in_time(name, theta):
    problem, state = smooth(name, "two-stage")
    fine = 3 if theta is None else 1  # explicit dispersion is stable in shorter steps only
    exact = marched(problem, state, EXACT * fine, theta)
    errors = [float(np.abs(marched(problem, state, n * fine, theta) - exact).max()) for n in STEPS]
    # implicit dispersion comes to its order from below: it spreads at first as if nothing were held
    assert observed_order(STEPS, errors) >= 1.8
    assert errors[-1] < 5e-5 * np.abs(exact).max()


@pytest.mark.parametrize(("name", "coupling"), [
    ("decay", "strang"), ("chain", "strang"), ("exchange", "strang"), ("all", "iterated"),
])  # fmt: skip
def test_other_schemes_are_second_order_where_rates_are_slow(name, coupling):
    """Explicit: rates of 1 to 8 per day against steps of 1 to 4 minutes."""
    problem, state = smooth(name, coupling)
    exact = marched(problem, state, 3 * EXACT, None)
    errors = [float(np.abs(marched(problem, state, 3 * n, None) - exact).max()) for n in STEPS]
    assert observed_order(STEPS, errors) >= 1.8
    # an exchange that is split errs more than one within the stages
    assert errors[-1] < (3e-4 if name == "exchange" else 5e-5) * np.abs(exact).max()


def test_strang_gains_nothing_where_all_is_at_equilibrium():
    """A sorbed wave: transport alone moves it as if nothing held it, and errs by the first order."""
    problem, state = smooth("freundlich", "strang")
    exact = marched(problem, state, 3 * EXACT, None)
    errors = [float(np.abs(marched(problem, state, 3 * n, None) - exact).max()) for n in STEPS]
    assert observed_order(STEPS, errors) == pytest.approx(1.05, abs=0.15)


def test_an_endless_transfer_is_no_immobile_water():
    """The same bits of physics: one water of the whole porosity, to the rounding of the exchange."""
    case = {"velocity": 1.0, "dispersivity": 0.02, "length": 1.0, "cells": 50, "days": 0.8}
    immobile = IMMOBILE.replace("TRANSFER", "1e9 1/s")
    mixed = profiles([Solute(rate=1.0, retardation=2.0)], immobile=immobile, **case)
    plain = profiles([Solute(rate=1.0, retardation=2.0)], courant=0.3, **case)
    # steps are cut by the faster flowing water: the difference is that of time steps, second order
    assert mixed.walk.dissolved("a") == pytest.approx(plain.walk.dissolved("a"), abs=2e-4)
    still = mixed.walk.last.still.dissolved
    assert still == pytest.approx(mixed.walk.last.dissolved, abs=1e-9)


def test_no_transfer_is_flowing_porosity_alone():
    case = {"dispersivity": 0.02, "length": 1.0, "cells": 50, "days": 0.4}
    immobile = IMMOBILE.replace("TRANSFER", "0 1/s")
    aside = profiles([Solute(initial=0.2)], immobile=immobile, velocity=0.6, **case)
    alone = profiles([Solute(initial=0.2)], velocity=0.6 * 0.3 / 0.18, porosity=0.18, **case)
    assert aside.walk.dissolved("a") == pytest.approx(alone.walk.dissolved("a"), abs=2e-6)  # first steps
    assert (aside.walk.last.still.dissolved[-1] == 0.2).all()


def test_immobile_water_decays_by_the_half_life_of_its_layer():
    """Still water, no exchange, no diffusion to speak of: what three days leave in both waters."""
    text = tracer_column([Solute(initial=1.0, rate=0.1)], velocity=0.0, dispersivity=0.0, length=0.4, cells=4,
                         days=3.0, immobile=IMMOBILE.replace("TRANSFER", "0 1/s"))  # fmt: skip
    layer = text[text.index("[[layers]]") : text.index("[flow]")]
    second = layer.replace('"bed"', '"second"') + '[layers.half_life]\na = "1 d"\n'
    text = text.replace("[flow]", f"{second}[flow]").replace('"0 m2/s"', '"1e-30 m2/s"')
    run = walk(text)
    expected = np.repeat([np.exp(-0.1 * 3.0), 0.5**3], 4)
    assert run.dissolved("a") == pytest.approx(expected, rel=1e-12)
    assert run.last.still.dissolved[-1] == pytest.approx(expected, rel=1e-12)


def test_a_short_life_and_a_long_step_leave_nothing_below_nothing():
    """Half-lives of minutes in steps of hours: what decays first is taken first, and the books close."""
    solutes = [Solute(rate=1e4, initial=1.0), Solute("b", 0.0, rate=5e3, parent="a"),
               Solute("c", 0.0, parent="b")]
    run = walk(
        tracer_column(solutes, velocity=1.0, dispersivity=0.0, length=1.0, cells=20, days=0.5, every=0.1)
    )
    for state in run.records:
        assert state.dissolved[run.problem.chemical :].min() >= 0.0
    everything = run.last.passed[0, -3:, 0].sum() + run.problem.stock[-3:].sum()
    last = run.problem.stored(run.last)[-1] + run.last.passed[1, -1, 0]
    assert last == pytest.approx(everything, rel=1e-3), "all has come to the end of the chain"


@st.composite
def columns(draw) -> str:
    names = "abc"[: draw(st.integers(1, 3))]
    laws = st.sampled_from(["", BENT, BOUNDED, BENT.replace("0.7", "0.3"), BENT.replace("0.7", "1.4"),
                            'law = "linear"\nkd = "5 L/kg"'])
    solutes = [
        Solute(name, draw(st.sampled_from([0.0, 1e-6, 1.0])), draw(st.sampled_from([0.0, 0.5])),
               draw(st.sampled_from([0.01, 0.1, 30.0])), names[i - 1] if i and draw(st.booleans()) else "",
               isotherm=draw(laws))
        for i, name in enumerate(names)
    ]
    immobile = ""
    if draw(st.booleans()):
        transfer = draw(st.sampled_from(["0 1/s", "0.1 1/d", "1e-3 1/s", "1e3 1/s"]))
        immobile = f'[layers.immobile]\nfraction = {draw(st.sampled_from([0.1, 0.5, 0.95]))}\n'
        immobile += f'transfer = "{transfer}"\nsolids = {draw(st.sampled_from([0.0, 0.3, 1.0]))}\n'
    return tracer_column(
        solutes, velocity=0.3, dispersivity=draw(st.sampled_from([0.0, 0.01, 0.5])), length=0.3, cells=6,
        days=3.0, every=0.5, inlet=draw(st.sampled_from(["flux", "concentration"])),
        pulse=draw(st.sampled_from([None, 1.2])),
        immobile=immobile, accuracy=draw(st.sampled_from([1e-3, 0.5])),
        coupling=draw(st.sampled_from(["two-stage", "lie", "strang", "iterated"])),
    )  # fmt: skip


@settings(max_examples=60, suppress_health_check=[HealthCheck.too_slow])
@given(columns())
def test_nothing_falls_below_nothing_or_rises_above_what_there_was(text):
    """`walk` closes the books after every step. What decays counts with what it decays into."""
    run = walk(text)
    problem = run.problem
    tracers = slice(problem.chemical, None)
    most = (problem.feeds.inflow.max(axis=(0, 1)) + problem.initial.dissolved.max(axis=1))[tracers].sum()
    for state in run.records:
        waters = [state.dissolved[tracers]] + ([state.still.dissolved[tracers]] if state.still else [])
        for dissolved in waters:
            assert dissolved.min() >= -EMPTIED * most
            if not problem.isotherms:  # a parent that is held lets go of its daughter
                assert dissolved.sum(axis=0).max() <= most * (1.0 + 1e-9)
        assert state.sorbed.min(initial=0.0) >= 0.0
