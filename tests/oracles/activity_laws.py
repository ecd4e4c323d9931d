"""Activity coefficients from their published formulas, for floats and for mpmath numbers alike."""

from __future__ import annotations

import math
from collections.abc import Callable

import mpmath as mp
import numpy as np
from numpy.typing import ArrayLike

LnGamma = Callable[[mp.mpf], list]  # ionic strength, mol/kg -> ln gamma of every species


def davies(charge: ArrayLike, a: float) -> LnGamma:
    """Davies (1962), held from its minimum on; neutral species log10 gamma = 0.1 I, held there too.

    charge  (species,), 1
    a       log10 Debye-Hueckel slope, (kg/mol)^0.5: 0.5085 at 25 degC
    """

    charges = np.asarray(charge, dtype=float).tolist()

    def ln_gamma(ionic_strength):
        held = min(ionic_strength, _davies_minimum(ionic_strength))
        root = _root(held)
        slope = a * (root / (1 + root) - held * 3 / 10)
        return [_ln10(held) * (-slope * z**2 if z else held / 10) for z in charges]

    return ln_gamma


def extended_debye_hueckel(
    charge: ArrayLike, ion_size: ArrayLike, a: float, b: float
) -> LnGamma:
    """log10 gamma = -a z^2 sqrt(I) / (1 + b size sqrt(I)); neutral species as with Davies.

    ion_size (species,), m
    b        m^-1 (kg/mol)^0.5: 3.281e9 at 25 degC
    """

    charges, sizes = np.asarray(charge, dtype=float).tolist(), np.asarray(ion_size, dtype=float).tolist()

    def ln_gamma(ionic_strength):
        root, neutral = _root(ionic_strength), min(ionic_strength, _davies_minimum(ionic_strength))
        return [
            _ln10(ionic_strength) * (-a * z**2 * root / (1 + b * size * root) if z else neutral / 10)
            for z, size in zip(charges, sizes, strict=True)
        ]

    return ln_gamma


def sit(charge: ArrayLike, interaction: ArrayLike, a: float) -> Callable[[list], tuple[list, mp.mpf]]:
    """Specific ion interaction theory, from its excess Gibbs energy alone, by differentiation.

    The excess Gibbs energy per kg of water, over RT: -(4 A'/b^3) (ln(1 + b q) - b q + b^2 q^2 / 2) with
    b = 1.5 and q = sqrt(I), and half the sum of all pairs.  Coefficients are its slopes against molalities,
    the water's activity is what it and the solutes' own number leave: from one function, so they go together.

    charge      (species,), 1
    interaction (species, species), kg/mol, on the log10 scale
    a           log10 Debye-Hueckel slope, (kg/mol)^0.5
    Returns     molalities (species,) to (ln gamma of every species, ln of the activity of water)
    """
    charges = [mp.mpf(z) for z in np.asarray(charge, dtype=float).tolist()]
    pairs = [[mp.mpf(e) * mp.log(10) for e in row] for row in np.asarray(interaction, dtype=float).tolist()]
    slope, b = mp.mpf(a) * mp.log(10), mp.mpf(3) / 2

    def excess(molality):
        return _cloud(charges, molality, slope, b) + _pairs(pairs, molality) / 2

    def laws(molality):
        # beyond an ionic strength of 4 the coefficients are those of the same mixture, thinned to 4
        strength = sum(z * z * m for z, m in zip(charges, molality, strict=True)) / 2
        held = [m * min(mp.mpf(1), 4 / strength) for m in molality]

        def at(s, value):
            return excess([value if i == s else m for i, m in enumerate(held)])

        ln_gamma = [mp.diff(lambda value, s=s: at(s, value), held[s]) for s in range(len(held))]
        # Gibbs-Duhem: what the excess energy loses when all molalities shrink alike
        swelling = sum(m * g for m, g in zip(held, ln_gamma, strict=True)) - excess(held)
        return ln_gamma, -mp.mpf("0.0180153") * (sum(held) + swelling)

    return laws


def _cloud(charges, molality, slope, b):
    q = mp.sqrt(sum(z * z * m for z, m in zip(charges, molality, strict=True)) / 2)
    return -4 * slope / b**3 * (mp.log(1 + b * q) - b * q + b * b * q * q / 2)


def _pairs(pairs, molality):
    return sum(
        one * e * other for one, row in zip(molality, pairs, strict=True)
        for e, other in zip(row, molality, strict=True)
    )  # fmt: skip


def _ln10(like):
    return mp.log(10) if isinstance(like, mp.mpf) else math.log(10)


def _root(value):
    return mp.sqrt(value) if isinstance(value, mp.mpf) else math.sqrt(value)


def _davies_minimum(like):
    """The ionic strength where Davies' bracket turns: 1 / (2 q (1 + q)^2) = 0.3, q = sqrt(I)."""
    five_thirds = mp.mpf(5) / 3 if isinstance(like, mp.mpf) else 5 / 3
    q = five_thirds * 0 + 0.628  # a start close enough for Newton to settle in eight rounds at 100 digits
    for _ in range(8):
        q -= (q * (1 + q) ** 2 - five_thirds) / ((1 + q) * (1 + 3 * q))
    return q * q
