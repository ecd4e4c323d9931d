"""Sulfides and hydroxides of ten metals: what they leave of the metal, in which order, and where they cross.

Every solid is put into a water of its own and the free ion is read off: hydroxides at pH 9, sulfides at pH 7
with 1 mmol/kg of sulfide, ideal. The published number is the common-practice amount, a listed product divided
by the stated concentrations; the list is another than the one the program's constant is from wherever there
is one. Magnesium and aluminium have no sulfide in water: what is known of MgS is its heat.

Citations
  openstax       OpenStax, Chemistry, appendix of solubility products
  harris         Harris, Quantitative Chemical Analysis, appendix F, solubility products
  encyclopedia   Encyclopedia of Environmental Science and Engineering (2005), Water Chemistry, table 3
  yin2019        Yin et al. (2019), Chin. J. Mater. Res. 33, 705, table 3
  myers1986      Myers (1986), J. Chem. Educ. 63, 687-690: sulfides dissolving in acid to H2S
  pichtel2014    Pichtel (2014), Waste Management Practices, CRC Press, sulfides as M^2+, HS^- and OH^-
  benning2000    Benning, Wilkin & Barnes (2000), Chem. Geol. 167, 25-51
  bazarkina2023  Bazarkina et al. (2023), Geol. Ore Deposits 65, 28-43: formation energy, ions of CODATA
  uhler1984      Uhler & Helz (1984), solubility of galena
  gubeli1967     Gubeli & Ste-Marie (1967), Can. J. Chem. 45, 827-832 and 2101-2108, and others: -8.5 to -9.6
  wilkin2010     Wilkin & Rogers (2010), Environ. Chem. 7, 514-523, and tables of alpha-NiS
  wagman1982     Wagman et al. (1982), NBS tables: formation energy of MgS -341.8 kJ/mol
  practice       what every text of the trade says of the order and of the crossing
"""

import itertools

import numpy as np
import pytest
from tests.support.agreement import Between, Check, Within
from tests.support.solutions import Solution, index, log10_activity

PKW = 14.0
AT = 9.0  # pH of the hydroxides

# mineral, metal, listed log10 of the product, hydroxides in it, source, seen, why
HYDROXIDES = [
    ("brucite", "Mg^2+", Within(-11.25, 0.2), 2, "openstax", True,
     "5.61e-12; other lists have 11.15 to 11.6"),
    ("pyrochroite", "Mn^2+", Within(-12.70, 0.2), 2, "openstax", True, "2e-13; another list has 12.8"),
    ("iron(II) hydroxide", "Fe^2+", Between(-16.31, -15.1), 2, "encyclopedia", True,
     "15.1 for the inactive solid; openstax has 4.87e-17: lists disagree by 1.2"),
    ("cobalt hydroxide", "Co^2+", Between(high=-14.9), 2, "harris", True,
     "14.9 is a fresh precipitate, the program holds the rose solid: it must leave less"),
    ("theophrastite", "Ni^2+", Between(high=-15.2), 2, "harris", True,
     "15.2 is a fresh precipitate, the program holds the aged one: it must leave less"),
    ("spertiniite", "Cu^2+", Within(-19.66, 0.4), 2, "openstax", True, "2.2e-20; 19.3 to 18.6 by age"),
    ("wülfingite", "Zn^2+", Within(-16.5, 0.2), 2, "yin2019", True, "16.5 to 16.7"),
    ("cadmium hydroxide", "Cd^2+", Within(-14.14, 0.2), 2, "openstax", True,
     "7.2e-15; another list has 14.4"),
    ("litharge", "Pb^2+", Within(-15.3, 0.3), 2, "harris", False, "red and yellow PbO, 15.4 and 15.1"),
    ("ferrihydrite", "Fe^3+", Within(-38.55, 0.2), 3, "openstax", True,
     "2.79e-39, for a floc of no fixed age"),
]  # fmt: skip

