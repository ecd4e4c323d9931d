"""Sums of constants of the table: reactions that a publication writes in another way than the table."""

from __future__ import annotations

from gossan.constants.load import load_table
from gossan.constants.temperature import log10_k_at


def log10_constant(name: str, celsius: float = 25.0) -> float:
    """log10 K of a species, a held component's half reaction, a mineral or `gas NAME`, as the table has."""
    table = load_table()
    if name.startswith("gas "):
        return log10_k_at(table.gases[name[4:]], 273.15 + celsius)
    for group in (table.species, table.components, table.minerals):
        if name in group:
            return log10_k_at(group[name], 273.15 + celsius)
    raise KeyError(name)


def log10_sum(terms: dict[str, float], celsius: float = 25.0) -> float:
    """Sum of constants, each taken so many times; gases and species as they fall to components.

    >>> round(log10_sum({"OH^-": -0.5}), 2)
    7.0
    """
    return sum(times * log10_constant(name, celsius) for name, times in terms.items())
