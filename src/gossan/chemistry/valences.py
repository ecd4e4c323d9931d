"""How much of each valence a water holds."""

from __future__ import annotations

import numpy as np

from gossan.chemistry.equilibrium import Equilibrium


def valence_totals(found: Equilibrium) -> np.ndarray:
    """(basis,): what one water holds dissolved of each of the basis, mol per kg of water.

    A component that no coupled valence counts as stands with its very amount, the others with the sum of
    their species: so does H^+, of which the oxygen and hydrogen that water itself makes count some, and e^-,
    which is only in ions between two valences (polysulfides).
    """
    system = found.system
    count = len(system.components)
    held = found.held()[:, 0]
    totals = held.copy()
    alone = ~system.conserved[count:].any(axis=0)
    totals[:count][alone] = found.amount[alone, 0]
    if system.electron >= 0:
        totals[0], totals[system.electron] = held[0], held[system.electron]
    return totals