# mineral, metal, published log10 K with H^+ and HS^-, of which source, seen, why
SULFIDES = [
    ("alabandite", "Mn^2+", Within(0.50, 0.3), "myers1986", False, "3e7 with acid, less pK1; one digit"),
    ("mackinawite", "Fe^2+", Within(-3.77, 0.4), "benning2000", True, "solids of 3.0 to 3.9 by their order"),
    ("fresh cobalt sulfide", "Co^2+", Within(-6.0, 0.5), "practice", False, "1e-20 or 4e-21 in lists"),
    ("fresh nickel sulfide", "Ni^2+", Between(-5.6, -2.5), "wilkin2010", False,
     "fresh and alpha-NiS; millerite is 7 units below and does not form"),
    ("fresh zinc sulfide", "Zn^2+", Between(-9.6, -8.5), "gubeli1967", False,
     "published for fresh or amorphous ZnS"),
    ("sphalerite", "Zn^2+", Within(-10.68, 0.8), "myers1986", False,
     "2e-4 with acid, less pK1; formation energies give -11.3 and -11.6"),
    ("greenockite", "Cd^2+", Within(-15.06, 0.35), "bazarkina2023", False,
     "0.3 kJ/mol of the solid, recalled ions"),
    ("galena", "Pb^2+", Between(-15.5, -12.25), "uhler1984", False,
     "solubility -12.25, calorimetry -15.1 within 0.4: not resolved"),
    ("covellite", "Cu^2+", Within(-22.2, 0.8), "pichtel2014", True,
     "6e-37, one digit; formation energies give -22.9"),
]  # fmt: skip
SULFIDIC = {"HS^-": 1e-3}
LOG10_HS = np.log10(1e-3 / (1 + 10 ** (6.98 - 7.0)))  # what 1 mmol/kg of sulfide makes at pH 7

# From most to least soluble, ripe solids: the order of the trade
SULFIDE_ORDER = [
    ("alabandite", "Mn^2+"), ("mackinawite", "Fe^2+"), ("millerite", "Ni^2+"), ("sphalerite", "Zn^2+"),
    ("greenockite", "Cd^2+"), ("galena", "Pb^2+"), ("covellite", "Cu^2+"),
]  # fmt: skip
HYDROXIDE_ORDER = [
    ("brucite", "Mg^2+"), ("pyrochroite", "Mn^2+"), ("cadmium hydroxide", "Cd^2+"),
    ("iron(II) hydroxide", "Fe^2+"), ("wülfingite", "Zn^2+"), ("spertiniite", "Cu^2+"),
    ("amorphous aluminium hydroxide", "Al^3+"), ("ferrihydrite", "Fe^3+"),
]  # fmt: skip
# lists disagree on where these stand, by the age of the solid; all put them here
BETWEEN_CADMIUM_AND_COPPER = [
    ("cobalt hydroxide", "Co^2+"), ("theophrastite", "Ni^2+"), ("litharge", "Pb^2+"),
]  # fmt: skip

# metal, its hydroxide, its sulfide, both ripe
PAIRS = [
    ("Mn^2+", "pyrochroite", "alabandite"),
    ("Fe^2+", "iron(II) hydroxide", "mackinawite"),
    ("Co^2+", "cobalt hydroxide", "aged cobalt sulfide"),
    ("Ni^2+", "theophrastite", "millerite"),
    ("Zn^2+", "wülfingite", "sphalerite"),
    ("Cd^2+", "cadmium hydroxide", "greenockite"),
    ("Pb^2+", "litharge", "galena"),
    ("Cu^2+", "spertiniite", "covellite"),
]
SULFIDE, PH = 1e-6, 9.0  # mol/kg of sulfide, and the pH, at which they are compared


def left_by_hydroxide(mineral: str, metal: str, at: float = AT) -> float:
    """log10 of the free metal over a hydroxide, ideal."""
    return log10_activity(metal)(Solution(pH=at, minerals=(mineral,), activity="ideal").equilibrium())


def left_by_sulfide(mineral: str, metal: str) -> float:
    """log10 of the free metal over a sulfide in 1 mmol/kg of sulfide at pH 7, ideal.

    Read off a trace of metal and its index, so that the solid itself adds no sulfide.
    """
    water = Solution({metal: 1e-9} | SULFIDIC, pH=7.0, activity="ideal", indexed=(mineral,))
    found = water.equilibrium()
    return log10_activity(metal)(found) - index(mineral)(found)


def shifted(published: Within | Between, by: float) -> Within | Between:
    """A published log10 of a constant as log10 of free metal."""
    if isinstance(published, Within):
        return Within(round(published.value + by, 2), published.tolerance)
    return Between(published.low + by, published.high + by)


