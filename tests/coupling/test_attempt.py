"""One step: order in time where nothing is sharp, and what its estimate says of its error."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from tests.support.columns import column, started
from tests.support.orders import observed_order
from tests.support.salts import Salt, water, write_salts

from gossan.chemistry.equilibrium import Solver
from gossan.coupling.attempt import attempt
from gossan.coupling.problem import Problem
from gossan.coupling.splitting import Turn
from gossan.coupling.state import State
from gossan.transport.faces import Faces, faces_of
from gossan.transport.step import DAMPING

STEPS = (12, 24, 48, 96)
EXACT = 768  # steps of the reference: its error is 1/64 of the finest, 1/8 where the order is the first
# What enters is the water behind the front, saturated: Na Cl = 1 and Cl - Na = 3 mol m-3.
BEHIND = {"Na": 0.3027756377319946, "K": 3.5, "Cl": 3.302775637731995, "NO3": 0.5}
AHEAD = {"Na": 1.0, "K": 0.5, "Cl": 1.0, "NO3": 0.5}
# dispersivity, weight of the end in an implicit step
EXPLICIT, IMPLICIT, VERY_IMPLICIT = ("2 cm", None), ("5 cm", DAMPING), ("20 cm", DAMPING)


def salty(folder, coupling: str, dispersivity: str) -> tuple[Problem, State]:
    """A bed full of salt, in its water a smooth front of a second cation: A B = K bends all profiles."""
    problem, state = started(
        column(
            water("feed", **BEHIND) + water("pore", **AHEAD), minerals='salt = "0.1 mol/L"', cells=40,
            dispersivity=dispersivity, chemistry=write_salts(folder, Salt("salt", "Na", 1.0)),
            run=f'coupling = "{coupling}"',
        ),
        folder,
    )  # fmt: skip
    share = 0.5 * (1.0 - np.tanh((problem.grid.centres - 0.45) / 0.05))
    amount = state.dissolved.copy()
    for ion in ("K^+", "Cl^-"):
        amount[problem.solutes.index(ion)] += 3.0 * share
    amount *= state.water
    found = Solver(problem.system).cold(state.water * problem.system.water_density, amount, state.solid)
    assert (found.solid > 0.0).all()
    return problem, replace(
        state, dissolved=found.amount / state.water, solid=found.solid, presence=found.presence,
        ln_activity=found.ln_activity, ionic_strength=found.ionic_strength, solved=found.solved,
    )  # fmt: skip


def faces(problem: Problem, state: State) -> Faces:
    """At the state's moment, under the held flux."""
    darcy_flux = np.full(len(state.water) + 1, problem.feeds.darcy_flux[0, 0])
    return faces_of(problem.transport, state.water, darcy_flux)


def marched(problem: Problem, state: State, steps: int, theta: float | None) -> tuple[np.ndarray, float]:
    """Totals (solute, cell) after a tenth of a pore volume in equal steps, and the sum of their estimates."""
    dt = 0.1 * problem.pore_volume / problem.feeds.darcy_flux[0, 0] / steps
    solver = Solver(problem.system)
    for _ in range(steps):
        inflow, now = problem.feeds.inflow[0, 0], faces(problem, state)
        state = attempt(Turn(problem, solver, state, now, inflow, dt, theta)).state
    held = state.dissolved * state.water
    return held + problem.system.mineral_stoichiometry.T @ state.solid, state.splitting_error


def errors(folder, coupling: str, dispersivity: str, theta: float | None) -> tuple[list[float], list[float]]:
    """True errors in L1, relative as the estimates are, and the estimates."""
    problem, state = salty(folder, coupling, dispersivity)
    exact, _ = marched(problem, state, EXACT, theta)
    scale = problem.stock + np.abs(problem.feeds.inflow[0, 0]) * problem.pore_volume
    found, told = [], []
    for steps in STEPS:
        totals, estimate = marched(problem, state, steps, theta)
        found.append(float(((np.abs(totals - exact) @ problem.grid.width) / scale)[1:].max()))
        told.append(estimate)
    return found, told


@pytest.mark.parametrize(("dispersivity", "theta"), [EXPLICIT, IMPLICIT, VERY_IMPLICIT])
def test_two_stage_is_second_order_in_time(tmp_path, dispersivity, theta):
    found, told = errors(tmp_path, "two-stage", dispersivity, theta)
    assert observed_order(STEPS, found) >= 1.9
    assert found[-1] < 5e-6
    # the estimate is a share of the first-order error: it covers the true one, ever more widely
    assert (np.array(told) > 0.9 * np.array(found)).all()


@pytest.mark.parametrize(("dispersivity", "theta"), [EXPLICIT, ("5 cm", 1.0), ("20 cm", 1.0)])
def test_lie_is_first_order_and_its_estimate_follows_the_error(tmp_path, dispersivity, theta):
    found, told = errors(tmp_path, "lie", dispersivity, theta)
    assert observed_order(STEPS, found) == pytest.approx(1.1, abs=0.15)  # the reference is no better than 1/8
    ratio = np.array(told) / np.array(found)
    assert ratio.min() > 1.0
    assert ratio.max() < (8.0 if theta else 4.0)  # backward Euler, against a second order that halves it


@pytest.mark.parametrize(("dispersivity", "theta"), [EXPLICIT, IMPLICIT])
def test_iterated_is_second_order_in_time(tmp_path, dispersivity, theta):
    found, _ = errors(tmp_path, "iterated", dispersivity, theta)
    assert observed_order(STEPS, found) >= 1.9
    assert found[-1] < 5e-6


def test_nothing_that_was_given_is_changed(tmp_path):
    problem, state = salty(tmp_path, "two-stage", "2 cm")
    before = {name: np.array(getattr(state, name), copy=True) for name in State.__slots__}
    solver, now = Solver(problem.system), faces(problem, state)
    attempt(Turn(problem, solver, state, now, problem.feeds.inflow[0, 0], 600.0, None))
    for name, values in before.items():
        assert np.array_equal(values, getattr(state, name)), name


def test_a_step_tried_twice_gives_the_same_bits(tmp_path):
    """Also after the solver has worked on something else: what it keeps for itself must not matter."""
    problem, state = salty(tmp_path, "two-stage", "2 cm")
    solver, now = Solver(problem.system), faces(problem, state)
    inflow = problem.feeds.inflow[0, 0]
    one = attempt(Turn(problem, solver, state, now, inflow, 600.0, None))
    attempt(Turn(problem, solver, one.state, faces(problem, one.state), 0.5 * inflow, 1200.0, DAMPING))
    two = attempt(Turn(problem, solver, state, now, inflow, 600.0, None))
    for name in State.__slots__:
        a, b = (np.asarray(getattr(trial.state, name)) for trial in (one, two))
        assert a.tobytes() == b.tobytes(), name
    assert one.error == two.error
