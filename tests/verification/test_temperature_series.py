"""Temperature, 0 to 50 degC: solubilities, gases, acids and pH standards against published series.

Amounts of gas are Bunsen coefficients brought to mol/kg at 1 atm of the gas itself, with the real volume of a
mole (22.41 L, for CO2 22.26 and H2S 22.14). Acids are tested as constants, without an
activity law; the pH standards test acids, ion product and Davies' law together. Calcium hydroxide is the
solution saturated at 25 degC.

Citations
  drever1997     Drever (1997), The Geochemistry of Natural Waters, 3rd ed., carbonate constants after
                 Plummer & Busenberg (1982)
  harned1943     Harned & Davis (1943), J. Am. Chem. Soc. 65, 2030-2037: first constant of carbonic acid
  harned1941     Harned & Scholes (1941), J. Am. Chem. Soc. 63, 1706-1709: second constant of carbonic acid
  bates1949      Bates & Pinching (1949), J. Res. NBS 42, 419-430: ammonium
  harned1933     Harned & Ehlers (1933), J. Am. Chem. Soc. 55, 652-656: acetic acid
  bates1943      Bates & Acree (1943), J. Res. NBS 30, 129-155: second constant of phosphoric acid
  loy1961        Loy & Himmelblau (1961), J. Phys. Chem. 65, 264-267: conductance of H2S
  bates1962      Bates (1962), J. Res. NBS 66A, 179-184; borax and phosphate standards
  staples1969    Staples & Bates (1969), J. Res. NBS 73A, 37-41
  bates1956      Bates, Bower & Smith (1956), J. Res. NBS 56, 305-312
  benson1984     Benson & Krause (1984), Limnol. Oceanogr. 29, 620-632; table of oxygen in fresh water under
                 moist air of 1 atm, mg/L
  bunsen         Bunsen coefficients of handbooks, as in Lange's Handbook of Chemistry, after Winkler
  hulett1902     Hulett & Allen (1902), J. Am. Chem. Soc. 24, 667-679, gypsum; at 50 degC Linke &
                 Seidell (1958)
  bassett1934    Bassett (1934), J. Chem. Soc. 1270-1275, calcium hydroxide, as in handbooks
  fournier1977   Fournier & Rowe (1977), Am. Mineral. 62, 1052-1056: log10 mg/kg = 4.52 - 731/T
  krauskopf1956  Krauskopf (1956), Geochim. Cosmochim. Acta 10, 1-26: 60 to 80 mg/L at 0 degC,
                 100 to 140 at 25
  crc            CRC Handbook of Chemistry and Physics, solubilities in water
"""

import pytest
from tests.support.agreement import Between, Check, Within
from tests.support.solutions import Solution, molality, ph, total
from tests.support.sums import log10_sum

from gossan.constants.water import density

TENS = (0, 10, 20, 25, 30, 40, 50)

# what, constants of its log10, published at degC, tolerance, source, why
PLUMMER = "two printed decimals"
CELLS = "cells and the equation of the table are this far apart"
CONSTANTS = [
    ("CO2 gas to CO2", {"gas CO2": 1.0, "CO2": 1.0},
     {0: -1.11, 5: -1.19, 10: -1.27, 15: -1.34, 20: -1.41, 25: -1.47, 30: -1.52, 45: -1.67}, 0.012,
     "drever1997", PLUMMER),
    ("first constant of carbonic acid", {"HCO3^-": 1.0, "CO2": -1.0},
     {0: -6.58, 5: -6.52, 10: -6.46, 15: -6.42, 20: -6.38, 25: -6.35, 30: -6.33, 45: -6.29}, 0.012,
     "drever1997", PLUMMER),
    ("second constant of carbonic acid", {"HCO3^-": -1.0},
     {0: -10.63, 5: -10.55, 10: -10.49, 15: -10.43, 20: -10.38, 25: -10.33, 30: -10.29, 45: -10.20}, 0.012,
     "drever1997", PLUMMER),
    ("calcite", {"calcite": 1.0},
     {0: -8.38, 5: -8.39, 10: -8.41, 15: -8.43, 20: -8.45, 25: -8.48, 30: -8.51, 45: -8.62}, 0.012,
     "drever1997", PLUMMER),
    ("first constant of carbonic acid, from cells", {"HCO3^-": 1.0, "CO2": -1.0},
     {0: -6.579, 10: -6.464, 20: -6.381, 25: -6.352, 30: -6.327, 40: -6.298, 50: -6.285}, 0.015,
     "harned1943", CELLS),
    ("second constant of carbonic acid, from cells", {"HCO3^-": -1.0},
     {0: -10.625, 10: -10.490, 20: -10.377, 25: -10.329, 30: -10.290, 40: -10.220, 50: -10.172}, 0.015,
     "harned1941", CELLS),
    ("ammonium to NH3", {"NH3": 1.0},
     {0: -10.081, 10: -9.730, 20: -9.400, 25: -9.245, 30: -9.093, 40: -8.805, 50: -8.539}, 0.01, "bates1949",
     "an enthalpy without heat capacity, which is small here"),
    ("acetic acid", {"CH3COOH": -1.0},
     {0: -4.781, 10: -4.762, 20: -4.757, 25: -4.756, 30: -4.757, 40: -4.769, 50: -4.787}, 0.005, "harned1933",
     "the equation of the table is that of these measurements"),
    ("second constant of phosphoric acid", {"H2PO4^-": -1.0, "HPO4^2-": 1.0},
     {0: -7.313, 10: -7.254, 20: -7.213, 25: -7.198, 30: -7.189, 40: -7.181, 50: -7.183}, 0.005, "bates1943",
     "the equation of the table is that of these measurements"),
    ("H2S to HS^-, by conductance", {"H2S": -1.0}, {0: -7.57, 50: -6.82}, 0.2, "loy1961",
     "conductance read 0.08 above the table at 25 degC and gave its constants 4 % and more of error"),
]  # fmt: skip

