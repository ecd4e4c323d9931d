"""How winding pores slow diffusion: laws for the factor on the free-water coefficient, by porosity.

The factor is what diffusion in the pore water keeps, D_pore / D_free; per section of bulk a water content
comes on top. Geologists also write it as 1 / tortuosity^2.
"""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np


@dataclass(frozen=True, slots=True)
class Tortuosity:
    """The law of one layer, one of `LAWS` or "number", and its number.

    exponent  1, of "archie" (the cementation exponent) and "iversen-joergensen"
    factor    1, in [0, 1], of "number": it stays whatever the pores do
    """

    law: str = "millington-quirk"
    exponent: float = float("nan")
    factor: float = float("nan")


def millington_quirk(porosity: np.ndarray) -> np.ndarray:
    """The factor for pores between grains, full of water (equations.md, 69).

    porosity  (cell,), 1, in (0, 1]
    Returns   (cell,), 1
    Valid     for sands and soils
    Source    Millington & Quirk (1961), Trans. Faraday Soc. 57, 1200-1207, for full pores; from memory

    >>> round(float(millington_quirk(0.343)), 12)
    0.7
    """
    return np.cbrt(porosity)


def archie(porosity: np.ndarray, exponent: float) -> np.ndarray:
    """The factor from electrical conduction, whose formation factor is n^-exponent (equations.md, 70).

    porosity  (cell,), 1, in (0, 1]
    exponent  1, >= 1: about 1.3 in loose sand, 1.8 to 2.0 in sandstone, up to 3 in clay
    Returns   (cell,), 1
    Source    Archie (1942), Trans. AIME 146, 54-62; from memory

    >>> round(float(archie(0.36, 1.5)), 12)
    0.6
    """
    return porosity ** (exponent - 1.0)


def bruggeman(porosity: np.ndarray) -> np.ndarray:
    """The factor of a bed of grains of all sizes: n^(3/2) / n (equations.md, 71).

    porosity  (cell,), 1, in (0, 1]
    Returns   (cell,), 1
    Valid     for round grains; Marshall (1959), J. Soil Sci. 10, 79-82, found the same power for soils
    Source    Bruggeman (1935), Ann. Phys. 416, 636-664; from memory
    """
    return np.sqrt(porosity)


def boudreau(porosity: np.ndarray) -> np.ndarray:
    """The factor of fine-grained sediments: 1 / (1 - ln n^2) (equations.md, 72).

    porosity  (cell,), 1, in (0, 1]
    Returns   (cell,), 1
    Valid     for muds, porosity 0.4 to 0.95
    Source    Boudreau (1996), Geochim. Cosmochim. Acta 60, 3139-3142; from memory
    """
    return 1.0 / (1.0 - 2.0 * np.log(porosity))


def weissberg(porosity: np.ndarray) -> np.ndarray:
    """The most that a bed of spheres, placed at random, leaves: 1 / (1 - ln(n) / 2) (equations.md, 73).

    porosity  (cell,), 1, in (0, 1]
    Returns   (cell,), 1
    Valid     as an upper bound for spheres that may overlap
    Source    Weissberg (1963), J. Appl. Phys. 34, 2636-2639; from memory
    """
    return 1.0 / (1.0 - 0.5 * np.log(porosity))


def maxwell(porosity: np.ndarray) -> np.ndarray:
    """The factor of spheres far apart: 2 / (3 - n) (equations.md, 74).

    porosity  (cell,), 1, in (0, 1]
    Returns   (cell,), 1
    Valid     exactly for few spheres, within a few per cent for beds of equal ones
    Source    Maxwell (1873), A Treatise on Electricity and Magnetism, art. 314; from memory
    """
    return 2.0 / (3.0 - porosity)


def iversen_joergensen(porosity: np.ndarray, exponent: float) -> np.ndarray:
    """The factor measured in sea beds: 1 / (1 + m (1 - n)) (equations.md, 75).

    porosity  (cell,), 1, in (0, 1]
    exponent  1, m: 2 in sands, 3 in muds
    Returns   (cell,), 1
    Valid     for porosities of 0.4 to 0.9
    Source    Iversen & Joergensen (1993), Geochim. Cosmochim. Acta 57, 571-578; from memory
    """
    return 1.0 / (1.0 + exponent * (1.0 - porosity))


LAWS = {
    "millington-quirk": millington_quirk,
    "bruggeman": bruggeman,
    "boudreau": boudreau,
    "weissberg": weissberg,
    "maxwell": maxwell,
}
LAWS_OF_TWO = {"archie": archie, "iversen-joergensen": iversen_joergensen}  # with an exponent


def winding(laws: Sequence[Tortuosity], layer: np.ndarray, porosity: np.ndarray) -> np.ndarray:
    """(cell,) 1: the factor on free-water diffusion in every cell, by the law of its layer and its pores now.

    laws one per layer; layer (cell,) int; porosity (cell,) 1, in (0, 1]; raises KeyError on an unknown law
    """
    if len(set(laws)) == 1:
        return _by_law(laws[0], porosity)
    factor = np.empty_like(porosity)
    for number, law in enumerate(laws):
        here = layer == number
        factor[here] = _by_law(law, porosity[here])
    return factor


def _by_law(said: Tortuosity, porosity: np.ndarray) -> np.ndarray:
    if said.law == "number":
        return np.full_like(porosity, said.factor)
    if said.law in LAWS_OF_TWO:
        return LAWS_OF_TWO[said.law](porosity, said.exponent)
    return LAWS[said.law](porosity)
