"""Checks of the column: layers and ports must fit together."""

from __future__ import annotations

import math
from collections.abc import Iterable

from gossan.base.amounts import Amount
from gossan.base.wrong import did_you_mean
from gossan.case.check_waters import check_tracer, mineral_named, tracer_names
from gossan.case.column_kinds import Growing
from gossan.case.draft import Draft
from gossan.case.lines import Path
from gossan.case.model import MOST_CELLS, Layer
from gossan.constants.entries import Table

ROUND_OFF = 1e-9  # lengths and shares that differ by less than this are the same
MOST_GROWTH = 1.5  # of a cell's length over its neighbour's, within a layer that grows


def check_layers(draft: Draft, table: Table) -> None:
    """Names, waters, cells, solids, conductivity and clogging of every layer."""
    layers = draft.case.layers or ()
    _check_names_once(draft, "layers", layers)
    for index, layer in enumerate(layers):
        path: Path = ("layers", index)
        check_water_name(draft, layer.water, (*path, "water"))
        _check_cells(draft, layer, path)
        _check_solids(draft, table, layer, path)
        _check_conductivity(draft, path)
        _check_clogging(draft, layer, path)


def _check_conductivity(draft: Draft, path: Path) -> None:
    flow = draft.case.flow
    heads = [flow.head_drop, *(feed.head_drop for feed in flow.feed or ())] if flow else []
    if any(head is not None for head in heads) and "conductivity" not in draft.at(path):
        wrong = "is missing: with a head_drop every layer needs one"
        draft.fault((*path, "conductivity"), wrong, 'write conductivity = "25 m/d"')


def _check_clogging(draft: Draft, layer: Layer, path: Path) -> None:
    """The numbers that a law needs; those that it does not use are let be."""
    if layer.clogging is None or layer.clogging.law not in ("power", "threshold"):
        return
    law = layer.clogging.law
    path = (*path, "clogging")
    tubes = law == "threshold" and "pore_bodies" in draft.at(path)
    needed = {} if tubes else {"exponent": "3.0"}
    if law == "threshold":
        needed["critical_porosity"] = "0.05"
    if tubes and "exponent" in draft.at(path):
        wrong = "stands beside exponent: two laws for one layer"
        draft.fault((*path, "pore_bodies"), wrong, "keep one of the two")
    for name, example in needed.items():
        if name not in draft.at(path):
            draft.fault((*path, name), f'is missing: law = "{law}" needs it', f"write {name} = {example}")
    critical = layer.clogging.critical_porosity if law == "threshold" else None
    if critical is not None and layer.porosity is not None and critical >= layer.porosity:
        wrong = f"is {critical:g}, but the layer starts with a porosity of {layer.porosity:g}"
        draft.fault((*path, "critical_porosity"), wrong, "it must be less")


def _check_names_once(draft: Draft, what: str, entries: Iterable) -> None:
    seen: set[str] = set()
    for index, entry in enumerate(entries):
        if entry.name in seen:
            draft.fault((what, index, "name"), f'is "{entry.name}" a second time', "every name stands once")
        if entry.name is not None:
            seen.add(entry.name)


def check_water_name(draft: Draft, name: str | None, at: Path) -> None:
    waters = draft.at(("waters",))
    if name is not None and waters and name not in waters:
        draft.fault(at, f'is "{name}", but there is no [waters.{name}]', did_you_mean(name, waters))


def _check_cells(draft: Draft, layer: Layer, path: Path) -> None:
    given = [key for key in ("cells", "cell") if key in draft.at(path)]
    if not given:
        draft.fault((*path, "cells"), "is missing", 'write cells = 60, or cell = "2 cm"')
    elif len(given) == 2:
        draft.fault((*path, "cell"), "stands beside cells: the same fact twice", "keep one of the two")
    elif layer.cell is not None and layer.length is not None:
        _check_cell_lengths(draft, layer, (*path, "cell"))


