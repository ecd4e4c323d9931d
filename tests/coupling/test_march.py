"""The walk: minerals and waters at every record, steps that meet their marks, errors that are as told."""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.columns import Walk, column, started, walk, watched

from gossan.base.errors import SolveError
from gossan.chemistry.equilibrium import mineral_saturation
from gossan.coupling.drive import Drive
from gossan.coupling.march import pore_volumes

ACID_ON_CALCITE = """
[waters.feed]
pH = 3.5
balance_on = "SO4"
analysis = {Ca = "1 mmol/L", Fe = "1 mmol/L"}
[waters.pore]
balance_on = "Cl"
analysis = {Na = "1 mmol/L"}
saturated_with = {calcite = 0.0}
"""
SALT_ON_GYPSUM = """
[waters.feed]
balance_on = "Cl"
analysis = {Na = "20 mmol/L"}
[waters.pore.saturated_with]
gypsum = 0.0
"""


def indices(run: Walk, state) -> np.ndarray:
    """(mineral, cell) saturation indices."""
    system = run.problem.system
    return mineral_saturation(system, state.ln_activity)


@pytest.mark.parametrize("coupling", ["two-stage", "lie"])
@pytest.mark.parametrize("dispersivity", ["1 cm", "20 cm"])
def test_every_mineral_is_there_and_saturated_or_absent_and_not_above(coupling, dispersivity):
    run = walk(
        column(
            ACID_ON_CALCITE, minerals='calcite = "0.01 wt%"', forms='["calcite", "siderite", "gypsum"]',
            duration="6 PV", dispersivity=dispersivity, cells=10,
            run=f'coupling = "{coupling}"\nports_every = "0.3 PV"',
        )
    )  # fmt: skip
    assert "siderite" in run.problem.system.minerals
    assert run.inventory("siderite") > 0.0 == run.inventory("siderite", run.records[0]), "it comes"
    assert (run.solid("calcite") == 0.0).sum() > 5, "and what was there goes"
    first, last = indices(run, run.records[0]), indices(run, run.last)
    siderite = run.problem.system.minerals.index("siderite")
    assert np.isnan(first[siderite]).all(), "no iron, no index"
    assert np.isfinite(last).all()
    for state in run.records:
        index, there = indices(run, state), state.solid > 0.0
        assert state.solid.min() >= 0.0
        assert np.nanmax(index) <= 1e-9
        assert np.abs(index[there]).max(initial=0.0) <= 1e-9
        assert np.array_equal(there, state.presence > 0), "what the next solve starts from"


def test_what_may_only_dissolve_never_grows():
    """Gypsum off the list, in water that would let it grow: what is there stays, and goes when it can."""
    waters = """
[waters.feed]
analysis = {Ca = "40 mmol/L", SO4 = "40 mmol/L"}
[waters.pore]
[waters.rinse]
"""
    run = walk(
        column(
            waters, minerals='gypsum = "0.5 wt%"', forms='["calcite"]', cells=10, duration="6 PV",
            feed='{from = "0 d", water = "feed"}, {from = "2 PV", water = "rinse"}', dispersivity="2 cm",
            run='ports_every = "0.1 PV"',
        )
    )  # fmt: skip
    amounts = np.array([run.solid("gypsum", state) for state in run.records])
    assert np.diff(amounts, axis=0).max() <= 0.0
    while_strong = (run.pore_volumes > 1.6) & (run.pore_volumes < 2.0)
    gypsum = run.problem.system.minerals.index("gypsum")
    index = np.array([indices(run, state)[gypsum] for state in run.records])
    assert index[while_strong].min() > 0.1, "above saturation, and nothing falls"
    held = amounts[while_strong]
    assert held.max() > 0.0
    assert np.array_equal(held, np.broadcast_to(held[0], held.shape))
    assert 0.0 < amounts[-1].sum() < held[0].sum(), "the rinse dissolves it"


