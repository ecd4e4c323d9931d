"""Which valences a case couples, and which gases and minerals carry electrons because of it."""

from __future__ import annotations

from gossan.base.wrong import Wrong
from gossan.case.model import Chemistry
from gossan.chemistry.redox import uncoupled
from gossan.constants.couples import couple_named, couples_of, partner
from gossan.constants.entries import Mineral, Table


def coupled_by(chemistry: Chemistry | None, table: Table) -> frozenset[str]:
    """The held components that a case couples to the first ion of their element, as the table names them.

    Names that the table lacks are passed over; the checks of a case complain of them.
    """
    if chemistry is None:
        return frozenset()
    if chemistry.redox == "coupled":
        return frozenset(couples_of(table))
    found = set()
    for text in chemistry.coupled or ():
        try:
            found.add(couple_named(text, table))
        except Wrong:
            continue
    return frozenset(found)


def counted_as(component: str, chemistry: Chemistry | None, table: Table) -> str:
    """The first ion of its element that a coupled valence is counted as; "" for what no couple ties."""
    return partner(table.components[component]) if component in coupled_by(chemistry, table) else ""


def carries_electrons(gas: str, coupled: frozenset[str], table: Table) -> bool:
    """Whether a gas that comes or goes brings electrons along: where it is made of a coupled valence."""
    reaction = table.gases[gas].reaction
    return bool(reaction.electrons) or not coupled.isdisjoint(reaction.components)


def couples_missing(mineral: Mineral, coupled: frozenset[str], table: Table) -> list[str]:
    """The couples that a mineral which gives or takes electrons needs, and that are not coupled.

    Nothing is missing of a mineral that leaves valences alone.
    """
    if not mineral.reaction.electrons:
        return []
    missing = uncoupled(table, mineral.reaction.components, coupled)
    if not missing and not coupled:  # of a metal with one valence: whatever takes the electrons
        missing = [table.components["O2"].couple]
    return missing
