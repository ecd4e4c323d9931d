"""Limits: in SI whatever their unit, and when the steps of a run first exceed them."""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.small_cases import GYPSUM

from gossan.case.bounds import bounds_of
from gossan.case.read import case_from_text
from gossan.constants.water import density
from gossan.recording import run
from gossan.views.crossing import SURE
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


def test_steps_tell_closer_than_records(result):
    """Half the interval of records is 864 s; the case's steps are some 20 s long."""
    bromide = next(v for v in verdicts(result, bounds_of(case_from_text(GYPSUM))) if v.quantity == "bromide")
    when, off, shadow = result.crossings["outlet"]["bromide"]
    assert bromide.first_exceeded == when
    assert bromide.error == pytest.approx(off + SURE * abs(shadow - when))
    port = result.ports["outlet"]
    recorded = np.interp(when, port.time.values, port.dissolved.sel(component="bromide").values)
    assert recorded == pytest.approx(0.5, abs=0.02)  # on the straight line between two records


def test_where_no_errors_were_carried_none_is_stated(tmp_path):
    case = case_from_text(GYPSUM.replace("[run]\n", '[run]\nerrors = "none"\n'))
    found = run(case, tmp_path / "plain.h5")
    late = [v for v in verdicts(found, bounds_of(case)) if v.first_exceeded]
    assert late
    assert all(v.error is None for v in late)
    assert "dissolved_error" not in list(found.ports["outlet"])


def test_a_limit_exceeded_from_the_start_stays_so_whatever_comes_later(tmp_path):
    """Gypsum's sulfate is washed below its limit, and a second feed brings it above again."""
    feed = '[[flow.feed]]\nfrom = "2 d"\nwater = "strong"\n[limits.outlet]'
    strong = '[waters.strong]\nbalance_on = "SO4"\nanalysis = {Na = "1 g/L", SO4 = "2 g/L"}\n[[layers]]'
    text = GYPSUM.replace("[limits.outlet]", feed).replace("[[layers]]", strong)
    case = case_from_text(text.replace('duration = "4 PV"', 'duration = "20 PV"'))
    found = run(case, tmp_path / "again.h5")
    assert found.crossings["outlet"]["SO4^2-"][0] > 2 * 86400.0, "as the steps saw it, again"
    sulfate = next(v for v in verdicts(found, bounds_of(case)) if v.quantity == "SO4^2-")
    assert (sulfate.first_exceeded, sulfate.error) == (0.0, 0.0)
