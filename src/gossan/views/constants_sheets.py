"""Constants as they are shown: a list of all, or all that is known of one."""

from __future__ import annotations

import re
from collections.abc import Iterable, Iterator
from typing import Any

from gossan.constants.couples import PROTON
from gossan.constants.entries import (
    Alternative,
    Component,
    Constant,
    Gas,
    Interaction,
    Mineral,
    Species,
    Table,
)
from gossan.constants.temperature import KELVIN, REFERENCE, log10_k_at
from gossan.views.sheet import Sheet

Entry = Component | Species | Mineral | Gas
SHOWN_AT = (5.0, 15.0, 25.0, 35.0)  # degC


def kind_of(entry: Entry | Interaction) -> str:
    """What an entry is, in a word."""
    return type(entry).__name__.lower()


def list_sheets(table: Table) -> Iterator[Sheet]:
    """All entries in one list, and all interactions of ions in another."""
    yield _list(table)
    yield interactions_sheet(table.interactions.values(), table)


def _list(table: Table) -> Sheet:
    rows = []
    for group in (table.components, table.species, table.minerals, table.gases):
        for entry in group.values():
            constant = constant_of(entry)
            rows.append((
                kind_of(entry), entry.name, f"{constant.value:.3f}" if constant else "-", _sd(constant),
                _status(constant), _range(valid_of(entry)),
                "may form" if isinstance(entry, Mineral) and entry.forms else "",
            ))  # fmt: skip
    heads = ("kind", "name", "log10 K", "sd", "status", "degC", "")
    note = (
        "log10 K at 25 degC; species forming from components, minerals and gases dissolving to them; "
        "degC: where it is known; "
        "may form: on the default list"
    )
    return Sheet("Constants", heads, tuple(rows), left=2, note=note)


def interactions_sheet(interactions: Iterable[Interaction], table: Table) -> Sheet:
    """Interaction coefficients of ions."""
    rows = tuple(
        (each.name, f"{each.coefficient.value:g}", _sd(each.coefficient), _seen(each.coefficient),
         _with_note(each.coefficient.note, each.coefficient.source, table))
        for each in interactions
    )  # fmt: skip
    heads = ("ions", "kg/mol", "sd", "status", "source")
    return Sheet("Interactions of ions", heads, rows, wraps=True, note="25 degC, for activity = \"sit\"")


def entry_sheets(
    entry: Entry | Interaction, table: Table, temperature: float | None = None
) -> Iterator[Sheet]:
    """All that is known of one entry; its log10 K also at a temperature (K) that is asked for."""
    if isinstance(entry, Interaction):
        yield interactions_sheet([entry], table)
        return
    yield Sheet(f"{entry.name}, {kind_of(entry)}", ("", ""), tuple(_facts(entry, table)), left=2, wraps=True)
    if constant_of(entry):
        shown = sorted({*(celsius + KELVIN for celsius in SHOWN_AT), temperature or REFERENCE})
        heads = tuple(f"{kelvin - KELVIN:.4g} degC" for kelvin in shown)
        rows = (tuple(f"{log10_k_at(entry, kelvin):.3f}" for kelvin in shown),)
        yield Sheet("log10 K by temperature", heads, rows, left=0, note=_reading(entry))
    if entry.alternatives:
        others = tuple(_alternative(other, table) for other in entry.alternatives)
        yield Sheet("Published values not chosen", ("value", "status", "source"), others, 0, True)
    if isinstance(entry, Component):
        yield from _holding(entry, table)
    paired = [each for pair, each in table.interactions.items() if entry.name in pair]
    if paired and isinstance(entry, (Component, Species)):
        yield interactions_sheet(paired, table)


def _holding(component: Component, table: Table) -> Iterator[Sheet]:
    """What else the table has of a component."""
    rows = []
    for kind, group in (("species", table.species), ("minerals", table.minerals), ("gases", table.gases)):
        names = [entry.name for entry in group.values() if component.name in entry.reaction.components]
        if names:
            rows.append((kind, ", ".join(names)))
    if rows and component.name != PROTON:
        yield Sheet(f"Made with {component.name}", ("", ""), tuple(rows), left=1, wraps=True)


def _alternative(other: Alternative, table: Table) -> tuple[str, str, str]:
    return f"{other.value:g}", _seen(other), _with_note(other.note, other.source, table)


def constant_of(entry: Entry) -> Constant | None:
    """The log10 K of an entry; None for the first ion of an element."""
    return entry.half_log10_k if isinstance(entry, Component) else entry.log10_k


def valid_of(entry: Entry) -> tuple[float, float] | None:
    """From which to which temperature (K) the constant of an entry is known; None for a first ion."""
    return entry.half_valid if isinstance(entry, Component) else entry.valid


