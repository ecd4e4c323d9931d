"""Which constants of a system are used outside the temperatures they are known for."""

from __future__ import annotations

from collections.abc import Collection, Iterator

from gossan.chemistry.system import System
from gossan.constants.entries import Table
from gossan.constants.temperature import KELVIN

ROUNDING = 1e-6  # K: a temperature in degC, brought to K and back, is off by less


def beyond_validity(
    table: Table, system: System, temperature: float, solids: Collection[str] = ()
) -> tuple[str, ...]:
    """Names of constants not known at a temperature (K): of minerals, gases, species, then of couples.

    Only what the system holds counts, so that every entry named is made of components that are there; solids
    are minerals beside those of the system.
    """
    return tuple(
        name
        for name, (low, high) in _ranges(table, system, solids)
        if not low - ROUNDING <= temperature <= high + ROUNDING
    )


def validity_note(
    table: Table, system: System, temperature: float, shown: int = 3, solids: Collection[str] = ()
) -> str:
    """One line on the constants used outside their range: how many, and the first few; "" where none is."""
    names = beyond_validity(table, system, temperature, solids)
    if not names:
        return ""
    first = ", ".join(names[:shown]) + (" ..." if len(names) > shown else "")
    count = f"{len(names)} constants are" if len(names) > 1 else "one constant is"
    return (
        f"at {temperature - KELVIN:.3g} degC {count} used outside the temperatures known for it "
        f"({first}): gossan constants NAME shows the range"
    )


def _ranges(
    table: Table, system: System, solids: Collection[str]
) -> Iterator[tuple[str, tuple[float, float]]]:
    """Every constant that a system uses, and from which to which temperature (K) it is known."""
    for group, names in ((table.minerals, (*system.minerals, *solids)), (table.gases, system.gases),
                         (table.species, system.species)):  # fmt: skip
        for name in names:
            if name in group:
                yield name, group[name].valid
    for name in system.valences:
        half = table.components[name].half_valid
        if half:
            yield name, half
