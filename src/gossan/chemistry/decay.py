"""Decay of solutes, and growth of those they decay into, exactly over a step."""

from __future__ import annotations

from collections.abc import Iterator
from dataclasses import dataclass, replace
from functools import cached_property

import numpy as np

SMALL = 0.125  # decay over a step that is short enough for the series
TERMS = 14  # of it: the next one is below 1e-27
GENTLE = 1.0  # decay over a step below which what decays is the small number, above which what is left is


@dataclass(frozen=True, slots=True)
class Kept:
    """What a step does to what was there and to what arrives meanwhile; all (member, member).

    fastest       the largest decay over the step, lambda dt
    whole, first  e^Z and phi_1(Z), no entry < 0: what is left of the stock, and of an even inflow
    early, late   e^Z - 1 and phi_1(Z) - 1: what decay makes of them
    """

    fastest: float
    whole: np.ndarray
    first: np.ndarray
    early: np.ndarray
    late: np.ndarray

    def arrived(self) -> Kept:
        """The same where all that arrives has done so before anything decays."""
        return replace(self, first=self.whole, late=self.early)


@dataclass(frozen=True, eq=False)
class KeptByCell:
    """What a step does in every cell: kept by zone, and the zone (cell,) int of each."""

    kept: tuple[Kept, ...]
    zone: np.ndarray

    def at(self, cells: np.ndarray) -> KeptByCell:
        """The same of some cells."""
        return KeptByCell(self.kept, self.zone[cells])

    def arrived(self) -> KeptByCell:
        """The same where all that arrives has done so before anything decays."""
        return replace(self, kept=tuple(kept.arrived() for kept in self.kept))

    def alone(self, stock: np.ndarray) -> np.ndarray:
        """(member, cell) what is left of a stock that nothing is added to."""
        left = np.empty_like(stock)
        for kept, here in self.zones():
            left[:, here] = kept.whole @ stock[:, here]
        return left

    def zones(self) -> Iterator[tuple[Kept, np.ndarray | slice]]:
        """What a step does in each zone, and which cells those are."""
        if len(self.kept) == 1:
            yield self.kept[0], slice(None)
            return
        for number, kept in enumerate(self.kept):
            yield kept, np.flatnonzero(self.zone == number)


@dataclass(frozen=True, eq=False)
class Decay:
    """Solutes that decay or grow from others.

    solutes  (member,) int, rows of the solutes that take part
    rates    (zone, member, member) s-1: -lambda on the diagonal, the parent's lambda where it decays into the
             row
    zone     (cell,) int: whose rates hold in each cell
    """

    solutes: np.ndarray
    rates: np.ndarray
    zone: np.ndarray

    @cached_property
    def descent(self) -> np.ndarray:
        """(member, member) 1 where the column's solute decays into the row's, directly or through others."""
        grows = (self.rates > 0.0).any(axis=0).astype(float)
        reached = grows
        for _ in grows:
            reached = np.minimum(reached + grows @ reached, 1.0)
        return reached

    def over(self, dt: float) -> KeptByCell:
        """What dt (s) leaves and makes."""
        return KeptByCell(tuple(kept_of(rates * dt) for rates in self.rates), self.zone)


def kept_of(z: np.ndarray) -> Kept:
    """What a step leaves and makes; z (member, member) 1, rates times its length (equations.md, 53).

    The series is summed for a step that is short enough, then doubled: sums of what is not negative, so that
    every entry keeps its digits, for equal rates in a chain as well as for unlike ones.
    """
    fastest = float(-z.diagonal().min())
    doublings = max(0, int(np.ceil(np.log2(fastest / SMALL)))) if fastest > SMALL else 0
    part = z * 0.5**doublings
    one = np.eye(len(z))
    second = one.copy()
    for n in range(TERMS + 2, 2, -1):
        second = one + part @ second / n
    second *= 0.5
    first = one + part @ second
    whole = one + part @ first
    for n in range(doublings, 0, -1):
        second = 0.25 * (first @ first + 2.0 * second)
        first = 0.5 * (first + whole @ first)
        whole = whole @ whole
        np.fill_diagonal(whole, np.exp(z.diagonal() * 0.5 ** (n - 1)))  # squares would double its error
    return Kept(fastest, whole, first, z @ first, z @ second)


def decayed(by_cell: KeptByCell, stock: np.ndarray, gained: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    """What is left after a step, and what decay made of it (equations.md, 54).

    stock   (member, cell) there at the start, >= 0; gained (member, cell) arrived evenly during the step, net
    Returns (member, cell) left, >= 0 where stock + gained is; (member, cell) left - stock - gained, below 0
            where more decayed than grew

    A cell that would lose what has decayed already is taken to have lost it first.
    """
    left, made = np.empty_like(stock), np.empty_like(stock)
    for kept, here in by_cell.zones():
        left[:, here], made[:, here] = _decayed(kept, stock[:, here], gained[:, here])
    return left, made


def _decayed(kept: Kept, stock: np.ndarray, gained: np.ndarray) -> tuple[np.ndarray, np.ndarray]:
    after = stock + gained
    if kept.fastest <= GENTLE:
        made = kept.early @ stock + kept.late @ gained
        left = after + made
    else:
        left = kept.whole @ stock + kept.first @ gained
        made = left - after
    short = (left < 0.0).any(axis=0)
    if short.any():
        left[:, short] = kept.whole @ after[:, short]
        made[:, short] = left[:, short] - after[:, short]
    return left, made
