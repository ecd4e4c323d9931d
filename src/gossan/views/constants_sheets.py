"""Constants as they are shown: a list of all, or all that is known of one."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

from gossan.constants.entries import Alternative, Component, Constant, Gas, Mineral, Species, Table
from gossan.constants.temperature import KELVIN, log10_k_at
from gossan.views.sheet import Sheet

Entry = Component | Species | Mineral | Gas
SHOWN_AT = (5.0, 15.0, 25.0, 35.0)  # degC


def kind_of(entry: Entry) -> str:
    """What an entry is, in a word."""
    return type(entry).__name__.lower()


def list_sheet(table: Table) -> Sheet:
    """All entries in one list."""
    rows = []
    for group in (table.components, table.species, table.minerals, table.gases):
        for entry in group.values():
            constant = constant_of(entry)
            rows.append((
                kind_of(entry), entry.name, f"{constant.value:.3f}" if constant else "-", _sd(constant),
                _status(constant), "may form" if isinstance(entry, Mineral) and entry.forms else "",
            ))  # fmt: skip
    heads = ("kind", "name", "log10 K", "sd", "status", "")
    note = (
        "25 degC; species forming from components, minerals and gases dissolving to them; "
        "may form: on the default list"
    )
    return Sheet("Constants", heads, tuple(rows), left=2, note=note)


def entry_sheets(entry: Entry, table: Table) -> Iterator[Sheet]:
    """All that is known of one entry."""
    yield Sheet(f"{entry.name}, {kind_of(entry)}", ("", ""), tuple(_facts(entry, table)), left=2, wraps=True)
    if constant_of(entry):
        heads = tuple(f"{celsius:g} degC" for celsius in SHOWN_AT)
        rows = (tuple(f"{log10_k_at(entry, celsius + KELVIN):.3f}" for celsius in SHOWN_AT),)
        yield Sheet("log10 K by temperature", heads, rows, left=0, note=_reading(entry))
    if entry.alternatives:
        others = tuple(_alternative(other, table) for other in entry.alternatives)
        yield Sheet("Published values not chosen", ("value", "status", "source"), others, 0, True)


def _alternative(other: Alternative, table: Table) -> tuple[str, str, str]:
    source = table.sources[other.source]
    return f"{other.value:g}", _seen(other), f"{other.note}; {source}" if other.note else source


def constant_of(entry: Entry) -> Constant | None:
    """The log10 K of an entry; None for the first ion of an element."""
    return entry.half_log10_k if isinstance(entry, Component) else entry.log10_k


def _reading(entry: Entry) -> str:
    if isinstance(entry, Species):
        return "of its forming from components"
    return "of its half reaction" if isinstance(entry, Component) else "of its dissolving to components"


def _facts(entry: Entry, table: Table) -> Iterator[tuple[str, str]]:
    reaction = entry.half_reaction if isinstance(entry, Component) else entry.reaction
    if reaction:
        yield "reaction", reaction.text
    if isinstance(entry, Mineral):
        yield "formula", entry.formula
        if entry.also_called:
            yield "also called", ", ".join(entry.also_called)
        yield "default list", "may form" if entry.forms else "may only dissolve, unless a case names it"
    constant = constant_of(entry)
    printed = None if isinstance(entry, Component) else entry.published
    if constant:
        yield "log10 K, 25 degC", _with_sd(constant) + (" (to components)" if printed else "")
        if printed:
            yield "as published", f"{_with_sd(printed)} for the reaction above"
        yield "source", table.sources[constant.source]
        yield "status", _status(constant)
        if constant.note:
            yield "of the constant", constant.note
        yield "temperature", _temperature(entry, table)
    for what, found, factor, unit in _measures(entry):
        yield what, f"{found.value * factor:.4g} {unit}; {table.sources[found.source]}; {_status(found)}"
    if entry.note:
        yield "note", entry.note


def _measures(entry: Entry) -> Iterator[tuple[str, Constant, float, str]]:
    if isinstance(entry, Mineral):
        yield "molar volume", entry.molar_volume, 1e6, "cm3/mol"
    elif isinstance(entry, (Component, Species)):
        if entry.ion_size:
            yield "ion size", entry.ion_size, 1e9, "nm"
        if entry.diffusion:
            yield "diffusion, 25 degC", entry.diffusion, 1.0, "m2/s"


def _temperature(entry: Entry, table: Table) -> str:
    enthalpy = entry.half_enthalpy if isinstance(entry, Component) else entry.enthalpy
    if not enthalpy:
        return "no enthalpy is known: the value at 25 degC is used throughout"
    said = f"enthalpy {enthalpy.value / 1e3:.4g} kJ/mol of the reaction above"
    return f"{said}; {table.sources[enthalpy.source]}; {_status(enthalpy)}"


def _with_sd(constant: Constant) -> str:
    return f"{constant.value:.3f}" + (f" ± {constant.sd:g}" if constant.sd is not None else "")


def _sd(constant: Constant | None) -> str:
    return f"{constant.sd:g}" if constant and constant.sd is not None else "-"


def _status(constant: Constant | None) -> str:
    return "-" if constant is None else _seen(constant)


def _seen(known: Constant | Alternative) -> str:
    return "from memory" if known.from_memory else "seen"


def entry_json(entry: Entry, table: Table) -> dict[str, Any]:
    """One entry as data: log10 K at 25 degC and by temperature (K), uncertainty, source, status."""
    constant = constant_of(entry)
    reaction = entry.half_reaction if isinstance(entry, Component) else entry.reaction
    return {
        "kind": kind_of(entry),
        "name": entry.name,
        "reaction": reaction.text if reaction else None,
        "log10_k": constant.value if constant else None,
        "sd": constant.sd if constant else None,
        "source": table.sources[constant.source] if constant else None,
        "status": _seen(constant) if constant else None,
        "log10_k_at_K": {
            f"{celsius + KELVIN:g}": log10_k_at(entry, celsius + KELVIN) for celsius in SHOWN_AT
        } if constant else {},
        "molar_volume_m3_mol": entry.molar_volume.value if isinstance(entry, Mineral) else None,
        "forms": entry.forms if isinstance(entry, Mineral) else None,
        "note": entry.note,
        "alternatives": [
            {"value": other.value, "source": table.sources[other.source], "status": _seen(other),
             "note": other.note}
            for other in entry.alternatives
        ],
    }  # fmt: skip
