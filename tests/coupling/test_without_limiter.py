"""`limiter = "none"`: tracers show what it does to a front, chemistry is spared what it cannot bear."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from tests.support.columns import column, started, watched

from gossan.transport import step
from gossan.transport.faces import Faces
from gossan.transport.kernel.advect import FIRST_ORDER

EMPTIED = 1e-14  # mol m-3: rounding of a cell of some 10 mol m-3 that gives all it has
WATERS = """
[waters.feed]
balance_on = "Cl"
analysis = {Zn = "500 mg/L", Na = "1 mmol/L"}
[waters.feed.tracers]
a = "1 mmol/L"
[waters.pore]
balance_on = "Cl"
analysis = {Na = "1 mmol/L"}
[waters.pore.tracers]
a = "0 mmol/L"
"""
SHARP = column(
    WATERS, minerals='calcite = "0.05 wt%"', forms='["calcite", "smithsonite"]', cells=40, duration="0.8 PV",
    run='limiter = "none"\nprofiles_every = "0.8 PV"\nports_every = "0.8 PV"',
)  # fmt: skip


@pytest.mark.parametrize("more", ["", 'coupling = "lie"'], ids=["two-stage", "lie"])
def test_a_front_of_chemistry_falls_back_where_it_would_take_what_is_not_there(more, monkeypatch):
    """Books and charge close at every step; only the tracer swings below nothing."""
    fallen_back = []

    def watching(of, **changed):
        if isinstance(of, Faces):
            fallen_back.append(changed["transport"].limiter == FIRST_ORDER)
        return replace(of, **changed)

    monkeypatch.setattr(step, "replace", watching)  # which only the fallback calls
    problem, _ = started(SHARP.replace('limiter = "none"', f'limiter = "none"\n{more}'))
    signed = np.isin(np.arange(len(problem.solutes)), problem.system.signed)
    tracer = np.arange(len(problem.solutes)) >= problem.chemical
    lowest = 0.0
    for stride in watched(problem):
        assert stride.state.dissolved[~signed & ~tracer].min() >= -EMPTIED
        assert stride.state.solid.min() >= 0.0
        lowest = min(lowest, float(stride.state.dissolved[tracer].min()))
    assert fallen_back, "or nothing here was tried"
    assert all(fallen_back)
    assert lowest < -0.01
