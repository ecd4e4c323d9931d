"""What a run comes to: limits, conductivity, head, capacity, ledger, effort."""

from __future__ import annotations

from dataclasses import dataclass
from typing import Any

import numpy as np

from gossan.base.notation import molar_mass
from gossan.case.bounds import bounds_of, tracer_masses
from gossan.case.model import Case
from gossan.constants.potential import potential_of_pe
from gossan.recording import case_of
from gossan.store.read import Result
from gossan.views.bed import Bed, Bottleneck, HeadLoss, bed_of, bottleneck_of, head_loss_of
from gossan.views.bed_json import conductivity_json, head_loss_json
from gossan.views.limits import Verdict, verdicts
from gossan.views.scales import round_times


@dataclass(frozen=True, slots=True)
class Stock:
    """A mineral of the start: how much of it there was and is, mol per m2 of cross-section."""

    mineral: str
    first: float
    left: float
    molar_mass: float  # kg/mol

    @property
    def used(self) -> float:
        """mol per m2 that are gone; negative where it grew."""
        return self.first - self.left

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
    bed: Bed
    bottleneck: Bottleneck | None  # None where no conductivity is given
    head_loss: HeadLoss | None  # at a few round times, the start and the end
    flux: tuple[float, float]  # m s-1 at the inlet, first and last
    least_porosity: tuple[float, float]  # and where, m
    stocks: list[Stock]
    ledger: dict[str, float]  # largest error by solute, "water" and "charge"
    splitting_error: float | None  # the largest ever carried, relative; None where none was
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
    time, bed = float(profiles.time.values[-1]), bed_of(result, case)
    flux = profiles.darcy_flux.values[:, 0]
    return Summary(
        result=result,
        verdicts=verdicts(result, bounds_of(case)),
        tracer_masses=tracer_masses(case),
        redox=_redox(result, case.temperature.si),
        bed=bed,
        bottleneck=bottleneck_of(result, case, bed),
        head_loss=head_loss_of(result, round_times(time)),
        flux=(float(flux[0]), float(flux[-1])),
        least_porosity=(float(porosity.min()), float(result.axes.x[cell])),
        stocks=_stocks(result, case, width),
        ledger=errors,
        splitting_error=_carried(result),
        steps=steps.count,
        seconds=float(steps.seconds.values.sum()),
        time=time,
    )


def _carried(result: Result) -> float | None:
    if "splitting_error" not in result.ledger:
        return None
    return float(result.ledger.splitting_error.values.max(initial=0.0))


def _redox(result: Result, temperature: float) -> dict[str, tuple[float, float]]:
    found = {}
    for port in result.axes.ports:
        first, last = (float(result.ports[port].pe.values[i]) for i in (0, -1))
        if np.isfinite(first):
            found[port] = (potential_of_pe(first, temperature), potential_of_pe(last, temperature))
    return found


def _stocks(result: Result, case: Case, width: np.ndarray) -> list[Stock]:
    first, last = (result.profiles.solid.values[i] @ width for i in (0, -1))
    return [
        Stock(name, float(a), float(b), _mass(name, case))
        for name, a, b in zip(result.axes.mineral, first, last, strict=True) if a > 0.0
    ]


def _mass(mineral: str, case: Case) -> float:
    """kg/mol; a gas of a limited amount stands among the minerals."""
    known = case.table.minerals
    return known[mineral].molar_mass if mineral in known else molar_mass(mineral.removesuffix("(g)"))


def run_json(summary: Summary) -> dict[str, Any]:
    """The machine-readable result of `gossan run` (contract, section 3)."""
    result = summary.result
    ports: dict[str, dict[str, Any]] = {name: {} for name in result.axes.ports}
    for verdict in summary.verdicts:
        ports[verdict.port][verdict.quantity] = {
            "limit": verdict.limit,
            "first_exceeded_s": verdict.first_exceeded,
            "error_s": verdict.error,
            "grid_error_s": verdict.grid_error,
            "last": verdict.last,
            "peak": verdict.peak,
        }
    return {
        "status": result.status,
        "reason": result.reason or None,
        "ports": ports,
        "conductivity": conductivity_json(summary.bed, summary.bottleneck),
        "head_loss": head_loss_json(summary.head_loss),
        "capacity": {
            stock.mineral: {
                "start_mol_m2": stock.first, "left_mol_m2": stock.left, "used_mol_m2": stock.used,
                "used_kg_m2": stock.used * stock.molar_mass, "used_percent": stock.used_percent,
            }
            for stock in summary.stocks
        },
        "warnings": list(result.warnings),
        "ledger_error": summary.ledger_error,
        "splitting_error": summary.splitting_error,
        "steps": summary.steps,
        "seconds": summary.seconds,
        "file": str(result.path),
    }  # fmt: skip
