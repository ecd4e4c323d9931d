"""The layout says what the contract says, and the page about it is fresh."""

from __future__ import annotations

import pytest
from tools.docs.result_file import PAGE, page

from gossan.store.layout import VARIABLES, growing_axis, variables

# The result file's contract: group, variable, dimensions, unit.
CONTRACT = """
profiles dissolved time,component,x mol m-3
profiles solid time,mineral,x mol m-3
profiles saturation time,mineral,x 1
profiles activity time,species,x 1
profiles porosity time,x 1
profiles conductivity time,x m s-1
profiles pH time,x 1
profiles pe time,x 1
profiles ionic_strength time,x mol kg-1
profiles darcy_flux time,face m s-1
profiles head time,face m
profiles time time s
profiles x x m
profiles face face m
profiles layer x 1
ports/NAME time time s
ports/NAME pore_volumes time 1
ports/NAME darcy_flux time m s-1
ports/NAME pH time 1
ports/NAME pe time 1
ports/NAME dissolved time,component mol m-3
ports/NAME resident time,component mol m-3
ports/NAME passed time,component mol m-2
ledger entered time,component mol m-2
ledger left time,component mol m-2
ledger stored time,component mol m-2
ledger made time,component mol m-2
ledger error time,component 1
ledger water_error time 1
ledger charge_error time 1
steps time step s
steps dt step s
steps courant step 1
steps iterations step 1
steps splitting_error step 1
steps seconds step s
"""


@pytest.mark.parametrize("line", CONTRACT.split("\n")[1:-1])
def test_the_contract_is_kept(line):
    group, name, dims, unit = line.split(" ", 3)
    (row,) = [row for row in VARIABLES if (row.group, row.name) == (group, name)]
    assert (row.dims, row.unit) == (tuple(dims.split(",")), unit)


def test_every_dimension_has_its_axis():
    for row in VARIABLES:
        axes = {other.name for other in variables(row.group) if other.kind == "axis"}
        assert set(row.dims) <= axes
        assert row.kind == "axis" or row.dims[0] == growing_axis(row.group)


def test_the_page_is_fresh():
    assert PAGE.read_text(encoding="utf-8") == page(), "run `python -m tools.docs.result_file`"
