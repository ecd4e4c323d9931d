"""Limits: in SI whatever their unit, and crossed when straight lines between records cross them."""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.small_cases import GYPSUM

from gossan.case.bounds import bounds_of
from gossan.case.read import case_from_text
from gossan.constants.water import density
from gossan.views.crossing import first_outside
from gossan.views.limits import verdicts

INF = np.inf


@pytest.mark.parametrize(("written", "mol_per_m3"), [
    ('Zn = "65.38 mg/L"', 1.0),  # g/mol of zinc, IUPAC (2021)
    ('Zn = "2 meq/L"', 1.0),
    ('Zn = "1 mmol/kg"', 1e-3 * density(298.15)),
    ('NO3 = "14.007 mg/L as N"', 1.0),
    ('bromide = "3 mmol/L"', 3.0),
])  # fmt: skip
def test_a_limit_is_in_moles_per_volume(written, mol_per_m3):
    head, _, tail = GYPSUM.partition("[limits.outlet]\n")
    case = case_from_text(head + "[limits.outlet]\n" + written + "\n" + tail[tail.index("[run]") :])
    (bound,) = bounds_of(case)
    assert bound.high == pytest.approx(mol_per_m3, rel=1e-12)
    assert bound.low == -INF


def test_a_crossing_lies_on_the_straight_line_between_records():
    time = np.array([0.0, 10.0, 30.0, 40.0])
    rising = np.array([1.0, 1.0, 2.0, 5.0])
    assert first_outside(time, rising, -INF, 1.5) == (20.0, 10.0)
    assert first_outside(time, rising, -INF, 5.0) is None  # a limit that is met is kept
    assert first_outside(time, rising, -INF, 0.5) == (0.0, 0.0)


def test_a_range_can_be_left_at_either_end():
    time = np.array([0.0, 10.0])
    assert first_outside(time, np.array([7.0, 6.0]), 6.5, 9.0) == (5.0, 5.0)
    assert first_outside(time, np.array([8.0, 10.0]), 6.5, 9.0) == (5.0, 5.0)


def test_only_the_first_crossing_counts():
    time = np.arange(5.0)
    assert first_outside(time, np.array([0.0, 2.0, 0.0, 2.0, 0.0]), -INF, 1.0) == (0.5, 0.5)


def test_peak_and_last_are_those_of_the_port(result):
    found = {v.quantity: v for v in verdicts(result, [])}
    sulfate = result.ports["outlet"].dissolved.sel(component="SO4^2-").values
    assert found["SO4^2-"].peak == sulfate.max()
    assert found["SO4^2-"].last == sulfate[-1]
    assert all(v.first_exceeded is None and v.limit is None for v in found.values())


def test_limits_come_first_and_every_solute_has_a_verdict(result):
    case = case_from_text(GYPSUM)
    found = [v.quantity for v in verdicts(result, bounds_of(case))]
    assert found[:4] == ["SO4^2-", "bromide", "Zn^2+", "pH"]
    assert set(found) == {*result.axes.component, "pH", "Zn^2+"}


def test_the_error_is_never_less_than_half_a_record(result):
    bromide = next(v for v in verdicts(result, bounds_of(case_from_text(GYPSUM))) if v.quantity == "bromide")
    interval = np.diff(result.ports["outlet"].time.values).min()
    assert bromide.error > 0.5 * interval
    # what the steps add is little beside it: their errors are held to 1e-3 each
    assert bromide.error < 0.6 * interval
