"""Redox couples by their constants alone: standard pe, potentials, acetate with sulfate.

pe is per electron, at unit activities; a potential is pe times RT ln10/F, 59.16 mV at 25 degC.

Citations
  stumm1996      Stumm & Morgan (1996), Aquatic Chemistry, 3rd ed., redox table
  ciavatta1980   Ciavatta, Ferri & Palombari (1980), J. Inorg. Nucl. Chem. 42, 593-598; the CRC Handbook
  crc            CRC Handbook of Chemistry and Physics, electrochemical series
  latimer1952    Latimer (1952), The Oxidation States of the Elements and their Potentials in Aqueous
                 Solutions, 2nd ed.
  thauer1977     Thauer, Jungermann & Decker (1977), Bacteriol. Rev. 41, 100-180
"""

from math import log

import pytest
from tests.support.agreement import Check, Within
from tests.support.sums import log10_sum

from gossan.constants.load import load_table
from gossan.constants.temperature import GAS_CONSTANT, log10_k_at

FARADAY = 96485.33212  # C/mol
VOLTS_PER_PE = GAS_CONSTANT * 298.15 * log(10.0) / FARADAY

PRINTED = "the printed digits, and energies of formation that differ by 1 kJ/mol"
# couple, constants and how often each is taken, standard pe, tolerance, source, why
PE = [
    ("O2 gas to water", {"O2": -0.25, "gas O2": 0.25}, 20.75, 0.05, "stumm1996", PRINTED),
    ("Fe(III) to Fe(II)", {"Fe^3+": -1.0}, 13.0, 0.05, "stumm1996", PRINTED),
    ("sulfate to HS^-", {"HS^-": 0.125}, 4.25, 0.06, "stumm1996", PRINTED),
    ("sulfate to H2S gas", {"HS^-": 0.125, "gas H2S": -0.125}, 5.25, 0.06, "stumm1996",
     PRINTED),
    ("sulfur to H2S gas", {"sulfur": 0.5, "gas H2S": -0.5}, 2.89, 0.06, "stumm1996", PRINTED),
    ("sulfate to sulfur", {"HS^-": 1 / 6, "sulfur": -1 / 6}, 6.03, 0.06, "stumm1996", PRINTED),
    ("nitrate to N2 gas", {"N2": 0.1, "gas N2": -0.1}, 21.05, 0.05, "stumm1996", PRINTED),
    ("nitrate to nitrite", {"NO2^-": 0.5}, 14.15, 0.15, "stumm1996",
     "energies of nitrite in lists are 5 kJ/mol apart, 0.4 of pe"),
    ("nitrate to ammonium", {"NH4^+": 0.125}, 14.90, 0.06, "stumm1996", PRINTED),
    ("CO2 gas to CH4 gas", {"CH4": 0.125, "gas CH4": -0.125, "gas CO2": 0.125}, 2.87, 0.04,
     "stumm1996", PRINTED),
    ("H^+ to H2 gas", {"H2": 0.5, "gas H2": -0.5}, 0.0, 0.02, "stumm1996",
     "nil by definition; the solubility and the energy of dissolved H2 are from two sources"),
    ("MnO2 to Mn(II)", {"pyrolusite": 0.5}, 20.8, 0.2, "stumm1996", "MnO2 of more than one order"),
    ("Cu(II) to copper", {"copper metal": -0.5}, 5.7, 0.05, "stumm1996", PRINTED),
    ("Zn(II) to zinc", {"zinc metal": -0.5}, -12.89, 0.03, "stumm1996", PRINTED),
    ("Cu(II) to Cu(I), 0.159 V", {"Cu^+": 1.0}, 2.69, 0.05, "ciavatta1980", "0.153 to 0.159 V in lists"),
]  # fmt: skip

# couple, constants, electrons of their sum, volts, tolerance, source, why
POTENTIALS = [
    ("O2 gas to water", {"O2": -1.0, "gas O2": 1.0}, 4.0, 1.229, 0.003, "crc", PRINTED),
    ("Fe(III) to Fe(II)", {"Fe^3+": -1.0}, 1.0, 0.771, 0.003, "crc", PRINTED),
    ("Cu(I) to copper", {"copper metal": -1.0, "Cu^+": -1.0}, 1.0, 0.521, 0.01, "crc",
     "0.518 to 0.522 V with Cu(II)/Cu(I) at 0.153 to 0.159 V"),
    ("Zn(II) to zinc", {"zinc metal": -1.0}, 2.0, -0.7618, 0.002, "crc", PRINTED),
    ("Mn(III) to Mn(II)", {"Mn^3+": -1.0}, 1.0, 1.5415, 0.05, "crc", "1.51 to 1.54 V in acids"),
    ("nitrate to nitrite at pH 14", {"NO2^-": 1.0, "OH^-": 2.0}, 2.0, 0.01, 0.01, "latimer1952",
     "the printed digit"),
]  # fmt: skip

CHECKS = [
    Check(f"{couple}, pe", lambda terms=terms: log10_sum(terms), Within(value, tolerance), source, False, why,
          logarithmic=True)
    for couple, terms, value, tolerance, source, why in PE
] + [
    Check(f"{couple}, V",
          lambda terms=terms, electrons=electrons: log10_sum(terms) / electrons * VOLTS_PER_PE,
          Within(value, tolerance), source, False, why)
    for couple, terms, electrons, value, tolerance, source, why in POTENTIALS
] + [
    Check("acetate and sulfate to bicarbonate and HS^-, log10 K",
          lambda: log10_sum({"HS^-": 1.0, "CH3COO^-": -1.0, "HCO3^-": 2.0}), Within(8.45, 0.7), "thauer1977",
          False, "from -47.6 kJ/mol of acetate; both half reactions are built from recalled energies",
          logarithmic=True),
]  # fmt: skip


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_redox_constants(check):
    check.judge()


@pytest.mark.parametrize("celsius", [0.0, 5.0, 50.0])
def test_one_enthalpy_serves_for_oxygen_from_0_to_50_degrees(celsius):
    """Against the gas with heat capacities of 25 degC: O2 29.4, water 75.3, H+ 0 J/mol/K (wagman1982).

    They bend log10 K by ΔCp/R ln10 (T0/T - 1 - ln T0/T); the gas's solubility follows its own curve.
    """
    kelvin, table = 273.15 + celsius, load_table()
    ratio = 298.15 / kelvin
    enthalpy = 2 * 285.83e3
    gas = -83.105 + enthalpy / (GAS_CONSTANT * log(10.0)) * (1 / 298.15 - 1 / kelvin)
    gas += (29.4 - 2 * 75.3) / (GAS_CONSTANT * log(10.0)) * (ratio - 1 - log(ratio))
    bent = gas + log10_k_at(table.gases["O2"], kelvin)
    assert log10_k_at(table.components["O2"], kelvin) == pytest.approx(bent, abs=0.03)
    assert log10_k_at(table.components["O2"], 298.15) == pytest.approx(-83.105 - 2.894, abs=0.03)
