"""Numbers of twice the digits: a pair of doubles whose sum is meant, about 32 decimal digits.

The high part is the double nearest to the sum.  Sums and products of doubles are exact (equations.md, 77) as
long as the compiler neither regroups nor fuses, which no kernel here allows it to.
"""

from __future__ import annotations

import math

from gossan.base.jit import kernel

SPLITTER = 134217729.0  # 2^27 + 1
PER_LN2 = 1.0 / math.log(2.0)
LN2 = 0.6931471805599453
LN2_REST = 2.3190468138462996e-17
LN2_LAST = 5.7077084384162121e-34
HALVINGS = 6
PIECES = 13  # of the exponential's series: (0.0055)^13 / 13! is 7e-40
LEAST_EXPONENT = -600.0  # below, the low part of a result would leave the range of doubles


@kernel(inner=True)
def two_sum(a, b):
    """a + b and what rounding lost of it (equations.md, 77)."""
    high = a + b
    part = high - a
    return high, (a - (high - part)) + (b - part)


@kernel(inner=True)
def two_product(a, b):
    """a b and what rounding lost of it, |a|, |b| < 1e290 (equations.md, 77)."""
    high = a * b
    wide = SPLITTER * a  # in two halves of 26 bits, whose products are exact
    a_high = wide - (wide - a)
    a_low = a - a_high
    wide = SPLITTER * b
    b_high = wide - (wide - b)
    b_low = b - b_high
    return high, ((a_high * b_high - high) + a_high * b_low + a_low * b_high) + a_low * b_low


@kernel(inner=True)
def add(a, a_low, b, b_low):
    """The sum of two pairs; its error is 4e-32 of the larger one, not of the sum."""
    high, low = two_sum(a, b)
    second, third = two_sum(a_low, b_low)
    high, low = two_sum(high, low + second)
    return two_sum(high, low + third)


@kernel(inner=True)
def times(a, a_low, b, b_low):
    """The product of two pairs, within 2e-31 of itself."""
    high, low = two_product(a, b)
    return two_sum(high, low + (a * b_low + a_low * b))


@kernel(inner=True)
def over(a, a_low, b, b_low):
    """The quotient of two pairs, within 2e-31 of itself."""
    first = a / b
    product, product_low = times(b, b_low, first, 0.0)
    left, left_low = add(a, a_low, -product, -product_low)
    second = left / b
    product, product_low = times(b, b_low, second, 0.0)
    left, left_low = add(left, left_low, -product, -product_low)
    high, low = two_sum(first, second)
    return add(high, low, left / b, 0.0)


@kernel(inner=True)
def exponential(a, a_low):
    """e^a of a pair, within 1e-30 of itself for |a| < 600; nothing below (equations.md, 78).

    a = n ln 2 + 2^6 r with |r| < 0.0055; e^r - 1 by its series, then six times doubled:
    e^2r - 1 = (e^r - 1)^2 + 2 (e^r - 1).
    """
    if not a > LEAST_EXPONENT:
        return 0.0, 0.0
    n = math.floor(a * PER_LN2 + 0.5)
    high, low = two_product(n, LN2)
    r, r_low = add(a, a_low, -high, -low)
    high, low = two_product(n, LN2_REST)
    r, r_low = add(r, r_low, -high, -low - n * LN2_LAST)
    r, r_low = r / 2.0**HALVINGS, r_low / 2.0**HALVINGS
    inner, inner_low = 1.0, 0.0  # e^r - 1 = r (1 + r/2 (1 + r/3 (...))), from its last piece on
    for i in range(PIECES, 1, -1):
        piece, piece_low = over(r, r_low, float(i), 0.0)
        inner, inner_low = times(inner, inner_low, piece, piece_low)
        inner, inner_low = add(inner, inner_low, 1.0, 0.0)
    less, less_low = times(r, r_low, inner, inner_low)
    for _ in range(HALVINGS):
        square, square_low = times(less, less_low, less, less_low)
        less, less_low = add(square, square_low, 2.0 * less, 2.0 * less_low)
    less, less_low = add(less, less_low, 1.0, 0.0)
    scale = math.ldexp(1.0, int(n))
    return less * scale, less_low * scale
