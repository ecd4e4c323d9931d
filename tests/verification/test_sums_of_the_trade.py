"""Sums that a designer does by hand: conductivity of a clogging bed, layers in series, solids, units.

The published forms give the values; most of them were worked out from those forms with 40 digits and stand
here as printed. What a metal takes up as a solid is a volume per litre of water, and ten times that the share
of a pore volume that 100 of them fill, in per cent.

Citations
  carman1937     Kozeny (1927), Sitzungsber. Akad. Wiss. Wien 136, 271-306; Carman (1937), Trans. Inst. Chem.
                 Eng. 15, 150-166
  darcy          textbook: layers in series are resistances, L / sum(L_i / K_i)
  robie1995      Robie & Hemingway (1995), U.S. Geol. Surv. Bulletin 2131, molar volumes
  nist811        Thompson & Taylor (2008), NIST Special Publication 811, conversion factors
  masses         atomic weights of IUPAC, as in Hem (1985), U.S. Geol. Surv. Water-Supply Paper 2254, table 9
  hubbert1956    Hubbert (1956), Trans. AIME 207, 222-239: K = k rho g / viscosity
  sobek1978      Sobek, Schuller, Freeman & Smith (1978), EPA-600/2-78-054: 31.25 kg of CaCO3 per tonne and
                 per cent of pyritic sulfur
"""

from __future__ import annotations

import numpy as np
import pytest
from tests.support.agreement import Check, Within

from gossan.base.amounts import alkalinity, in_water
from gossan.base.notation import molar_mass
from gossan.base.units import in_si, si
from gossan.chemistry.system import build_system
from gossan.constants.load import load_table
from gossan.constants.names import component_named, equivalents, moles
from gossan.constants.water import density, viscosity
from gossan.transport.clogging import kozeny_carman
from gossan.transport.flow import flow_of_head

TABLE = load_table()
GRAVITY = 9.80665  # m s-2, standard
DAY = 86400.0

# porosity of the clean bed, porosity now, K / K0
CLOGGED = [
    (0.4, 0.36, 0.64072), (0.4, 0.32, 0.39862), (0.4, 0.24, 0.13463), (0.4, 0.2, 0.07031),
    (0.4, 0.1, 0.00694),
    (0.45, 0.405, 0.62290), (0.45, 0.36, 0.37813), (0.45, 0.27, 0.12261), (0.45, 0.225, 0.06296),
    (0.45, 0.1125, 0.00600), (0.55, 0.495, 0.57886), (0.55, 0.44, 0.33061), (0.55, 0.33, 0.09744),
    (0.55, 0.275, 0.04816), (0.55, 0.1375, 0.00425),
]  # fmt: skip
# two layers, m and m/d each; K of both, m/d
SERIES = [((0.1, 1.0), (0.9, 50.0), 8.47458), ((0.05, 0.05), (1.45, 50.0), 1.45773)]
# mineral, metal, mg/L of it, cm3 of solid per litre, per cent of the pores after 100 pore volumes, share
SOLIDS = [
    ("sphalerite", "Zn", 1060.0, 0.3864, 3.864, 2e-4), ("sphalerite", "Zn", 45.0, 0.0164, 0.164, 2e-3),
    ("covellite", "Cu", 310.0, 0.0996, 0.996, 1.1e-3), ("mackinawite", "Fe", 500.0, 0.1835, 1.835, 3e-3),
    ("calcite", "Ca", 100.0, 0.0921, 0.921, 6e-4), ("goethite", "Fe", 250.0, 0.0932, 0.932, 1.5e-3),
    ("gypsum", "Ca", 200.0, 0.3727, 3.727, 2e-4),
]  # fmt: skip
# one of, is how many, value, share that the printed digits leave
UNITS = [
    ("ft/d", "m/d", 0.3048, 1e-9), ("ft/d", "cm/s", 0.000352778, 2e-6), ("cm/s", "m/d", 864.0, 1e-9),
    ("gal/min", "L/min", 3.78541, 1e-6), ("gal/d/ft2", "m/d", 0.0407458, 1e-6),
    ("mmol/m3/d", "nmol/cm3/d", 1.0, 1e-9), ("mmol/L/a", "mmol/L/d", 0.00273785, 1e-6),
    ("ton", "kg", 907.185, 1e-6),
]  # fmt: skip


def in_series(*layers: tuple[float, float]) -> float:
    """m/d: what a head over layers (m, m/d) drives, over the gradient."""
    width, conductivity = np.array(layers).T
    flux, _ = flow_of_head(1.0, conductivity / DAY, width, np.zeros(len(layers) + 1))
    return float(flux[0]) * float(width.sum()) * DAY


def volume_of_solid(mineral: str, metal: str, mg_per_litre: float) -> float:
    """cm3 per litre of water."""
    metals = moles(in_water(f"{mg_per_litre} mg/L"), component_named(metal, TABLE.components))  # mol/m3
    return 1e3 * metals * TABLE.minerals[mineral].molar_volume.value


def times(unit: str, other: str) -> float:
    one, another = in_si("1", unit), in_si("1", other)
    assert one.unit == another.unit
    return one.si / another.si


