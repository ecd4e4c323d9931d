"""Redox potential, what stands for it (pe, dissolved oxygen), and how far it can go in water."""

from __future__ import annotations

from math import log, log10

from gossan.constants.entries import Table
from gossan.constants.temperature import GAS_CONSTANT, log10_k_at

FARADAY = 96485.33212  # C/mol, exact since the SI of 2019
ELECTRONS_OF_OXYGEN = 4.0  # 2 H2O = O2 + 4 H^+ + 4 e^-


def pe_of_potential(volts: float, temperature: float) -> float:
    """The pe of a redox potential against the hydrogen electrode (equations.md, 60).

    volts        V, against the hydrogen electrode and no other
    temperature  K

    >>> round(pe_of_potential(0.771, 298.15), 2)
    13.03
    """
    return volts * FARADAY / (GAS_CONSTANT * temperature * log(10.0))


def potential_of_pe(pe: float, temperature: float) -> float:
    """The redox potential of a pe in V, against the hydrogen electrode (equations.md, 60).

    >>> round(potential_of_pe(-4.0, 298.15), 3)
    -0.237
    """
    return pe * GAS_CONSTANT * temperature * log(10.0) / FARADAY


def pe_of_oxygen(activity: float, ph: float, temperature: float, table: Table) -> float:
    """The pe that dissolved oxygen stands for, were it at equilibrium with water (equations.md, 61).

    activity  of dissolved oxygen, > 0, molal scale
    """
    log10_k = log10_k_at(table.components["O2"], temperature)
    return (log10(activity) - log10_k) / ELECTRONS_OF_OXYGEN - ph


def pressures_of_water(pe: float, ph: float, temperature: float, table: Table) -> dict[str, float]:
    """log10 of the pressures, atm, of oxygen and hydrogen over water of this pe and pH (equations.md, 61).

    Water is stable where both are small: above 1 atm it would give off bubbles.
    """
    pressures = {}
    for gas in ("O2", "H2"):
        half = table.components[gas].half_reaction
        assert half is not None
        protons, electrons = half.components["H^+"], half.electrons
        dissolved = log10_k_at(table.components[gas], temperature) - protons * ph - electrons * pe
        pressures[gas] = dissolved - log10_k_at(table.gases[gas], temperature)
    return pressures
