"""How much of a solid water dissolves: measured amounts, common practice, and the least amount of hydroxides.

Common practice is a solubility product taken at its word, without ion pairs, hydrolysis and activity
coefficients. The program repeats that where it is given the product in place of its own constant and the
other species are left out; with its own constants the amounts are nearer to what is measured: gypsum 16 in
place of 5.6 mmol/kg.

Citations
  bates1956      Bates, Bower & Smith (1956), J. Res. NBS 56, 305-312: lime water holds 0.0203 mol/L
  linke1958      Linke & Seidell (1958), Solubilities of Inorganic Compounds; Blount & Dickson (1973), Am.
                 Mineral. 58, 323-331
  marshall1966   Marshall & Slusher (1966), J. Phys. Chem. 70, 4015-4027
  lebedev2017    Lebedev & Kosorukov (2017), Gypsum solubility in water at 25 degC: the spread of published
                 values
  crc            CRC Handbook of Chemistry and Physics, solubilities in water
  alexander1954  Alexander, Heston & Iler (1954), J. Phys. Chem. 58, 453-455: 100 to 140 mg/L; Nordstrom et
                 al. (1990), ACS Symp. Ser. 416
  siever1962     Siever (1962), J. Geol. 70, 127-150: quartz about 6 mg/L of SiO2; Nordstrom et al. (1990)
  practice       arithmetic on a stated solubility product
  pichtel2014    Pichtel (2014), Waste Management Practices, CRC Press: arithmetic on its products
  openstax       OpenStax, Chemistry, appendix of solubility products: arithmetic on its products
  nordstrom1996  Nordstrom & May (1996), The Environmental Chemistry of Aluminum, ch. 2; Langmuir (1997), ch.
                 7
  liu1999        Liu & Millero (1999), Geochim. Cosmochim. Acta 63, 3487-3497; Stefansson (2007), Environ.
                 Sci. Technol. 41, 6117-6123
  powell2007     Powell et al. (2007), Pure Appl. Chem. 79, 895-950; Stumm & Morgan (1996), fig. 7
  powell2013     Powell et al. (2013), Pure Appl. Chem. 85, 2249-2311; Baes & Mesmer (1976), The Hydrolysis of
                 Cations
  baes1976       Baes & Mesmer (1976), The Hydrolysis of Cations
  preis2000      Preis, Konigsberger & Gamsjager (2000), J. Solution Chem. 29, 605-618: 7.25 - 2 pH - log10
                 pCO2
  bench          what a pH meter reads in laboratories: 4.0 to 4.3 in CuSO4, 4.5 to 5.5 in ZnSO4, 2.8 to 3.2
                 in AlCl3
"""

import numpy as np
import pytest
from scipy.optimize import minimize_scalar
from tests.support.agreement import Between, Check, Within
from tests.support.solutions import Solution, log10_activity, log10_total, ph, total

WATER = 13.995  # -log10 of the ion product of the table, at 25 degC
SPREAD = "the spread of published solubilities"
GYPSUM = "Davies' law and the pair CaSO4 together read 3 to 8 % high, the more the warmer"
BENCH = "the meter reads salts that carry a little free acid"