def _check_cell_lengths(draft: Draft, layer: Layer, at: Path) -> None:
    assert layer.cell is not None
    cells = (layer.cell.first, layer.cell.last) if isinstance(layer.cell, Growing) else (layer.cell,)
    for cell in cells:
        if cell.si > layer.length.si * (1 + ROUND_OFF):
            wrong = f'is "{cell}", longer than the layer ("{layer.length}")'
            draft.fault(at, wrong, f'at most "{layer.length}"')
            return
        if layer.length.si / cell.si > MOST_CELLS:
            wrong = f'is "{cell}", {layer.length.si / cell.si:.3g} cells in "{layer.length}"'
            draft.fault(at, wrong, f"at most {MOST_CELLS} cells are possible")
            return
    count, growth = layer.mesh
    if max(growth, 1.0 / growth) > MOST_GROWTH * (1 + ROUND_OFF):
        wrong = f'goes from "{cells[0]}" to "{cells[-1]}" in {count} cells, by a factor of {growth:.3g} each'
        draft.fault(at, wrong, f"at most {MOST_GROWTH:g}, or profiles lose their accuracy: bring them closer")


def _check_solids(draft: Draft, table: Table, layer: Layer, path: Path) -> None:
    """Minerals of a layer: known, once each, no more than the solid that is there."""
    names: dict[str, str] = {}
    for key in layer.minerals or {}:
        at = (*path, "minerals", key)
        name = mineral_named(draft, table, key, at)
        if name in names:
            draft.fault(at, f'is {name} a second time, after "{names[name]}"', "keep one of the two")
        if name:
            names[name] = key
    given = [solid.amount for solid in (layer.minerals or {}).values() if solid]
    of_mass = math.fsum(each.si for each in given if each.unit == "kg/kg")
    of_bulk = math.fsum(each.si for each in given if each.unit == "m3/m3")
    if of_mass > 1 + ROUND_OFF:
        wrong = f"add up to {100 * of_mass:.4g} wt% of the dry solid"
        draft.fault((*path, "minerals"), wrong, "at most 100 wt%")
    if layer.porosity is not None and of_bulk > (1 - layer.porosity) * (1 + ROUND_OFF):
        wrong = f"add up to {100 * of_bulk:.4g} vol% of the bulk, with a porosity of {layer.porosity:g}"
        draft.fault((*path, "minerals"), wrong, f"at most {100 * (1 - layer.porosity):.4g} vol% is solid")


def check_outlet(draft: Draft) -> None:
    """What the kind of outlet needs, and nothing that belongs to another kind."""
    flow, given = draft.case.flow, draft.at(("flow",))
    if flow is None:
        return
    needed = {
        "concentration": ("outlet_water", '"river"'),
        "gradient": ("outlet_gradient", '{bromide = "-5 mg/L/m"}'),
    }
    for kind, (key, example) in needed.items():
        if flow.outlet == kind and key not in given:
            draft.fault(("flow", key), f'is missing: outlet = "{kind}" needs it', f"write {key} = {example}")
        elif flow.outlet not in (kind, None) and key in given:
            cure = f'write outlet = "{kind}", or leave it out'
            draft.fault(("flow", key), f'goes with outlet = "{kind}"', cure)
    if "outlet_water" in given:
        check_water_name(draft, flow.outlet_water, ("flow", "outlet_water"))
    tracers = tracer_names(draft)
    for name, gradient in (flow.outlet_gradient or {}).items():
        at: Path = ("flow", "outlet_gradient", name)
        if name not in tracers:
            wrong = "is no tracer; a gradient of ions would not balance their charges"
            draft.fault(at, wrong, did_you_mean(name, tracers))
        elif gradient is not None:
            check_tracer(draft, name, gradient, at)


def check_ports(draft: Draft) -> None:
    """Port names stand once, ports lie within the column, `outlet` at its end."""
    ports = draft.case.ports or ()
    _check_names_once(draft, "ports", ports)
    lengths = [layer.length for layer in draft.case.layers or ()]
    column = math.fsum(length.si for length in lengths) if lengths and all(lengths) else None
    for index, port in enumerate(ports):
        if not isinstance(port.at, Amount) or column is None:
            continue
        at: Path = ("ports", index, "at")
        if port.at.si > column * (1 + ROUND_OFF):
            wrong = f'is "{port.at}", beyond the column of {column:.6g} m'
            draft.fault(at, wrong, f'at most "{column:.6g} m"')
        elif port.name == "outlet" and port.at.si < column * (1 - ROUND_OFF):
            wrong = f'is "{port.at}", but the port outlet is the end of the column at {column:.6g} m'
            draft.fault(at, wrong, "call it something else")
