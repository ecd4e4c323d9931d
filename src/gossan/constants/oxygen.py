"""How much oxygen water takes up from the air."""

from __future__ import annotations

from math import exp

# ln of umol/kg against 1/T, for fresh water under air at 1 atm that is saturated with water vapour; stated
# uncertainty 0.1 %; from memory
_BENSON_KRAUSE = (-135.29996, 1.572288e5, -6.637149e7, 1.243678e10, -8.621061e11)


def air_saturated(temperature: float) -> float:
    """Dissolved oxygen of fresh water under air at 1 atm, mol per kg of water (equations.md, 62).

    temperature  K
    Valid    0 to 40 degC, fresh water at sea level; salt and height take from it (1 % per 100 m)
    Source   Benson & Krause (1984), Limnol. Oceanogr. 29, 620-632, from memory

    >>> round(1e3 * 31.998 * air_saturated(293.15), 2)
    9.11
    """
    inverse = 1.0 / temperature
    above = 0.0
    for coefficient in reversed(_BENSON_KRAUSE):
        above = above * inverse + coefficient
    return 1e-6 * exp(above)
