"""Results as rows of CSV, with heads and units from the layout of the result file."""

from __future__ import annotations

import math
from collections.abc import Callable, Iterator
from typing import Any

from gossan.case.bounds import bounds_of
from gossan.recording import case_of, certified
from gossan.store.layout import variable, variables
from gossan.store.read import Group, Result
from gossan.views.bed import bed_of, head_loss_of
from gossan.views.limits import verdicts

Row = list[Any]


def port_rows(result: Result) -> Iterator[Row]:
    """Every record of every port, one after another; the first row is the head."""
    for index, (name, port) in enumerate(result.ports.items()):
        columns = list(_columns(port, f"ports/{name}", "time"))
        if index == 0:
            yield ["port", variable("ports/NAME", "x").header, *(head for head, _ in columns)]
        x = result.axes.ports[name]
        for record in range(port.count):
            yield [name, x, *(values[record] for _, values in columns)]


def profile_rows(result: Result) -> Iterator[Row]:
    """Every cell of every frame, one row each: time, x, layer, then all that is known there."""
    profiles = result.profiles
    heads = [variable("profiles", name).header for name in ("time", "x", "layer")]
    columns = [pair for row in variables("profiles")
               if row.kind == "frame" and row.dims[-1] == "x" and row.name in profiles
               for pair in _split(profiles, row)]
    yield [*heads, *(head for head, _ in columns)]
    for frame, time in enumerate(profiles.time.values):
        for cell, (x, layer) in enumerate(zip(result.axes.x, result.axes.layer, strict=True)):
            yield [time, x, layer, *(values[frame, cell] for _, values in columns)]


def ledger_rows(result: Result) -> Iterator[Row]:
    """The ledger at every record of the ports."""
    columns = list(_columns(result.ledger, "ledger", "time"))
    yield [head for head, _ in columns]
    for record in range(result.ledger.count):
        yield [values[record] for _, values in columns]


def limit_rows(result: Result) -> Iterator[Row]:
    """Every quantity with a limit, and when it was first exceeded."""
    yield ["port", "quantity", "unit", "low limit", "high limit", "first exceeded (s)",
           "first exceeded (pore volumes)", "error (s)", "last", "peak"]
    for verdict in verdicts(result, bounds_of(case_of(result))):
        if verdict.bound:
            unit = "1" if verdict.quantity == "pH" else variable("ports/NAME", "dissolved").unit
            yield [verdict.port, verdict.quantity, unit, verdict.bound.low, verdict.bound.high,
                   verdict.first_exceeded, verdict.pore_volumes, verdict.error, verdict.last, verdict.peak]


def bed_rows(result: Result) -> Iterator[Row]:
    """Loss of head and what is left of the conductivity at every frame, as shares of that at the start."""
    bed, heads = bed_of(result, case_of(result)), head_loss_of(result)
    columns: list[tuple[str, Any]] = [(variable("profiles", "time").header, bed.time)]
    if heads:
        columns += [(f"head loss of {name} (m)", heads.loss[:, i]) for i, name in enumerate(heads.layers)]
        columns.append(("head loss of the column (m)", heads.whole))
    if bed.known:
        columns.append(("left of the least cell", bed.least_cell.through_time))
    if bed.in_series:
        columns.append(("left of the column", bed.column.through_time))
        columns += [(f"left by {name}", left.through_time) for name, left in bed.band.items()]
    yield [head for head, _ in columns]
    for frame in range(len(bed.time)):
        yield [values[frame] for _, values in columns]


def certificate_rows(result: Result) -> Iterator[Row]:
    """Every cell's certificate at the last checkpoint: residuals in doubled precision and errors of ln a."""
    for index, found in enumerate(certified(result)):
        judged = found.certificate
        system = judged.system
        named = system.species[: len(judged.ln_activity)]
        if index == 0:
            yield [variable("profiles", "time").header, variable("profiles", "x").header, "layer", "water",
                   "ionic_strength", "minerals present", "minerals absent", "minerals full", "diluted since",
                   *(f"balance {name}" for name in system.components),
                   *(f"ln_activity {name}" for name in named)]
        for i, cell in enumerate(found.cells):
            yield [found.time, result.axes.x[cell], result.axes.layer[cell], found.water,
                   judged.ionic_strength[i], judged.present[i], judged.absent[i], judged.full[i],
                   found.diluted[i], *judged.balance[:, i], *judged.ln_activity[:, i]]


WHAT: dict[str, Callable[[Result], Iterator[Row]]] = {
    "ports": port_rows, "profiles": profile_rows, "ledger": ledger_rows, "limits": limit_rows,
    "bed": bed_rows,
    "certificate": certificate_rows,
}  # fmt: skip


def cell_text(value: Any) -> str:
    """A cell of CSV: the shortest text that reads back as the same number, nothing for what is not known.

    >>> cell_text(0.1), cell_text(float("nan"))
    ('0.1', '')
    """
    if value is None or isinstance(value, str):
        return value or ""
    number = float(value)
    return repr(number) if math.isfinite(number) else ""


def _columns(group: Group, name: str, along: str) -> Iterator[tuple[str, Any]]:
    """Heads and values of all that runs along one axis, time itself first."""
    for row in variables(name):
        if row.dims and row.dims[0] == along:
            yield from _split(group, row)


def _split(group: Group, row: Any) -> Iterator[tuple[str, Any]]:
    """A variable as columns, one per name where names stand along an axis of it."""
    field = group[row.name]
    names = next((dim for dim in row.dims if dim in ("component", "mineral", "species")), None)
    if names is None:
        yield row.header, field.values
        return
    at = row.dims.index(names)
    unit = row.header.removeprefix(row.name)
    for index, name in enumerate(field.coords[names]):
        yield f"{row.name} {name}{unit}", field.values.take(index, axis=at)