CHECKS = [
    Check(f"{metal} over {mineral}, pH 9, log10",
          lambda mineral=mineral, metal=metal: left_by_hydroxide(mineral, metal),
          shifted(published, times * (PKW - AT)), source, seen, why, logarithmic=True)
    for mineral, metal, published, times, source, seen, why in HYDROXIDES
]  # fmt: skip
CHECKS += [
    Check(f"{metal} over {mineral}, pH 7, 1 mM sulfide, log10",
          lambda mineral=mineral, metal=metal: left_by_sulfide(mineral, metal),
          shifted(published, round(-7.0 - LOG10_HS, 2)), source, seen, why, logarithmic=True)
    for mineral, metal, published, source, seen, why in SULFIDES
]  # fmt: skip


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_free_metal(check):
    check.judge()


def test_a_listed_aluminium_hydroxide_lies_between_gibbsite_and_the_floc():
    """1e-32 (practice) is log10 -11 of Al^3+ at pH 7: a solid between the two."""
    solids = ("gibbsite", "amorphous aluminium hydroxide")
    gibbsite, floc = (left_by_hydroxide(name, "Al^3+", 7.0) for name in solids)
    assert gibbsite < -11.0 < floc


def test_order_of_sulfides():
    left = [left_by_sulfide(*solid) for solid in SULFIDE_ORDER]
    assert all(more > less for more, less in itertools.pairwise(left))


def test_order_of_hydroxides():
    left = [left_by_hydroxide(*solid) for solid in HYDROXIDE_ORDER]
    assert all(more > less for more, less in itertools.pairwise(left))
    for solid in BETWEEN_CADMIUM_AND_COPPER:
        assert left[2] > left_by_hydroxide(*solid) > left[5]


def gap(metal: str, hydroxide: str, sulfide: str) -> float:
    """log10 of free metal over the hydroxide less that over the sulfide, in the same water."""
    water = Solution({metal: 1e-12, "HS^-": SULFIDE}, pH=PH, activity="ideal", indexed=(hydroxide, sulfide))
    found = water.equilibrium()
    return index(sulfide)(found) - index(hydroxide)(found)


def test_where_hydroxide_and_sulfide_cross():
    """1 umol/kg of sulfide, pH 9: manganese's are close, from iron on the sulfide wins, copper's by far."""
    gaps = {metal: gap(metal, hydroxide, sulfide) for metal, hydroxide, sulfide in PAIRS}
    manganese, copper = gaps.pop("Mn^2+"), gaps.pop("Cu^2+")
    assert abs(manganese) < 0.5
    assert min(gaps.values()) == gaps["Fe^2+"] > 1.0
    assert copper > 2.5 + max(gaps.values())


def test_fresh_nickel_sulfide_needs_more_sulfide():
    """What first falls of NiS is so soluble that the aged hydroxide undercuts it at 1 umol/kg, pH 9."""
    sulfides = ("fresh nickel sulfide", "millerite")
    fresh, ripe = (gap("Ni^2+", "theophrastite", sulfide) for sulfide in sulfides)
    assert fresh < 0.0 < ripe


def test_magnesium_hydroxide_is_the_less_soluble():
    """MgS by its formation energy (wagman1982, ions of CODATA, from memory) leaves over 10^10 times more."""
    energy = -455.4 + 12.24 - -341.8  # kJ/mol of MgS + H^+ = Mg^2+ + HS^-
    log10_k = -1e3 * energy / (8.314462618 * 298.15 * np.log(10.0))
    water = Solution({"Mg^2+": 1e-12, "HS^-": SULFIDE}, pH=PH, activity="ideal", indexed=("brucite",))
    found = water.equilibrium()
    over_sulfide = log10_k - PH - log10_activity("HS^-")(found)
    over_hydroxide = log10_activity("Mg^2+")(found) - index("brucite")(found)
    assert over_sulfide - over_hydroxide > 10.0


@pytest.mark.parametrize(("metal", "hydroxide", "sulfide"), PAIRS)
def test_the_gap_is_what_both_solids_together_settle_at(metal, hydroxide, sulfide):
    """Over both solids the sulfide left is that at which they cross: the stated one, 10^gap lower."""
    totals = {metal: 2e-3, "HS^-": 1e-3}
    both = Solution(totals, pH=PH, minerals=(hydroxide, sulfide), activity="ideal").equilibrium()
    assert log10_activity(metal)(both) == pytest.approx(left_by_hydroxide(hydroxide, metal, PH), abs=1e-9)
    crossing = np.log10(SULFIDE) - gap(metal, hydroxide, sulfide)
    assert log10_activity("HS^-")(both) == pytest.approx(crossing, abs=0.01)  # H2S is 1 % at pH 9