# name, solution, quantity, published, source, seen, reason of the tolerance, logarithmic
ROWS = [
    ("lime in water, Ca mol/kg", Solution(minerals=("portlandite",)), total("Ca^2+"),
     Within(0.0203, share=0.03), "bates1956", True,
     "lists of its constant spread by 0.1 in log10 K, 3 % of Ca", False),
    ("lime in water, pH", Solution(minerals=("portlandite",)), ph, Within(12.45, 0.06), "bates1956", True,
     "the pair CaOH^+ takes 0.04 of it", True),
    ("gypsum at 0 degC, mol/kg", Solution(celsius=0.0, pH=7.0, minerals=("gypsum",)), total("Ca^2+"),
     Within(0.0130, share=0.06), "linke1958", False, GYPSUM, False),
    ("gypsum at 25 degC, mol/kg", Solution(pH=7.0, minerals=("gypsum",)), total("Ca^2+"),
     Within(0.0152, share=0.06), "marshall1966", False, GYPSUM, False),
    ("gypsum at 25 degC by the extended Debye-Hueckel law, mol/kg",
     Solution(pH=7.0, minerals=("gypsum",), activity="debye-hueckel"), total("Ca^2+"),
     Within(0.0152, share=0.04), "marshall1966", False,
     "the law's ion sizes bring it nearer than Davies' law", False),
    ("gypsum at 25 degC within the published spread, mol/kg", Solution(pH=7.0, minerals=("gypsum",)),
     total("Ca^2+"), Between(0.0147, 0.0182), "lebedev2017", True, SPREAD, False),
    ("gypsum at 40 degC, mol/kg", Solution(celsius=40.0, pH=7.0, minerals=("gypsum",)), total("Ca^2+"),
     Within(0.0155, share=0.08), "linke1958", False, GYPSUM, False),
    ("gypsum at 50 degC, mol/kg", Solution(celsius=50.0, pH=7.0, minerals=("gypsum",)), total("Ca^2+"),
     Within(0.0152, share=0.09), "linke1958", False, GYPSUM, False),
    ("gypsum in 1 m NaCl, mol/kg", Solution({"Na^+": 1.0, "Cl^-": 1.0}, pH=7.0, minerals=("gypsum",)),
     total("Ca^2+"), Within(0.042, share=0.30), "marshall1966", False,
     "I = 1.1 is far outside Davies' law: it reads 22 % low, and a water like that draws a warning", False),
    ("anglesite, mol/kg", Solution(pH=6.0, minerals=("anglesite",)), total("Pb^2+"),
     Within(1.5e-4, share=0.12), "crc", False, "editions: 0.0425 to 0.045 g/L", False),
    ("whewellite, mol/kg", Solution(pH=7.0, minerals=("whewellite",)), total("Ca^2+"),
     Within(5e-5, share=0.15), "crc", False, "editions: 6.1 to 7.0 mg/L", False),
    ("zinc oxalate, mol/kg", Solution(pH=7.0, minerals=("zinc oxalate",)), total("Zn^2+"),
     Within(1.4e-4, share=0.2), "crc", False,
     "0.0026 g in 100 g, two digits; three quarters of it the pair ZnC2O4, known to 0.05", False),
    ("magnesium oxalate, mol/kg", Solution(pH=7.0, minerals=("glushinskite",)), total("Mg^2+"),
     Within(3.4e-3, share=0.25), "crc", False,
     "0.038 g in 100 g at an unsure temperature; nearly all of it the pair MgC2O4, known to 0.1", False),
    ("magnesium oxalate without its ion pairs, mol/kg",
     Solution(pH=7.0, minerals=("glushinskite",), excluded=("MgC2O4", "Mg(C2O4)2^2-")), total("Mg^2+"),
     Within(1e-3, share=0.15), "practice", False,
     "that list's 7e-7 gives 0.84 mmol/kg ideal, and near 1 with activity coefficients", False),
    ("quartz, mol/kg", Solution(pH=6.0, minerals=("quartz",)), total("H4SiO4"), Within(1.05e-4, share=0.05),
     "siever1962", False, "6 to 6.6 mg/L", False),
    ("amorphous silica, mol/kg", Solution(pH=6.0, minerals=("amorphous silica",)), total("H4SiO4"),
     Within(1.95e-3, share=0.05), "alexander1954", False, "117 mg/L; measured 100 to 140", False),
    ("brucite in water, pH", Solution(minerals=("brucite",)), ph, Within(10.4, 0.15), "crc", False,
     "milk of magnesia reads 10.3 to 10.5", True),
    ("brucite in water, mol/kg", Solution(minerals=("brucite",)), total("Mg^2+"), Within(1.5e-4, share=0.35),
     "crc", False, "handbooks have 6.4 to 9 mg/L", False),
    ("litharge in water, mol/kg", Solution(minerals=("litharge",)), total("Pb^2+"), Between(7.6e-5, 2.3e-4),
     "crc", False, "editions: 0.017 and 0.050 g/L", False),
    ("smithsonite at 10^-3.5 atm of CO2 and pH 7.5, log10 mol/kg",
     Solution(pH=7.5, minerals=("smithsonite",), gases={"CO2": 10**-3.5}), log10_total("Zn^2+"),
     Within(-4.25, 0.1), "preis2000", True,
     "arithmetic for free zinc; complexes and activity coefficients take the rest", True),
    ("pH of 0.1 m CuSO4", Solution({"Cu^2+": 0.1, "SO4^2-": 0.1}), ph, Within(4.1, 0.5), "bench", False,
     BENCH, True),
    ("pH of 0.1 m ZnSO4", Solution({"Zn^2+": 0.1, "SO4^2-": 0.1}), ph, Within(5.3, 0.5), "bench", False,
     BENCH, True),
    ("pH of 0.1 m AlCl3", Solution({"Al^3+": 0.1, "Cl^-": 0.3}), ph, Within(3.05, 0.3), "bench", False, BENCH,
     True),
]  # fmt: skip

