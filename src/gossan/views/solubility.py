"""What every solid leaves dissolved of its metal in a water that a person describes in words."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from gossan.base.amounts import in_water
from gossan.base.wrong import Wrong
from gossan.chemistry.solubility import Solubility, least_soluble, metal_of, solubilities, system_of
from gossan.chemistry.validity import validity_note
from gossan.constants.entries import Mineral, Table
from gossan.constants.find import find
from gossan.constants.names import component_named, moles
from gossan.constants.water import density

LEAST, LEAST_FORMING = "least soluble", "least of those that may form"


@dataclass(frozen=True, slots=True)
class Solubilities:
    """Solubilities, and the water that they are of."""

    rows: Sequence[Solubility]
    pH: float
    totals: Mapping[str, float]  # mol per kg of water by component
    temperature: float  # K
    table: Table
    validity: str  # what is to be told of constants at this temperature, or ""

    def marks(self) -> dict[str, str]:
        """What distinguishes a solid among those of its metal."""
        forming = [name for name, mineral in self.table.minerals.items() if mineral.forms]
        marks = dict.fromkeys(least_soluble(self.rows, forming), LEAST_FORMING)
        return marks | dict.fromkeys(least_soluble(self.rows, self.table.minerals), LEAST)

    def to_json(self) -> dict[str, Any]:
        """As data, mol per kg of water; null where there is no number, or more than 1 mol/kg."""
        marks = self.marks()
        solids = [
            {
                "mineral": row.mineral,
                "metal": row.metal,
                "dissolved_mol_kg": row.dissolved,
                "low_mol_kg": row.low,
                "high_mol_kg": row.high,
                "soluble": row.soluble,
                "least_soluble": marks.get(row.mineral) == LEAST,
                "forms": self.table.minerals[row.mineral].forms,
                "lacks": list(row.lacks),
                "needs_electrons": row.electrons,
            }
            for row in self.rows
        ]
        return {
            "pH": self.pH,
            "temperature_K": self.temperature,
            "given_mol_kg": dict(self.totals),
            "activity": "ideal",
            "warnings": [self.validity] if self.validity else [],
            "solids": solids,
        }


def work_out(
    table: Table, pH: float, given: Iterable[tuple[str, str]], temperature: float, name: str = ""
) -> Solubilities:
    """Work out the solubilities of the solids of a name, or of all.

    given        what a laboratory calls a solute, and its amount as it writes it: ("HS", "3 mg/L")
    temperature  K
    name         a solid, a formula, or a metal; "" is all
    Raises       Wrong: an unknown solute, no amount, a water that cannot be; UnknownName
    """
    totals: dict[str, float] = {}
    for solute, amount in given:
        component, total = _total(table, solute, amount, temperature)
        if component in totals:
            raise Wrong(f"gives {component} twice", "leave one of them out")
        totals[component] = total
    rows = solubilities(table, pH, totals, temperature, solids_called(table, name) if name else None)
    known = [row for row in rows if row.known]
    metals, minerals = [row.metal for row in known], [row.mineral for row in known]
    system = system_of(table, metals, totals, minerals, temperature)
    return Solubilities(rows, pH, totals, temperature, table, validity_note(table, system, temperature))


def solids_called(table: Table, name: str) -> list[str]:
    """The solids of a metal, `Zn`, or else those that bear a name or formula.

    Raises  UnknownName; Wrong where the name is of something that is no solid
    """
    try:
        metal = component_named(name, table.components).component
    except Wrong:
        metal = ""
    found = [mineral.name for mineral in table.minerals.values() if metal_of(mineral) == metal]
    if not metal:
        found = [entry.name for entry in find(table, name) if isinstance(entry, Mineral)]
    if not found:
        raise Wrong(f"asks for {name}, for which no solid is named", "name a solid or its metal")
    return found


def _total(table: Table, solute: str, text: str, temperature: float) -> tuple[str, float]:
    """A component and its amount, mol per kg of water."""
    named, amount = component_named(solute, table.components), in_water(text, example="1e-4 mol/L")
    total = moles(amount, named) / (1.0 if amount.unit.endswith("/kg") else density(temperature))
    if total < 0.0:
        raise Wrong(f'has {solute} = "{text}"', "an amount is not below zero")
    return named.component, total