# what, solution at 25 degC, pH, tolerance, source, why
BORAX = {0: 9.464, 10: 9.332, 20: 9.225, 25: 9.180, 30: 9.139, 40: 9.068, 50: 9.011}
PHOSPHATE = {0: 6.984, 10: 6.923, 20: 6.881, 25: 6.865, 30: 6.853, 40: 6.838, 50: 6.833}
CARBONATE = {0: 10.317, 10: 10.179, 20: 10.062, 25: 10.012, 30: 9.966, 40: 9.889, 50: 9.828}
LIME = {0: 13.423, 10: 13.003, 20: 12.627, 25: 12.454, 30: 12.289, 40: 11.984, 50: 11.705}
CONVENTION = "the standards follow a convention with 1.5 sqrt(I) below, Davies' law has sqrt(I)"
STANDARDS = [
    ("phosphate 1:1", {"K^+": 0.025, "Na^+": 0.05, "PO4^3-": 0.05}, (), PHOSPHATE, 0.025, "bates1962",
     CONVENTION),
    ("borax 0.01 m", {"Na^+": 0.02, "B(OH)3": 0.04}, (), BORAX, 0.03, "bates1962", CONVENTION),
    ("carbonate 1:1 without sodium pairs", {"Na^+": 0.075, "CO3^2-": 0.05}, ("NaCO3^-", "NaHCO3"), CARBONATE,
     0.02, "staples1969", CONVENTION),
    ("calcium hydroxide 0.0203 m", {"Ca^2+": 0.0203}, (), LIME, 0.05, "bates1956",
     "CaOH^+ is known to 0.1 in log10 K, and its enthalpy to a few kJ/mol"),
]  # fmt: skip

# gas, litres of a mole at 0 degC and 1 atm, Bunsen coefficients, share
WINKLER = "measured before 1910; later work differs by 1 % for O2 and CO2, 2 to 4 for H2S, H2, N2, 6 for CH4"
GASES = [
    ("CO2", 22.26, {0: 1.713, 10: 1.194, 20: 0.878, 25: 0.759, 30: 0.665, 40: 0.530, 50: 0.436}, 0.02),
    ("O2", 22.41, {0: 0.04889, 10: 0.03802, 20: 0.03102, 25: 0.02831, 30: 0.02608, 40: 0.02306, 50: 0.02090},
     0.015),
    ("H2S", 22.14, {0: 4.670, 10: 3.399, 20: 2.582, 25: 2.282, 30: 2.037, 40: 1.660, 50: 1.392}, 0.025),
    ("N2", 22.41, {0: 0.02354, 10: 0.01861, 20: 0.01545, 25: 0.01434, 30: 0.01342, 40: 0.01184, 50: 0.01088},
     0.04),
    ("H2", 22.43, {0: 0.02148, 10: 0.01955, 20: 0.01819, 25: 0.01754, 30: 0.01699, 40: 0.01644, 50: 0.01608},
     0.03),
    ("CH4", 22.36, {0: 0.05563, 10: 0.04177, 20: 0.03308, 25: 0.03006, 30: 0.02762, 40: 0.02369, 50: 0.02134},
     0.07),
]  # fmt: skip

# degC: mg/L of O2 in fresh water under air of 1 atm, vapour pressure of water in atm
AIR = {
    0: (14.621, 0.00603), 10: (11.288, 0.01211), 20: (9.092, 0.02307), 25: (8.263, 0.03126),
    30: (7.559, 0.04187), 40: (6.412, 0.07279), 50: (5.477, 0.12174),
}  # fmt: skip

