"""Columns beside a gas: what it gives is in the books, and the water stands where the gas holds it."""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.columns import column, walk

from gossan.coupling.ledger import Books

WATERS = """
[waters.feed]
[waters.pore]
"""
SULFIDIC = """
[waters.feed]
pH = 7.0
pe = -3.0
balance_on = "Cl"
analysis = {Na = "2 mmol/L", Ca = "1 mmol/L", SO4 = "0.5 mmol/L"}
[waters.pore]
pH = 7.0
pe = -3.0
balance_on = "Cl"
analysis = {Na = "2 mmol/L", Ca = "1 mmol/L", SO4 = "0.5 mmol/L"}
"""
BURNING = 'coupled = ["Fe(II)/Fe(III)", "S(-II)/S(VI)", "O(0)/O(-II)"]'


def made(run) -> dict[str, float]:
    """mol/m2 by solute, since the start."""
    ledger = Books(run.problem).closed(run.last)
    return dict(zip(run.problem.solutes, ledger.made.tolist(), strict=True))


def test_calcite_dissolves_under_the_soil_s_carbon_dioxide():
    """Books closed after every step; half of the bicarbonate that leaves came from the air of the soil.

    CaCO3 + CO2 + H2O = Ca^2+ + 2 HCO3^-: Stumm & Morgan (1996), ch. 4 (from memory).
    """
    run = walk(column(WATERS, minerals='calcite = "1 wt%"', forms='["calcite"]', cells=10, duration="3 PV",
                      chemistry='gases = {CO2 = "0.01 atm"}'))
    gave = made(run)
    calcium, carbon = run.left("Ca^2+")[-1], run.left("CO3^2-")[-1]
    assert gave["CO3^2-"] == pytest.approx(carbon - calcium, rel=0.01)
    # what stays CO2 in the water: 10^-1.468 mol/kg and atm, Plummer & Busenberg (1982)
    dissolved = 10**-1.468 * 0.01 * 1e3 * run.last.water_passed[1].sum()
    assert gave["CO3^2-"] == pytest.approx(calcium + dissolved, rel=0.03)
    assert gave["H^+"] == pytest.approx(2 * gave["CO3^2-"], rel=1e-12)  # CO2 is CO3^2- and two protons
    assert gave["Ca^2+"] == 0.0
    # log10 [Ca] = (-6.0 + log10 p) / 3 within the activities, at 0.01 atm about 1.5 mmol/kg (from memory)
    assert run.outflow("Ca^2+")[-1] == pytest.approx(1.5, abs=0.15)


@pytest.mark.parametrize("coupling", ["two-stage", "lie"])
def test_oxygen_that_is_held_is_counted_in_electrons(coupling):
    run = walk(column(SULFIDIC, minerals='calcite = "1 wt%"', forms='["calcite", "ferrihydrite"]', cells=6,
                      duration="2 PV", chemistry=f'{BURNING}\ngases = {{O2 = "0.2 atm"}}',
                      run=f'coupling = "{coupling}"'))
    gave = made(run)
    # the water that flows in holds none: at 0.2 atm each litre takes up 0.25 mmol, and four electrons go
    entered = run.last.water_passed[0].sum()
    assert -gave["e^-"] / 4 == pytest.approx(0.25 * entered, rel=0.03)
    assert gave["H^+"] == pytest.approx(gave["e^-"], rel=1e-9)  # O2 is -4 H^+ and -4 e^-
    assert gave["SO4^2-"] == 0.0


def test_a_limited_gas_makes_nothing_it_is_there():
    limited = 'gases = {O2 = {pressure = "0.2 atm", amount = "5e-3 mol/L"}}'
    run = walk(column(SULFIDIC, minerals='mackinawite = "0.5 umol/g"', cells=6, duration="1 PV",
                      forms='["mackinawite", "ferrihydrite"]', chemistry=f"{BURNING}\n{limited}"))
    assert set(made(run).values()) == {0.0}
    assert np.all(run.solid("O2(g)") >= 0.0)
    assert run.inventory("O2(g)") < 5.0  # some was used or carried off
