"""Water itself against temperature: ion product, density, viscosity, Debye-Hueckel A, how fast ions move.

The ion product at 75 and 100 degC lies beyond the range of cases; it shows that the fit does not turn away.
Conductivities follow from the table's diffusion coefficients by the law of Nernst and Einstein, z²F²D/RT
summed over the ions; in a salt solution the law of Robinson and Stokes takes from that
(60.66 + 0.2300 L) sqrt(c) / (1 + B a sqrt(c)), in S cm2/mol at 25 degC, with the table's ion size a. The
program prints no conductivity: these rows test diffusion coefficients.

The program lets all ions diffuse as the viscosity says, and leaves out what is each ion's own.

Citations
  bandura2006    Bandura & Lvov (2006), J. Phys. Chem. Ref. Data 35, 15-30, as tabulated in the CRC Handbook
  marshall1981   Marshall & Franck (1981), J. Phys. Chem. Ref. Data 10, 295-304, in the CRC Handbook
  harned1958     Harned & Owen (1958), The Physical Chemistry of Electrolytic Solutions, 3rd ed.: ion product
                 from cells without liquid junction
  manov1943      Manov, Bates, Hamer & Acree (1943), in Freeze & Cherry (1979), Groundwater, appendix IV
  kell1975       Kell (1975), J. Chem. Eng. Data 20, 97-105; values of the CRC Handbook
  robinson1959   Robinson & Stokes (1959), Electrolyte Solutions, Butterworths, limiting conductivities
  hamer1970      Hamer & DeWane (1970), NSRDS-NBS 33
  crc_viscosity  CRC Handbook of Chemistry and Physics: viscosity of water at 1 bar by the IAPWS formulation
                 of 2008
  ict1928        International Critical Tables (1928), as quoted in the Encyclopedia of Environmental Science
                 and Engineering: viscosity of water, on a scale of which 20 degC is 1.0087 mPa s
  li1974         Li & Gregory (1974), Geochim. Cosmochim. Acta 38, 703-714: diffusion at infinite dilution
  methods2510    Standard Methods for the Examination of Water and Wastewater, 2510 B: conductivity of
                 potassium chloride at 25 degC, 147, 1412 and 12 890 uS/cm
"""

from math import sqrt

import pytest
from tests.support.agreement import Check, Within
from tests.support.sums import log10_sum

from gossan.constants.load import load_table
from gossan.constants.temperature import GAS_CONSTANT
from gossan.constants.water import debye_huckel, density, diffusion_ratio, fluidity_ratio, viscosity

TABLE = load_table()
FARADAY = 96485.33212  # C/mol
FIT = "the least-squares fit of the ion product to its table"

# what, degC, times log10 Kw, value, tolerance, source, seen, why
ION_PRODUCT = [
    ("neutral pH at 75 degC", 75.0, -0.5, 6.348, 0.01, "bandura2006", True, FIT),
    ("neutral pH at 100 degC, own pressure", 100.0, -0.5, 6.126, 0.01, "bandura2006", True, FIT),
    ("log10 Kw at 10 degC", 10.0, 1.0, -14.528, 0.005, "marshall1981", True, FIT),
    ("log10 Kw at 40 degC", 40.0, 1.0, -13.542, 0.005, "marshall1981", True, FIT),
]
CELLS = {0: -14.944, 5: -14.734, 10: -14.535, 15: -14.346, 20: -14.167, 25: -13.997, 30: -13.833, 35: -13.680,
         40: -13.535, 45: -13.396, 50: -13.262}  # fmt: skip
DENSITIES = {0: 999.84, 4: 999.97, 10: 999.70, 20: 998.21, 25: 997.05, 30: 995.65, 50: 988.04}  # kg/m3
VISCOSITIES = {10: 1.3059, 20: 1.0016, 25: 0.8900, 30: 0.7972, 40: 0.6527, 50: 0.5465}  # mPa s
OLDER = {0: 1.7921, 5: 1.5188, 10: 1.3097, 15: 1.1447, 25: 0.8949, 30: 0.8004, 35: 0.7208}
AT_TWENTY = 1.0087
DIFFUSION = {"Na^+": (6.27, 13.3), "Cl^-": (10.1, 20.3), "Ca^2+": (3.73, 7.93), "SO4^2-": (5.00, 10.7),
             "Zn^2+": (3.35, 7.15)}  # at 0 and 25 degC, 1e-10 m2/s

