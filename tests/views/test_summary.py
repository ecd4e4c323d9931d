"""What a run comes to, against the arrays it is taken from."""

from __future__ import annotations

import pytest

from gossan.views.scales import solute_scale, time_scale
from gossan.views.summary import run_json, summary_of


def test_capacity_counts_the_minerals_of_the_start(result):
    (gypsum,) = summary_of(result).stocks
    # 0.1 wt% of 2650 kg/m3 of grains at porosity 0.4, over 0.17217 kg/mol and 0.2 m
    assert gypsum.first == pytest.approx(0.001 * 2650 * 0.6 / 0.17217 * 0.2, rel=1e-3)
    assert gypsum.used_percent == pytest.approx(100.0)
    assert gypsum.used * gypsum.molar_mass == pytest.approx(0.001 * 2650 * 0.6 * 0.2, rel=1e-3)
    told = run_json(summary_of(result))["capacity"]["gypsum"]
    assert told["used_kg_m2"] == pytest.approx(0.318, rel=1e-3)
    assert told["used_percent"] == pytest.approx(100.0)


def test_head_loss_is_darcys(result):
    first, last = summary_of(result).head_loss.whole[[0, -1]]
    assert first == pytest.approx(0.4 / 10 * 0.2, rel=1e-3)  # flux over conductivity times length
    assert last < first  # gypsum made room


def test_the_ledger_has_every_solute_and_charge_and_water(result):
    ledger = summary_of(result).ledger
    assert set(ledger) == {*result.axes.component, "water", "charge"}
    assert 0.0 < max(ledger.values()) < 1e-12


def test_json_has_the_largest_error_that_was_carried(result):
    carried = result.ledger.splitting_error.values
    assert run_json(summary_of(result))["splitting_error"] == carried.max()
    assert 0.0 < carried.max() < 0.01


def test_scales_are_those_people_read():
    assert time_scale(3600.0 * 5).unit == "h"
    assert solute_scale("bromide").unit == "mmol/L"
    assert solute_scale("bromide", {"bromide": 0.0799}).factor == pytest.approx(79.9)
    assert solute_scale("SO4^2-").factor == pytest.approx(96.06, abs=0.01)