# Products taken at their word. The S^2- of a textbook, which does not hydrolyse there, is played by HS^- at
# pH 0 with more protons forbidden; other hydrolysis and pairs are left out.
# name, mineral, its log10 K in the program's form, held pH, species left out, quantity, amount, source,
# seen
EXACT = "arithmetic; the printed digits of the answer"
ION = ("H2S", "S^2-", "CuHS", "CoHS^+")
CARBONATE_ALONE = ("HCO3^-", "CO2", "CaHCO3^+", "CaCO3", "CaOH^+")
AL = ("AlOH^2+", "Al(OH)2^+", "Al(OH)3", "Al(OH)4^-", "Al2(OH)2^4+")
PRODUCTS = [
    ("CuS, 1e-36, [Cu] = [S] mol/L", "covellite", -36.0, 0.0, ION, total("Cu^2+"), Within(1e-18, share=0.01),
     "practice", False),
    ("CoS, 1e-20, [Co] = [S] mol/L", "fresh cobalt sulfide", -20.0, 0.0, ION, total("Co^2+"),
     Within(1e-10, share=0.01), "practice", False),
    ("CoS, 4e-21, [Co] = [S] mol/L", "fresh cobalt sulfide", np.log10(4e-21), 0.0, ION, total("Co^2+"),
     Within(6.3e-11, share=0.01), "pichtel2014", True),
    ("Al(OH)3, 1e-32, at pH 7, log10 of Al^3+", "gibbsite", -32.0 + 3 * WATER, 7.0, (),
     log10_activity("Al^3+"), Within(-11.0, 0.02), "practice", False),
    ("Fe(OH)3, 2.79e-39, at pH 7, log10 of Fe^3+", "ferrihydrite", np.log10(2.79e-39) + 3 * WATER, 7.0, (),
     log10_activity("Fe^3+"), Within(-17.55, 0.02), "openstax", True),
    ("Fe(OH)2, 4.87e-17, at pH 7, log10 of Fe^2+", "iron(II) hydroxide", np.log10(4.87e-17) + 2 * WATER, 7.0,
     (), log10_activity("Fe^2+"), Within(-2.31, 0.02), "openstax", True),
    ("Mg(OH)2, 5.61e-12, in water, mol/L", "brucite", np.log10(5.61e-12) + 2 * WATER, None, ("MgOH^+",),
     total("Mg^2+"), Within(1.12e-4, share=0.01), "openstax", True),
    ("CaCO3, 3.36e-9, no hydrolysis, mol/L", "calcite", np.log10(3.36e-9), None, CARBONATE_ALONE,
     total("Ca^2+"), Within(5.8e-5, share=0.01), "openstax", True),
    ("gypsum, 3.14e-5, no pair, mol/L", "gypsum", np.log10(3.14e-5), None, ("CaSO4", "HSO4^-", "CaOH^+"),
     total("Ca^2+"), Within(5.6e-3, share=0.01), "openstax", True),
]  # fmt: skip

