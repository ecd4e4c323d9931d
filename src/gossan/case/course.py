"""The feeds of a case laid on one clock: pieces, straight in all that drives the column."""

from __future__ import annotations

import math
from collections.abc import Callable, Sequence
from dataclasses import dataclass

from gossan.base.amounts import Amount

SAME = 1e-9  # times that differ by less than this share are one

# of an entry's node (-1: of its `from`): what is wrong, and the cure
Complain = Callable[[int, int, str, str], None]


@dataclass(frozen=True)
class Values:
    """All that drives the column at one time: a water by its name, and the rest in SI."""

    water: str
    darcy_flux: float | None  # m s-1, or
    head_drop: float | None  # m
    temperature: float  # K


@dataclass(frozen=True)
class Node:
    """Values at a time since the entry's start, s or PV."""

    after: Amount
    values: Values


@dataclass(frozen=True)
class Entry:
    """An entry of the feed; linear: between two nodes all goes evenly from one to the next."""

    start: Amount  # s or PV since the start of the run
    nodes: tuple[Node, ...]
    linear: bool


@dataclass(frozen=True)
class Piece:
    """A stretch of the clock."""

    start: float  # s, or PV where the clock counts volume
    first: Values
    last: Values

    def mean_flux(self) -> float:
        """m s-1, where fluxes are held."""
        return 0.5 * ((self.first.darcy_flux or 0.0) + (self.last.darcy_flux or 0.0))


@dataclass(frozen=True)
class Course:
    """The pieces in order; the last goes on for ever, unchanged."""

    by_volume: bool
    pieces: tuple[Piece, ...]
    pore_length: float  # m of water in a pore volume

    @property
    def steady_flux(self) -> bool:
        """Whether one flux is held from first to last."""
        return len({flux for piece in self.pieces for flux in _fluxes(piece)}) == 1 and self.held_flux

    @property
    def comes_to_rest(self) -> bool:
        """Whether nothing flows any more in the end."""
        return not _flows(self.pieces[-1].last)

    @property
    def held_flux(self) -> bool:
        """Whether a flux is held all the time: then times and pore volumes tell each other."""
        return all(values.head_drop is None for piece in self.pieces for values in (piece.first, piece.last))

    def seconds(self, time: Amount) -> float:
        """A time or a number of pore volumes in s; inf for water that never comes.

        Raises  ValueError for pore volumes where a head is held: the flux is not known before the run
        """
        if time.unit == "s" or time.si == 0.0:
            return time.si
        if not self.held_flux:
            raise ValueError("pore volumes become a time only where the flux is held")
        return time_at(self.pieces, time.si * self.pore_length)

    def volumes(self, seconds: float) -> float:
        """Pore volumes that have entered by a time, where the flux is held."""
        return volume_at(self.pieces, seconds) / self.pore_length


def _flows(values: Values) -> bool:
    return (values.darcy_flux or 0.0) > 0.0 or (values.head_drop or 0.0) > 0.0


def _fluxes(piece: Piece) -> tuple[float | None, float | None]:
    return piece.first.darcy_flux, piece.last.darcy_flux


def volume_at(pieces: Sequence[Piece], time: float) -> float:
    """m3 m-2 that have entered by a time, s, under held fluxes (equations.md, 63)."""
    volume = 0.0
    for i, piece in enumerate(pieces):
        end = pieces[i + 1].start if i + 1 < len(pieces) else math.inf
        if time <= piece.start:
            break
        if time >= end:
            volume += piece.mean_flux() * (end - piece.start)
            continue
        gone = time - piece.start
        first, last = (flux or 0.0 for flux in _fluxes(piece))
        rise = (last - first) / (end - piece.start)
        volume += gone * (first + 0.5 * rise * gone)
    return volume


def time_at(pieces: Sequence[Piece], volume: float) -> float:
    """s, when so many m3 m-2 have entered under held fluxes; inf where they never will."""
    for i, piece in enumerate(pieces):
        end = pieces[i + 1].start if i + 1 < len(pieces) else math.inf
        first, last = (flux or 0.0 for flux in _fluxes(piece))
        passing = piece.mean_flux() * (end - piece.start) if piece.mean_flux() > 0.0 else 0.0
        if volume > passing:
            volume -= passing
            continue
        rise = (last - first) / (end - piece.start)
        pace = first + math.sqrt(max(first * first + 2.0 * rise * volume, 0.0))
        return min(piece.start + (2.0 * volume / pace if pace > 0.0 else 0.0), end)
    return math.inf


