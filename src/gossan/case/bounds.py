"""What a case allows at its ports, in SI."""

from __future__ import annotations

from dataclasses import dataclass

import numpy as np

from gossan.base.amounts import Amount
from gossan.case.model import Case
from gossan.case.quantities import Range
from gossan.constants.names import component_named, moles
from gossan.constants.water import density

PH = "pH"


@dataclass(frozen=True, slots=True)
class Bound:
    """What a case allows at a port: mol m-3 of a solute at most, or a pH from low to high."""

    port: str
    quantity: str  # a component, a tracer or "pH"
    low: float  # -inf for a solute
    high: float
    text: str  # as the case says it


def tracer_masses(case: Case) -> dict[str, float]:
    """kg/mol of the tracers whose molar mass a case gives."""
    return {name: tracer.molar_mass.si for name, tracer in case.tracers.items() if tracer.molar_mass}


def bounds_of(case: Case) -> list[Bound]:
    """The limits of a case, in the order in which it gives them."""
    components = case.table.components
    masses, tracers = tracer_masses(case), case.tracer_names
    water = density(case.temperature.si)
    found = []
    for port, limits in case.limits.items():
        for key, said in limits.items():
            if isinstance(said, Range):
                found.append(Bound(port, PH, said.low, said.high, f"{said.low:g} to {said.high:g}"))
                continue
            if key in tracers:
                name, amount = key, said.si / (masses[key] if said.unit.startswith("kg") else 1.0)
            else:
                named = component_named(key, components)
                name, amount = named.component, moles(said, named)
            found.append(Bound(port, name, -np.inf, amount * _per_volume(said, water), said.text))
    return found


def _per_volume(said: Amount, water_density: float) -> float:
    return water_density if said.unit.endswith("/kg") else 1.0
