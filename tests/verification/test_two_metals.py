"""Two metals and one sulfide: where the fronts of zinc and copper stand, and what flows between them.

Mine water with Zn and Cu enters sand that holds mackinawite, FeS. Each front keeps two balances: what it
holds back, R c = c + solid for the metal that it stops, and for sulfide, of which the water ahead of the zinc
front carries s out of the column. With everything per litre of water, S of sulfide and M = Zn + Cu:

    zinc front     R (M + s) = M + s + S            behind it the sand holds S + s - s R of zinc sulfide,
    copper front   R Cu = Cu + S M / (M + s)        which copper takes over, metal for metal;
    between them zinc flows at M, more than its inflow; ahead of both, iron at M + s.

s is what mackinawite leaves dissolved in that water: the feed with iron for its metals. The same without s,
from the rules of the trade for sediment (dry bulk density 1.6 kg/L, porosity 0.40, 0.5 umol/g of sulfide,
Zn 10 and Cu 5 mg/L): fronts at 9.63 and 26.42 pore volumes, iron at 12.9 mg/L; s is 1 % of M.
"""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.columns import case_of, column

import gossan

WITHIN = 0.003  # half a cell, the scatter to expect of a front, is 1 %; 0.1 % is found
SULFIDE = 2.000  # mol per m3 of water: 0.5 umol/g * 1.6 kg/L / 0.40
MINERALS = ["mackinawite", "sphalerite", "covellite"]
ZINC, COPPER, IRON = 65.38, 63.546, 55.845  # g/mol, IUPAC (2021)
TEXT = column(
    """
[waters.feed]
pH = 6.5
balance_on = "SO4"
analysis = {Zn = "10 mg/L", Cu = "5 mg/L"}
[waters.pore]
balance_on = "SO4"
analysis = {Na = "1 mmol/L"}
saturated_with = {mackinawite = 0.0}
""",
    minerals='mackinawite = "0.5 umol/g"',
    forms='["mackinawite", "sphalerite", "covellite"]',
    grain_density=f"{1600 / 0.6!r} kg/m3",
    dispersivity="0.5 cm",
    cells=50,
    duration="30 PV",
    run='profiles_every = "5 PV"\nports_every = "0.1 PV"\ncoupling = "COUPLING"',
)


@pytest.fixture(scope="module", params=["two-stage", "lie"])
def outlet(request, tmp_path_factory):
    path = tmp_path_factory.mktemp("two-metals") / "column.h5"
    result = gossan.run(case_of(TEXT.replace("COUPLING", request.param)), path).loaded()
    assert np.abs(result.ledger.error.values).max() < 1e-12
    assert np.abs(result.ledger.charge_error.values).max() < 1e-12
    assert np.abs(result.ledger.water_error.values).max() < 1e-12
    assert result.steps.splitting_error.values.max() <= 1e-3
    return result.ports["outlet"]


@pytest.fixture(scope="module")
def feed():
    return {"Zn^2+": 10.0 / ZINC, "Cu^2+": 5.0 / COPPER}


@pytest.fixture(scope="module")
def dissolved_sulfide(feed):
    """mol per m3 of water, over mackinawite in the feed with iron for its metals, at its charge."""
    sulfate = gossan.assay(case_of(TEXT.replace("COUPLING", "lie")), "feed")["feed"].dissolved["SO4^2-"]
    ahead = {
        "balance_on": "pH",
        "analysis": {"Fe": f"{sum(feed.values())!r} mmol/L", "SO4": f"{1e3 * sulfate!r} mmol/kg"},
        "saturated_with": {"mackinawite": 0.0},
    }
    found = gossan.assay(ahead, chemistry={"minerals": MINERALS})["water"]
    return found.water.system.water_density * found.dissolved["HS^-"]


def crossing(port, component: str, height: float) -> float:
    """Pore volumes at which a concentration first rises through a height."""
    c, at = port.dissolved.sel(component=component).values, port.pore_volumes.values
    k = int(np.argmax(c >= height))
    return float(np.interp(height, c[k - 1 : k + 1], at[k - 1 : k + 1]))


def after(port, pore_volumes: float) -> int:
    return int(np.searchsorted(port.pore_volumes.values, pore_volumes))


def test_zinc_breaks_through_first(outlet, feed, dissolved_sulfide):
    metals = sum(feed.values())
    expected = 1.0 + SULFIDE / (metals + dissolved_sulfide)
    assert crossing(outlet, "Zn^2+", 0.5 * metals) == pytest.approx(expected, rel=WITHIN)
    assert expected == pytest.approx(9.634, rel=0.015), "by the trade, without s"
    assert 1.0 + SULFIDE / metals == pytest.approx(9.634, abs=5e-4)


def test_copper_breaks_through_last(outlet, feed, dissolved_sulfide):
    metals, copper = sum(feed.values()), feed["Cu^2+"]
    expected = 1.0 + SULFIDE * metals / ((metals + dissolved_sulfide) * copper)
    assert crossing(outlet, "Cu^2+", 0.5 * copper) == pytest.approx(expected, rel=WITHIN)
    assert expected == pytest.approx(26.418, rel=0.015)
    assert 1.0 + SULFIDE / copper == pytest.approx(26.418, abs=1e-3)


@pytest.mark.parametrize("pore_volumes", [12.0, 18.0, 25.0])
def test_zinc_leaves_above_its_inflow_between_the_fronts(outlet, feed, pore_volumes):
    zinc = outlet.dissolved.sel(component="Zn^2+").values[after(outlet, pore_volumes)]
    assert zinc == pytest.approx(sum(feed.values()), rel=1e-6)  # a plateau: no front, no error of one
    assert zinc / feed["Zn^2+"] == pytest.approx(1.5144, abs=1e-4)
    assert zinc * ZINC == pytest.approx(15.14, abs=0.005)


@pytest.mark.parametrize("pore_volumes", [2.0, 5.0, 9.0])
def test_iron_leaves_from_the_first_pore_volume(outlet, feed, dissolved_sulfide, pore_volumes):
    iron = outlet.dissolved.sel(component="Fe^2+").values[after(outlet, pore_volumes)]
    expected = sum(feed.values()) + dissolved_sulfide
    assert iron == pytest.approx(expected, rel=1e-4)  # at 2, a trace of the first pore water
    assert iron * IRON == pytest.approx(12.94, rel=0.015)
    assert sum(feed.values()) * IRON == pytest.approx(12.94, abs=0.005)


def test_every_mole_of_sulfide_is_worth_one_of_metal(outlet, feed, dissolved_sulfide):
    """The same fronts from what left until the end, which no shape of a front can bend."""
    metals, copper, zinc = sum(feed.values()), feed["Cu^2+"], feed["Zn^2+"]
    end = outlet.pore_volumes.values[-1]
    passed = outlet.passed.values[-1] / 0.4  # per m3 of water that the column of 1 m holds
    names = list(outlet.passed.coords["component"])
    held = 1.0 + SULFIDE * metals / ((metals + dissolved_sulfide) * copper)
    assert passed[names.index("Cu^2+")] == pytest.approx((end - held) * copper, rel=WITHIN)
    assert passed[names.index("Zn^2+")] == pytest.approx((end - 1.0) * zinc, rel=WITHIN), "one stays"


def test_the_feed_leaves_at_last(outlet, feed):
    for metal, inflow in feed.items():
        assert outlet.dissolved.sel(component=metal).values[-1] == pytest.approx(inflow, rel=1e-6)
