"""Cases with redox and gases become waters, problems and recorded pe."""

from __future__ import annotations

import math

import numpy as np
import pytest
from tests.support.columns import case_of, column

from gossan.case.build import build
from gossan.case.waters import lab_report, read_waters
from gossan.recording import run
from gossan.views.assay import assay
from gossan.views.plan import plan_of
from gossan.views.plan_sheets import plan_sheets
from gossan.views.run_sheets import run_sheets
from gossan.views.summary import summary_of

WATERS = """
[waters.feed]
pH = 3.0
balance_on = "Cl"
analysis = {"Fe(II)" = "2 mmol/L", "Fe(III)" = "1 mmol/L"}
[waters.pore]
pH = 7.0
dissolved_oxygen = "8 mg/L"
balance_on = "Cl"
analysis = {Na = "1 mmol/L", Cu = "0.01 mmol/L"}
"""
IRON, BOTH = 'coupled = ["Fe(II)/Fe(III)"]', 'coupled = ["Fe(II)/Fe(III)", "O2/H2O"]'


def problem(chemistry: str = "", minerals: str = "", waters: str = WATERS):
    return build(case_of(column(waters, chemistry=chemistry, minerals=minerals, forms="[]", cells=2)))


def inflow(built) -> dict[str, float]:
    return dict(zip(built.solutes, built.feeds.inflow[0, 0].tolist(), strict=True))


def start(built) -> dict[str, float]:
    return dict(zip(built.solutes, built.initial.dissolved[:, 0].tolist(), strict=True))


# what the report says


def report(keys: str, chemistry: str = ""):
    case = case_of(f"[waters.one]\n{keys}\n[chemistry]\n{chemistry}")
    return lab_report(case, "one", case.table)


def test_a_potential_is_against_the_hydrogen_electrode_at_the_water_s_temperature():
    assert report('Eh = "591.6 mV"').pe == pytest.approx(10.0, abs=1e-3)
    assert report('Eh = "0.5420 V"\ntemperature = "0 degC"').pe == pytest.approx(10.0, abs=1e-3)
    assert report("pe = -3.2").pe == -3.2


@pytest.mark.parametrize("amount", ["8 mg/L", "0.25 mmol/L", "8.02 mg/kg"])
def test_oxygen_in_the_units_of_meters(amount):
    """8 mg/L over 31.998 g/mol."""
    assert report(f'dissolved_oxygen = "{amount}"').oxygen == pytest.approx(2.507e-4, rel=1e-3)


def test_only_a_bare_element_without_a_second_valence_is_divided():
    for names, undivided in [
        (("Fe", "Cu", "SO4"), {"Fe^2+", "Cu^2+"}),
        (("Fe(II)", "manganese"), {"Mn^2+"}),
        (("Fe", "Fe(III)"), set()),
    ]:
        analysis = ", ".join(f'"{name}" = "1 mmol/L"' for name in names)
        assert report(f"analysis = {{{analysis}}}").undivided == undivided


# the column's own components


def test_held_valences_are_carried_apart_and_oxygen_divides_copper():
    built = problem()
    assert "e^-" not in built.solutes
    assert inflow(built)["Fe^2+"] == pytest.approx(2.0, rel=1e-12)
    assert inflow(built)["Fe^3+"] == pytest.approx(1.0, rel=1e-12)
    assert inflow(built)["O2"] == 0.0
    assert start(built)["O2"] == pytest.approx(8.0 / 31.998, rel=1e-4)
    assert start(built)["Cu^2+"] == pytest.approx(0.01, rel=1e-9)


def test_a_couple_counts_valences_as_the_first_ion_and_electrons():
    built = problem(IRON)
    assert built.solutes[-1] == "e^-"
    assert "Fe^3+" not in built.solutes
    assert inflow(built)["Fe^2+"] == pytest.approx(3.0, rel=1e-12)
    assert inflow(built)["e^-"] == pytest.approx(-1.0, rel=1e-12)
    assert start(built)["O2"] == pytest.approx(8.0 / 31.998, rel=1e-4)  # no couple of the case: it stays
    assert start(built)["e^-"] == 0.0


def test_oxygen_that_is_coupled_is_counted_as_protons_and_electrons():
    built = problem(BOTH)
    assert "O2" not in built.solutes
    oxygen = 8.0 / 31.998
    assert start(built)["e^-"] == pytest.approx(-4.0 * oxygen, rel=1e-4)
    assert start(built)["H^+"] == pytest.approx(-4.0 * oxygen, abs=0.03)  # and some for copper's hydroxide
    charge = built.system.component_charge @ built.initial.dissolved[: built.chemical, 0]
    assert charge == pytest.approx(0.0, abs=1e-10)


def test_all_is_coupled_with_one_word():
    built = problem('redox = "coupled"')
    assert set(built.solutes) == {"H^+", "Na^+", "Fe^2+", "Cu^2+", "Cl^-", "e^-"}
    assert set(built.system.basis) - set(built.system.components) == {"Fe^3+", "Cu^+", "O2", "H2"}


