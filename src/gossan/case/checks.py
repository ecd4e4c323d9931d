"""What no single key can show: names that must exist, facts given twice, things that must fit together.

Each check reads the draft of a case, in which a hole (None) is a value that has been complained of already.
"""

from __future__ import annotations

from pathlib import Path as FilePath

from gossan.base.amounts import Amount
from gossan.base.wrong import did_you_mean
from gossan.case.check_column import check_layers, check_outlet, check_ports
from gossan.case.check_flow import check_flow
from gossan.case.check_redox import check_redox
from gossan.case.check_retention import check_half_lives, check_parents, check_sorption
from gossan.case.check_waters import (
    check_tracer,
    check_waters,
    mineral_named,
    solute_named,
    tracer_names,
)
from gossan.case.draft import Draft
from gossan.case.lines import Path
from gossan.case.quantities import Range
from gossan.case.redox import counted_as
from gossan.constants.entries import Table
from gossan.constants.find import UnknownName, find_mineral


def check_case(draft: Draft, table: Table, files: dict[str, str], folder: FilePath) -> None:
    """Run every check across keys; faults are added to the draft.

    files   texts of the files that the case names, by name; those read from the folder are added
    """
    check_waters(draft, table)
    check_redox(draft, table)
    check_layers(draft, table)
    check_flow(draft, table, files, folder)
    check_outlet(draft)
    check_chemistry(draft, table)
    check_ports(draft)
    check_half_lives(draft)
    check_parents(draft)
    check_sorption(draft, table)
    check_limits(draft, table)


def check_chemistry(draft: Draft, table: Table) -> None:
    """Minerals and species that are named must exist; a thing cannot be both asked for and left out."""
    chemistry = draft.case.chemistry
    if chemistry is None:
        return
    given = draft.at(("chemistry",))
    if "minerals" in given and "also" in given:
        wrong = "stands beside minerals: minerals is the whole list, also adds to the default list"
        draft.fault(("chemistry", "also"), wrong, "keep one of the two")
    wanted = {}
    for key in ("minerals", "also"):
        for index, name in enumerate(getattr(chemistry, key) or ()):
            wanted[mineral_named(draft, table, name, ("chemistry", key, index))] = name
    for index, name in enumerate(chemistry.exclude or ()):
        at: Path = ("chemistry", "exclude", index)
        if name in table.species:
            continue
        if name in table.components:
            draft.fault(at, f'names "{name}", a component', "leave it out of the waters instead")
            continue
        try:
            accepted = find_mineral(table, name).name
        except UnknownName as unknown:
            cure = did_you_mean(name, [*table.species, *table.minerals]) or unknown.right
            draft.fault(at, f'names "{name}", which is neither a mineral nor a species of the table', cure)
            continue
        if accepted in wanted:
            draft.fault(at, f'names "{name}", which is asked for as well', "keep one of the two")


def check_limits(draft: Draft, table: Table) -> None:
    """Limits stand at ports that exist, for solutes that exist, once each."""
    ports = [port.name for port in draft.case.ports or () if port.name is not None]
    tracers = tracer_names(draft)
    for port, limits in (draft.case.limits or {}).items():
        if port not in (*ports, "outlet"):
            cure = did_you_mean(port, dict.fromkeys((*ports, "outlet")))
            draft.fault(("limits", port), "is no port", cure)
        seen: dict[str, str] = {}
        for key, limit in (limits or {}).items():
            at: Path = ("limits", port, key)
            if key == "pH":
                if isinstance(limit, Amount):
                    draft.fault(at, f'is "{limit}"', "a limit of pH is a range: [6.5, 9.0]")
                continue
            if isinstance(limit, Range):
                wrong = f"is a range ({limit.low:g} to {limit.high:g}); a solute has a highest amount"
                draft.fault(at, wrong, 'such as "0.12 mg/L"')
                continue
            if key in tracers:
                check_tracer(draft, key, limit, at)
                continue
            named = solute_named(draft, table, key, limit, at)
            first = counted_as(named.component, draft.case.chemistry, table) if named else ""
            if named and first:
                wrong = f"limits {named.component}, which is coupled and counted as {first}"
                draft.fault(at, wrong, f"limit {first}, all valences together")
                continue
            if named and named.component in seen:
                wrong = f"limits {named.component} a second time, after {seen[named.component]}"
                draft.fault(at, wrong, "keep one of the two")
            if named:
                seen[named.component] = key