def darcy() -> float:
    """m/d in water of 20 degC."""
    return si("1 darcy", "m2") * density(293.15) * GRAVITY / viscosity(293.15) * DAY


def mass_of(formula: str, name: str, said: str) -> float:
    """mg/L of a substance in what a laboratory's words say."""
    named = component_named(name, TABLE.components)
    return moles(in_water(said), named) * molar_mass(formula) / 1e-3


def acid_potential() -> float:
    """kg of CaCO3 that take up the acid of a tonne with 1 wt% of pyritic sulfur, all iron to ferrihydrite.

    Formulas alone: in conserved components pyrite and the oxygen that leaves no electron, less ferrihydrite.
    """
    there = {"H^+", "Fe^2+", "Fe^3+", "SO4^2-", "HS^-", "O2", "Ca^2+", "CO3^2-"}
    named = ["pyrite", "ferrihydrite", "calcite"]
    system = build_system(TABLE, there, named, coupled=("Fe^3+", "HS^-", "O2"))
    pyrite, ferrihydrite = (
        system.mineral_stoichiometry[system.minerals.index(name)] for name in ("pyrite", "ferrihydrite")
    )
    oxygen = system.conserved[system.basis.index("O2")]
    proton, electron = system.components.index("H^+"), system.components.index("e^-")
    left = pyrite - ferrihydrite
    left = left - left[electron] / oxygen[electron] * oxygen
    assert left[electron] == 0.0
    assert left[system.components.index("SO4^2-")] == 2.0
    acid = left[proton] / 2.0  # per sulfur; calcite takes two and leaves as CO2
    return acid / 2.0 * si("1 wt%", "kg/kg") * 1000.0 / molar_mass("S") * molar_mass("CaCO3")


DIGITS = "the printed digits"
CHECKS = [
    Check(f"K/K0 from porosity {clean} to {now}",
          lambda clean=clean, now=now: float(kozeny_carman(now, clean)), Within(value, 5.1e-6), "carman1937",
          False, DIGITS)
    for clean, now, value in CLOGGED
] + [
    Check(f"K of {a[0]:g} m at {a[1]:g} and {b[0]:g} m at {b[1]:g} m/d, m/d",
          lambda a=a, b=b: in_series(a, b), Within(value, 5.1e-6), "darcy", False, DIGITS)
    for a, b, value in SERIES
] + [
    Check(f"{name} from {mg:g} mg/L of {metal}, cm3 per litre",
          lambda row=(name, metal, mg): volume_of_solid(*row), Within(value, 5e-5, share), "robie1995", False,
          f"{DIGITS}, and of molar masses and volumes")
    for name, metal, mg, value, _, share in SOLIDS
] + [
    Check(f"the same, % of the pores after 100 pore volumes ({name}, {mg:g} mg/L)",
          lambda row=(name, metal, mg): 10.0 * volume_of_solid(*row), Within(value, 5e-4, share), "robie1995",
          False, f"{DIGITS}, and of molar masses and volumes")
    for name, metal, mg, _, value, share in SOLIDS
] + [
    Check(f"1 {unit} in {other}", lambda unit=unit, other=other: times(unit, other),
          Within(value, share=share), "nist811", False, DIGITS)
    for unit, other, value, share in UNITS
] + [
    Check("mg/L of nitrate in 1 mg/L as N", lambda: mass_of("NO3", "NO3", "1 mg/L as N"),
          Within(4.4268, 3e-4), "masses", False, "editions of the atomic weights"),
    Check("mg/L of sulfate in 1 mg/L as S", lambda: mass_of("SO4", "SO4", "1 mg/L as S"),
          Within(2.99626, 5e-4), "masses", False, "editions of the atomic weight of sulfur"),
    Check("meq/L in 1 mg/L as CaCO3", lambda: equivalents(alkalinity("1 mg/L as CaCO3")),
          Within(0.0199826, 5e-7), "masses", False, "editions of the atomic weight of calcium"),
    Check("mg/L of HCO3 in 1 mg/L of alkalinity as CaCO3",
          lambda: equivalents(alkalinity("1 mg/L as CaCO3")) / equivalents(alkalinity("1 mg/L as HCO3")),
          Within(1.21928, 3e-5), "masses", False, "editions of the atomic weight of calcium"),
    Check("m/d of 1 darcy in water of 20 degC", darcy, Within(0.833376, share=1e-4), "hubbert1956", False,
          "the viscosity of water"),
    Check("wt% of 1 t in 1000 t", lambda: si("1 kg/t", "kg/kg") / si("1 wt%", "kg/kg"), Within(0.1, 1e-12),
          "sobek1978", False, "exact"),
    Check("kg of CaCO3 per t and wt% of pyritic sulfur", acid_potential, Within(31.25, share=1.2e-3),
          "sobek1978", False, "the source takes 100 g/mol and 32 g/mol"),
]  # fmt: skip


@pytest.mark.parametrize("check", CHECKS, ids=str)
def test_a_sum_of_the_trade(check):
    check.judge()
