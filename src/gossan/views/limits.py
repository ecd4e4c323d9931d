"""Limits at the ports held against what the ports recorded."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np

from gossan.case.bounds import PH, Bound
from gossan.store.read import Crossing, Group, Result
from gossan.views.crossing import closer, error_of_steps, first_outside


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
    error: float | None = None  # s, of first_exceeded by steps and records; None where it is not known
    grid_error: float | None = None  # s, of first_exceeded by the cells; None where it was not looked for
    last: float | None = None
    peak: float | None = None  # the largest; of a pH the farthest beyond its range or nearest to an end

    @property
    def limit(self) -> float | tuple[float, float] | None:
        """The highest amount (mol m-3), or the range of pH."""
        if self.bound is None:
            return None
        return (self.bound.low, self.bound.high) if self.quantity == PH else self.bound.high


def verdicts(result: Result, bounds: list[Bound]) -> list[Verdict]:
    """Every solute and the pH at every port, those with a limit first within each port."""
    found = []
    for name, port in result.ports.items():
        own = [bound for bound in bounds if bound.port == name]
        held = {bound.quantity: bound for bound in own}
        solutes = [*result.axes.component, PH]
        order = [*held, *(solute for solute in solutes if solute not in held)]
        crossings = result.crossings.get(name, {})
        own_verdicts = [_verdict(name, port, quantity, held.get(quantity), crossings) for quantity in order]
        if result.coarse is not None:
            own_verdicts = [_checked(verdict, result.coarse.get(name, {})) for verdict in own_verdicts]
        found += own_verdicts
    return found


def _verdict(
    name: str, port: Group, quantity: str, bound: Bound | None, crossings: dict[str, Crossing]
) -> Verdict:
    values, errors = _values(port, quantity)
    known = np.isfinite(values)
    if not known.any():
        return Verdict(name, quantity, bound)
    time, values, volumes = port.time.values[known], values[known], port.pore_volumes.values[known]
    peak: float | None = float(values.max())
    if quantity == PH:
        peak = _farthest(values, bound) if bound else None
    when = error = passed = None
    if bound:
        found = first_outside(time, values, bound.low, bound.high)
        from_the_start = found is not None and found[0] == time[0]
        if quantity in crossings and not from_the_start:
            found = closer(crossings[quantity])
            errors = None
        if found:
            when, error = found
            if errors is not None:
                error += error_of_steps(time, values, errors[known], bound.low, bound.high, when)
            passed = float(np.interp(when, time, volumes))
            error = error if np.isfinite(error) else None
    return Verdict(name, quantity, bound, when, passed, error, last=float(values[-1]), peak=peak)


def _checked(verdict: Verdict, coarse: dict[str, float]) -> Verdict:
    """A verdict with the error of its grid: the whole difference, as if it only fell by half with the cells.

    It falls faster where nothing is sharp, and about like that at a front of minerals (docs/decisions.md).
    """
    if not verdict.first_exceeded or verdict.quantity not in coarse:
        return verdict
    return replace(verdict, grid_error=abs(coarse[verdict.quantity] - verdict.first_exceeded))


def _values(port: Group, quantity: str) -> tuple[np.ndarray, np.ndarray | None]:
    """(record,) what a port recorded, and the errors carried with it, where there are any."""
    carried = "pH_error" in port
    if quantity == PH:
        return port.pH.values, port.pH_error.values if carried else None
    solutes = [str(name) for name in port.component.values]
    if quantity not in solutes:  # a limit for what the case does not hold
        return np.full(port.count, np.nan), None
    k = solutes.index(quantity)
    return port.dissolved.values[:, k], port.dissolved_error.values[:, k] if carried else None


def _farthest(values: np.ndarray, bound: Bound) -> float:
    return float(values[np.argmax(np.maximum(bound.low - values, values - bound.high))])
