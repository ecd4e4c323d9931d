"""Pure water against temperature: its density, viscosity and Debye-Hueckel parameters."""

from __future__ import annotations

import tomllib
from bisect import bisect_right
from functools import lru_cache
from pathlib import Path

ZERO_CELSIUS = 273.15  # K
PER_ANGSTROM = 1e10  # 1/m

# Kell (1975), J. Chem. Eng. Data 20, 97-105: kg/m3 at 1 atm against degC; from memory
_KELL = (999.83952, 16.945176, -7.9870401e-3, -46.170461e-6, 105.56302e-9, -280.54253e-12)
_KELL_BELOW = 16.879850e-3

# Huber, Perkins, Laesecke, Friend, Sengers, Assael, Metaxa, Vogel, Mares & Miyagawa (2009), J. Phys. Chem.
# Ref. Data 38, 101-125, for 1 bar: factors in uPa s and powers of T / 300 K; from memory
_HUBER = ((280.68, -1.9), (511.45, -7.7), (61.131, -19.6), (0.45903, -40.0))


def density(temperature_k: float) -> float:
    """Density of pure water at 1 atm, in kg/m3.

    temperature_k  K, from 273.15 to 423.15
    Raises   ValueError outside of that
    Source   Kell (1975), J. Chem. Eng. Data 20, 97-105, from memory; its error there is below 0.02 kg/m3

    >>> round(density(293.15), 1)
    998.2
    """
    t = _celsius(temperature_k, 0.0, 150.0)
    above = 0.0
    for coefficient in reversed(_KELL):
        above = above * t + coefficient
    return above / (1.0 + _KELL_BELOW * t)


def viscosity(temperature_k: float) -> float:
    """Viscosity of pure water at 1 bar, in Pa s (equations.md, 85).

    temperature_k  K, from 273.15 to 373.15
    Raises   ValueError outside of that
    Source   Huber et al. (2009), J. Phys. Chem. Ref. Data 38, 101-125: the short form of the IAPWS
             formulation of 2008, from memory; its error there is below 1 %

    >>> round(1e3 * viscosity(293.15), 4)
    1.0016
    """
    _celsius(temperature_k, 0.0, 100.0)
    share = temperature_k / 300.0
    return 1e-6 * sum(factor * share**power for factor, power in _HUBER)


def fluidity_ratio(temperature_k: float, reference: float) -> float:
    """Weight over viscosity of water, as a multiple of that at a reference (equations.md, 85).

    temperature_k, reference  K, from 273.15 to 373.15
    Returns  what a bed's hydraulic conductivity is multiplied by

    >>> round(fluidity_ratio(275.15, 295.15), 3)
    0.572
    """
    thinner = viscosity(reference) / viscosity(temperature_k)
    return density(temperature_k) / density(reference) * thinner if temperature_k != reference else 1.0


def diffusion_ratio(temperature_k: float, reference: float) -> float:
    """How fast solutes diffuse in water, as a multiple of that at a reference (equations.md, 85).

    temperature_k, reference  K, from 273.15 to 373.15
    Valid    for ions within about 12 % over 25 K; the law is that of large round particles
    Source   Einstein (1905), Ann. Phys. 322, 549-560, with Stokes's law of drag; from memory

    >>> round(diffusion_ratio(275.15, 295.15), 3)
    0.532
    """
    return temperature_k / reference * viscosity(reference) / viscosity(temperature_k)


def debye_huckel(temperature_k: float) -> tuple[float, float]:
    """Parameters A and B of the Debye-Hueckel law for log10 of an activity coefficient.

    temperature_k  K, from 273.15 to 333.15
    Returns  A in (kg/mol)^0.5 and B in (kg/mol)^0.5 per m, by cubic pieces through the tabulated values
    Raises   ValueError outside of that
    Source   constants/debye_huckel.toml; the table is rounded to 5e-5 in A and 5e5 in B

    >>> debye_huckel(298.15)
    (0.5085, 3281000000.0)
    """
    table = _table()
    t = _celsius(temperature_k, table["temperature"][0], table["temperature"][-1])
    a, b = (_cubic(table["temperature"], table[name], t) for name in ("A", "B"))
    return a, b * PER_ANGSTROM


@lru_cache(maxsize=1)
def _table() -> dict[str, list[float]]:
    return tomllib.loads((Path(__file__).parent / "debye_huckel.toml").read_text(encoding="utf-8"))


def _celsius(temperature_k: float, low: float, high: float) -> float:
    t = temperature_k - ZERO_CELSIUS
    if not low - 1e-9 <= t <= high + 1e-9:
        raise ValueError(f"{t:.6g} degC is outside the {low:g} to {high:g} degC that water is known for here")
    return t


def _cubic(x: list[float], y: list[float], at: float) -> float:
    """Cubic Hermite interpolation, each slope that of the parabola through a node and its neighbours."""
    i = min(max(bisect_right(x, at) - 1, 0), len(x) - 2)
    width = x[i + 1] - x[i]
    s = (at - x[i]) / width
    left, right = _slope(x, y, i), _slope(x, y, i + 1)
    return (
        (1.0 + 2.0 * s) * (1.0 - s) ** 2 * y[i]
        + s * (1.0 - s) ** 2 * width * left
        + s * s * (3.0 - 2.0 * s) * y[i + 1]
        - s * s * (1.0 - s) * width * right
    )


def _slope(x: list[float], y: list[float], i: int) -> float:
    """Slope at node i of the parabola through it and two neighbours (at an end: the two next nodes)."""
    middle = min(max(i, 1), len(x) - 2)
    before = (y[middle] - y[middle - 1]) / (x[middle] - x[middle - 1])
    after = (y[middle + 1] - y[middle]) / (x[middle + 1] - x[middle])
    curvature = (after - before) / (x[middle + 1] - x[middle - 1])
    return before + curvature * (2.0 * x[i] - x[middle - 1] - x[middle])
