"""Which constants of a system are used outside the temperatures they are known for."""

from __future__ import annotations

from collections.abc import Iterator

from gossan.chemistry.system import System
from gossan.constants.entries import Gas, Mineral, Species, Table
from gossan.constants.temperature import KELVIN

ROUNDING = 1e-6  # K: a temperature in degC, brought to K and back, is off by less


def beyond_validity(table: Table, system: System, temperature: float) -> tuple[str, ...]:
    """Names of the entries whose constant is not known at a temperature (K): minerals, gases, species.

    Only what the system holds counts, so that every entry named is made of components that are there.
    """
    return tuple(
        entry.name
        for entry in _entries(table, system)
        if not entry.valid[0] - ROUNDING <= temperature <= entry.valid[1] + ROUNDING
    )


def validity_note(table: Table, system: System, temperature: float, shown: int = 3) -> str:
    """One line on the constants used outside their range: how many, and the first few; "" where none is."""
    names = beyond_validity(table, system, temperature)
    if not names:
        return ""
    first = ", ".join(names[:shown]) + (" ..." if len(names) > shown else "")
    count = f"{len(names)} constants are" if len(names) > 1 else "one constant is"
    return (
        f"at {temperature - KELVIN:.3g} degC {count} used outside the temperatures known for it "
        f"({first}): gossan constants NAME shows the range"
    )


def _entries(table: Table, system: System) -> Iterator[Mineral | Gas | Species]:
    yield from (table.minerals[name] for name in system.minerals if name in table.minerals)
    yield from (table.gases[name] for name in system.gases)
    yield from (table.species[name] for name in system.species if name in table.species)