def course_of(entries: Sequence[Entry], pore_length: float, complain: Complain) -> Course:
    """Lay entries on a clock: seconds, or pore volumes where a head is held and entries count them.

    pore_length  m of water in one pore volume
    complain     is told of every time that cannot be
    """
    times = [time for entry in entries for time in (entry.start, *(node.after for node in entry.nodes))]
    values = [node.values for entry in entries for node in entry.nodes]
    heads = any(each.head_drop is not None for each in values)
    by_volume = heads and any(time.unit == "PV" and time.si > 0.0 for time in times)
    layer = _Layer(by_volume, pore_length, complain)
    for index, entry in enumerate(entries):
        layer.lay(index, entry)
    return Course(by_volume, tuple(layer.pieces), pore_length)


class _Layer:
    """Lays entry after entry."""

    def __init__(self, by_volume: bool, pore_length: float, complain: Complain):
        self.by_volume, self.pore_length, self.complain = by_volume, pore_length, complain
        self.pieces: list[Piece] = []
        self.last_start = -1.0

    def lay(self, index: int, entry: Entry) -> None:
        start = self._start(index, entry.start)
        if start is None:
            return
        self.last_start = start
        self.pieces.append(Piece(start, entry.nodes[0].values, entry.nodes[0].values))
        for number, (node, following) in enumerate(zip(entry.nodes, entry.nodes[1:], strict=False), 1):
            last = following.values if entry.linear else node.values
            piece = Piece(start, node.values, last)
            span = self._span(index, number, node, following, piece)
            if span is None:
                return
            start += span
            self.pieces[-1] = piece
            self.pieces.append(Piece(start, following.values, following.values))

    def _start(self, index: int, given: Amount) -> float | None:
        start = given.si
        if index == 0:
            if start != 0.0:
                self.complain(0, -1, f'is "{given}"; the first feed starts with the run', 'write "0 d"')
            return 0.0
        if not self._right_clock(index, -1, given):
            return None
        if given.unit == "PV" and not self.by_volume:
            start = time_at(self.pieces, given.si * self.pore_length)
        if math.isinf(start) or (self.by_volume and self.pieces and not _flows(self.pieces[-1].last)):
            self.complain(index, -1, f'is "{given}", which never comes: nothing flows before it',
                          'give a time, such as "30 d"')
            return None
        if start <= self.last_start:
            self.complain(index, -1, f'is "{given}", not later than the feed before', "put them in order")
            return None
        if start < self.pieces[-1].start * (1.0 - SAME):
            self.complain(index, -1, f'is "{given}", while the feed before is still on its way',
                          "let its `over`, or the last row of its series, end before")
            return None
        if start <= self.pieces[-1].start * (1.0 + SAME):
            start = self.pieces.pop().start  # the feed before has just arrived
        return start

    def _span(self, index: int, number: int, node: Node, following: Node, piece: Piece) -> float | None:
        """How long a piece lasts, on the clock."""
        if not self._right_clock(index, number, following.after):
            return None
        first, last = piece.first, piece.last
        if (first.head_drop is None) != (last.head_drop is None):
            self.complain(index, number, "leads from a held flux to a held head or back",
                          "leave out over: such a change is instant")
            return None
        span = following.after.si - node.after.si
        if following.after.unit != "PV":
            return span
        if self.by_volume and _flows(first):
            if first.head_drop != last.head_drop or first.darcy_flux != last.darcy_flux:
                self.complain(index, number, "counts pore volumes while the flow changes under a held head",
                              "count time: the flux is not known before the run")
                return None
            return span
        if piece.mean_flux() <= 0.0:
            self.complain(index, number, f'is "{following.after}", which never comes: nothing flows',
                          'give a time, such as "30 d"')
            return None
        return span * self.pore_length / piece.mean_flux()

    def _right_clock(self, index: int, number: int, given: Amount) -> bool:
        if not self.by_volume or given.unit == "PV" or given.si == 0.0:
            return True
        self.complain(index, number, f'is "{given}", while other feeds count pore volumes: with a head_drop '
                      "the one does not tell the other before the run", "give all of them in one unit")
        return False
