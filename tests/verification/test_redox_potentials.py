"""Redox potentials of waters as a case states them, and oxygen as a share of what air leaves in the water.

Each water goes the whole way of a report: words and units, valences, pH, couples, the potential that an assay
prints, against the hydrogen electrode at 25 degC.

Citations
  stumm1996      Stumm & Morgan (1996), Aquatic Chemistry, 3rd ed., ch. 8: the redox table and its examples
  garrels1965    Garrels & Christ (1965), Solutions, Minerals, and Equilibria, ch. 7: fields of iron in water
  crc_potentials CRC Handbook, electrochemical series: Fe3+/Fe2+ 0.771 V
  methods4500    Standard Methods for the Examination of Water and Wastewater, 4500-O, table of saturation,
                 after Benson & Krause (1984), Limnol. Oceanogr. 29, 620-632
"""

from __future__ import annotations

import pytest
from tests.support.agreement import Between, Check, Within

from gossan.views.assay import WaterAssay, assay

ALL = {"redox": "coupled"}
PRINTED = "the printed digits, and energies of formation that differ by 1 kJ/mol"


def water(chemistry: dict | None = None, temperature: str = "25 degC", **keys: object) -> WaterAssay:
    """A water of a case of these tables."""
    return assay(keys, temperature=temperature, chemistry=chemistry or {})["water"]


def aerated() -> WaterAssay:
    """Pure water at pH 7 with the oxygen of air."""
    return water(ALL, dissolved_oxygen="8.26 mg/L")


def sulfidic(ph: float) -> WaterAssay:
    """As much sulfate as sulfide; without activity coefficients, as the table has it."""
    return water({**ALL, "activity": "ideal", "exclude": ["S4^2-", "S5^2-"]}, pH=ph, balance_on="Na",
                 analysis={"SO4": "0.1 mmol/L", "HS": "0.1 mmol/L"})  # fmt: skip


def rusty(ph: float) -> WaterAssay:
    """A water with 1e-5 mol/L of iron(II) and fresh iron(III) hydroxide."""
    return water({"coupled": ["Fe(II)/Fe(III)"], "activity": "ideal"}, pH=ph, balance_on="Cl",
                 analysis={"Fe(II)": "1e-5 mol/L", "Na": "1 mmol/L"}, saturated_with={"ferrihydrite": 0.0})


def acid_iron() -> WaterAssay:
    """As much iron(III) as iron(II) in strong acid."""
    return water({"coupled": ["Fe(II)/Fe(III)"], "activity": "ideal"}, pH=0.0, balance_on="NO3",
                 analysis={"Fe(II)": "1 mmol/L", "Fe(III)": "1 mmol/L"})  # fmt: skip


CHECKS = [
    Check("Eh of aerated pure water, V", lambda: aerated().Eh, Within(0.80, 0.01), "stumm1996", False,
          "the printed digits"),
    Check("pe of aerated pure water", lambda: aerated().pe, Within(13.58, 0.05), "stumm1996", False, PRINTED,
          logarithmic=True),
    Check("Eh of sulfate and sulfide in equal parts, pH 7, V", lambda: sulfidic(7.0).Eh, Within(-0.22, 0.01),
          "stumm1996", False, "pe of -3.75 as printed for pH 7, and H2S takes half of the sulfide"),
    Check("Eh of sulfate and sulfide in equal parts, pH 9, V", lambda: sulfidic(9.0).Eh,
          Within(-0.348, 0.01), "stumm1996", False,
          "pe = 4.25 - 9/8 pH; the printed digits"),
    Check("Eh of 1e-5 M iron(II) with fresh hydroxide, pH 6, V", lambda: rusty(6.0).Eh, Within(0.18, 0.06),
          "stumm1996", False, "pe = 16 - 3 pH + 5; fresh hydroxides differ by 1 in log10 K, which is 59 mV"),
    Check("Eh of 1e-5 M iron(II) with fresh hydroxide, pH 7, V", lambda: rusty(7.0).Eh, Between(-0.06, 0.11),
          "garrels1965", False, "between hydroxides of log10 K 3 and 5"),
    Check("Eh of iron(II) and iron(III) in equal parts, pH 0, V", lambda: acid_iron().Eh,
          Within(0.771, 0.003), "crc_potentials", False, "hydroxide takes some of the iron(III): 2 mV"),
    *[
        Check(f"{amount} mg/L of oxygen at {celsius} degC, % of saturation",
              lambda amount=amount, celsius=celsius: water(
                  temperature=f"{celsius} degC", dissolved_oxygen=f"{amount} mg/L").oxygen_percent,
              Within(100.0, 0.05), "methods4500", False, "three decimals of the table")
        for celsius, amount in [(0, 14.621), (10, 11.288), (20, 9.092), (25, 8.263), (30, 7.559), (40, 6.412)]
    ],
]  # fmt: skip


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_potentials(check):
    check.judge()


@pytest.mark.parametrize("ph", [4.0, 7.0, 10.0])
def test_a_stated_potential_comes_back(ph):
    """The potential that divides a water is the potential that its couples show."""
    found = water({"coupled": ["Fe(II)/Fe(III)"]}, pH=ph, Eh=f"{420 - 59 * (ph - 4):.0f} mV", balance_on="Cl",
                  analysis={"Fe": "1 mmol/L", "Na": "3 mmol/L"})  # fmt: skip
    assert pytest.approx(found.reported_Eh, abs=2e-5) == found.Eh


def test_the_slope_of_an_oxygen_electrode_is_that_of_ph():
    """59 mV lower for each unit of pH, as the upper line of water has it."""
    acid, neutral = (
        water(ALL, pH=ph, dissolved_oxygen="8 mg/L", balance_on="Cl", analysis={"Na": "1 mmol/L"}).Eh
        for ph in (6.0, 7.0)
    )
    assert acid - neutral == pytest.approx(0.05916, abs=1e-4)