def test_a_mineral_brings_its_couples_along():
    built = problem('redox = "coupled"', 'pyrite = "1 umol/g"')
    assert built.system.minerals == ("pyrite",)
    assert "HS^-" in built.system.basis
    assert "SO4^2-" in built.solutes


# gases


def test_an_open_gas_holds_its_pressure_at_the_start():
    built = problem('redox = "coupled"\ngases = {O2 = "0.2 bar", CO2 = "1 kPa"}')
    system = built.system
    assert system.open_gases == ("O2", "CO2")
    ln = system.gas_stoichiometry @ built.initial.ln_activity[:, 0] - system.gas_ln_k
    pressures = dict(zip(system.gases, np.exp(ln), strict=True))
    assert pressures["O2"] == pytest.approx(0.2 / 1.01325, rel=1e-9)
    assert pressures["CO2"] == pytest.approx(1.0 / 101.325, rel=1e-9)
    assert "CO3^2-" in built.solutes


def test_a_gas_with_an_amount_is_a_mineral_of_so_much():
    built = problem('gases = {CO2 = {pressure = "0.01 atm", amount = "1e-3 mol/L"}}')
    system = built.system
    gas = system.minerals.index("CO2(g)")
    assert system.may_form[gas]
    carbon = built.system.components.index("CO3^2-")
    held = built.initial.solid[gas] + built.initial.dissolved[carbon] * built.initial.water
    assert held == pytest.approx(1.0, rel=1e-12)  # mol per m3 of bulk, whatever went into the water
    assert 0.0 < built.initial.solid[gas, 0] < 1.0


# what is shown


def test_pe_is_recorded(tmp_path):
    case = case_of(column(WATERS, chemistry=BOTH, forms="[]", cells=2, duration="0.2 PV"))
    result = run(case, tmp_path / "iron.h5")
    frames, port = result.profiles["pe"], result.ports["outlet"]["pe"]
    assert np.isfinite(np.asarray(frames)).all()
    assert np.asarray(frames)[0] == pytest.approx(np.asarray(port)[0], abs=1e-9)
    assert np.asarray(frames)[0, 0] == pytest.approx(13.6, abs=0.05)
    assert np.asarray(frames)[-1, 0] < 13.5  # iron(II) arrives and eats the oxygen


def test_a_run_and_a_check_tell_of_redox(tmp_path):
    gases = 'gases = {CO2 = {pressure = "0.01 atm", amount = "1e-3 mol/L"}, N2 = "0.8 atm"}'
    case = case_of(column(WATERS, chemistry=f"{BOTH}\n{gases}", forms="[]", cells=2, duration="0.2 PV"))
    told = dict(row[:2] for sheet in plan_sheets(plan_of(case)) for row in sheet.rows)
    assert told["redox"] == "held, but for Fe(II)/Fe(III), O2/H2O"
    assert told["gases"] == "CO2 at 0.01 atm, 1e-3 mol/L of it; N2 at 0.8 atm, without end"
    result = run(case, tmp_path / "iron.h5")
    summary = summary_of(result)
    first, last = summary.redox["outlet"]
    pe = np.asarray(result.ports["outlet"]["pe"])
    assert (first, last) == pytest.approx((0.05916 * pe[0], 0.05916 * pe[-1]), rel=1e-4)
    (sheet,) = (sheet for sheet in run_sheets(summary) if sheet.title == "Redox")
    assert sheet.rows == (("outlet", f"{1e3 * first:.0f}", f"{1e3 * last:.0f}"),)


def test_an_assay_shows_pe_valences_and_oxygen():
    text = WATERS + f"[chemistry]\n{BOTH}"
    feed, pore = (assay(case_of(text))[name] for name in ("feed", "pore"))
    assert feed.valences["Fe^3+"] == pytest.approx(feed.valences["Fe^2+"] / 2, rel=1e-6)
    assert feed.Eh == pytest.approx(0.05916 * feed.pe, rel=1e-4)
    assert list(feed.coupled) == ["Fe^2+", "Fe^3+", "O2"]
    assert pore.oxygen_percent == pytest.approx(96.9, abs=0.3)  # 8 of 8.26 mg/L
    assert pore.reported_Eh == pytest.approx(pore.Eh, abs=1e-5)
    told = assay(case_of(text)).to_json()["waters"]["pore"]
    assert told["pe"] == pore.pe
    assert told["valences"]["O2"] == pytest.approx(2.507e-4, rel=1e-3)
    assert "e^-" in told["dissolved"]
    held = assay(case_of(WATERS)).to_json()["waters"]["feed"]
    assert math.isnan(held["pe"])


def test_the_parts_of_a_coupled_element_are_those_of_its_valences():
    one = assay(case_of(WATERS + f"[chemistry]\n{IRON}"))["feed"]
    shares = {(part.component, part.species): part.share for part in one.parts()}
    ferric = sum(share for (component, _), share in shares.items() if component == "Fe^3+")
    assert ferric == pytest.approx(1.0, abs=5e-3)
    assert shares["Fe^3+", "FeOH^2+"] > 0.1


def test_every_water_of_a_coupled_case_is_read():
    waters = read_waters(case_of(WATERS + '[chemistry]\nredox = "coupled"'))
    assert all(math.isfinite(water.pe) for water in waters.values())
