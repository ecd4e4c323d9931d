"""Certificates of a column's cells."""

from __future__ import annotations

import numpy as np
from tests.support.columns import column, walk

from gossan.coupling.certify import certify_state, diluted_since

WATERS = """
[waters.pore]
pH = 7.0
analysis = {Na = "1 mmol/L", Cl = "1 mmol/L"}
balance_on = "Cl"
[waters.feed]
pH = 4.0
analysis = {Zn = "1 mmol/L", SO4 = "1 mmol/L", Na = "0.1 mmol/L"}
balance_on = "SO4"
"""


def test_every_cell_of_a_column_is_certified():
    """Calcite meets acid zinc: the front, the cells before it and those behind."""
    text = column(WATERS, minerals='calcite = "0.1 wt%"', duration="1 PV", cells=20)
    done = walk(text)
    found = certify_state(done.problem, done.last)
    assert found.worst.shape == (20,)
    # a hundred roundings: amounts of a column are what subtraction from the solids left of them
    assert found.worst.max() < 1e-11
    assert np.median(found.worst) < 1e-13
    assert found.present.max() < 1e-10
    assert found.absent.max() < 1e-10
    assert found.ionic_strength.max() < 1e-10


def test_what_solids_free_of_water_is_no_fault_of_the_solve():
    """CaCO3 + 2 H+ = Ca2+ + CO2 + H2O: 1 mmol/L of acid frees some 5e-4 of 55.5 mol/L, 1e-5 at the most."""
    text = column(WATERS, minerals='calcite = "0.1 wt%"', duration="1 PV", cells=20)
    done = walk(text)
    found = diluted_since(done.problem, done.last)
    assert found.shape == (20,)
    assert 1e-12 < found.max() < 1e-5


def test_immobile_water_is_certified_too():
    beside = 'immobile = {fraction = 0.3, transfer = "1e-6 1/s"}\n'
    beside += 'sorption.Ca = {law = "linear", kd = "1 L/kg"}'
    text = column(WATERS, minerals='calcite = "0.1 wt%"', duration="0.5 PV", cells=8, layer=beside)
    done = walk(text)
    assert done.last.still is not None
    for water in (done.last, done.last.still):
        assert certify_state(done.problem, water).worst.max() < 1e-11
