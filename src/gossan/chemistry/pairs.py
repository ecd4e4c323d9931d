"""Interaction coefficients of all species of a system: published ones, and estimates where there are none.

Estimates, all on the log10 scale in kg/mol (equations.md, 47):
  cation and chloride or nitrate   as others of its charge: 0.15 for 2, 0.33 (aluminium's) for 3 and more,
                                   0.075 for a complex of charge 1
  neutral species and ion          of a dissolved gas z^2 / 20, so that log10 gamma = I / 10 as in (6)
  any other pair                   nil; with sulfate that goes with its complexes, which the table holds
Source: means of the published values; 0.05 to 0.1 for hydroxo complexes is custom (from memory).
"""

from __future__ import annotations

from collections.abc import Sequence

import numpy as np

from gossan.base.notation import charge_of
from gossan.constants.entries import Table

MONATOMIC_ONES = ("H^+", "Na^+", "K^+", "NH4^+", "Cu^+")  # known one by one, or nil
MEASURED_IN = ("Cl^-", "NO3^-")
BY_CHARGE = {1: 0.075, 2: 0.15, 3: 0.33}
GASES_PER_CHARGE_SQUARED = 0.05
MATTERS = 0.03  # mol/kg: an estimate wrong by 0.2 kg/mol is then worth 1.4 % of the other ion's activity


def coefficient(table: Table, one: str, other: str) -> tuple[float, bool]:
    """The interaction coefficient of two species, kg/mol on the log10 scale, and whether it is an estimate.

    >>> from gossan.constants.load import load_table
    >>> coefficient(load_table(), "Cl^-", "Na^+"), coefficient(load_table(), "ZnOH^+", "Cl^-")
    ((0.03, False), (0.075, True))
    """
    for pair in ((one, other), (other, one)):
        if pair in table.interactions:
            return table.interactions[pair].coefficient.value, False
    charges = charge_of(one), charge_of(other)
    if charges[0] * charges[1] > 0 or charges == (0, 0):
        return 0.0, False
    if 0 in charges:
        molecule, charge = (one, charges[1]) if charges[0] == 0 else (other, charges[0])
        return (GASES_PER_CHARGE_SQUARED * charge**2, True) if molecule in table.gases else (0.0, False)
    cation, anion = (one, other) if charges[0] > 0 else (other, one)
    if anion in MEASURED_IN and cation not in MONATOMIC_ONES:
        return BY_CHARGE[min(charge_of(cation), 3)], True
    return 0.0, True


def interaction_matrix(table: Table, species: Sequence[str]) -> np.ndarray:
    """(species, species) kg/mol on the log10 scale, symmetric."""
    found = np.zeros((len(species), len(species)))
    for i, one in enumerate(species):
        for j in range(i):
            found[i, j] = found[j, i] = coefficient(table, one, species[j])[0]
    return found


def estimated_pairs(table: Table, species: Sequence[str], molality: np.ndarray) -> list[str]:
    """Pairs of ions, both abundant in a water, whose coefficient is an estimate.

    molality (species,) mol/kg
    """
    main = [name for name, amount in zip(species, molality, strict=True) if amount > MATTERS]
    ions = [name for name in main if charge_of(name)]
    return [
        f"{cation}/{anion}"
        for cation in ions
        for anion in ions
        if charge_of(cation) > 0 > charge_of(anion) and coefficient(table, cation, anion)[1]
    ]


def held_complexes(table: Table) -> set[str]:
    """Complexes that a published coefficient of the ions they are made of holds already.

    A weak pair shows as a low coefficient; with both it would count twice.
    """
    return {name for interaction in table.interactions.values() for name in interaction.holds}
