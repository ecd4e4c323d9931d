"""What is left of metals in sulfidic water: floors set by bisulfide complexes, and the separation in acid.

The classroom rule that ZnS stays dissolved in 0.3 M acid holds for the fresh solid only, and copper over
covellite with Cu(II) species alone is a number without meaning (1e-26 mol/kg): pore waters hold Cu(I) with
bisulfide. Both are kept here as what they are, traps. A third: against sulfide, what should be dissolved has
the shape of a U, but in a treatment wetland filtered Zn, Cu and Cd lay flat and above it, worst where sulfide
was low, because spheres of ZnS pass the filter (gammons2001). A floor is the least that can be measured.

Citations
  wang1999       Wang & Tessier (1999), Cadmium complexation with bisulfide, Environ. Sci. Technol. 33,
                 4270-4277
  rickard2006    Rickard (2006), The solubility of FeS, Geochim. Cosmochim. Acta 70, 5779-5789: a plateau of
                 10^-5.7
  rickard2006b   Rickard & Luther (2006), Rev. Mineral. Geochem. 61, 421-504
  mountain1999   Mountain & Seward (1999), Geochim. Cosmochim. Acta 63, 11-29, evaluated
  weblog         a chemist's web log that works out ZnS from pKsp 22.5 (with S^2-), pK1 7.0, pK2 14.0 and the
                 complexes of Rickard & Luther (2006)
  porewater      pore waters of sulfidic mud: 1e-10 to 1e-7 mol/L of Zn, 1e-11 to 1e-8 of Cu; the program
                 stays among them
  gammons2001    Gammons & Frandsen (2001), Fate and transport of metals in H2S-rich waters at a treatment
                 wetland, Geochem. Trans. 2, 1
  vogel          the classical scheme of qualitative analysis (Vogel): 0.1 M H2S in 0.3 M acid, ideal
                 concentrations
  computed       solved apart from this program with the same constants: fresh ZnS -9.0, FeS -3.5, Zn(HS)n
                 6.0, 12.9, 14.9, 14.8; without Cu(I) no copper is left
"""

import numpy as np
import pytest
from tests.support.agreement import Between, Check, Within
from tests.support.solutions import Solution, index, log10_activity, log10_ratio, log10_total

SULFIDIC = {"HS^-": 1e-3}
SALT = SULFIDIC | {"Na^+": 0.01, "Cl^-": 0.01}
FIELD = "a range on purpose: field data, and complexes known to half a unit each"

# name, solution, quantity, published, source, seen, reason of the tolerance; all are log10
ROWS = [
    ("Zn over sphalerite, pH 7, 1 mM sulfide", Solution(SALT, pH=7.0, minerals=("sphalerite",)),
     log10_total("Zn^2+"), Between(-10.0, -7.5), "porewater", False, FIELD),
    ("Zn over fresh zinc sulfide, pH 7, 1 mM sulfide",
     Solution(SALT, pH=7.0, minerals=("fresh zinc sulfide",)), log10_total("Zn^2+"), Within(-6.4, 0.06),
     "computed", False, "two printed digits"),
    ("Zn over fresh zinc sulfide and mackinawite, pH 6.5, 10 mM sulfate",
     Solution({"SO4^2-": 0.01, "Na^+": 0.02}, pH=6.5, minerals=("fresh zinc sulfide", "mackinawite")),
     log10_total("Zn^2+"), Within(-7.7, 0.06), "computed", False, "two printed digits"),
    ("Zn(HS)2 over Zn^2+ there", Solution(SALT, pH=7.0, minerals=("sphalerite",)),
     log10_ratio("Zn(HS)2", "Zn^2+"), Between(4.0, 8.0), "rickard2006b", False, FIELD),
    ("Cd(HS)2 over Cd^2+, pH 7, 1 uM sulfide", Solution({"Cd^2+": 1e-11, "HS^-": 1e-6}, pH=7.0),
     log10_ratio("Cd(HS)2", "Cd^2+"), Between(0.5, 3.0), "wang1999", True,
     "the paper: bisulfide complexes take over from 1 uM on"),
    ("Cd over greenockite, pH 7, 0.1 mM sulfide",
     Solution({"HS^-": 1e-4}, pH=7.0, minerals=("greenockite",), activity="ideal"), log10_total("Cd^2+"),
     Within(-11.6, 0.4), "wang1999", True, "evaluated from its constants, each known to 0.2"),
    ("Fe over mackinawite, pH 7, 1 mM sulfide", Solution(SULFIDIC, pH=7.0, minerals=("mackinawite",)),
     log10_total("Fe^2+"), Between(-5.9, -5.0), "rickard2006", False,
     "the plateau and the free ion above it"),
    ("FeS(aq) over mackinawite, pH 9", Solution(SULFIDIC, pH=9.0, minerals=("mackinawite",)),
     log10_activity("FeS"), Within(-5.7, 0.05), "rickard2006", False, "the printed digit"),
    ("Cu(I) over chalcocite, pH 7, 1 mM sulfide", Solution(SULFIDIC, pH=7.0, minerals=("chalcocite",)),
     log10_total("Cu^+"), Between(-10.5, -6.5), "mountain1999", False, FIELD),
    ("Cu over covellite with Cu(II) species alone, pH 7, 1 mM sulfide",
     Solution(SULFIDIC, pH=7.0, minerals=("covellite",)), log10_total("Cu^2+"), Between(high=-20.0),
     "computed", False, "a trap, kept: less than one ion in a lake"),
]  # fmt: skip

