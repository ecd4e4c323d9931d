"""What drives a column from outside: the entering water, flow and temperature as functions of one clock."""

from __future__ import annotations

from bisect import bisect_left
from dataclasses import dataclass
from functools import cached_property
from typing import NamedTuple

import numpy as np

from gossan.coupling.schedule import SAME, Schedule


class Push(NamedTuple):
    """How the water is driven, and how warm it is; flux or head is held, the other NaN."""

    darcy_flux: float  # m s-1, through the inlet
    head_drop: float  # m, over the whole column
    temperature: float  # K


@dataclass(frozen=True, eq=False)
class Feeds:
    """Pieces on a clock, all straight within a piece (equations.md, 63); what jumps does so between two.

    Each array holds the values at the start of a piece and at its end. The last piece has no end: there the
    two are alike.
    """

    begins: Schedule  # when each piece does; the first at 0
    inflow: np.ndarray  # (piece, 2, solute) mol m-3 of water
    darcy_flux: np.ndarray  # (piece, 2) m s-1 through the inlet, NaN where a head is held
    head_drop: np.ndarray  # (piece, 2) m over the column, NaN where the flux is held
    temperature: np.ndarray  # (piece, 2) K

    @cached_property
    def _marks(self) -> list[float]:
        return self.begins.marks.tolist()

    @property
    def head_at_start(self) -> bool:
        """Whether a head is held at the start, and not a flux."""
        return bool(np.isnan(self.darcy_flux[0, 0]))

    @property
    def flux_is_steady(self) -> bool:
        """Whether one flux is held from first to last."""
        return bool((self.darcy_flux == self.darcy_flux[0, 0]).all())

    def piece(self, now: float) -> int:
        """The piece from now on, when the clock shows now."""
        return max(self.begins.passed(now) - 1, 0)

    def piece_before(self, now: float) -> int:
        """The piece until now: where one piece follows another, the earlier."""
        return max(bisect_left(self._marks, now - SAME * max(1.0, abs(now))) - 1, 0)

    def share(self, piece: int, now: float) -> float:
        """How much of a piece has gone by, 0 to 1."""
        if piece + 1 == len(self._marks):
            return 0.0
        start, end = self._marks[piece : piece + 2]
        return min(max((now - start) / (end - start), 0.0), 1.0)

    def at(self, values: np.ndarray, piece: int, now: float) -> np.ndarray:
        """One of the arrays within a piece, when the clock shows now."""
        share = self.share(piece, now)
        start, end = values[piece]
        return start + share * (end - start) if share < 1.0 else end  # level pieces stay so, to the last bit

    def slope(self, values: np.ndarray, piece: int) -> float:
        """How fast one of the arrays of numbers changes within a piece, per unit of the clock."""
        if piece + 1 == len(self._marks):
            return 0.0
        start, end = self._marks[piece : piece + 2]
        return float(values[piece, 1] - values[piece, 0]) / (end - start)

    def temperature_before(self, now: float) -> float:
        """K, until now: where it jumps, the one before the jump; at 0 the first of all."""
        return float(self.at(self.temperature, self.piece_before(now), now))


def steady(
    inflow: np.ndarray, temperature: float, darcy_flux: float = np.nan, head_drop: float = np.nan
) -> Feeds:
    """One water for ever, (solute,) mol m-3, under one flux (m s-1) or loss of head (m)."""

    def both(value: float) -> np.ndarray:
        return np.full((1, 2), value)

    return Feeds(
        begins=Schedule(np.zeros(1)),
        inflow=np.stack([inflow, inflow])[None],
        darcy_flux=both(darcy_flux),
        head_drop=both(head_drop),
        temperature=both(temperature),
    )
