"""Equilibrium under SIT the slow and obvious way: laws frozen, solved, taken anew, until nothing moves.

For brines in which the interactions are mild enough for such a repetition to settle.
"""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

import mpmath as mp
import numpy as np
from numpy.typing import ArrayLike
from tests.oracles.plain_speciation import NoSpeciation, Speciation, speciate
from tests.support.small_systems import PlainSystem

EVEN = 1e-13  # change of any ln gamma that counts as none
PATIENCE = 200


def speciate_brine(
    plain: PlainSystem,
    totals: ArrayLike,
    law: Callable[[list], tuple[list, mp.mpf]],
    species_water: ArrayLike,
    mineral_water: ArrayLike,
) -> tuple[Speciation, float]:
    """The equilibrium and the ln of the activity of water.

    law           of tests.oracles.activity_laws.sit: molalities to (ln gamma, ln of the activity of water)
    species_water (species,), mineral_water (mineral,): H2O in one of formation, or freed by one dissolving
    Raises        NoSpeciation
    """
    species_water, mineral_water = np.asarray(species_water, float), np.asarray(mineral_water, float)
    ln_gamma, ln_water = np.zeros(len(plain.species)), 0.0
    for _ in range(PATIENCE):
        frozen = ln_gamma.copy()
        wet = replace(
            plain,
            ln_k=plain.ln_k + species_water * ln_water,
            mineral_ln_k=plain.mineral_ln_k - mineral_water * ln_water,
        )
        found = speciate(wet, totals, ln_gamma=lambda _, frozen=frozen: frozen)
        with mp.workdps(30):
            exact, exact_water = law([mp.mpf(m) for m in found.molality.tolist()])
        before, before_water = ln_gamma, ln_water
        ln_gamma, ln_water = np.array(exact, dtype=float), float(exact_water)
        if np.abs(ln_gamma - before).max() + abs(ln_water - before_water) < EVEN:
            return found, ln_water
    raise NoSpeciation("the repetition did not settle")
