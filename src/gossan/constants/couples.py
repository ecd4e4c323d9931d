"""Redox couples by the names that people give them."""

from __future__ import annotations

import re
from collections.abc import Collection, Iterable

from gossan.base.notation import normal_ion
from gossan.base.wrong import Wrong
from gossan.constants.entries import Component, Table
from gossan.constants.names import component_named

PROTON = "H^+"
WATER = "H2O"
# what Fe, Mn and Cu are divided into beside the divalent ion; other elements are named by their species
DIVIDED = ("Fe^3+", "Mn^3+", "Cu^+")


def couples_of(table: Table) -> tuple[str, ...]:
    """Every held component that a couple can bring to equilibrium with the first ion of its element."""
    return tuple(name for name, component in table.components.items() if component.couple)


def partner(component: Component) -> str:
    """The first ion that a couple's held component is made from; water or H^+ where there is no other.

    >>> from gossan.constants.load import load_table
    >>> components = load_table().components
    >>> partner(components["Fe^3+"]), partner(components["O2"]), partner(components["H2"])
    ('Fe^2+', 'H2O', 'H^+')
    """
    half = component.half_reaction
    assert half is not None
    return next((ion for ion in half.components if ion != PROTON), WATER if half.water else PROTON)


def applicable(coupled: Iterable[str], components: Collection[str], table: Table) -> tuple[str, ...]:
    """Those of the held components whose element is there in one of its valences, or is water's own."""
    found = []
    for held in coupled:
        other = partner(table.components[held])
        if other in (WATER, PROTON) or held in components or other in components:
            found.append(held)
    return tuple(found)


def couple_named(text: str, table: Table) -> str:
    """The held component of a couple, from valences or ions in either order.

    Raises  Wrong: no couple of that name (with the closest), or two valences that are not coupled directly

    >>> from gossan.constants.load import load_table
    >>> couple_named("Fe^3+/Fe^2+", load_table()), couple_named("sulfate/sulfide", load_table())
    ('Fe^3+', 'HS^-')
    """
    sides = [side.strip() for side in text.split("/")]
    named = [_side(side, table) for side in sides]
    for held in couples_of(table):
        component = table.components[held]
        if set(sides) == set(component.couple.split("/")) or set(named) == {held, partner(component)}:
            return held
    through = [table.components[name] for name in named if name in couples_of(table)]
    if len(set(named)) == 2 and len(through) == 2 and len({partner(component) for component in through}) == 1:
        wrong = f'is "{text}", two valences that are coupled through {partner(through[0])}'
        raise Wrong(wrong, "name " + " and ".join(f'"{component.couple}"' for component in through))
    raise Wrong(f'names the couple "{text}", which the table of constants lacks', _cure(text, table))


def _side(text: str, table: Table) -> str | None:
    """The component that one side of a couple names, H2O among them; None where it names nothing."""
    try:
        ion = normal_ion(text)
    except ValueError:  # "N(-III)"
        ion = ""
    if ion in table.components or ion == WATER:
        return ion
    try:
        return component_named(text, table.components).component
    except Wrong:
        return None


def _cure(text: str, table: Table) -> str:
    """The couples of an element that the text names; else all there are."""
    known = [table.components[held].couple for held in couples_of(table)]
    elements = re.findall(r"[A-Z][a-z]?", text)
    same = [couple for couple in known if couple.partition("(")[0] in elements]
    if len(same) == 1:
        return f'did you mean "{same[0]}"?'
    return "one of " + ", ".join(f'"{couple}"' for couple in same or known) + " is needed"
