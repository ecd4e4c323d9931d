"""Certificates of a column's cells."""

from __future__ import annotations

import numpy as np
from tests.support.columns import column, walk

from gossan.coupling.certify import certify_state

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
    # amounts of a column are what subtraction left of them: rounding of the solids' totals, for traces
    assert found.worst.max() < 1e-6
    assert np.median(found.worst) < 1e-11
    assert found.present.max() < 1e-10
    assert found.absent.max() < 1e-10
    assert found.ionic_strength.max() < 1e-10
