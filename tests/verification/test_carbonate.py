"""Carbon dioxide and calcite: rain, limestone water at given pressures of CO2, the Langelier index, gases.

The rows called `computed` were found by hand from Plummer & Busenberg's constants with Davies' law, without
this program; they test the arithmetic closely. The others test the constants.

Citations
  computed       solved apart from this program: log10 K of CO2(g) -1.468, K1 -6.352, K2 -10.329, calcite
                 -8.480, CaHCO3^+ 1.106, CaCO3(aq) 3.224 (Plummer & Busenberg 1982, from memory), Davies A
                 0.509
  plummer1982    Plummer & Busenberg (1982), Geochim. Cosmochim. Acta 46, 1011-1040: measured, near 1 atm
  garrels1965    Garrels & Christ (1965), Solutions, Minerals, and Equilibria, ch. 3
  stumm1996      Stumm & Morgan (1996), Aquatic Chemistry, 3rd ed., ch. 4
  langmuir1997   Langmuir (1997), Aqueous Environmental Geochemistry, ch. 6
  langelier      a worked example in wide use in water treatment, index -0.7
  sander2015     Sander (2015, 2023), Henry's law constants, Atmos. Chem. Phys. 15, 4399-4981 and 23,
                 10901-12440
  h2s            1 mg/L of sulfide S at pH 7: computed with pK1 7.0 and 0.102 mol/L/atm
"""

import pytest
from tests.support.agreement import Between, Check, Within
from tests.support.solutions import Solution, index, molality, ph, total

AIR = 10**-3.5  # atm
CALCITE = ("calcite",)

# atm of CO2, pH, mmol/kg of Ca, alkalinity in mg/L as CaCO3 (which is twice Ca)
LIMESTONE = [
    (AIR, 8.279, 0.494, 49.4), (1e-3, 7.952, 0.731, 73.2), (1e-2, 7.298, 1.652, 165.3),
    (0.1, 6.648, 3.868, 387.0), (0.213, 6.436, 5.163, 517.0),
]  # fmt: skip
HAND = "three or four printed digits; K1 and A of the two differ in the last one"


def alkalinity(found):
    """Mg/L as CaCO3 of a solution of Ca, carbonate and water: 2 Ca in equivalents."""
    return 2.0 * total("Ca^2+")(found) * 50.04e3


