"""What slows solutes down, from the words of a case to the numbers of a problem."""

from __future__ import annotations

import math

import numpy as np

from gossan.base.amounts import Amount
from gossan.base.errors import Fault, InputError
from gossan.case.model import Case, Layer
from gossan.case.retention import Sorption
from gossan.chemistry.decay import Decay
from gossan.chemistry.isotherm import LAWS, Isotherms
from gossan.constants.names import component_named, moles
from gossan.coupling.problem import Stagnant
from gossan.transport.grid import Grid


def decay_of(case: Case, grid: Grid, chemical: int) -> Decay | None:
    """Half-lives and parents of the tracers, which stand behind so many components (equations.md, 53)."""
    by_layer = np.array([_rates(case, layer) for layer in case.layers])
    members = np.flatnonzero((by_layer != 0.0).any(axis=(0, 2)))
    if not len(members):
        return None
    rates, zone = np.unique(by_layer[:, members][:, :, members], axis=0, return_inverse=True)
    return Decay(chemical + members, np.ascontiguousarray(rates), zone.ravel()[grid.layer])


def _rates(case: Case, layer: Layer) -> np.ndarray:
    """(tracer, tracer) s-1 in a layer, as `Decay` has them of its members."""
    names = case.tracer_names
    rates = np.zeros((len(names), len(names)))
    for row, name in enumerate(names):
        tracer = case.tracers.get(name)
        half_life = layer.half_life.get(name) or (tracer.half_life if tracer else None)
        if half_life:
            rates[row, row] = -math.log(2.0) / half_life.si
    for row, name in enumerate(names):
        tracer = case.tracers.get(name)
        if tracer and tracer.parent:
            parent = names.index(tracer.parent)
            rates[row, parent] = -rates[parent, parent]
    return rates


def stagnant_of(case: Case, grid: Grid) -> Stagnant | None:
    """The immobile water of all layers that have some."""
    has = np.array([layer.immobile is not None for layer in case.layers])
    cells = np.flatnonzero(has[grid.layer])
    if not len(cells):
        return None
    said = [layer.immobile for layer in case.layers]
    of_layer = np.array([(i.fraction, i.share, i.transfer.si) if i else (0.0, 0.0, 0.0) for i in said])
    fraction, solids, transfer = (np.ascontiguousarray(column) for column in of_layer[grid.layer[cells]].T)
    return Stagnant(cells, fraction, solids, transfer)


def isotherms_of(case: Case, grid: Grid, components: tuple[str, ...]) -> Isotherms | None:
    """The isotherms of all layers, per bulk: with the dry bulk density (equations.md, 55).

    Raises   InputError for a component that the system does not conserve by itself
    """
    tracers = case.tracer_names
    solutes = (*components, *tracers)
    laws: dict[int, dict[int, tuple[int, float, float]]] = {}
    for index, layer in enumerate(case.layers):
        for key, said in layer.sorption.items():
            name = key if key in tracers else component_named(key, case.table.components).component
            if name not in solutes:  # a valence that is coupled is part of its element's total
                path = ("layers", index, "sorption", key)
                wrong = f"is for {name}, which is no component of its own in this system"
                where = f"layers.{layer.name}.sorption.{key}"
                fault = Fault(case.file, case.line_of(*path), where, wrong, "name the total it is in")
                raise InputError([fault])
            laws.setdefault(solutes.index(name), {})[index] = _law(case, layer, key, said)
    if not laws:
        return None
    rows = sorted(laws)
    table = np.array([[laws[row].get(index, (0, 0.0, 0.0)) for index in range(len(case.layers))]
                      for row in rows])[:, grid.layer]
    law, strength, bend = (np.ascontiguousarray(table[..., n]) for n in range(3))
    return Isotherms(np.array(rows), law.astype(np.int8), strength, bend)


def _law(case: Case, layer: Layer, key: str, said: Sorption) -> tuple[int, float, float]:
    """The kind of a law, its strength and its bend, as `Isotherms` has them."""
    dry = layer.grain_density.si * (1.0 - layer.porosity)  # kg of dry solid per m3 of bulk
    law = LAWS[said.law]
    if said.kd is not None:
        return law, dry * said.kd.si, 0.0
    if said.coefficient is not None and said.exponent is not None:
        at = _moles(case, key, said.at)
        return law, dry * _moles(case, key, said.coefficient) * at ** -said.exponent, said.exponent
    assert said.capacity is not None
    assert said.affinity is not None
    affinity = said.affinity.si
    if said.affinity.unit == "m3/kg":
        affinity /= _moles(case, key, Amount("", 1.0, "kg/m3"))
    return law, dry * _moles(case, key, said.capacity) * affinity, affinity


def _moles(case: Case, key: str, amount: Amount) -> float:
    """An amount per water or per solid in moles; a mass is that of the tracer, or of what the key names."""
    tracer = case.tracers.get(key)
    if key not in case.tracer_names:
        return moles(amount, component_named(key, case.table.components))
    if amount.unit.startswith("mol"):
        return amount.si
    assert tracer is not None
    assert tracer.molar_mass is not None
    return amount.si / tracer.molar_mass.si