def test_acid_beside_as_much_alkali_is_no_reason_for_short_steps():
    """Their sum of excess H^+ is next to nothing; an error is measured against what there is of both."""
    def steps(base: float) -> int:
        text = f"""
[waters.feed]
[waters.acid]
balance_on = "pH"
analysis = {{Cl = "1 mmol/L"}}
[waters.base]
balance_on = "pH"
analysis = {{Na = "{base} mmol/L"}}
[flow]
darcy_flux = "0.1 m/d"
feed = [{{from = "0 d", water = "feed"}}]
[run]
duration = "2 PV"
ports_every = "1 PV"
profiles_every = "1 PV"
"""
        layer = '[[layers]]\nlength = "10 cm"\ncells = 5\nporosity = 0.4\ndispersivity = "1 cm"\n'
        for name in ("acid", "base"):
            text += f'{layer}name = "{name}"\nwater = "{name}"\n'
        return walk(text).strides

    assert steps(1.00000001) == steps(1.0) < 100


MARKS = [
    ('profiles_every = "0.25 PV"\nports_every = "0.1 PV"', "3 PV"),
    ('profiles_every = "7 h"\nports_every = "1.7 h"', "3 d"),
]


@pytest.mark.parametrize(("every", "duration"), MARKS)
@pytest.mark.parametrize("flow", ['darcy_flux = "0.3 m/d"', 'head_drop = "5 cm"'])
def test_steps_meet_every_mark(every, duration, flow):
    """Also where the pores, and so a held head's flux, change on the way: a mark is never passed unseen."""
    problem, _ = started(
        column(
            SALT_ON_GYPSUM, minerals='gypsum = "0.5 wt%"', cells=6, length="30 cm", flow=flow,
            duration=duration, dispersivity="2 cm", layer='conductivity = "1 m/d"', run=every,
        )
    )  # fmt: skip
    frames, records, now = [], [], 0.0
    for stride in watched(problem):
        assert stride.state.time > now
        now = stride.state.time
        clock = problem.frames.clock(now, pore_volumes(problem, stride.state))
        if stride.frame_due:
            frames.append(clock)
        if stride.record_due:
            records.append(clock)
    assert frames == pytest.approx(problem.frames.marks[1:], rel=1e-12)
    assert records == pytest.approx(problem.records.marks[1:], rel=1e-12)


def test_a_flow_that_turns_back_is_no_flow_to_go_on_with(monkeypatch):
    """Where solids push out more water than a head drives through, what comes in at the outlet is unknown."""
    problem, _ = started(
        column(SALT_ON_GYPSUM, minerals='gypsum = "0.1 wt%"', cells=3, flow='head_drop = "5 cm"',
               layer='conductivity = "1 m/d"')
    )  # fmt: skip
    forward = Drive.flow

    def back(drive, dt, span=None):
        darcy_flux, head = forward(drive, dt, span)
        return darcy_flux - 1.01 * darcy_flux[0], head

    monkeypatch.setattr(Drive, "flow", back)
    with pytest.raises(SolveError, match="turned back at the inlet"):
        next(iter(watched(problem)))


def totals(run: Walk) -> np.ndarray:
    held = run.last.dissolved * run.last.water
    return held + run.problem.system.mineral_stoichiometry.T @ run.last.solid


@pytest.mark.parametrize(
    ("coupling", "dispersivity", "most"),
    [("two-stage", "1 cm", 0.1), ("two-stage", "20 cm", 0.5), ("lie", "1 cm", 0.1), ("lie", "20 cm", 0.1)],
)
def test_a_run_s_estimates_cover_its_error_in_time(coupling, dispersivity, most):
    """Behind a dissolution front: the sum of all steps' estimates against the same grid in tiny steps.

    They cover it 10 times or more while dispersion is explicit. Implicit, it spreads a solute before the
    solid can hold it, and the second order is lost: there the whole difference counts.
    """
    def run(coupling: str, courant: float, accuracy: float) -> Walk:
        return walk(
            column(
                SALT_ON_GYPSUM, minerals='gypsum = "0.2 wt%"', cells=20, duration="3 PV",
                dispersivity=dispersivity,
                run=f'coupling = "{coupling}"\nmax_courant = {courant}\naccuracy = {accuracy}\n'
                'ports_every = "3 PV"\nprofiles_every = "3 PV"',
            )
        )  # fmt: skip

    exact, found = run("two-stage", 0.03, 0.5), run(coupling, 0.5, 1e-3)
    problem = found.problem
    scale = problem.stock + np.abs(found.last.passed[0, :, 0])
    error = float(((np.abs(totals(found) - totals(exact)) @ problem.grid.width) / scale)[1:].max())
    assert 0.0 < error <= most * found.last.splitting_error
    assert found.largest_error <= 1e-3
