"""Loops over species that fill vector registers.

The sums may be regrouped by the compiler (`reassoc`), once and for all when it compiles: the same input
gives the same bits, whatever the thread or the cell beside it.  Nothing here knows NaN.
"""

from __future__ import annotations

import math

import numpy as np

from gossan.base.jit import kernel

REGROUPED = {"reassoc", "contract"}

LOWEST, HIGHEST = -690.0, 300.0  # exponents: e^300 mol/kg still has a square, and far steps a slope
PER_LN2 = 1.0 / math.log(2.0)
LN2_HIGH = 0.693147180369123816490  # its last bits are zero: a product with a small integer is exact
LN2_LOW = 1.90821492927058770002e-10  # the rest of ln 2
SHIFTER = 1.5 * 2.0**52  # a number so large that only whole numbers stand beside it


@kernel(inner=True, fastmath={"contract"})
def exponentials(exponent, bits, out):
    """out = e^exponent, within two units in the last place (equations.md, 8).

    exponent (species,), held to LOWEST..HIGHEST; bits (species,) int64 is working space
    e^x = 2^n e^r with |r| <= ln(2) / 2; e^r by its Taylor polynomial of degree 13, whose rest is 4e-18.
    The compiler has no vector exponential of its own.  Adding SHIFTER rounds to a whole number n and leaves
    it in the lowest bits, from where it is moved to the place of a floating-point exponent.
    """
    shifted = bits.view(np.float64)
    for s in range(exponent.shape[0]):
        x = exponent[s]
        x = x if x > LOWEST else LOWEST
        x = x if x < HIGHEST else HIGHEST
        moved = x * PER_LN2 + SHIFTER
        n = moved - SHIFTER
        r = (x - n * LN2_HIGH) - n * LN2_LOW
        p = 1.0 / 6227020800.0
        p = p * r + 1.0 / 479001600.0
        p = p * r + 1.0 / 39916800.0
        p = p * r + 1.0 / 3628800.0
        p = p * r + 1.0 / 362880.0
        p = p * r + 1.0 / 40320.0
        p = p * r + 1.0 / 5040.0
        p = p * r + 1.0 / 720.0
        p = p * r + 1.0 / 120.0
        p = p * r + 1.0 / 24.0
        p = p * r + 1.0 / 6.0
        p = p * r + 0.5
        p = p * r + 1.0
        out[s] = p * r + 1.0
        shifted[s] = moved
    for s in range(exponent.shape[0]):
        bits[s] = (bits[s] + 1023) << 52
    for s in range(exponent.shape[0]):
        out[s] *= shifted[s]


@kernel(inner=True, fastmath=REGROUPED)
def dot(a, b):
    """The sum of a times b over species."""
    value = 0.0
    for s in range(a.shape[0]):
        value += a[s] * b[s]
    return value


@kernel(inner=True, fastmath=REGROUPED)
def both_sums(coefficient, row, molality):
    """The sums of the positive and of the negative terms of coefficient[row] times molality, over species.

    Apart, because one of them can be too small to be found again in their difference.
    """
    positive, negative = 0.0, 0.0
    for s in range(molality.shape[0]):
        term = coefficient[row, s] * molality[s]
        positive += term if term > 0.0 else 0.0
        negative += -term if term < 0.0 else 0.0
    return positive, negative


@kernel(inner=True, fastmath=REGROUPED)
def row_dot(coefficient, row, b):
    """The sum of coefficient[row] times b over species."""
    value = 0.0
    for s in range(b.shape[0]):
        value += coefficient[row, s] * b[s]
    return value


@kernel(inner=True, fastmath=REGROUPED)
def four_row_dots(coefficient, row, b):
    """The sums of coefficient[row] to coefficient[row + 3] times b over species, side by side."""
    one, two, three, four = 0.0, 0.0, 0.0, 0.0
    for s in range(b.shape[0]):
        value = b[s]
        one += coefficient[row, s] * value
        two += coefficient[row + 1, s] * value
        three += coefficient[row + 2, s] * value
        four += coefficient[row + 3, s] * value
    return one, two, three, four


@kernel(inner=True, fastmath={"contract"})
def add_row(out, factor, coefficient, row):
    """Add factor times coefficient[row] to out, over species."""
    for s in range(out.shape[0]):
        out[s] += factor * coefficient[row, s]
