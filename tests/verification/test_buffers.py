"""pH of pure water, of the standard buffers and of plain acids, bases and salts.

The sodium carbonate pairs (NaCO3^-, NaHCO3) are left out of the carbonate buffers. The activity coefficients
that Davies' law was fitted to, and by which the standards were assigned, are those of sodium salts as a
whole: what sodium does to carbonate is in them already. With the pairs as well it is counted twice, and the
buffer at 25 degC reads 9.86 in place of 10.01; a test below holds that to be so.

Citations
  bandura2006    Bandura & Lvov (2006), J. Phys. Chem. Ref. Data 35, 15-30, as tabulated in the CRC Handbook
  jis8802        JIS Z 8802, reference pH solutions of the compositions of the primary standards of NBS; a
                 table reproduced by a maker of instruments
  bates1962      Bates (1962), Revised standard values for pH measurements, J. Res. NBS 66A, 179-184
  bates1973      Bates (1973), Determination of pH, Wiley
  staples1969    Staples & Bates (1969), Two new standards for the pH scale, J. Res. NBS 73A, 37-41
  bates1956      Bates, Bower & Smith (1956), Calcium hydroxide as a highly alkaline pH standard, J. Res. NBS
                 56, 305-312
  text           problems of common texts of general and analytical chemistry, such as Harris, Quantitative
                 Chemical Analysis
  stumm1996      Stumm & Morgan (1996), Aquatic Chemistry, 3rd ed., ch. 4
  methods2320    Standard Methods for the Examination of Water and Wastewater, 2320 B, table of end points
  manuscript     a review manuscript in an archive: water saturated with H2S, about 0.11 M, has pH near 4.0
"""

import pytest
from tests.support.agreement import Check, Within
from tests.support.solutions import BATES_GUGGENHEIM, Solution, ph

SODIUM_PAIRS = ("NaCO3^-", "NaHCO3")
PHOSPHATE = {"K^+": 0.025, "Na^+": 0.05, "PO4^3-": 0.05}
PHOSPHATE_1_TO_3_5 = {"K^+": 0.008695, "Na^+": 0.06086, "PO4^3-": 0.039125}
CARBONATE = {"Na^+": 0.075, "CO3^2-": 0.05}

FIT = "the least-squares fit of the ion product to its table"
DAVIES = "the standards follow the Bates-Guggenheim convention, 1.5 sqrt(I) below; Davies' law has sqrt(I)"
ENTHALPY = "the same, and acid constants carried in temperature by their enthalpy alone"
ROUNDED = "rounding of constants and of the published pH"
IDEAL = "an identity of the constants; the published constants differ in the second decimal"