def _range(valid: tuple[float, float] | None) -> str:
    return f"{valid[0] - KELVIN:.4g} to {valid[1] - KELVIN:.4g}" if valid else "-"


def _cited(note: str, table: Table) -> str:
    """A note in which keys of sources have become authors and years."""

    def author(key: re.Match[str]) -> str:
        source = table.sources.get(key[0], "")
        return source.partition(")")[0] + ")" if re.match(r"[^(]*\(\d{4}\)", source) else key[0]

    return re.sub(r"\b[a-z_]+\d{4}[a-z]?\b", author, note)


def _with_note(note: str, key: str, table: Table) -> str:
    source = table.sources[key]
    return f"{_cited(note, table)}; {source}" if note else source


def _reading(entry: Entry) -> str:
    if isinstance(entry, Species):
        return "of its forming from components"
    return "of its half reaction" if isinstance(entry, Component) else "of its dissolving to components"


def _facts(entry: Entry, table: Table) -> Iterator[tuple[str, str]]:
    reaction = entry.half_reaction if isinstance(entry, Component) else entry.reaction
    if reaction:
        yield "reaction", reaction.text
    if isinstance(entry, Component) and entry.couple:
        yield "couple", entry.couple
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
            yield "of the constant", _cited(constant.note, table)
        yield "temperature", _temperature(entry, table)
        yield "valid", f"{_range(valid_of(entry))} degC"
    for what, found, factor, unit in _measures(entry):
        yield what, f"{found.value * factor:.4g} {unit}; {table.sources[found.source]}; {_status(found)}"
    if entry.note:
        yield "note", _cited(entry.note, table)


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
    fit = entry.half_fit if isinstance(entry, Component) else entry.fit
    if not enthalpy:
        return "no enthalpy is known of the reaction above: its value at 25 degC is used throughout"
    sd = f" ± {enthalpy.sd / 1e3:.2g}" if enthalpy.sd is not None else ""
    said = f"enthalpy {enthalpy.value / 1e3:.4g}{sd} kJ/mol of the reaction above; "
    said += f"{_with_note(enthalpy.note, enthalpy.source, table)}; {_status(enthalpy)}"
    curved = fit and (fit.linear or fit.log10 or fit.inverse_square)
    return f"{said}. The constant follows an equation; this is its slope at 25 degC" if curved else said


def _with_sd(constant: Constant) -> str:
    return f"{constant.value:.3f}" + (f" ± {constant.sd:g}" if constant.sd is not None else "")


def _sd(constant: Constant | None) -> str:
    return f"{constant.sd:g}" if constant and constant.sd is not None else "-"


def _status(constant: Constant | None) -> str:
    return "-" if constant is None else _seen(constant)


def _seen(known: Constant | Alternative) -> str:
    return "from memory" if known.from_memory else "seen"


def _interaction_json(interaction: Interaction, table: Table) -> dict[str, Any]:
    """One interaction coefficient as data, kg/mol at 25 degC."""
    found = interaction.coefficient
    return {
        "kind": kind_of(interaction),
        "name": interaction.name,
        "value_kg_mol": found.value,
        "sd": found.sd,
        "source": table.sources[found.source],
        "status": _seen(found),
        "note": found.note,
    }


def entry_json(
    entry: Entry | Interaction, table: Table, temperature: float | None = None
) -> dict[str, Any]:
    """One entry as data: log10 K at 25 degC and by temperature (K), uncertainty, source, status."""
    if isinstance(entry, Interaction):
        return _interaction_json(entry, table)
    constant, valid = constant_of(entry), valid_of(entry)
    shown = sorted({*(celsius + KELVIN for celsius in SHOWN_AT), temperature or REFERENCE})
    reaction = entry.half_reaction if isinstance(entry, Component) else entry.reaction
    return {
        "kind": kind_of(entry),
        "name": entry.name,
        "reaction": reaction.text if reaction else None,
        "couple": entry.couple or None if isinstance(entry, Component) else None,
        "log10_k": constant.value if constant else None,
        "sd": constant.sd if constant else None,
        "source": table.sources[constant.source] if constant else None,
        "status": _seen(constant) if constant else None,
        "log10_k_at_K": {f"{kelvin:g}": log10_k_at(entry, kelvin) for kelvin in shown} if constant else {},
        "valid_K": list(valid) if valid else None,
        "molar_volume_m3_mol": entry.molar_volume.value if isinstance(entry, Mineral) else None,
        "forms": entry.forms if isinstance(entry, Mineral) else None,
        "note": entry.note,
        "alternatives": [
            {"value": other.value, "source": table.sources[other.source], "status": _seen(other),
             "note": other.note}
            for other in entry.alternatives
        ],
    }  # fmt: skip
