"""Every case that comes with the program runs, to its headline numbers and in about as many steps."""

from __future__ import annotations

from pathlib import Path

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
