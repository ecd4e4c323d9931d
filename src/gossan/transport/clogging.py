"""How hydraulic conductivity follows porosity: laws as fractions of the clean bed's conductivity."""

from __future__ import annotations

from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np


@dataclass(frozen=True, slots=True)
class Clogging:
    """The law of one layer: "kozeny-carman", "power", "threshold" or "none", and its numbers."""

    law: str = "kozeny-carman"
    exponent: float = 3.0  # power and threshold
    critical_porosity: float = 0.0  # threshold
    pore_bodies: float | None = None  # threshold: their share of the way, instead of an exponent
    residual: float = 0.0  # of the clean conductivity, left however little the law leaves

    @property
    def closes_at(self) -> float:
        """The porosity at which nothing flows any more, 0 where the law has none."""
        return self.critical_porosity if self.law == "threshold" and not self.residual else 0.0


def kozeny_carman(porosity: np.ndarray, initial: np.ndarray) -> np.ndarray:
    """Conductivity left in a clogging bed, as a fraction of the clean bed's (equations.md, 31).

    porosity  (cell,), 1, in [0, 1)
    initial   (cell,), 1, in (0, 1): the porosity at which the clean value was measured
    Returns   (cell,), 1
    Valid     for even coats on clean grains, porosity 0.25 to 0.5; crystals that bridge throats clog sooner
    Source    Kozeny (1927); Carman (1937), Trans. Inst. Chem. Eng. 15, 150-166; from memory

    >>> round(kozeny_carman(0.30, 0.38), 3)
    0.386
    """
    return (porosity / initial) ** 3 * ((1 - initial) / (1 - porosity)) ** 2


def power(porosity: np.ndarray, initial: np.ndarray, exponent: float) -> np.ndarray:
    """The same by a power of the porosity (equations.md, 32).

    porosity, initial  (cell,), 1, as in `kozeny_carman`
    exponent           1, > 0: 2 to 3 where pores open or coats are even, up to 8 where cement seals throats
    Returns            (cell,), 1
    Source             Hommel, Coltman & Class (2018), Transp. Porous Med. 124, 589-629; range from memory

    >>> round(power(0.19, 0.38, 3.0), 3)
    0.125
    """
    return (porosity / initial) ** exponent


def threshold(porosity: np.ndarray, initial: np.ndarray, exponent: float, critical: float) -> np.ndarray:
    """The same where pores stop connecting at a critical porosity; 0 from there down (equations.md, 33).

    porosity, initial  (cell,), 1, as in `kozeny_carman`
    exponent           1, > 0, often 2 to 3
    critical           1, in [0, initial)
    Returns            (cell,), 1
    Source             Verma & Pruess (1988), J. Geophys. Res. 93, 1159-1173, for fractured tuff; from memory

    >>> [round(float(threshold(p, 0.35, 3.0, 0.05)), 3) for p in (0.35, 0.20, 0.04)]
    [1.0, 0.125, 0.0]
    """
    return (np.maximum(porosity - critical, 0.0) / (initial - critical)) ** exponent


def bodies_and_throats(
    porosity: np.ndarray, initial: np.ndarray, critical: float, bodies: float
) -> np.ndarray:
    """The same for wide and narrow tubes in series, whose narrow ones close first (equations.md, 82).

    porosity, initial  (cell,), 1, as in `kozeny_carman`
    critical           1, in [0, initial): the porosity at which the throats are full
    bodies             1, in (0, 1): share of the way that runs through the bodies
    Returns            (cell,), 1; 0 from the critical porosity down
    Source             Verma & Pruess (1988), J. Geophys. Res. 93, 1159-1173; from memory

    >>> [round(float(bodies_and_throats(n, 0.5, 0.4, 0.8)), 3) for n in (0.5, 0.45, 0.4)]
    [1.0, 0.269, 0.0]
    """
    open_part = np.maximum(porosity - critical, 0.0) / (initial - critical)
    wider = critical / (bodies * (initial - critical))  # bodies over throats in the clean bed, less 1
    way = open_part + wider
    share = np.divide(open_part, way, out=np.ones_like(way), where=way > 0.0)
    clean = 1.0 - bodies + bodies / (1.0 + wider) ** 2
    return open_part**2 * clean / (1.0 - bodies + bodies * share**2)


def conductivity_left(
    cloggings: Sequence[Clogging], layer: np.ndarray, porosity: np.ndarray, initial: np.ndarray
) -> np.ndarray:
    """The fraction of its clean conductivity that each cell keeps, by the law of its layer.

    cloggings one per layer; layer (cell,) int; porosity, initial (cell,), 1; returns (cell,), 1.
    Raises ValueError on a law that is none of the four.
    """
    left = np.ones_like(porosity)
    for number, clogging in enumerate(cloggings):
        here = layer == number
        left[here] = _by_law(clogging, porosity[here], initial[here])
        if clogging.residual:
            left[here] = np.maximum(left[here], clogging.residual)
    return left


def _by_law(clogging: Clogging, porosity: np.ndarray, initial: np.ndarray) -> np.ndarray:
    match clogging.law:
        case "kozeny-carman":
            return kozeny_carman(porosity, initial)
        case "power":
            return power(porosity, initial, clogging.exponent)
        case "threshold" if clogging.pore_bodies is not None:
            return bodies_and_throats(porosity, initial, clogging.critical_porosity, clogging.pore_bodies)
        case "threshold":
            return threshold(porosity, initial, clogging.exponent, clogging.critical_porosity)
        case "none":
            return np.ones_like(porosity)
    raise ValueError(f"no clogging law is called {clogging.law!r}")
