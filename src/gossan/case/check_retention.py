"""Checks of what slows solutes down: parents of tracers, isotherms and whom they are for."""

from __future__ import annotations

from contextlib import suppress

from gossan.base.wrong import Wrong, did_you_mean
from gossan.case.draft import Draft
from gossan.case.lines import Path
from gossan.case.redox import counted_as
from gossan.case.retention import NEEDED, TAKEN, Sorption
from gossan.constants.entries import Table
from gossan.constants.find import UnknownName, find_mineral
from gossan.constants.names import component_named

EXAMPLES = {
    "kd": '"2 L/kg"', "coefficient": '"12 mg/kg"', "exponent": "0.7", "capacity": '"3 mmol/kg"',
    "affinity": '"0.2 L/mg"',
}  # fmt: skip
OF_MASS = ("kg/kg", "kg/m3", "m3/kg")  # units of an isotherm, kd apart, that count the solute by its mass


def check_half_lives(draft: Draft) -> None:
    """The half-lives of a layer are of tracers."""
    tracers = _tracers(draft)
    for index, layer in enumerate(draft.case.layers or ()):
        for key in layer.half_life or {}:
            if key not in tracers:
                cure = did_you_mean(key, tracers) or f"write [tracers.{key}]"
                draft.fault(("layers", index, "half_life", key), "is no tracer, and only tracers decay", cure)


def check_parents(draft: Draft) -> None:
    """A parent is a tracer that decays somewhere, and nothing comes from itself."""
    tracers = draft.case.tracers or {}
    decaying = {key for layer in draft.case.layers or () for key in layer.half_life or {}}
    for name, tracer in tracers.items():
        parent = tracer.parent if tracer else ""
        if not parent:
            continue
        at: Path = ("tracers", name, "parent")
        if parent not in tracers:
            cure = did_you_mean(parent, tracers) or f"write [tracers.{parent}]"
            draft.fault(at, f'is "{parent}", but there is no [tracers.{parent}]', cure)
        elif "half_life" not in draft.at(("tracers", parent)) and parent not in decaying:
            cure = f'write half_life = "40 d" below [tracers.{parent}]'
            draft.fault(at, f'is "{parent}", which has no half_life and never decays', cure)
        elif name in _forebears(tracers, name):
            draft.fault(at, f'is "{parent}", which comes from {name} itself', "a chain ends with what stays")


def _forebears(tracers: dict, name: str) -> set[str]:
    found: set[str] = set()
    while (tracer := tracers.get(name)) and tracer.parent and tracer.parent not in found:
        name = tracer.parent
        found.add(name)
    return found


def check_sorption(draft: Draft, table: Table) -> None:
    """Isotherms are for solutes of the column, once each, and have what their law needs and no more."""
    present = _solutes(draft, table)
    for index, layer in enumerate(draft.case.layers or ()):
        seen: dict[str, str] = {}
        for key, said in (layer.sorption or {}).items():
            at: Path = ("layers", index, "sorption", key)
            name = _sorbate(draft, table, key, present, at)
            if name in seen:
                draft.fault(at, f"is {name} a second time, after {seen[name]}", "keep one of the two")
            if name:
                seen[name] = key
            if said is not None and said.law is not None:
                _check_law(draft, said, key, at)


def _sorbate(draft: Draft, table: Table, key: str, present: set[str], at: Path) -> str:
    """The tracer or component that an isotherm is for; "" after a fault."""
    tracers = _tracers(draft)
    if key in tracers:
        return key
    try:
        name = component_named(key, table.components).component
    except Wrong as wrong:
        draft.fault(at, f"{wrong.wrong} and no tracer bears", did_you_mean(key, tracers) or wrong.right)
        return ""
    first = counted_as(name, draft.case.chemistry, table)
    if first:
        told = f"is for {name}, which is coupled and counted as {first}"
        draft.fault(at, told, f"an isotherm is for {first}, all valences together")
        return ""
    if name not in present:
        draft.fault(at, f"is for {name}, which no water or mineral of the column holds", "leave it out")
        return ""
    return name


def _tracers(draft: Draft) -> list[str]:
    declared = list(draft.case.tracers or {})
    waters = (draft.case.waters or {}).values()
    return declared or [name for water in waters if water for name in water.tracers or {}]


def _solutes(draft: Draft, table: Table) -> set[str]:
    """The components of all waters that the column uses and of the minerals of its layers."""
    case = draft.case
    layers, feeds = case.layers or (), (case.flow and case.flow.feed) or ()
    used = {each.water for each in (*layers, *feeds)}
    waters = [water for name, water in (case.waters or {}).items() if water and name in used]
    names = [key for water in waters for key in water.analysis or {}]
    names += ["CO3" for water in waters if water.alkalinity is not None]
    names += [water.balance_on for water in waters if water.balance_on not in (None, "", "pH")]
    found: set[str] = set()
    for name in names:
        with suppress(Wrong):
            found.add(component_named(name, table.components).component)
    solids = [key for layer in layers for key in layer.minerals or {}]
    for key in [*solids, *(key for water in waters for key in water.saturated_with or {})]:
        with suppress(UnknownName):
            entry = table.gases.get(key) or find_mineral(table, key)
            found |= set(entry.reaction.components)
    return found


def _check_law(draft: Draft, said: Sorption, key: str, at: Path) -> None:
    given = draft.at(at)
    for name in NEEDED[said.law]:
        if name not in given:
            wrong = f'is missing: law = "{said.law}" needs it'
            draft.fault((*at, name), wrong, f"write {name} = {EXAMPLES[name]}")
    for name in given:
        if name != "law" and name in Sorption.model_fields and name not in TAKEN[said.law]:
            needed = " and ".join(NEEDED[said.law])
            draft.fault((*at, name), f'is not used by law = "{said.law}"', f"it takes {needed}")
    masses = [name for name in TAKEN[said.law] if name != "kd" and name in given
              and getattr(getattr(said, name), "unit", "") in OF_MASS]
    if masses and key in _tracers(draft) and "molar_mass" not in draft.at(("tracers", key)):
        wrong = f'is "{getattr(said, masses[0])}", by mass, but the molar mass is not known'
        draft.fault((*at, masses[0]), wrong, f'write [tracers.{key}] with molar_mass = "79.9 g/mol"')
