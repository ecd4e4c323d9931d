"""Systems in conserved components, electrons among them, written out from the table's records.

Nothing here goes through the program's system: a valence that is coupled is one more species, formed from its
first ion, protons and electrons, and so is whatever is made of it.
"""

from __future__ import annotations

import math
from collections.abc import Mapping, Sequence

import numpy as np
from tests.support.redox_waters import ELECTRON
from tests.support.small_systems import PlainSystem

from gossan.constants.entries import Component, Reaction, Species, Table
from gossan.constants.temperature import log10_k_at

OF_WATER = ("O2", "H2")  # made of water alone: there whenever electrons are


def redox_system(
    table: Table,
    components: Sequence[str],
    species: Sequence[str],
    minerals: Sequence[str],
    gases: Mapping[str, float] | None = None,
    kelvin: float = 298.15,
) -> PlainSystem:
    """The system of these conserved components, e^- last where anything is coupled.

    species   dissolved ions and molecules, e^- or not; those that are no components are formed from them
    minerals  names in the table; gases: those held open, with their pressures in atm
    """
    frame = _Frame(table, components, kelvin)
    named = [name for name in species if name != ELECTRON]
    counted_apart = [name for name in OF_WATER if ELECTRON in components and name in frame.place]
    unnamed = [name for name in OF_WATER if ELECTRON in components and name not in named]
    traces = [name for name in OF_WATER if name in (*counted_apart, *unnamed)]
    records: list[Component | Species] = [table.components.get(name) or table.species[name] for name in named]
    formed = [frame.formed(record) for record in records]
    for name in traces:
        records.append(table.components[name])
        formed.append(frame.half(table.components[name]))
    gases = gases or {}
    dissolved = [(table.minerals[name], 1.0) for name in minerals]
    dissolved += [(table.gases[name], pressure) for name, pressure in gases.items()]
    rows, ln_k = [], []
    for record, pressure in dissolved:
        row, log10_made = frame.apart(record.reaction)
        rows.append(row)
        ln_k.append(math.log(10) * (log10_k_at(record, kelvin) - log10_made) + math.log(pressure))
    return PlainSystem(
        components=tuple(components),
        species=(*named, *(f"{name} of water" for name in traces)),
        minerals=(*minerals, *(f"{name}(g)" for name in gases)),
        formation=np.array([row for row, _ in formed]),
        ln_k=math.log(10) * np.array([log10_k for _, log10_k in formed]),
        charge=np.array([float(record.charge) for record in records]),
        ion_size=np.array([record.ion_size.value if record.ion_size else math.nan for record in records]),
        dissolution=np.array(rows).reshape(len(rows), len(components)),
        mineral_ln_k=np.array(ln_k),
        endless=len(gases),
    )


class _Frame:
    """Conserved components, and how all else is made of them; constants are log10 at one temperature."""

    def __init__(self, table: Table, components: Sequence[str], kelvin: float):
        self.table, self.kelvin = table, kelvin
        self.place = {name: k for k, name in enumerate(components)}

    def apart(self, reaction: Reaction) -> tuple[np.ndarray, float]:
        """A reaction's terms in components, and the constant of making them from these."""
        row, log10_k = np.zeros(len(self.place)), 0.0
        for name, times in reaction.components.items():
            if name in self.place:
                row[self.place[name]] += times
            else:
                of_valence, constant = self.half(self.table.components[name])
                row += times * of_valence
                log10_k += times * constant
        if reaction.electrons:
            row[self.place[ELECTRON]] += reaction.electrons
        return row, log10_k

    def half(self, valence: Component) -> tuple[np.ndarray, float]:
        """A valence formed from its first ion."""
        assert valence.half_reaction is not None
        row, log10_k = self.apart(valence.half_reaction)
        return row, log10_k + log10_k_at(valence, self.kelvin)

    def formed(self, record: Component | Species) -> tuple[np.ndarray, float]:
        """A dissolved ion or molecule."""
        if record.name in self.place:
            row = np.zeros(len(self.place))
            row[self.place[record.name]] = 1.0
            return row, 0.0
        if isinstance(record, Component):
            return self.half(record)
        row, log10_k = self.apart(record.reaction)
        return row, log10_k + log10_k_at(record, self.kelvin)
