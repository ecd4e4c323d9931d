"""Columns that close: where their steps end, what ends the run, and what goes on without flow."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest
from tests.support.columns import column, started, watched
from tests.support.salts import Salt, water, write_salts

from gossan.coupling.drive import Drive
from gossan.coupling.march import Clogged, Stride, march
from gossan.coupling.pores import LANDING, flow, pore_room, pore_space, share_to_close
from gossan.coupling.problem import CLOGGED, Problem

FLUX, HEAD = 'darcy_flux = "8 cm/d"', 'head_drop = "5 cm"\ninlet = "concentration"'
# nearly all of its conductivity until it has none: closes soon under a held head too
SUDDEN = '{law = "threshold", exponent = 0.2, critical_porosity = 0.25}'


def closing(folder: Path, flow: str, law: str, duration: str = "50 d", large: float = 400.0) -> Problem:
    """A salt that needs more room than there is takes the place of a smaller one, from the inlet on."""
    chemistry = write_salts(folder, Salt("small", "Na", 1.0, 50.0), Salt("large", "K", 1e-6, large))
    feed = water("feed", K=500.0, NO3=500.0) + '[waters.feed.tracers]\ndye = "1 mmol/L"\n'
    return started(
        column(
            feed + water("pore", Na=1.0, Cl=1.0), minerals='small = "10 vol%"', cells=5, length="20 cm",
            flow=flow, layer=f'conductivity = "1 m/d"\nclogging = {law}', chemistry=chemistry,
            duration=duration, diffusion="1e-9 m2/s", run='ports_every = "5 d"',
        ),
        folder,
    )[0]  # fmt: skip


def walked(problem: Problem) -> tuple[list[Stride], Clogged | None]:
    strides = []
    try:
        for stride in watched(problem):
            strides.append(stride)
    except Clogged as clogged:
        return strides, clogged
    return strides, None


@pytest.mark.parametrize(
    ("law", "closes_at"),
    [('{law = "kozeny-carman"}', CLOGGED),
     ('{law = "threshold", exponent = 3.0, critical_porosity = 0.2}', 0.2)],
)
def test_a_held_flux_ends_on_the_closing_of_a_pore(tmp_path, law, closes_at):
    """Not beyond it: with never less room than nothing, and within a millionth of the bulk."""
    problem = closing(tmp_path, FLUX, law)
    strides, clogged = walked(problem)
    assert clogged is not None
    room = np.array([pore_space(problem, stride.state.solid) - closes_at for stride in strides])
    assert room.min() >= -1e-15
    assert 0.0 <= room[-1, 0] == room.min() < 1.001 * LANDING
    assert (room[:-1] > LANDING).all()
    assert (clogged.cell, clogged.time) == (0, strides[-1].state.time)
    assert np.isfinite(strides[-1].head).all()


def test_immobile_pores_close_as_well(tmp_path):
    """Whichever of the two waters loses its room first ends the run, and neither has less than none."""
    law = '{law = "kozeny-carman"}\nimmobile = {fraction = 0.3, transfer = "1e-5 1/s"}'
    problem = closing(tmp_path, FLUX, law)
    strides, clogged = walked(problem)
    assert clogged is not None
    push = Drive(problem, problem.initial).push
    room = np.array([pore_room(problem, stride.state, push) for stride in strides])
    assert room.min() >= 0.0
    assert 0.0 <= room[-1].min() <= LANDING < room[:-1].min()


def test_a_step_is_cut_by_straight_lines():
    """Two pores that would close in it, the second sooner: after a half and a quarter of the step."""
    room, beyond = np.array([0.2, 0.1, 0.3]), np.array([-0.2, -0.3, 0.1])
    assert share_to_close(room, beyond) == pytest.approx(0.25, rel=1e-5)
    assert share_to_close(room, beyond) < 0.25, "so that it ends within what counts as closed"


def test_what_is_left_in_any_case_carries_the_flow_on(tmp_path):
    """Past the critical porosity, with the head that a thousandth of the conductivity needs."""
    law = '{law = "threshold", exponent = 3.0, critical_porosity = 0.2, residual = 1e-3}'
    problem = closing(tmp_path, FLUX, law, large=170.0)
    strides, clogged = walked(problem)
    assert clogged is None
    last = strides[-1]
    assert CLOGGED < last.state.water.max() < 0.2
    darcy_flux, head = Drive(problem, last.state).flow(1.0, 0.0)
    assert darcy_flux == pytest.approx(0.08 / 86400.0, rel=1e-3)
    assert head[0] == pytest.approx(0.08 / 1.0 * 0.2 / 1e-3, rel=1e-3)


def test_a_held_head_goes_on_as_a_closed_column(tmp_path):
    """No flow at all where the bed has lost its way through, while diffusion and chemistry go on."""
    problem = closing(tmp_path, HEAD, SUDDEN, duration="40 d")
    strides, clogged = walked(problem)
    assert clogged is None, "there is room left"
    fluxes = np.array([Drive(problem, stride.state).flow(stride.trial.dt)[0] for stride in strides])
    closed = int(np.argmax(fluxes[:, 0] == 0.0))
    assert closed > 10
    assert fluxes[:closed, 0].min() > 0.5 * fluxes[0, 0], "until then it flows"
    assert (fluxes[closed:, 0] == 0.0).all()
    # the step after takes back what solids were to push out in the one that closed it
    assert np.abs(fluxes[closed + 2 :, 1:]).max() < 1e-3 * fluxes[0, 0], "but for what solids push out"
    first, last = strides[closed].state, strides[-1].state
    assert last.time - first.time > 20 * 86400.0
    came = last.passed[0].sum(axis=-1) - first.passed[0].sum(axis=-1)
    assert came[problem.solutes.index("dye")] > 0.0, "it diffuses in"
    assert last.solid[1, 0] > first.solid[1, 0], "and falls"
    dye = problem.solutes.index("dye")
    assert last.dissolved[dye, -1] > first.dissolved[dye, -1] + 1e-3
    _, head = Drive(problem, last).flow(1.0, 0.0)
    assert head == pytest.approx([0.05, *[0.0] * 5], abs=1e-9), "all of it over the cell that closed"


def test_a_closed_column_under_a_flux_that_is_held_again_has_ended(tmp_path):
    problem = closing(tmp_path, HEAD, SUDDEN, duration="40 d")
    strides, _ = walked(problem)
    push = Drive(problem, strides[-1].state).push
    darcy_flux, _ = flow(problem, strides[-1].state, 1.0, push)
    assert darcy_flux[0] == 0.0
    again = closing(tmp_path, FLUX, SUDDEN)
    with pytest.raises(Clogged):
        next(iter(march(again, strides[-1].state, strides[-1].pace)))
