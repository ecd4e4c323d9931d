"""A run that leaves the range of its activity law says where, when and how far."""

from __future__ import annotations

from dataclasses import replace

import numpy as np
import pytest
from tests.support.columns import case_of, column

from gossan import recording
from gossan.case.build import build
from gossan.coupling.beyond import Beyond, watched
from gossan.store.read import open_result

WATERS = """
[waters.feed]
balance_on = "Cl"
analysis = {Na = "0.8 mol/L"}
[waters.pore]
balance_on = "Cl"
analysis = {Na = "0.1 mol/L"}
"""
TEXT = column(WATERS, cells=5, dispersivity="1 cm", duration="1 PV")


@pytest.fixture(scope="module")
def problem():
    return build(case_of(TEXT))


def at(problem, time, *strengths):
    return replace(problem.initial, time=time, ionic_strength=np.array(strengths))


def test_the_first_cell_and_the_largest_strength_are_kept(problem):
    within = at(problem, 1.0, 0.1, 0.5, 0.1, 0.1, 0.1)
    inside = watched(problem, within, Beyond())
    assert inside == Beyond(-1.0, -1, 0.5)
    assert inside.told(problem) == ""
    first = watched(problem, at(problem, 2.0, 0.1, 0.2, 0.51, 0.6, 0.1), inside)
    assert first == Beyond(2.0, 2, 0.6)
    further = watched(problem, at(problem, 3.0, 0.9, 0.2, 0.51, 0.6, 0.1), first)
    assert further == Beyond(2.0, 2, 0.9)
    assert watched(problem, within, further) == further


def test_it_is_told_with_law_layer_place_and_time(problem):
    told = Beyond(86400.0, 2, 0.61).told(problem)
    assert told == (
        "ionic strength up to 0.61 mol/kg: the davies law is meant for waters up to 0.5, which was first "
        "exceeded in cell 2 (layer bed, x = 0.5 m) at 1 d"
    )


def test_a_result_file_holds_the_warning_and_a_resumed_run_the_same(tmp_path):
    whole, stopped = tmp_path / "whole.h5", tmp_path / "stopped.h5"
    recording.run_case(case_of(TEXT), whole)
    (warning,) = open_result(whole).warnings
    # the feed: 0.8 mol of each ion in a litre of 997 g
    assert warning.startswith("ionic strength up to 0.8")
    assert "first exceeded in cell 0 (layer bed, x = 0.1 m)" in warning

    def stop_early(share, state):
        if share > 0.7:
            raise KeyboardInterrupt

    run = recording.run_case
    with pytest.raises(KeyboardInterrupt):
        run(case_of(TEXT), stopped, progress=stop_early)
    assert open_result(stopped).warnings == ()
    recording.resume(stopped)
    assert open_result(stopped).warnings == (warning,)


def test_a_run_within_its_range_says_nothing(tmp_path):
    path = tmp_path / "thin.h5"
    recording.run_case(case_of(TEXT.replace("0.8 mol/L", "0.4 mol/L")), path)
    assert open_result(path).warnings == ()
