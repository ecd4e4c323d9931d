"""Activity coefficients on plain arrays."""

from __future__ import annotations

import math

from gossan.base.jit import kernel

IDEAL, DAVIES, DEBYE_HUCKEL = 0, 1, 2

# Davies' law has its minimum where 1 / (2 s (1 + s)^2) = 0.3 with s = sqrt(I); beyond, it would rise
# again and the equilibrium lose its uniqueness, so it is held there.
HELD_FROM = 0.39497933858960194
LEAST_IONIC_STRENGTH = 1e-14  # keeps the slope of sqrt(I) finite in pure water


@kernel
def activity_coefficients(model, debye_hueckel, charge_squared, size, ionic_strength, ln_gamma, slope):
    """Fill ln gamma of every kind of species, and its slope against ionic strength (equations.md, 4-6).

    charge_squared, size (kind,); size is B times the ion size, (kg/mol)^0.5; ionic_strength mol/kg
    ln_gamma (kind,) and slope (kind,) kg/mol are overwritten
    Neutral species: log10 gamma = 0.1 I.  All laws of Davies and of neutral species are held from
    HELD_FROM on; the extended Debye-Hueckel law of ions needs no such hold.
    """
    strength = ionic_strength if ionic_strength > LEAST_IONIC_STRENGTH else LEAST_IONIC_STRENGTH
    held = strength > HELD_FROM
    if model != DEBYE_HUCKEL and held:
        strength = HELD_FROM
    root = math.sqrt(strength)
    for kind in range(charge_squared.shape[0]):
        if model == IDEAL:
            ln_gamma[kind] = 0.0
            slope[kind] = 0.0
        elif charge_squared[kind] == 0.0:
            salting = 0.1 * math.log(10.0)
            ln_gamma[kind] = salting * (HELD_FROM if held else strength)
            slope[kind] = 0.0 if held else salting
        elif model == DAVIES:
            factor = -debye_hueckel * charge_squared[kind]
            ln_gamma[kind] = factor * (root / (1.0 + root) - 0.3 * strength)
            slope[kind] = 0.0 if held else factor * (0.5 / (root * (1.0 + root) ** 2) - 0.3)
        else:
            factor = -debye_hueckel * charge_squared[kind]
            spread = 1.0 + size[kind] * root
            ln_gamma[kind] = factor * root / spread
            slope[kind] = factor * 0.5 / (root * spread * spread)
