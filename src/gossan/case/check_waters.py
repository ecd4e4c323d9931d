"""Checks of the waters: names that must exist in the table of constants, facts given twice."""

from __future__ import annotations

from collections.abc import Iterable

from gossan.base.amounts import Amount
from gossan.base.wrong import Wrong, did_you_mean
from gossan.case.draft import Draft
from gossan.case.lines import Path
from gossan.case.model import Water
from gossan.case.redox import coupled_by, couples_missing
from gossan.constants.entries import Table
from gossan.constants.find import UnknownName, find_mineral
from gossan.constants.names import Named, component_named, moles


def check_waters(draft: Draft, table: Table) -> None:
    """Solutes, balance ions, minerals, gases and tracers of every water."""
    if draft.case.waters == {}:
        draft.fault(("waters",), "is empty", "every case has at least one water: begin it with [waters.NAME]")
    for name, water in (draft.case.waters or {}).items():
        if water is None:
            continue
        path: Path = ("waters", name)
        named = _check_analysis(draft, table, water, path)
        _check_same_fact(draft, water, named, path)
        _check_balance_ion(draft, table, water, path)
        _check_saturations(draft, table, water, (*path, "saturated_with"))
        for tracer, given in (water.tracers or {}).items():
            check_tracer(draft, tracer, given, (*path, "tracers", tracer))
            _check_tracer_name(draft, table, tracer, (*path, "tracers", tracer))
    for tracer in draft.case.tracers or {}:
        _check_tracer_name(draft, table, tracer, ("tracers", tracer))


def _check_analysis(draft: Draft, table: Table, water: Water, path: Path) -> dict[str, Named]:
    """Each name of an analysis must be a component, once; returns those that are."""
    found: dict[str, Named] = {}
    for key, given in (water.analysis or {}).items():
        at = (*path, "analysis", key)
        if key in Water.model_fields:
            cure = f"it is a key of the water itself: write it below [{draft.key(path)}]"
            draft.fault(at, "is no solute", cure)
            continue
        named = solute_named(draft, table, key, given, at)
        if named is None:
            continue
        twin = next((other for other, it in found.items() if it.component == named.component), None)
        if twin:
            what = "inorganic carbon" if named.component == "CO3^2-" else named.component
            draft.fault(at, f"gives {what} a second time, after {twin}", "keep one of the two")
        found[key] = named
    return found


def solute_named(draft: Draft, table: Table, key: str, given: Amount | None, at: Path) -> Named | None:
    """The component that a key names, its amount checked for having moles; None after a fault."""
    try:
        named = component_named(key, table.components)
        if given is not None:
            moles(given, named)
    except Wrong as wrong:
        draft.fault(at, wrong.wrong, wrong.right)
        return None
    return named


def _check_same_fact(draft: Draft, water: Water, named: dict[str, Named], path: Path) -> None:
    if water.alkalinity is not None:
        for key, it in named.items():
            if it.component == "CO3^2-":
                wrong = "gives inorganic carbon, which the alkalinity gives already"
                draft.fault((*path, "analysis", key), wrong, "keep one of the two")
    if water.balance_on == "pH" and water.alkalinity is not None:
        wrong = 'is "pH" beside an alkalinity: the same fact twice'
        draft.fault((*path, "balance_on"), wrong, "leave one of them out, or balance on an ion")


def _check_balance_ion(draft: Draft, table: Table, water: Water, path: Path) -> None:
    if not water.balance_on or water.balance_on == "pH":
        return
    at = (*path, "balance_on")
    try:
        named = component_named(water.balance_on, table.components)
    except Wrong as wrong:
        draft.fault(at, wrong.wrong, wrong.right)
        return
    if table.components[named.component].charge == 0:
        draft.fault(at, f'is "{water.balance_on}", which has no charge', "name an ion, or pH")


def _check_saturations(draft: Draft, table: Table, water: Water, path: Path) -> None:
    """Minerals with an index and gases with a pressure, each under one of its names."""
    seen: dict[str, str] = {}
    for name, wanted in (water.saturated_with or {}).items():
        at = (*path, name)
        if name in table.gases:
            if isinstance(wanted, float):
                cure = f'did you mean "{wanted:g} atm"?' if wanted > 0 else 'such as "0.003 atm"'
                draft.fault(at, f"is {wanted:g}, but a gas has a pressure", cure)
            continue
        mineral = mineral_named(draft, table, name, at, more=table.gases)
        if mineral and isinstance(wanted, Amount):
            draft.fault(at, f'is "{wanted}", but a mineral has a saturation index', "such as 0.0")
        if mineral in seen:
            draft.fault(at, f"is {mineral} a second time, after {seen[mineral]}", "keep one of the two")
        if mineral:
            seen[mineral] = name


def mineral_named(draft: Draft, table: Table, name: str, at: Path, more: Iterable[str] = ()) -> str | None:
    """The accepted name of a mineral that the program can use; None after a fault."""
    try:
        mineral = find_mineral(table, name)
    except UnknownName as unknown:
        shared = "is the formula" in unknown.wrong
        wrong = "the formula of several" if shared else "which the table of constants lacks"
        draft.fault(at, f'names the mineral "{name}", {wrong}', unknown.right or did_you_mean(name, more))
        return None
    coupled = coupled_by(draft.case.chemistry, table)
    missing = couples_missing(mineral, coupled, table)
    if missing:
        named = " and ".join(missing) + (" are" if len(missing) > 1 else " is")
        wrong = f'names "{name}", which gives or takes electrons, and {named} not coupled'
        listed = ", ".join(f'"{couple}"' for couple in (*_couples_named(draft), *missing))
        draft.fault(at, wrong, f'write coupled = [{listed}] in [chemistry], or redox = "coupled"')
        return None
    return mineral.name


def _couples_named(draft: Draft) -> tuple[str, ...]:
    """The couples that a case names already."""
    return tuple(draft.case.chemistry.coupled or ()) if draft.case.chemistry else ()


def check_tracer(draft: Draft, name: str, given: Amount | None, at: Path) -> None:
    declared = draft.case.tracers or {}
    if declared and name not in declared:
        cure = did_you_mean(name, declared)
        draft.fault(at, "is a tracer without a table", f"{cure} or write [tracers.{name}]".strip())
    if given is None:
        return
    if given.unit.startswith("eq") or given.as_formula:
        draft.fault(at, f'is "{given}"', "a tracer has no formula: give mg/L with its molar mass, or mmol/L")
    elif given.unit.startswith("kg") and not _has_molar_mass(draft, name):
        wrong = f'is "{given}", a mass, but the molar mass is not known'
        draft.fault(at, wrong, f'write [tracers.{name}] with molar_mass = "79.9 g/mol", or give mmol/L')


def _check_tracer_name(draft: Draft, table: Table, name: str, at: Path) -> None:
    """Tracers and components share an axis of the result file, so their names must differ."""
    if name in table.components:
        draft.fault(at, f'is "{name}", a component with chemistry', "call the tracer something else")


def _has_molar_mass(draft: Draft, name: str) -> bool:
    """Whether a tracer's molar mass is given (or was given wrongly, which has its own fault)."""
    return "molar_mass" in draft.at(("tracers", name))


def tracer_names(draft: Draft) -> set[str]:
    """The tracers that the case declares or a water names."""
    waters = (draft.case.waters or {}).values()
    named = {name for water in waters if water for name in water.tracers or {}}
    return named | set(draft.case.tracers or {})
