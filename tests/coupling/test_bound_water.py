"""Water that growing solids displace, and that crystals and hydroxides bind or free: counted, by hand too."""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.columns import Walk, column, walk

from gossan.coupling.ledger import Books

MOLE_OF_WATER = 18.015e-6 / 0.99705  # m3 at 25 degC, CRC Handbook
# cm3/mol and molecules of water that a mole binds: CaSO4.2H2O 172.17 g/mol at 2.31 to 2.33 g/cm3; hydroxides
# from the ion and three of water, which gives three protons back
GYPSUM_VOLUME = 172.17 / 2.32 * 1e-6
BOUND = {"gypsum": 2, "amorphous aluminium hydroxide": 3, "ferrihydrite": 3, "calcite": 0}

WASHED = """
[waters.feed]
balance_on = "pH"
analysis = {Na = "1 mmol/L", Cl = "1 mmol/L"}
[waters.pore.saturated_with]
gypsum = 0.0
"""
SULFATE_ON_LIME = """
[waters.feed]
pH = 3.5
balance_on = "SO4"
analysis = {Al = "25 mmol/L", Mg = "20 mmol/L", SO4 = "58 mmol/L"}
[waters.pore.saturated_with]
calcite = 0.0
"""
FERRIC = """
[waters.feed]
pH = 2.5
balance_on = "SO4"
analysis = {"Fe(III)" = "5 mmol/L", SO4 = "9 mmol/L"}
[waters.pore.saturated_with]
calcite = 0.0
"""
CASES = {
    "gypsum dissolves": (WASHED, 'gypsum = "2 wt%"', '["gypsum"]', ()),
    "gypsum and aluminium hydroxide grow": (
        SULFATE_ON_LIME, 'calcite = "5 wt%"', '["gypsum", "calcite", "amorphous aluminium hydroxide"]',
        ("gypsum", "amorphous aluminium hydroxide"),
    ),
    "ferrihydrite grows": (FERRIC, 'calcite = "5 wt%"', '["calcite", "ferrihydrite"]', ("ferrihydrite",)),
}  # fmt: skip


@pytest.fixture(scope="module", params=CASES)
def run(request) -> tuple[Walk, tuple[str, ...]]:
    """A march; the ledger of water is checked to round-off at every one of its steps."""
    waters, minerals, forms, grown = CASES[request.param]
    made = walk(
        column(waters, minerals=minerals, forms=forms, cells=6, length="30 cm", dispersivity="2 cm",
               duration="3 PV", run='ports_every = "0.5 PV"')
    )  # fmt: skip
    return made, grown


def gained(run: Walk, mineral: str) -> float:
    """mol m-2 since the start."""
    return run.inventory(mineral) - run.inventory(mineral, run.records[0])


def test_what_solids_bind_is_what_the_ledger_has_as_freed(run):
    run, grown = run
    assert all(gained(run, mineral) > 0.1 for mineral in grown)
    bound = sum(BOUND[name] * gained(run, name) for name in run.problem.system.minerals)
    freed = run.last.water_passed[2].sum()
    assert freed == pytest.approx(-MOLE_OF_WATER * bound, rel=2e-5)  # the digits of density and molar mass
    assert abs(freed) > 1e-6


def test_what_leaves_is_what_enters_is_freed_and_displaced(run):
    """At each record: out = in + freed + the room that solids took."""
    run, _ = run
    volumes = run.problem.system.molar_volume
    for state in run.records[1:]:
        entered, left, freed = state.water_passed.sum(axis=-1)
        taken = float(volumes @ ((state.solid - run.records[0].solid) @ run.problem.grid.width))
        # pores and water agree to second order in the step; what differs leaves within the next one
        assert left - entered == pytest.approx(freed + taken, abs=2e-3 * abs(freed) + 1e-9)
        assert abs(Books(run.problem).closed(state).water_error) < 1e-14


def test_gypsum_leaves_less_room_than_it_frees_water():
    """37 cm3 of water leave a mole's 74 of room: half of the new pores fill from the inlet."""
    waters, minerals, forms, _ = CASES["gypsum dissolves"]
    run = walk(column(waters, minerals=minerals, forms=forms, cells=6, length="30 cm", duration="3 PV"))
    entered, left, freed = run.last.water_passed.sum(axis=-1)
    gone = -gained(run, "gypsum")
    assert freed == pytest.approx(2 * MOLE_OF_WATER * gone, rel=2e-5)
    assert entered - left == pytest.approx((GYPSUM_VOLUME - 2 * MOLE_OF_WATER) * gone, rel=0.02)
    opened = np.sum((run.last.water - run.records[0].water) * run.problem.grid.width)
    assert opened == pytest.approx(GYPSUM_VOLUME * gone, rel=0.01)
