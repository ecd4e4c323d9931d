"""A case's words become SI, moles and arrays."""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.columns import case_of, column

from gossan.base.errors import InputError
from gossan.case.build import build, first_pace

DAY = 86400.0
WATERS = """
[waters.feed]
balance_on = "Cl"
analysis = {Na = "5 mmol/L", Ca = "0.5 mmol/L"}
tracers = {bromide = "1 mmol/L", dye = "3 mg/L"}
[waters.pore]
balance_on = "Cl"
analysis = {Na = "1 mmol/L"}
saturated_with = {calcite = 0.0}
"""
TRACERS = '[tracers.bromide]\n[tracers.dye]\nmolar_mass = "300 g/mol"\n'
SECOND = """
[[layers]]
name = "second"
length = "50 cm"
cell = "20 cm"
porosity = 0.2
dispersivity = "3 cm"
water = "feed"
conductivity = "2 m/d"
clogging = {law = "threshold", exponent = 2.5, critical_porosity = 0.05}
"""


def problem(**settings):
    waters = settings.pop("waters", WATERS)
    more = settings.pop("more", "") + "\n" + TRACERS
    return build(case_of(column(waters, more=more, **settings)))


# amount as written, mol per m3 of bulk: sand of 2650 kg/m3 and porosity 0.4 has 1590 kg of dry solid in it
AMOUNTS = [
    ('"1 wt%"', 15.9 / 0.100086),
    ('"5 g/kg"', 0.005 * 1590.0 / 0.100086),
    ('"2 umol/g"', 2e-3 * 1590.0),
    ('"0.1 mol/L"', 100.0),
    ('"1 vol%"', 0.01 / 36.934e-6),
    ('{amount = "0.1 mol/L", reactive = 0.4}', 40.0),
]


@pytest.mark.parametrize(("amount", "moles"), AMOUNTS)
def test_amounts_of_minerals_become_moles_per_volume_of_bulk(amount, moles):
    built = problem(minerals=f"calcite = {amount}")
    found = built.initial.solid[built.system.minerals.index("calcite")]
    assert found == pytest.approx(moles, rel=2e-4)  # molar masses and volumes differ in their last digits


def test_what_flows_in_is_what_the_laboratory_found():
    built = problem()
    inflow = dict(zip(built.solutes, built.feeds.inflow[0, 0], strict=True))
    assert inflow["Na^+"] == pytest.approx(5.0, rel=1e-12)
    assert inflow["Ca^2+"] == pytest.approx(0.5, rel=1e-12)
    assert inflow["Cl^-"] == pytest.approx(6.0, rel=1e-6)
    assert inflow["bromide"] == pytest.approx(1.0, rel=1e-12)
    assert inflow["dye"] == pytest.approx(0.01, rel=1e-12)
    assert built.solutes[built.chemical :] == built.tracers == ("bromide", "dye")
    charge = built.system.component_charge @ built.feeds.inflow[0, 0][: built.chemical]
    assert charge == pytest.approx(0.0, abs=1e-12)


def test_layers_become_cells():
    built = problem(cells=4, length="1 m", layer='conductivity = "1 m/d"', more=SECOND)
    grid = built.grid
    assert grid.edges == pytest.approx([0.0, 0.25, 0.5, 0.75, 1.0, 1.0 + 0.5 / 3, 1.0 + 1.0 / 3, 1.5])
    assert built.porosity.tolist() == [0.4] * 4 + [0.2] * 3
    assert built.conductivity * DAY == pytest.approx([1.0] * 4 + [2.0] * 3)
    assert built.pore_volume == pytest.approx(0.5)
    assert [law.law for law in built.clogging] == ["kozeny-carman", "threshold"]
    assert built.closing == pytest.approx([1e-3] * 4 + [0.05] * 3)
    sodium = built.initial.dissolved[built.solutes.index("Na^+")]
    assert sodium == pytest.approx([1.0] * 4 + [5.0] * 3)
    assert built.initial.dissolved[built.solutes.index("bromide")].tolist() == [0.0] * 4 + [1.0] * 3


