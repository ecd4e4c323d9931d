"""How long a run would be in time, water and steps, over all pieces of its feed; nothing is run."""

from __future__ import annotations

import math
from dataclasses import dataclass, replace

import numpy as np

from gossan.coupling.drive import Drive, time_to_pass
from gossan.coupling.march import longest_step
from gossan.coupling.problem import Problem

# Gauss's two points: exact for cubics, and within a piece, where nothing jumps
POINTS = (0.5 - math.sqrt(3.0) / 6.0, 0.5 + math.sqrt(3.0) / 6.0)


@dataclass(frozen=True)
class Extent:
    """A run, as far as it can be foretold from its first pores."""

    seconds: float
    water: float  # m3 m-2 that enter
    steps: int  # that Courant's number, the spread by dispersion and what is to be recorded ask for


def extent_of(problem: Problem) -> Extent:
    """Follow the feed from piece to piece; pores and conductivity are taken to stay as they begin."""
    marks, by_volume = problem.feeds.begins.marks, problem.feeds.begins.by_volume
    seconds = water = 0.0
    steps = 0
    for piece, start in enumerate(marks):
        end = float(marks[piece + 1]) if piece + 1 < len(marks) else math.inf
        here = _Piece(problem, float(start), end)
        left = problem.end.marks[-1] - (water / problem.pore_volume if problem.end.by_volume else seconds)
        span = min(end - float(start), here.clock_until(left))
        lasts = span * problem.pore_volume / here.flux if by_volume else span
        brings = span * problem.pore_volume if by_volume else here.flux_until(span) * span
        recorded = _marks_between(problem, (seconds, water), (seconds + lasts, water + brings))
        seconds, water = seconds + lasts, water + brings
        steps += max(math.ceil(lasts * here.rate * (1.0 - 1e-9)), recorded, 1)
        if span < end - float(start):
            break
    return Extent(seconds, water, steps)


class _Piece:
    """A stretch of the feed's clock."""

    def __init__(self, problem: Problem, start: float, end: float):
        self.problem = problem
        span = end - start if end < math.inf else 0.0
        found = [_at(problem, start + share * span) for share in POINTS]
        self.flux = float(np.mean([flux for flux, _ in found]))
        self.rate = float(np.mean([rate for _, rate in found]))
        apart = (POINTS[1] - POINTS[0]) * span
        self.rise = (found[1][0] - found[0][0]) / apart if apart else 0.0  # per unit of the clock
        self.first = self.flux - 0.5 * self.rise * span

    def flux_until(self, span: float) -> float:
        """m s-1, the mean over the first stretch of the piece, on a clock of seconds."""
        return self.first + 0.5 * self.rise * span

    def clock_until(self, left: float) -> float:
        """How long, on the clock, until what is left of the run has gone by; left s or pore volumes."""
        by_volume = self.problem.feeds.begins.by_volume
        if by_volume == self.problem.end.by_volume:
            return left
        if by_volume:
            return left * self.flux / self.problem.pore_volume
        return time_to_pass(left * self.problem.pore_volume, (self.first, self.rise))


def _at(problem: Problem, now: float) -> tuple[float, float]:
    """Flux into the column, m s-1, and steps per second, when the clock of the feeds shows now."""
    state = problem.initial
    if problem.feeds.begins.by_volume:
        passed = state.water_passed.copy()
        passed[0] = now * problem.pore_volume, 0.0
        state = replace(state, water_passed=passed)
    else:
        state = replace(state, time=now)
    drive = Drive(problem, state)
    darcy_flux, _ = drive.flow(1.0, 0.0)
    return float(darcy_flux[0]), 1.0 / longest_step(problem, drive.faces(darcy_flux))[0]


def _marks_between(problem: Problem, first: tuple[float, float], last: tuple[float, float]) -> int:
    """Records that fall due between two moments, each s and m3 m-2 of water."""
    records, volume = problem.records, problem.pore_volume
    before, after = (records.passed(records.clock(s, water / volume)) for s, water in (first, last))
    return after - before
