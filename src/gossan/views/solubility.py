"""What every solid leaves dissolved of its metal in a water that a person describes in words."""

from __future__ import annotations

from collections.abc import Iterable, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

from gossan.base.amounts import in_water
from gossan.base.wrong import Wrong
from gossan.chemistry.activity import IDEAL
from gossan.chemistry.plausible import stability
from gossan.chemistry.solubility import Solubility, counted_as, least_soluble, solubilities
from gossan.chemistry.system import build_system
from gossan.chemistry.validity import validity_note
from gossan.constants.couples import DIVIDED
from gossan.constants.entries import Mineral, Table
from gossan.constants.find import find
from gossan.constants.names import component_named, moles
from gossan.constants.potential import potential_of_pe
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
    pe: float | None  # None: valences are held, and nothing gives or takes electrons
    warnings: tuple[str, ...]  # of the water, and of constants at this temperature

    @property
    def Eh(self) -> float | None:
        """The same as a potential against the hydrogen electrode, V."""
        return None if self.pe is None else potential_of_pe(self.pe, self.temperature)

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
            "pe": self.pe,
            "Eh_V": self.Eh,
            "temperature_K": self.temperature,
            "given_mol_kg": dict(self.totals),
            "activity": "ideal",
            "warnings": list(self.warnings),
            "solids": solids,
        }


def work_out(
    table: Table, pH: float, given: Iterable[tuple[str, str]], temperature: float, name: str = "",
    pe: float | None = None,
) -> Solubilities:
    """Work out the solubilities of the solids of a name, or of all.

    given        what a laboratory calls a solute, and its amount as it writes it: ("HS", "3 mg/L")
    temperature  K
    name         a solid, a formula, or a metal; "" is all
    pe           of the water; without it solids whose reaction needs electrons have no number
    Raises       Wrong: an unknown solute, no amount, a water that cannot be; UnknownName
    """
    totals: dict[str, float] = {}
    for solute, amount in given:
        component, total = _total(table, solute, amount, temperature)
        if component in totals:
            raise Wrong(f"gives {component} twice", "leave one of them out")
        totals[component] = total
    warnings = [] if pe is None else stability(pe, pH, temperature, table)
    rows = solubilities(table, pH, totals, temperature, solids_called(table, name, pe) if name else None, pe)
    known = [row for row in rows if row.known]
    metals = [row.metal for row in known]
    coupled = () if pe is None else DIVIDED
    system = build_system(
        table, [*metals, *totals], (), temperature=temperature, activity=IDEAL, coupled=coupled
    )  # fmt: skip
    validity = validity_note(table, system, temperature, solids=[row.mineral for row in known])
    warnings += [validity] if validity else []
    return Solubilities(rows, pH, totals, temperature, table, pe, tuple(warnings))


def solids_called(table: Table, name: str, pe: float | None = None) -> list[str]:
    """The solids of a metal, `Zn`, or else those that bear a name or formula.

    Raises  UnknownName; Wrong where the name is of something that is no solid
    """
    try:
        metal = component_named(name, table.components).component
    except Wrong:
        metal = ""
    found = [mineral.name for mineral in table.minerals.values() if counted_as(table, mineral, pe) == metal]
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