# hydroxide or oxide, its metal, pH between which to look, pH of the least amount, its log10 (ideal), source,
# reason of the tolerance
MINIMA = [
    ("gibbsite", "Al^3+", 4.0, 9.0, Within(6.1, 0.5), Within(-7.8, 0.35), "nordstrom1996",
     "Al(OH)3(aq) is known to 0.3"),
    ("ferrihydrite", "Fe^3+", 5.0, 11.0, Within(8.0, 0.5), Within(-10.2, 0.7), "liu1999",
     "the solid is 3.5 to 5 by age, Fe(OH)3(aq) has moved by 1.8"),
    ("spertiniite", "Cu^2+", 6.0, 12.5, Within(9.4, 0.8), Within(-7.45, 0.3), "powell2007",
     "Cu(OH)2(aq) is known to 0.2; the minimum is flat"),
    ("tenorite", "Cu^2+", 6.0, 12.5, Within(9.4, 0.8), Within(-8.45, 0.3), "powell2007",
     "the same; one unit below the hydroxide"),
    ("wülfingite", "Zn^2+", 7.0, 12.0, Within(9.6, 0.5), Within(-6.2, 0.35), "powell2013",
     "Zn(OH)2(aq) is -17.82 or -16.9; works treat at pH 9 to 9.5"),
    ("zincite", "Zn^2+", 7.0, 12.0, Within(9.6, 0.5), Within(-6.45, 0.35), "powell2013", "the same"),
    ("cadmium hydroxide", "Cd^2+", 8.0, 13.5, Within(11.6, 0.8), Within(-6.0, 0.6), "baes1976",
     "Cd(OH)2(aq) is known to 0.5"),
]  # fmt: skip


def least(mineral: str, metal: str, low: float, high: float) -> tuple[float, float]:
    """The pH at which least of a metal is dissolved over a mineral, and log10 of that, ideal."""

    def dissolved(at: float) -> float:
        return log10_total(metal)(Solution(pH=at, minerals=(mineral,), activity="ideal").equilibrium())

    found = minimize_scalar(dissolved, bounds=(low, high), method="bounded", options={"xatol": 1e-4})
    return float(found.x), float(found.fun)


def by_product(mineral, log10_k, held, left_out, quantity):
    water = Solution(
        pH=held, minerals=(mineral,), excluded=left_out, activity="ideal", log10_k={mineral: log10_k}
    )
    return quantity(water.equilibrium())


CHECKS = [
    Check(name, lambda water=water, quantity=quantity: quantity(water.equilibrium()), published, source, seen,
          why, logarithmic)
    for name, water, quantity, published, source, seen, why, logarithmic in ROWS
]  # fmt: skip
CHECKS += [
    Check(name, lambda given=tuple(given): by_product(*given), published, source, seen, EXACT,
          logarithmic="log10" in name)
    for name, *given, published, source, seen in PRODUCTS
]  # fmt: skip
for solid, ion, below, above, at, amount, origin, reason in MINIMA:
    where = (solid, ion, below, above)
    CHECKS += [
        Check(f"{solid}, pH of least solubility", lambda where=where: least(*where)[0], at, origin, False,
              reason, logarithmic=True),
        Check(f"{solid}, log10 of least dissolved mol/kg", lambda where=where: least(*where)[1], amount,
              origin, False, reason, logarithmic=True),
    ]  # fmt: skip


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_solubility(check):
    check.judge()


def test_the_minimum_is_a_minimum():
    """One unit of pH to either side dissolves more, for every hydroxide."""
    for mineral, metal, low, high, *_ in MINIMA:
        where, amount = least(mineral, metal, low, high)
        for beside in (where - 1.0, where + 1.0):
            water = Solution(pH=beside, minerals=(mineral,), activity="ideal")
            assert log10_total(metal)(water.equilibrium()) > amount + 0.05