# name, solution, quantity, published, source, seen, reason of the tolerance, logarithmic
ROWS = [
    ("pH of rain at 10^-3.5 atm of CO2", Solution(gases={"CO2": AIR}), ph, Within(5.66, 0.03), "stumm1996",
     False, "texts print 5.65 or 5.66", True),
    ("pH of rain at 420 ppm of CO2", Solution(gases={"CO2": 4.2e-4}), ph, Within(5.60, 0.03), "computed",
     False, "two printed decimals", True),
    ("calcite at 10^-3.5 atm, pH", Solution(minerals=CALCITE, gases={"CO2": AIR}), ph, Within(8.29, 0.06),
     "stumm1996", False, "8.26 to 8.34 in texts, by their constants", True),
    ("calcite at 10^-3.5 atm, Ca mol/kg", Solution(minerals=CALCITE, gases={"CO2": AIR}), total("Ca^2+"),
     Within(4.9e-4, share=0.05), "stumm1996", False, "two printed digits; 4.8e-4 to 5.1e-4 in texts", False),
    ("calcite at 1 atm, pH of the text", Solution(minerals=CALCITE, gases={"CO2": 1.0}), ph,
     Within(6.02, 0.05), "garrels1965", False, "constants of before 1965", True),
    ("calcite at 1 atm, Ca mol/kg of the text", Solution(minerals=CALCITE, gases={"CO2": 1.0}),
     total("Ca^2+"), Within(9.1e-3, share=0.06), "garrels1965", False, "constants of before 1965", False),
    ("calcite at 1 atm, pH", Solution(minerals=CALCITE, gases={"CO2": 1.0}), ph, Within(6.00, 0.05),
     "plummer1982", False, "6.0 to 6.02 in texts", True),
    ("calcite at 1 atm, Ca mol/kg", Solution(minerals=CALCITE, gases={"CO2": 1.0}), total("Ca^2+"),
     Within(9.2e-3, share=0.04), "plummer1982", False, "Davies' law alone is 3 % off at I = 0.03", False),
    ("calcite, closed, no CO2, pH", Solution(minerals=CALCITE), ph, Within(9.92, 0.06), "garrels1965", False,
     "9.9 to 9.95 in texts", True),
    ("calcite, closed, no CO2, Ca mol/kg", Solution(minerals=CALCITE), total("Ca^2+"),
     Within(1.24e-4, share=0.1), "garrels1965", False, "handbooks: 0.013 to 0.014 g/L, open to some air",
     False),
    ("calcite at 1 atm and 10 degC, Ca mol/kg", Solution(celsius=10.0, minerals=CALCITE, gases={"CO2": 1.0}),
     total("Ca^2+"), Between(0.0105, 0.0135), "langmuir1997", False,
     "more soluble when cold; handbooks have 12 to 13 mmol/L", False),
    ("calcite index of a treated water, pH 7.5",
     Solution({"Ca^2+": 1.5e-3, "CO3^2-": 7.3e-4, "Na^+": 2e-3, "Cl^-": 4.3e-3}, pH=7.5, indexed=CALCITE),
     index("calcite"), Within(-0.7, 0.25), "langelier", False,
     "the index is an approximation with tabulated terms, 0.1 to 0.2 apart; its carbon is 0.93 of alkalinity",
     True),
    ("H2S at 1 atm, mol/kg", Solution(gases={"H2S": 1.0}), molality("H2S"), Within(0.101, share=0.03),
     "sander2015", True, "the compilation's values spread by 3 %", False),
    ("H2 at 1 atm, mol/kg", Solution(gases={"H2": 1.0}, pH=9.0), molality("H2"), Within(7.9e-4, share=0.03),
     "sander2015", True, "two printed digits", False),
]  # fmt: skip
for pressure, its_ph, calcium, its_alkalinity in LIMESTONE:
    water, at = Solution(minerals=CALCITE, gases={"CO2": pressure}), f"calcite at {pressure:.3g} atm"
    ROWS += [
        (f"{at}, pH by hand", water, ph, Within(its_ph, 0.005), "computed", False, HAND, True),
        (f"{at}, Ca mmol/kg by hand", water, lambda found: 1e3 * total("Ca^2+")(found),
         Within(calcium, share=0.005), "computed", False, HAND, False),
        (f"{at}, alkalinity mg/L as CaCO3 by hand", water, alkalinity, Within(its_alkalinity, share=0.005),
         "computed", False, HAND, False),
    ]  # fmt: skip


def gas_over_sulfidic_water() -> float:
    """Ppm of H2S in gas over 1 mg/L of sulfide sulfur at pH 7."""
    found = Solution({"HS^-": 1e-3 / 32.06}, pH=7.0, activity="ideal").equilibrium()
    return 1e6 * float(found.gas_pressure()[found.system.gases.index("H2S"), 0])


CHECKS = [
    Check(name, lambda water=water, quantity=quantity: quantity(water.equilibrium()), published, source, seen,
          why, logarithmic)
    for name, water, quantity, published, source, seen, why, logarithmic in ROWS
]  # fmt: skip
CHECKS += [
    Check("ppm of H2S over 1 mg/L of sulfide S at pH 7", gas_over_sulfidic_water, Within(153.0, share=0.05),
          "h2s", False, "pK1 6.98 in place of 7.0 is 2.5 %, and a litre is taken for a kilogram"),
]  # fmt: skip


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_carbonate(check):
    check.judge()


def test_calcite_goes_down_with_warming_and_up_with_pressure():
    def calcium(celsius, pressure):
        water = Solution(celsius=celsius, minerals=CALCITE, gases={"CO2": pressure})
        return total("Ca^2+")(water.equilibrium())

    assert calcium(10.0, 1.0) > calcium(25.0, 1.0) > calcium(40.0, 1.0)
    # Ca goes as the cube root of the pressure where bicarbonate is the anion (stumm1996, ideal)
    assert calcium(25.0, 0.1) / calcium(25.0, 0.01) == pytest.approx(10 ** (1 / 3), rel=0.1)
