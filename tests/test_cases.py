"""Every case that comes with the program runs, to its headline numbers and in about as many steps."""

from __future__ import annotations

from pathlib import Path

import numpy as np
import pytest

import gossan
from gossan.recording import case_of
from gossan.views.summary import Summary, summary_of

CASES = Path(__file__).resolve().parents[1] / "cases"
DAY = 86400.0


@pytest.fixture(scope="module")
def demo(tmp_path_factory: pytest.TempPathFactory) -> Summary:
    """The demo, run once."""
    out = tmp_path_factory.mktemp("demo") / "demo.h5"
    return summary_of(gossan.run(gossan.load_case(CASES / "demo" / "case.toml"), out))


def first_exceeded(summary: Summary, solute: str) -> float:
    """Days until a limit at the outlet is crossed."""
    found = next(v for v in summary.verdicts if v.port == "outlet" and v.quantity == solute)
    assert found.first_exceeded is not None
    return found.first_exceeded / DAY


def test_the_demo_crosses_its_limits_when_its_page_says(demo):
    assert first_exceeded(demo, "Fe^2+") == pytest.approx(5.9, abs=0.1)
    assert first_exceeded(demo, "Zn^2+") == pytest.approx(97.5, rel=0.01)
    assert first_exceeded(demo, "Cu^2+") == pytest.approx(253.2, rel=0.01)
    assert first_exceeded(demo, "pH") == pytest.approx(253.6, rel=0.01)


def test_the_demo_takes_about_as_many_steps(demo):
    assert demo.steps == pytest.approx(9200, rel=0.05)


def test_the_demo_loses_nothing(demo):
    assert demo.ledger_error < 1e-12


def test_the_demo_shows_what_a_sum_for_one_metal_misses(demo):
    """Common practice, no source: the order of sulfides, shared capacity, zinc above its inflow."""
    port = demo.result.ports["outlet"]
    volumes = port.pore_volumes.values

    def milligrams(solute: str, mass: float, start: float, end: float):
        inside = (volumes > start) & (volumes < end)
        return port.dissolved.sel(component=solute).values[inside] * mass

    zinc, copper, iron = 65.38, 63.546, 55.845  # g/mol, IUPAC 2021
    assert milligrams("Fe^2+", iron, 1.5, 16).min() > 1.0
    assert milligrams("Zn^2+", zinc, 0, 15).max() < 1e-3  # caught behind copper
    assert milligrams("Zn^2+", zinc, 21, 42).mean() == pytest.approx(22.2, rel=0.03)  # inflow 15
    assert milligrams("Cu^2+", copper, 0, 42).max() < 1e-3
    profiles = demo.result.profiles
    ph = profiles.pH.values[:, -1]
    assert ph[20] == pytest.approx(7.46, abs=0.05)  # after 10 pore volumes calcite still buffers the outlet,
    assert ph[60] == pytest.approx(6.3, abs=0.05)  # after 30 siderite does
    calcite = profiles.solid.sel(mineral="calcite").values
    assert calcite[0].min() > 0
    assert calcite[-1].max() == 0.0  # spent within the run


def test_the_demo_holds_its_own_case(demo):
    assert case_of(demo.result).title == demo.result.title


@pytest.fixture(scope="module")
def end_of_life(tmp_path_factory: pytest.TempPathFactory) -> Summary:
    """A bed of sulfides that oxygen reaches, run once."""
    out = tmp_path_factory.mktemp("end") / "end.h5"
    return summary_of(gossan.run(gossan.load_case(CASES / "end-of-life" / "case.toml"), out))


def test_the_end_of_life_crosses_its_limits_when_its_page_says(end_of_life):
    assert first_exceeded(end_of_life, "Zn^2+") == pytest.approx(58.8, rel=0.01)
    assert first_exceeded(end_of_life, "Cu^2+") == pytest.approx(59.3, rel=0.01)
    assert end_of_life.steps == pytest.approx(2880, rel=0.05)
    assert end_of_life.ledger_error < 1e-12


