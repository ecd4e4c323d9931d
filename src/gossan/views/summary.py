"""What a run comes to: limits, conductivity, head, capacity, ledger, effort."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from gossan.case.model import Case
from gossan.constants.potential import potential_of_pe
from gossan.constants.water import fluidity_ratio
from gossan.recording import case_of
from gossan.store.read import Result
from gossan.views.limits import Verdict, bounds_of, tracer_masses, verdicts

HALF = 0.5  # of its first conductivity: where practice thinks of renewing a bed


@dataclass(frozen=True, slots=True)
class Conductivity:
    """The least that any cell kept of its first conductivity; None where no conductivity was given."""

    least_fraction: float | None = None
    at: float | None = None  # m
    half_at: float | None = None  # s, when a cell first fell to half


@dataclass(frozen=True, slots=True)
class Stock:
    """A mineral of the start: how much of it there was and is, mol per m2 of cross-section."""

    mineral: str
    first: float
    left: float

    @property
    def used_percent(self) -> float:
        """Share that is gone; negative where it grew."""
        return 100.0 * (1.0 - self.left / self.first)


@dataclass(frozen=True)
class Summary:
    """What a result file comes to."""

    result: Result
    verdicts: list[Verdict]
    tracer_masses: dict[str, float]
    redox: dict[str, tuple[float, float]]  # Eh in V at the start and the end by port, where pe is known
    conductivity: Conductivity
    head_loss: tuple[float, float] | None  # m, first and last
    flux: tuple[float, float]  # m s-1 at the inlet, first and last
    least_porosity: tuple[float, float]  # and where, m
    stocks: list[Stock]
    ledger: dict[str, float]  # largest error by solute, "water" and "charge"
    splitting_error: float  # of all steps together, as squares add
    steps: int
    seconds: float  # of all its steps, those before a stop too
    time: float  # s, reached

    @property
    def exceeded(self) -> list[Verdict]:
        """The limits that were not kept."""
        return [verdict for verdict in self.verdicts if verdict.first_exceeded is not None]

    @property
    def ledger_error(self) -> float:
        """The largest of all errors."""
        return max(self.ledger.values(), default=0.0)


def summary_of(result: Result, case: Case | None = None) -> Summary:
    """Sum up a result; case is the one it came from, by default as the file holds it."""
    case = case or case_of(result)
    profiles, steps, ledger = result.profiles, result.steps, result.ledger
    width = np.diff(result.axes.face)
    porosity = profiles.porosity.values
    cell = int(porosity.min(axis=0).argmin())
    largest = np.abs(ledger.error.values).max(axis=0, initial=0.0)
    errors = dict(zip(result.axes.component, largest.tolist(), strict=True))
    for name in ("water", "charge"):
        errors[name] = float(np.abs(ledger[f"{name}_error"].values).max(initial=0.0))
    head = profiles.head.values
    loss = head[:, 0] - head[:, -1]
    flux = profiles.darcy_flux.values[:, 0]
    return Summary(
        result=result,
        verdicts=verdicts(result, bounds_of(case)),
        tracer_masses=tracer_masses(case),
        redox=_redox(result, case.temperature.si),
        conductivity=_conductivity(result),
        head_loss=(float(loss[0]), float(loss[-1])) if np.isfinite(loss[[0, -1]]).all() else None,
        flux=(float(flux[0]), float(flux[-1])),
        least_porosity=(float(porosity.min()), float(result.axes.x[cell])),
        stocks=_stocks(result, width),
        ledger=errors,
        splitting_error=float(np.sqrt(np.sum(steps.splitting_error.values**2))),
        steps=steps.count,
        seconds=float(steps.seconds.values.sum()),
        time=float(profiles.time.values[-1]),
    )


def _redox(result: Result, temperature: float) -> dict[str, tuple[float, float]]:
    found = {}
    for port in result.axes.ports:
        first, last = (float(result.ports[port].pe.values[i]) for i in (0, -1))
        if np.isfinite(first):
            found[port] = (potential_of_pe(first, temperature), potential_of_pe(last, temperature))
    return found


def _stocks(result: Result, width: np.ndarray) -> list[Stock]:
    first, last = (result.profiles.solid.values[i] @ width for i in (0, -1))
    return [
        Stock(name, float(a), float(b))
        for name, a, b in zip(result.axes.mineral, first, last, strict=True) if a > 0.0
    ]


def fractions_left(result: Result) -> np.ndarray:
    """(time, x): conductivity over that of the start, as if at one temperature; NaN where none was given.

    What clogs a bed is told apart from cold water, which comes and goes.
    """
    temperature = result.profiles.temperature.values
    warmth = {each: fluidity_ratio(each, float(temperature[0])) for each in set(temperature.tolist())}
    conductivity = result.profiles.conductivity.values
    left = conductivity / conductivity[0]
    return left / np.array([[warmth[each]] for each in temperature.tolist()])


def _conductivity(result: Result) -> Conductivity:
    left = fractions_left(result)
    if not np.isfinite(left).any():
        return Conductivity()
    frame, cell = np.unravel_index(int(np.nanargmin(left)), left.shape)
    return Conductivity(
        float(left[frame, cell]), float(result.axes.x[cell]),
        _first_below(result.profiles.time.values, np.nanmin(left, axis=1), HALF),
    )  # fmt: skip


def _first_below(time: np.ndarray, values: np.ndarray, level: float) -> float | None:
    """When values first fall to a level, on straight lines between frames."""
    below = np.flatnonzero(values <= level)
    if not len(below):
        return None
    i = int(below[0])
    if i == 0:
        return float(time[0])
    share = (values[i - 1] - level) / (values[i - 1] - values[i])
    return float(time[i - 1] + share * (time[i] - time[i - 1]))


def run_json(summary: Summary) -> dict[str, Any]:
    """The machine-readable result of `gossan run` (contract, section 3)."""
    result = summary.result
    ports: dict[str, dict[str, Any]] = {name: {} for name in result.axes.ports}
    for verdict in summary.verdicts:
        ports[verdict.port][verdict.quantity] = {
            "limit": verdict.limit,
            "first_exceeded_s": verdict.first_exceeded,
            "error_s": verdict.error,
            "grid_error_s": None,
            "last": verdict.last,
            "peak": verdict.peak,
        }
    found = summary.conductivity
    return {
        "status": result.status,
        "reason": result.reason or None,
        "ports": ports,
        "conductivity": {
            "least_fraction": found.least_fraction, "at_m": found.at, "half_at_s": found.half_at
        },
        "warnings": list(result.warnings),
        "ledger_error": summary.ledger_error,
        "splitting_error": summary.splitting_error,
        "steps": summary.steps,
        "seconds": summary.seconds,
        "file": str(result.path),
    }  # fmt: skip