# g/100 mL of CaSO4, and of Ca(OH)2 in 100 g of water
GYPSUM = {0: 0.1759, 10: 0.1928, 18: 0.2016, 25: 0.2080, 30: 0.2090, 40: 0.2097, 50: 0.204}
PORTLANDITE = {0: 0.185, 10: 0.176, 20: 0.165, 30: 0.153, 40: 0.141, 50: 0.128}
DAVIES = "Davies' law and the pair CaSO4 together read 3 to 8 % high, the more the warmer"


def gas_dissolved(gas: str, celsius: float) -> float:
    """mol/kg under 1 atm of it."""
    held = {"H2S": 4.0, "CO2": 4.0}.get(gas)  # acid enough that the molecule is all
    return molality(gas)(Solution(celsius=celsius, pH=held or 7.0, gases={gas: 1.0}).equilibrium())


def oxygen(celsius: float, vapour: float) -> float:
    """mg/L under moist air of 1 atm."""
    found = Solution(celsius=celsius, gases={"O2": 0.20946 * (1.0 - vapour)}, pH=7.0).equilibrium()
    return 31.998 * molality("O2")(found) * density(273.15 + celsius)


def dissolved(mineral: str, of: str, celsius: float, ph_held: float | None = None) -> float:
    """mol/kg of a component over a mineral."""
    return total(of)(Solution(celsius=celsius, pH=ph_held, minerals=(mineral,)).equilibrium())


CHECKS = [
    Check(f"{what}, {t} degC, log10", lambda terms=terms, t=t: log10_sum(terms, t), Within(value, tolerance),
          source, False, why, logarithmic=True)
    for what, terms, series, tolerance, source, why in CONSTANTS for t, value in series.items()
] + [
    Check(f"{what}, {t} degC, pH",
          lambda totals=totals, t=t, out=out: ph(Solution(totals, float(t), excluded=out).equilibrium()),
          Within(value, tolerance), source, False, why, logarithmic=True)
    for what, totals, out, series, tolerance, source, why in STANDARDS for t, value in series.items()
] + [
    Check(f"{gas} at 1 atm, {t} degC, mol/kg", lambda gas=gas, t=t: gas_dissolved(gas, float(t)),
          Within(round(value / litres / density(273.15 + t) * 1e3, 7), share=share), "bunsen", False, WINKLER)
    for gas, litres, series, share in GASES for t, value in series.items()
] + [
    Check(f"O2 from air, {t} degC, mg/L", lambda t=t, vapour=vapour: oxygen(float(t), vapour),
          Within(value, share=0.004), "benson1984", False, "the table's fit is to these values")
    for t, (value, vapour) in AIR.items()
] + [
    Check(f"gypsum, {t} degC, mol/kg", lambda t=t: dissolved("gypsum", "Ca^2+", float(t), 7.0),
          Within(round(1e4 * grams / 136.14 / density(273.15 + t), 5), share=0.09),
          "hulett1902", False, DAVIES)
    for t, grams in GYPSUM.items()
] + [
    Check(f"calcium hydroxide, {t} degC, mol/kg", lambda t=t: dissolved("portlandite", "Ca^2+", float(t)),
          Within(round(10.0 * grams / 74.09, 5), share=0.12), "bassett1934", False,
          "handbooks have 6 % more at 25 degC than the makers of the pH standard")
    for t, grams in PORTLANDITE.items()
] + [
    Check(f"amorphous silica, {t} degC, mg/kg",
          lambda t=t: 60084.0 * dissolved("amorphous silica", "H4SiO4", float(t), 6.0),
          Within(round(10 ** (4.52 - 731.0 / (273.15 + t)), 1), share=0.05), "fournier1977", False,
          "two fits to the same measurements")
    for t in TENS
] + [
    Check(f"amorphous silica within what was measured, {t} degC, mg/kg",
          lambda t=t: 60084.0 * dissolved("amorphous silica", "H4SiO4", float(t), 6.0), published,
          "krauskopf1956", False, "gels differ")
    for t, published in ((0, Between(60.0, 80.0)), (25, Between(100.0, 140.0)))
] + [
    Check(f"anglesite, {t} degC, mg/kg",
          lambda t=t: 303.26e3 * dissolved("anglesite", "Pb^2+", float(t), 6.0),
          Within(value, share=0.1), "crc", False, "editions: 42.5 to 45 mg at 25 degC")
    for t, value in ((25, 42.5), (40, 56.0))
]  # fmt: skip


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_series(check):
    check.judge()


def test_gypsum_is_most_soluble_between_30_and_45_degrees():
    amounts = {t: dissolved("gypsum", "Ca^2+", float(t), 7.0) for t in (0, 25, 30, 35, 40, 45, 50)}
    assert max(amounts, key=amounts.get) in (30, 35, 40, 45)