# salt, ions, S cm2/mol, tolerance, source, seen
SALTS = [
    ("KCl", {"K^+": 1, "Cl^-": 1}, 149.85, 0.5, "robinson1959", False),
    ("HCl", {"H^+": 1, "Cl^-": 1}, 426.1, 1.0, "hamer1970", True),
    ("ZnSO4, twice 132.8", {"Zn^2+": 1, "SO4^2-": 1}, 265.6, 5.0, "robinson1959", False),
]
# mol/L of KCl, uS/cm, share
STANDARDS = [(0.001, 147.0, 0.003), (0.01, 1412.0, 0.004), (0.1, 12890.0, 0.02)]


def limiting_conductivity(ions: dict[str, int]) -> float:
    """S cm2/mol, by Nernst and Einstein."""
    moved = sum(
        times * TABLE.components[ion].charge ** 2 * TABLE.components[ion].diffusion.value
        for ion, times in ions.items()
    )
    return 1e4 * FARADAY**2 * moved / (GAS_CONSTANT * 298.15)


def conductivity(molar: float) -> float:
    """Of potassium chloride at 25 degC, uS/cm."""
    limit = limiting_conductivity({"K^+": 1, "Cl^-": 1})
    apart = debye_huckel(298.15)[1] * TABLE.components["K^+"].ion_size.value * sqrt(molar)
    return 1e3 * molar * (limit - (60.66 + 0.2300 * limit) * sqrt(molar) / (1.0 + apart))


def limiting_law() -> float:
    """A at 0 degC from density and relative permittivity."""
    return 1.8248e6 * sqrt(density(273.15) / 1000.0) / (87.9 * 273.15) ** 1.5


CHECKS = [
    Check(what, lambda t=celsius, times=times: log10_sum({"OH^-": times}, t), Within(value, tolerance),
          source, seen, why, logarithmic=True)
    for what, celsius, times, value, tolerance, source, seen, why in ION_PRODUCT
] + [
    Check(f"log10 Kw at {t} degC, from cells", lambda t=t: log10_sum({"OH^-": 1.0}, t), Within(value, 0.015),
          "harned1958", False, "the two reviews of ion products are 0.013 apart at 50 degC",
          logarithmic=True)
    for t, value in CELLS.items()
] + [
    Check(f"density at {t} degC, kg/m3", lambda t=t: density(273.15 + t), Within(value, 0.008), "kell1975",
          False, "printed to 0.01; Kell's scale of temperature costs 0.003")
    for t, value in DENSITIES.items()
] + [
    Check(f"viscosity at {t} degC, mPa s", lambda t=t: 1e3 * viscosity(273.15 + t), Within(value, 1e-4),
          "crc_viscosity", False, "the printed digit, and as much again between editions")
    for t, value in VISCOSITIES.items()
] + [
    Check(f"viscosity at {t} degC over that at 20", lambda t=t: viscosity(273.15 + t) / viscosity(293.15),
          Within(value / AT_TWENTY, share=0.008), "ict1928", True, "old measurements, 0.7 % off at 0 degC")
    for t, value in OLDER.items()
] + [
    Check("conductivity of a bed at 10 degC over that at 20", lambda: fluidity_ratio(283.15, 293.15),
          Within(999.70 / 998.21 * 1.0016 / 1.3059, share=2e-4), "crc_viscosity", False, "the printed digits")
] + [
    Check(f"diffusion of {ion} at 25 degC over that at 0", lambda: diffusion_ratio(298.15, 273.15),
          Within(fast / slow, share=0.12), "li1974", False,
          "what single ions differ by: their hydration changes with temperature")
    for ion, (slow, fast) in DIFFUSION.items()
] + [
    Check("A at 0 degC, from density and permittivity 87.9", limiting_law, Within(0.4883, 0.006), "manov1943",
          True, "permittivities of water are 0.3 apart, 0.003 in A, twice"),
    Check("A at 0 degC, as the program has it", lambda: debye_huckel(273.15)[0], Within(0.4883, 5e-5),
          "manov1943", True, "the printed digits: the value is the table's own"),
] + [
    Check(f"limiting conductivity of {salt}, S cm2/mol", lambda ions=ions: limiting_conductivity(ions),
          Within(value, tolerance), source, seen, "the digits of the diffusion coefficients")
    for salt, ions, value, tolerance, source, seen in SALTS
] + [
    Check(f"conductivity of {molar} M KCl, uS/cm", lambda molar=molar: conductivity(molar),
          Within(value, share=share), "methods2510", False,
          "the digits of the diffusion coefficients, and a law for dilute salts: 1 % off at 0.1 M")
    for molar, value, share in STANDARDS
]  # fmt: skip


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_water(check):
    check.judge()
