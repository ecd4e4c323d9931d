"""Limits at the ports held against what the ports recorded."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gossan.base.amounts import Amount
from gossan.case.model import Case
from gossan.case.quantities import Range
from gossan.constants.names import component_named, moles
from gossan.constants.water import density
from gossan.store.read import Group, Result

PH = "pH"


@dataclass(frozen=True, slots=True)
class Bound:
    """What a case allows at a port: mol m-3 of a solute at most, or a pH from low to high."""

    port: str
    quantity: str  # a component, a tracer or "pH"
    low: float  # -inf for a solute
    high: float
    text: str  # as the case says it


@dataclass(frozen=True, slots=True)
class Verdict:
    """A quantity at a port over the whole run, and whether it kept its limit.

    Solutes in mol m-3, flux-averaged; None where there is nothing to say.
    """

    port: str
    quantity: str
    bound: Bound | None
    first_exceeded: float | None = None  # s
    pore_volumes: float | None = None  # when first exceeded
    error: float | None = None  # s, of first_exceeded
    last: float | None = None
    peak: float | None = None  # the largest; of a pH the farthest beyond its range or nearest to an end

    @property
    def limit(self) -> float | tuple[float, float] | None:
        """The highest amount (mol m-3), or the range of pH."""
        if self.bound is None:
            return None
        return (self.bound.low, self.bound.high) if self.quantity == PH else self.bound.high


def tracer_masses(case: Case) -> dict[str, float]:
    """kg/mol of the tracers whose molar mass a case gives."""
    return {name: tracer.molar_mass.si for name, tracer in case.tracers.items() if tracer.molar_mass}


def bounds_of(case: Case) -> list[Bound]:
    """The limits of a case, in the order in which it gives them."""
    components = case.table.components
    masses, tracers = tracer_masses(case), case.tracer_names
    water = density(case.temperature.si)
    found = []
    for port, limits in case.limits.items():
        for key, said in limits.items():
            if isinstance(said, Range):
                found.append(Bound(port, PH, said.low, said.high, f"{said.low:g} to {said.high:g}"))
                continue
            if key in tracers:
                name, amount = key, said.si / (masses[key] if said.unit.startswith("kg") else 1.0)
            else:
                named = component_named(key, components)
                name, amount = named.component, moles(said, named)
            found.append(Bound(port, name, -np.inf, amount * _per_volume(said, water), said.text))
    return found


def _per_volume(said: Amount, water_density: float) -> float:
    return water_density if said.unit.endswith("/kg") else 1.0


def verdicts(result: Result, bounds: list[Bound]) -> list[Verdict]:
    """Every solute and the pH at every port, those with a limit first within each port."""
    steps = result.steps
    estimates = np.sqrt(np.cumsum(steps.splitting_error.values**2)), steps.time.values
    found = []
    for name, port in result.ports.items():
        own = [bound for bound in bounds if bound.port == name]
        held = {bound.quantity: bound for bound in own}
        solutes = [*result.axes.component, PH]
        order = [*held, *(solute for solute in solutes if solute not in held)]
        found += [_verdict(name, port, quantity, held.get(quantity), estimates) for quantity in order]
    return found


def _verdict(
    name: str,
    port: Group,
    quantity: str,
    bound: Bound | None,
    estimates: tuple[np.ndarray, np.ndarray],
) -> Verdict:
    values = _values(port, quantity)
    known = np.isfinite(values)
    if not known.any():
        return Verdict(name, quantity, bound)
    time, values, volumes = port.time.values[known], values[known], port.pore_volumes.values[known]
    peak: float | None = float(values.max())
    if quantity == PH:
        peak = _farthest(values, bound) if bound else None
    when = error = passed = None
    if bound:
        crossing = first_outside(time, values, bound.low, bound.high)
        if crossing:
            when, half_interval = crossing
            passed = float(np.interp(when, time, volumes))
            error = half_interval + _splitting_time(when, passed, *estimates)
    return Verdict(name, quantity, bound, when, passed, error, float(values[-1]), peak)


def _values(port: Group, quantity: str) -> np.ndarray:
    if quantity == PH:
        return port.pH.values
    solutes = [str(name) for name in port.component.values]
    if quantity not in solutes:  # a limit for what the case does not hold
        return np.full(port.count, np.nan)
    return port.dissolved.values[:, solutes.index(quantity)]


def _farthest(values: np.ndarray, bound: Bound) -> float:
    return float(values[np.argmax(np.maximum(bound.low - values, values - bound.high))])


def first_outside(
    time: np.ndarray, values: np.ndarray, low: float, high: float
) -> tuple[float, float] | None:
    """When values first leave [low, high], and half the interval between records there (equations.md, 46).

    time    (record,) s, rising
    Returns None where they never do; (time of the first record, 0) where they start outside

    >>> first_outside(np.array([0.0, 10.0, 20.0]), np.array([0.0, 1.0, 3.0]), -np.inf, 2.0)
    (15.0, 5.0)
    """
    outside = np.flatnonzero((values < low) | (values > high))
    if not len(outside):
        return None
    i = int(outside[0])
    if i == 0:
        return float(time[0]), 0.0
    edge = high if values[i] > high else low
    share = (edge - values[i - 1]) / (values[i] - values[i - 1])
    interval = float(time[i] - time[i - 1])
    return float(time[i - 1] + share * interval), 0.5 * interval


def _splitting_time(when: float, pore_volumes: float, together: np.ndarray, ends: np.ndarray) -> float:
    """The time that the error of stepping stands for, s.

    A step's estimate is relative to at least the feed of one pore volume; those of all steps up to then are
    added as squares, errors of different steps being independent, and stand for that many pore volumes of
    feed misplaced, each of which takes when / pore_volumes. Measured on the fronts of two metals in 25 cells:
    20 times and more what the crossing really moves when steps become finer, since the estimates are those
    of a scheme one order lower and the closed ledger holds a front in place.
    """
    if not len(ends) or pore_volumes <= 0.0:
        return 0.0
    index = min(int(np.searchsorted(ends, when)), len(ends) - 1)
    return float(together[index]) * when / pore_volumes