# name, solution, published pH, tolerance, source, seen, reason of the tolerance
ROWS = [
    ("pure water, 0 degC", Solution(celsius=0.0), 7.473, 0.01, "bandura2006", True, FIT),
    ("pure water, 50 degC", Solution(celsius=50.0), 6.632, 0.01, "bandura2006", True, FIT),
    ("phosphate 1:1, 0 degC", Solution(PHOSPHATE, 0.0), 6.98, 0.05, "jis8802", True, ENTHALPY),
    ("phosphate 1:1, 10 degC", Solution(PHOSPHATE, 10.0), 6.92, 0.04, "jis8802", True, ENTHALPY),
    ("phosphate 1:1, 25 degC", Solution(PHOSPHATE), 6.86, 0.03, "jis8802", True, DAVIES),
    ("phosphate 1:1, 50 degC", Solution(PHOSPHATE, 50.0), 6.83, 0.05, "jis8802", True, ENTHALPY),
    ("phosphate 1:1, 25 degC, by the convention of the standards",
     Solution(PHOSPHATE, activity=BATES_GUGGENHEIM), 6.865, 0.015, "bates1962", False, ROUNDED),
    ("phosphate 1:3.5, 25 degC", Solution(PHOSPHATE_1_TO_3_5), 7.413, 0.03, "bates1962", False, DAVIES),
    ("phosphate 1:3.5, 25 degC, by the convention of the standards",
     Solution(PHOSPHATE_1_TO_3_5, activity=BATES_GUGGENHEIM), 7.413, 0.015, "bates1962", False, ROUNDED),
    ("carbonate 1:1, 0 degC", Solution(CARBONATE, 0.0, excluded=SODIUM_PAIRS), 10.32, 0.04, "jis8802", True,
     DAVIES),
    ("carbonate 1:1, 10 degC", Solution(CARBONATE, 10.0, excluded=SODIUM_PAIRS), 10.18, 0.04, "jis8802", True,
     DAVIES),
    ("carbonate 1:1, 25 degC", Solution(CARBONATE, excluded=SODIUM_PAIRS), 10.012, 0.03, "staples1969", True,
     DAVIES),
    ("calcium hydroxide 0.0203 m, 25 degC", Solution({"Ca^2+": 0.0203}), 12.45, 0.06, "bates1956", True,
     "CaOH^+ is known to 0.1 in log10 K, which is 0.01 of pH; without it 12.51"),
    ("tetroxalate 0.05 m, 25 degC", Solution({"K^+": 0.05, "C2O4^2-": 0.1}), 1.68, 0.05, "jis8802", True,
     "I is 0.08, and pK1 of oxalic acid is known to 0.02"),
    ("borax 0.01 m, 25 degC", Solution({"Na^+": 0.02, "B(OH)3": 0.04}), 9.18, 0.03, "jis8802", True, DAVIES),
    ("hydrochloric acid 0.1 m, by the convention of the standards",
     Solution({"Cl^-": 0.1}, activity=BATES_GUGGENHEIM), 1.094, 0.03, "bates1973", False,
     "the value is from measured mean coefficients of HCl, 0.015 above the convention's"),
    ("sodium acetate 0.1 m", Solution({"CH3COO^-": 0.1, "Na^+": 0.1}), 8.8, 0.12, "text", False,
     "texts give 8.88 without and 8.77 with activity coefficients"),
    ("acetic acid 0.01 m, half neutralised, ideal",
     Solution({"CH3COO^-": 0.01, "Na^+": 0.005}, activity="ideal"), 4.757, 0.02, "text", False, IDEAL),
    ("acetic acid 0.05 m at its equivalence, ideal",
     Solution({"CH3COO^-": 0.05, "Na^+": 0.05}, activity="ideal"), 8.73, 0.03, "text", False, IDEAL),
    ("sodium bicarbonate 0.1 m", Solution({"Na^+": 0.1, "CO3^2-": 0.1}), 8.3, 0.32, "text", False,
     "8.3 is the ideal value; activity coefficients take 0.2 of it, and sodium pairs 0.1 more"),
    ("sodium bicarbonate 0.01 m, ideal: (pK1 + pK2)/2",
     Solution({"Na^+": 0.01, "CO3^2-": 0.01}, activity="ideal", excluded=SODIUM_PAIRS), 8.34, 0.03,
     "stumm1996", False, IDEAL),
    ("sodium carbonate 0.1 m", Solution({"Na^+": 0.2, "CO3^2-": 0.1}), 11.45, 0.2, "text", False,
     "texts give 11.6 without and 11.4 with activity coefficients; sodium pairs take 0.1 more"),
    ("ammonium chloride 0.1 m", Solution({"NH4^+": 0.1, "Cl^-": 0.1}), 5.13, 0.12, "text", False,
     "5.12 is the ideal value; the coefficient of H^+ alone is 0.11"),
    ("hydrogen sulfide 0.1 m", Solution({"HS^-": 0.1}), 3.99, 0.03, "manuscript", True, ROUNDED),
    ("sodium hydrogen sulfide 0.01 m: (pKw + pK1 + log c)/2", Solution({"HS^-": 0.01, "Na^+": 0.01}), 9.5,
     0.15, "text", False, "an ideal identity; activity coefficients take 0.04"),
    ("sulfuric acid 0.01 m", Solution({"SO4^2-": 0.01}), 1.84, 0.06, "text", False,
     "texts give 1.83 to 1.86 for the concentration of H^+; its activity is 0.05 less"),
    ("end point of an alkalinity of 30 mg/L as CaCO3, closed",
     Solution({"CO3^2-": 6e-4, "Na^+": 6e-4, "Cl^-": 6e-4}), 4.9, 0.2, "methods2320", False,
     "the practice allows for some loss of CO2 while titrating"),
    ("end point of an alkalinity of 500 mg/L as CaCO3, closed",
     Solution({"CO3^2-": 0.01, "Na^+": 0.01, "Cl^-": 0.01}), 4.3, 0.2, "methods2320", False,
     "the practice allows for some loss of CO2 while titrating"),
]  # fmt: skip

CHECKS = [
    Check(name, lambda solution=solution: ph(solution.equilibrium()), Within(value, tolerance), source, seen,
          why, logarithmic=True)
    for name, solution, value, tolerance, source, seen, why in ROWS
]  # fmt: skip


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_ph(check):
    check.judge()


def test_sodium_pairs_count_twice_in_the_carbonate_buffer():
    with_pairs, without = (
        ph(Solution(CARBONATE, excluded=left_out).equilibrium()) for left_out in ((), SODIUM_PAIRS)
    )
    assert with_pairs < 10.012 - 0.1 < without
