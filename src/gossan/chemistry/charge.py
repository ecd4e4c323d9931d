"""Electric charge of a water: what is left over, and the error a laboratory would state."""

from __future__ import annotations

import numpy as np

from gossan.chemistry.equilibrium import Equilibrium
from gossan.chemistry.system import System


def basis_charge(system: System) -> np.ndarray:
    """(basis,): charge of each valence; -1 of e^-, which is counted and is not in the water."""
    return system.species_charge[: len(system.basis)].copy()


def net_charge(found: Equilibrium) -> float:
    """Charge left over in a water, eq per kg of water: that of its components."""
    return float(found.system.component_charge @ found.amount[:, 0])


def equivalents(found: Equilibrium) -> tuple[float, float]:
    """Equivalents of cations and of anions as a laboratory counts them, eq per kg of water.

    Ion pairs count as the ions they are made of (CaSO4: two of each), but protons stay with their anion
    and hydroxide with its metal: bicarbonate is one equivalent, FeOH^+ one, H2CO3 none. Every valence counts
    as the ion it is, whatever it is conserved as; an ion between two valences (polysulfide) by its charge.
    """
    system = found.system
    stoichiometry = system.stoichiometry
    charge = basis_charge(system)
    charge[0] = 0.0
    cations = stoichiometry @ np.maximum(charge, 0.0)
    anions = stoichiometry @ np.maximum(-charge, 0.0)
    protons = stoichiometry[:, 0]
    # protons on an anion take from its charge, what is left over is acid; hydroxide likewise on a metal
    anions_after = anions - np.maximum(protons, 0.0)
    cations_after = cations + np.minimum(protons, 0.0)
    positive = np.maximum(cations_after, 0.0) + np.maximum(-anions_after, 0.0)
    negative = np.maximum(anions_after, 0.0) + np.maximum(-cations_after, 0.0)
    if system.electron >= 0:
        between = stoichiometry[:, system.electron] != 0.0
        positive[between] = np.maximum(system.species_charge[between], 0.0)
        negative[between] = np.maximum(-system.species_charge[between], 0.0)
    molality = found.molality()[:, 0]
    return float(positive @ molality), float(negative @ molality)


def charge_error_percent(found: Equilibrium) -> float:
    """100 (cations - anions) / (cations + anions), 0 without ions (equations.md, 42).

    Source: the definition in common use; some laboratories divide by the mean, which doubles it.
    """
    cations, anions = equivalents(found)
    return 100.0 * (cations - anions) / (cations + anions) if cations + anions else 0.0