def test_oxygen_shows_the_end_of_life_that_the_trade_knows(end_of_life):
    """Common practice, no source: sulfide goes, copper and zinc come, iron stays, carbonate is eaten."""
    profiles, port = end_of_life.result.profiles, end_of_life.result.ports["outlet"]
    width = 0.8 / 32

    def stock(mineral: str) -> np.ndarray:
        """mol/m2 in the whole gate, at every record."""
        return profiles.solid.sel(mineral=mineral).values.sum(axis=-1) * width

    sulfides = sum(stock(name) for name in ("fresh zinc sulfide", "fresh copper sulfide", "mackinawite"))
    assert sulfides[0] > 0.39
    assert sulfides[-1] == 0.0
    iron = stock("mackinawite")[0] + stock("siderite")[0]
    assert stock("ferrihydrite")[-1] > 0.7 * iron
    assert stock("calcite")[-1] == 0.0

    volumes = port.pore_volumes.values

    def milligrams(component: str, mass: float, at: float) -> float:
        return float(np.interp(at, volumes, port.dissolved.sel(component=component).values)) * mass

    assert milligrams("Zn^2+", 65.38, 8.0) < 1e-4
    assert milligrams("Zn^2+", 65.38, 20.0) > 7 * 1.5  # seven times what flowed in
    assert milligrams("Cu^2+", 63.546, 8.0) < 1e-4
    assert milligrams("Cu^2+", 63.546, 23.5) == pytest.approx(1.71, rel=0.03)
    assert milligrams("Fe^2+", 55.845, 12.0) < 1e-3
    assert np.interp(8.0, volumes, port.pH.values) == pytest.approx(8.4, abs=0.1)
    assert np.interp(20.0, volumes, port.pH.values) == pytest.approx(6.9, abs=0.1)


def test_oxygen_arrives_when_the_sum_on_paper_says(end_of_life):
    """2 O2 for each sulfide and 1/4 for each iron(II) that stays; then it fills the pores.

    FeS + 9/4 O2 + 5/2 H2O = Fe(OH)3 + SO4^2- + 2 H^+: Stumm & Morgan (1996), ch. 8 (from memory). The sum
    counts no sulfide that leaves dissolved, some 3 per cent.
    """
    profiles, port = end_of_life.result.profiles, end_of_life.result.ports["outlet"]
    width, pore_volume = 0.8 / 32, 0.8 * 0.40  # m; m3 per m2

    def stock(mineral: str, record: int) -> float:
        return float(profiles.solid.sel(mineral=mineral).values[record].sum()) * width

    after_one = int(np.argmin(np.abs(profiles.time.values - 3.2 * DAY)))
    names = ("fresh zinc sulfide", "fresh copper sulfide", "mackinawite")
    demand = 2 * sum(stock(name, after_one) for name in names) + stock("ferrihydrite", -1) / 4
    supply = 10.5 / 31.998 * pore_volume  # mol of O2 per m2 and pore volume; IUPAC 2021
    pe, volumes = port.pe.values, port.pore_volumes.values
    arrived = float(volumes[np.argmax(pe > 10.0)])
    assert arrived == pytest.approx(1 + demand / supply + 1, rel=0.04)
    assert arrived < 1 + demand / supply + 1


@pytest.fixture(scope="module")
def sulfide_bands(tmp_path_factory: pytest.TempPathFactory) -> Summary:
    """Copper and lead into zinc sulfide, run once."""
    out = tmp_path_factory.mktemp("bands") / "bands.h5"
    return summary_of(gossan.run(gossan.load_case(CASES / "sulfide-bands" / "case.toml"), out))


def test_sulfide_bands_arrive_when_the_theory_of_waves_says(sulfide_bands):
    """v / (1 + M / (n c)), Helfferich (1989), AIChE J. 35, 75-87: see the case's page."""
    speed = {metals: 0.1 / (1.0 + 20.0 / (0.3 * metals)) for metals in (1.0, 1.5)}
    assert first_exceeded(sulfide_bands, "Zn^2+") == pytest.approx(3.0, abs=0.1)
    assert first_exceeded(sulfide_bands, "Pb^2+") == pytest.approx(0.3 / speed[1.5], rel=0.002)
    assert first_exceeded(sulfide_bands, "Cu^2+") == pytest.approx(0.3 / speed[1.0], rel=0.002)
    port = sulfide_bands.result.ports["outlet"]

    def at(day: float, metal: str) -> float:
        return float(np.interp(day * DAY, port.time.values, port.dissolved.sel(component=metal).values))

    assert at(100.0, "Zn^2+") == pytest.approx(1.5, rel=1e-3)
    assert at(170.0, "Pb^2+") == pytest.approx(1.5, rel=1e-3)
    assert at(219.0, "Pb^2+") == pytest.approx(0.5, rel=1e-3)
    assert at(219.0, "Cu^2+") == pytest.approx(1.0, rel=1e-3)
    assert sulfide_bands.steps == pytest.approx(4805, rel=0.05)
    assert sulfide_bands.ledger_error < 1e-12