# mineral, its metal, log10 of free metal where the solid and 0.1 M H2S meet in 0.3 M acid, why
SEPARATED = "the scheme says which sulfides fall, at 0.01 M of metal or less"
ACID = [
    ("covellite", "Cu^2+", Between(high=-13.0), SEPARATED),
    ("greenockite", "Cd^2+", Between(high=-6.0), SEPARATED),
    ("fresh cadmium sulfide", "Cd^2+", Between(high=-6.0), SEPARATED),
    ("galena", "Pb^2+", Between(high=-4.0), SEPARATED),
    ("mackinawite", "Fe^2+", Between(low=1.0), SEPARATED),
    ("alabandite", "Mn^2+", Between(low=5.0), SEPARATED),
    ("fresh nickel sulfide", "Ni^2+", Between(low=2.0), SEPARATED),
    ("fresh cobalt sulfide", "Co^2+", Between(low=-1.5), SEPARATED),
    ("fresh zinc sulfide", "Zn^2+", Between(low=-2.5), "the scheme leaves zinc dissolved"),
    ("sphalerite", "Zn^2+", Within(-4.5, 0.4), "a trap: crystals would fall; the solid is known to 0.3"),
]  # fmt: skip

# The web log's constants, brought from S^2- and OH^- to HS^- and H^+: ZnS -22.5 + 14.0; hydroxides 5.0,
# 10.2, 13.9 and 15.5 less 14 for each OH^-
WEBLOG = {
    "fresh zinc sulfide": -8.5, "H2S": 7.0, "OH^-": -14.0, "ZnHS^+": 6.0, "Zn(HS)2": 12.9, "Zn(HS)3^-": 14.9,
    "Zn(HS)4^2-": 14.8, "ZnOH^+": -9.0, "Zn(OH)2": -17.8, "Zn(OH)3^-": -28.1, "Zn(OH)4^2-": -40.5,
}  # fmt: skip
# atm that hold H2S at 0.1 mol/kg with that pK1 and the table's solubility, log10 K -7.974 to H^+ and HS^-
TENTH_MOLAR = 10 ** (-1.0 - 7.0 + 7.974)
# pH, log10 of dissolved Zn, tolerance, why
SATURATED = [
    (1.0, -2.43, 0.02, "two printed decimals, constants with one"),
    (7.0, -2.53, 0.02, "two printed decimals, constants with one; without complexes it would be -14.5"),
]


def in_acid(mineral: str, metal: str) -> float:
    """log10 of the free metal at which the mineral would form, found from its index over a trace of metal."""
    water = Solution({metal: 1e-6, "HS^-": 0.1}, pH=-np.log10(0.3), activity="ideal", indexed=(mineral,))
    found = water.equilibrium()
    return log10_activity(metal)(found) - index(mineral)(found)


def saturated(at: float) -> float:
    """log10 of dissolved zinc over fresh ZnS under H2S, with the constants of the web log."""
    water = Solution(
        pH=at, minerals=("fresh zinc sulfide",), gases={"H2S": TENTH_MOLAR}, activity="ideal", log10_k=WEBLOG
    )
    return log10_total("Zn^2+")(water.equilibrium())


CHECKS = [
    Check(f"{name}, log10", lambda water=water, quantity=quantity: quantity(water.equilibrium()), published,
          source, seen, why, logarithmic=True)
    for name, water, quantity, published, source, seen, why in ROWS
]  # fmt: skip
CHECKS += [
    Check(f"{metal} that {mineral} leaves in 0.3 M acid, log10",
          lambda mineral=mineral, metal=metal: in_acid(mineral, metal), published, "vogel", False, why,
          logarithmic=True)
    for mineral, metal, published, why in ACID
]  # fmt: skip
CHECKS += [
    Check(f"Zn over ZnS under 0.1 M H2S, pH {at:g}, log10", lambda at=at: saturated(at),
          Within(value, tolerance), "weblog", True, why, logarithmic=True)
    for at, value, tolerance, why in SATURATED
]  # fmt: skip


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_sulfidic_water(check):
    check.judge()


def test_complexes_carry_zinc_up_with_sulfide():
    """Over a solid, more sulfide first takes zinc away and then, as bisulfide, brings it back: the U of
    gammons2001.
    """
    amounts = [1e-9, 1e-7, 1e-5, 1e-3, 1e-1]
    left = [
        log10_total("Zn^2+")(Solution({"HS^-": hs}, pH=7.0, minerals=("sphalerite",)).equilibrium())
        for hs in amounts
    ]
    least = int(np.argmin(left))
    assert 0 < least < len(amounts) - 1
    assert left == sorted(left[:least], reverse=True) + sorted(left[least:])
