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
