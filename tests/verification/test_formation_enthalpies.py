"""Minerals from enthalpies of formation: how the table's constants go with temperature at 25 degC.

The published value is what energies of formation give for the reaction, in kJ/mol; the program's is the slope
of log10 K. 3 kJ/mol is 0.05 in log10 K at 0 and at 50 degC. All energies are from memory: they catch slips of
the table, not errors that both share.

Citations
  cox1989        Cox, Wagman & Medvedev (1989), CODATA Key Values for Thermodynamics; the ions too,
                 except Mn and Cu^+ of wagman1982, Fe of lemire2013
  wagman1982     Wagman et al. (1982), NBS tables, J. Phys. Chem. Ref. Data 11, Suppl. 2
  robie1995      Robie & Hemingway (1995), U.S. Geol. Surv. Bull. 2131
  lemire2013     Lemire et al. (2013), Chemical Thermodynamics of Iron, OECD/NEA vol. 13a
"""

from math import log

import pytest
from tests.support.agreement import Check, Within

from gossan.constants.load import load_table
from gossan.constants.temperature import GAS_CONSTANT, REFERENCE, log10_k_at

TABLE = load_table()
STEP = 0.5  # K: the slope is then good to 1e-5 of itself

# kJ/mol
IONS = {
    "H^+": 0.0, "e^-": 0.0, "H2O": -285.83, "Ca^2+": -543.0, "Mg^2+": -467.0, "Zn^2+": -153.39,
    "Cu^2+": 64.9, "Cd^2+": -75.92, "Pb^2+": 0.92, "Al^3+": -538.4, "SO4^2-": -909.34, "CO3^2-": -675.23,
    "HS^-": -16.3, "Fe^2+": -90.29, "Fe^3+": -50.06, "Mn^2+": -220.75, "Cu^+": 71.67, "H4SiO4": -1460.0,
}  # fmt: skip

RECALLED = "1 kJ/mol is what recalled energies are good to"
OTHER_SET = "the mineral and its ions are from compilations that differ by some kJ/mol"
SLOPE = "the table has the slope of measured solubilities, which energies give to some kJ/mol"
# mineral, its energy, tolerance, source, why
ENERGIES = [
    ("gypsum", -2022.63, 1.0, "wagman1982", SLOPE),
    ("anhydrite", -1434.11, 1.0, "wagman1982", RECALLED),
    ("anglesite", -919.97, 3.0, "cox1989", OTHER_SET),
    ("goslarite", -3077.75, 1.0, "wagman1982", RECALLED),
    ("chalcanthite", -2279.65, 1.0, "wagman1982", RECALLED),
    ("epsomite", -3388.71, 1.0, "wagman1982", RECALLED),
    ("calcite", -1206.92, 2.0, "wagman1982", SLOPE),
    ("aragonite", -1207.13, 2.0, "wagman1982", SLOPE),
    ("dolomite", -2324.5, 5.0, "robie1995", OTHER_SET),
    ("magnesite", -1113.3, 4.0, "robie1995", OTHER_SET),
    ("cerussite", -699.1, 1.5, "wagman1982", RECALLED),
    ("otavite", -750.6, 1.0, "wagman1982", RECALLED),
    ("rhodochrosite", -894.1, 5.0, "wagman1982", "the crystal, the table has what is precipitated"),
    ("siderite", -755.9, 8.0, "robie1995", SLOPE + "; the energies of siderite in lists are 15 kJ/mol apart"),
    ("smithsonite", -812.78, 8.0, "wagman1982", "the table follows a later measurement, 6 kJ/mol away"),
    ("brucite", -924.54, 1.5, "wagman1982", RECALLED),
    ("portlandite", -986.09, 1.0, "wagman1982", RECALLED),
    ("pyrochroite", -695.4, 1.0, "wagman1982", RECALLED),
    ("wülfingite", -643.25, 1.5, "wagman1982", RECALLED),
    ("zincite", -350.46, 1.0, "cox1989", RECALLED),
    ("cadmium hydroxide", -560.7, 1.5, "wagman1982", RECALLED),
    ("litharge", -218.99, 1.0, "wagman1982", RECALLED),
    ("spertiniite", -449.8, 1.0, "wagman1982", RECALLED),
    ("tenorite", -157.3, 1.0, "wagman1982", RECALLED),
    ("cuprite", -168.6, 1.0, "wagman1982", RECALLED),
    ("gibbsite", -1293.1, 1.0, "robie1995", RECALLED),
    ("goethite", -559.0, 2.0, "wagman1982", OTHER_SET),
    ("hematite", -824.2, 4.0, "wagman1982", OTHER_SET),
    ("magnetite", -1118.4, 4.0, "wagman1982", OTHER_SET),
    ("iron(II) hydroxide", -574.0, 3.0, "lemire2013", OTHER_SET),
    ("sphalerite", -205.98, 2.0, "wagman1982", OTHER_SET),
    ("greenockite", -161.9, 1.0, "wagman1982", RECALLED),
    ("galena", -100.4, 3.0, "wagman1982", OTHER_SET),
    ("covellite", -53.1, 1.0, "wagman1982", RECALLED),
    ("alabandite", -214.2, 1.0, "wagman1982", RECALLED),
    ("pyrite", -171.5, 1.0, "robie1995", RECALLED),
    ("quartz", -910.7, 4.0, "robie1995", SLOPE + "; H4SiO4 is known to 3"),
    ("amorphous silica", -899.7, 4.0, "wagman1982", SLOPE + "; H4SiO4 is known to 3"),
    ("copper metal", 0.0, 1.0, "cox1989", RECALLED),
    ("zinc metal", 0.0, 1.0, "cox1989", RECALLED),
]  # fmt: skip


def enthalpy(name: str) -> float:
    """Of dissolving a mineral at 25 degC, from the slope of its constant; kJ/mol."""
    mineral = TABLE.minerals[name]
    warmer, colder = (log10_k_at(mineral, REFERENCE + step) for step in (STEP, -STEP))
    return 1e-3 * GAS_CONSTANT * log(10.0) * REFERENCE**2 * (warmer - colder) / (2.0 * STEP)


def enthalpy_from(name: str, energy: float) -> float:
    """The same from enthalpies of formation."""
    reaction = TABLE.minerals[name].reaction
    made = {**reaction.components, "H2O": reaction.water, "e^-": reaction.electrons}
    return sum(times * IONS[part] for part, times in made.items()) - energy


CHECKS = [
    Check(f"{name}, kJ/mol", lambda name=name: enthalpy(name),
          Within(round(enthalpy_from(name, energy), 2), tolerance), source, False, why)
    for name, energy, tolerance, source, why in ENERGIES
]  # fmt: skip


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_enthalpies(check):
    check.judge()
