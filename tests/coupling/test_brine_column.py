"""A column of brine under SIT: books, equilibrium, the same bits after a stop, water among the species."""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.columns import assert_at_equilibrium, assert_books_closed, case_of, column

from gossan import recording
from gossan.case.build import build, first_pace
from gossan.coupling.ledger import Books
from gossan.coupling.march import march
from gossan.store.read import open_result

WATERS = """
[waters.feed]
balance_on = "Cl"
analysis = {Na = "2 mol/L", Mg = "0.1 mol/L"}
[waters.pore]
balance_on = "SO4"
analysis = {Na = "0.1 mol/L"}
saturated_with = {gypsum = 0.0}
"""
TEXT = column(
    WATERS, cells=5, length="10 cm", dispersivity="1 cm", minerals='gypsum = "2 wt%"', duration="1.5 PV",
    chemistry='activity = "sit"',
)  # fmt: skip


def test_books_close_and_minerals_are_at_equilibrium():
    problem = build(case_of(TEXT))
    books = Books(problem)
    state = problem.initial
    for stride in march(problem, state, first_pace(problem)):
        state = stride.state
        assert_books_closed(books, state)
        assert_at_equilibrium(problem, state)
    calcium = problem.solutes.index("Ca^2+")
    # more than twice the gypsum that fresh water takes: 15 mol m-3
    assert state.dissolved[calcium, 0] > 35.0
    assert state.ionic_strength.max() > 2.0


def test_a_stopped_run_goes_on_to_the_same_bits_and_records_the_water(tmp_path):
    whole, stopped = tmp_path / "whole.h5", tmp_path / "stopped.h5"
    assert recording.run_case(case_of(TEXT), whole).status == "finished"

    def stop_early(share, state):
        if share > 0.5:
            raise KeyboardInterrupt

    with pytest.raises(KeyboardInterrupt):
        recording.run_case(case_of(TEXT), stopped, progress=stop_early)
    assert recording.resume(stopped).status == "finished"
    one, other = open_result(whole), open_result(stopped)
    assert np.array_equal(one.profiles.dissolved.values, other.profiles.dissolved.values)
    assert np.array_equal(one.profiles.activity.values, other.profiles.activity.values, equal_nan=True)
    water = one.profiles.activity.values[:, one.axes.species.index("H2O")]
    # 2 mol/kg of NaCl: 0.932 (Hamer & Wu, osmotic coefficient 0.983), and the magnesium
    assert 10.0 ** water[-1, 0] == pytest.approx(0.927, abs=0.005)
    assert 10.0 ** water[0, -1] == pytest.approx(0.996, abs=0.003)
    assert one.warnings == ()