def test_the_start_is_at_equilibrium_and_keeps_every_mole():
    """Water that lacks calcite takes it from the calcite there, and no more than there is."""
    waters = WATERS.replace("saturated_with = {calcite = 0.0}", "")
    plenty = problem(waters=waters, minerals='calcite = "1 wt%"')
    scarce = problem(waters=waters, minerals='calcite = "1e-7 wt%"')
    for built, moles in ((plenty, 158.87), (scarce, 1.5887e-5)):
        state, calcite = built.initial, built.system.minerals.index("calcite")
        carbon = state.dissolved[built.solutes.index("CO3^2-")] * state.water
        assert carbon + state.solid[calcite] == pytest.approx(moles, rel=1e-4)
        assert state.time == state.step == 0
    assert (plenty.initial.solid[plenty.system.minerals.index("calcite")] > 0.0).all()
    assert (scarce.initial.solid == 0.0).all()


def test_only_what_is_listed_forms_and_what_is_there_may_dissolve():
    built = problem(minerals='calcite = "1 wt%", gypsum = "1 wt%"', forms='["gypsum"]')
    forms = dict(zip(built.system.minerals, built.system.may_form.tolist(), strict=True))
    assert forms == {"gypsum": True, "calcite": False}
    without = problem(minerals='calcite = "1 wt%"', chemistry='exclude = ["CaHCO3^+"]')
    assert "CaHCO3^+" not in without.system.species
    assert "CaHCO3^+" in built.system.species


def test_times_and_pore_volumes_each_keep_their_clock():
    feed = '{from = "0 d", water = "feed"}, {from = "1.5 PV", water = "pore"}'
    run = 'profiles_every = "0.5 d"\nports_every = "0.25 PV"'
    held = problem(feed=feed, duration="2 PV", run=run)  # 0.4 m in the pores, 0.1 m/d: a pore volume is 4 d
    assert held.feeds.begins.marks == pytest.approx([0.0, 6.0 * DAY])
    assert held.end.by_volume
    assert held.end.marks.tolist() == [2.0]
    assert not held.frames.by_volume
    assert held.frames.marks == pytest.approx(0.5 * DAY * np.arange(17))
    assert held.records.by_volume
    assert held.records.marks == pytest.approx(0.25 * np.arange(9))
    defaults = problem(duration="2 PV")
    assert (len(defaults.frames.marks), len(defaults.records.marks)) == (101, 1001)


def test_flow_is_held_by_flux_or_by_head():
    flux = problem()
    assert (flux.feeds.darcy_flux, np.isnan(flux.feeds.head_drop).all()) == (pytest.approx(0.1 / DAY), True)
    assert np.isnan(flux.conductivity).all()
    head = problem(flow='head_drop = "15 cm"\ninlet = "concentration"', layer='conductivity = "1 m/d"')
    assert (np.isnan(head.feeds.darcy_flux).all(), head.feeds.head_drop) == (True, pytest.approx(0.15))
    assert head.transport.first_type
    assert not flux.transport.first_type
    for built in (flux, head):
        assert 0.0 < first_pace(built).dt < 0.01 * 4.0 * DAY


def test_ports_stand_at_faces_and_the_outlet_is_always_there():
    built = problem(cells=10, more='[[ports]]\nname = "third"\nat = "0.33 m"')
    assert {port.name: port.face for port in built.ports} == {"third": 3, "outlet": 10}
    assert built.ports[[port.name for port in built.ports].index("third")].x == pytest.approx(0.3)
    assert built.gates[:2].tolist() == [0, 10]


def test_components_share_a_limiter_and_tracers_have_their_own():
    built = problem()
    assert built.transport.bounds.tolist() == [0, built.chemical, built.chemical + 1, built.chemical + 2]


def test_a_case_without_a_column_is_refused_in_words():
    with pytest.raises(InputError, match="layers"):
        build(case_of(WATERS + TRACERS))
