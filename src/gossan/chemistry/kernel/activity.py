"""Activity coefficients on plain arrays."""

from __future__ import annotations

import math

from gossan.base.jit import kernel

IDEAL, DAVIES, DEBYE_HUCKEL, SIT = 0, 1, 2, 3

# Davies' law has its minimum where 1 / (2 s (1 + s)^2) = 0.3 with s = sqrt(I); beyond, it would rise
# again and the equilibrium lose its uniqueness, so it is held there.
HELD_FROM = 0.39497933858960194
LEAST_IONIC_STRENGTH = 1e-14  # keeps the slope of sqrt(I) finite in pure water
SALTING = 0.1 * math.log(10.0)  # kg/mol, of neutral species
# Of SIT: the same for all ions, so that interaction coefficients of one table go together; (kg/mol)^0.5
SIT_SIZE = 1.5
# mol/kg: beyond its range of 3.5 the law goes on as it is at 4, for a denser water of the same composition
SIT_HELD_FROM = 4.0


@kernel
def activity_coefficients(
    model, debye_hueckel, charge_squared, neutral, size, ionic_strength, ln_gamma, slope
):
    """Fill ln gamma of every species, and its slope against ionic strength (equations.md, 4-6).

    charge_squared, neutral, size (species,); size is B times the ion size, (kg/mol)^0.5
    ionic_strength mol/kg; ln_gamma (species,) and slope (species,) kg/mol are overwritten
    Neutral species: log10 gamma = 0.1 I.  Davies' law and that of neutral species are held from HELD_FROM
    on; the extended Debye-Hueckel law of ions needs no such hold.  SIT's part of the ionic strength alone has
    the extended form too (equations.md, 47); it is held from SIT_HELD_FROM on.
    """
    strength = ionic_strength if ionic_strength > LEAST_IONIC_STRENGTH else LEAST_IONIC_STRENGTH
    held = strength > HELD_FROM
    salting = SALTING * (HELD_FROM if held else strength)
    salting_slope = 0.0 if held else SALTING
    if model == IDEAL:
        for s in range(ln_gamma.shape[0]):
            ln_gamma[s] = 0.0
            slope[s] = 0.0
    elif model == DAVIES:
        if held:
            strength = HELD_FROM
        root = math.sqrt(strength)
        law = -debye_hueckel * (root / (1.0 + root) - 0.3 * strength)
        law_slope = 0.0 if held else -debye_hueckel * (0.5 / (root * (1.0 + root) ** 2) - 0.3)
        for s in range(ln_gamma.shape[0]):
            ln_gamma[s] = charge_squared[s] * law + neutral[s] * salting
            slope[s] = charge_squared[s] * law_slope + neutral[s] * salting_slope
    else:
        beyond = model == SIT and strength > SIT_HELD_FROM
        root = math.sqrt(SIT_HELD_FROM if beyond else strength)
        steepness = 0.0 if beyond else 0.5 / root
        for s in range(ln_gamma.shape[0]):
            spread = 1.0 / (1.0 + size[s] * root)
            factor = -debye_hueckel * charge_squared[s] * spread
            ln_gamma[s] = factor * root + neutral[s] * salting
            slope[s] = factor * spread * steepness + neutral[s] * salting_slope
