"""Which valences are coupled, and what a basis of valences is made of (equations.md, 50 and 51)."""

from __future__ import annotations

from collections.abc import Collection, Iterable
from dataclasses import dataclass

import numpy as np

from gossan.constants.entries import Component, Gas, Mineral, Species, Table

PROTON, ELECTRON, WATER = "H^+", "e^-", "H2O"
WATERS_OWN = ("O2", "H2")  # made of water alone: there whenever electrons are


@dataclass(frozen=True, eq=False)
class Basis:
    """The conserved components of a system, and the valences that couples tie to them.

    names: components (H^+ first, e^- last where anything is coupled), then the coupled valences, then water
    where the law of activities says how active it is
    """

    components: tuple[str, ...]
    valences: tuple[str, ...]
    conserved: np.ndarray  # (basis, component): what of each component one of the basis is counted as
    first: np.ndarray  # (valence,) int64: the component that a valence is counted as; -1 for water's own
    hydration: np.ndarray  # (valence,) mol of H2O that go into one, beside what it is counted as
    water: bool  # whether water is in the basis

    @property
    def names(self) -> tuple[str, ...]:
        """All of them, in order."""
        return (*self.components, *self.valences, *([WATER] if self.water else []))

    @property
    def electron(self) -> int:
        """Where e^- stands among the components, -1 where nothing is coupled."""
        return len(self.components) - 1 if self.components[-1] == ELECTRON else -1

    def ties(self) -> np.ndarray:
        """(valence, basis): a valence less what it is counted as, in the manner of a solid that dissolves."""
        count, valences = len(self.components), len(self.valences)
        rows = np.zeros((valences, len(self.names)))
        rows[:, :count] = -self.conserved[count : count + valences]
        rows[:, count : count + valences] = np.eye(valences)
        if self.water:
            rows[:, -1] = -self.hydration
        return rows


def basis_of(table: Table, wanted: Iterable[str], coupled: Collection[str], water: bool = False) -> Basis:
    """Sort what waters and solids hold into conserved components and coupled valences.

    wanted   names of components that are there, in any valence
    coupled  names of the held components to couple; those whose element is not there are left out
    water    whether the activity of water is other than 1
    """
    tied = [name for name in table.components if name in coupled and table.components[name].half_reaction]
    there = {PROTON}
    for name in wanted:
        there.update(_firsts(table, name) if name in tied else [name])
    valences = tuple(name for name in tied if all(first in there for first in _firsts(table, name)))
    components = [PROTON] + [name for name in table.components if name in there - {PROTON, *valences}]
    if coupled:
        components.append(ELECTRON)
    place = {name: k for k, name in enumerate(components)}
    conserved = np.vstack([np.eye(len(components)), np.zeros((len(valences) + water, len(components)))])
    hydration = np.zeros(len(valences))
    first = np.full(len(valences), -1, np.int64)
    for v, name in enumerate(valences):
        half = table.components[name].half_reaction
        assert half is not None
        for ion, times in half.components.items():
            conserved[len(components) + v, place[ion]] = times
            if ion != PROTON:
                first[v] = place[ion]
        conserved[len(components) + v, place[ELECTRON]] = half.electrons
        hydration[v] = half.water
    return Basis(tuple(components), valences, conserved, first, hydration, water)


def _firsts(table: Table, name: str) -> list[str]:
    """The first ions of a held component's element; none for what is made of water."""
    half = table.components[name].half_reaction
    return [ion for ion in half.components if ion != PROTON] if half else [name]


def is_made_of(entry: Species | Mineral | Gas, basis: Basis, table: Table) -> bool:
    """Whether an entry is made of a basis; where electrons change hands, all its elements must be coupled."""
    reaction = entry.reaction
    if not all(name in basis.names for name in reaction.components):
        return False
    if reaction.electrons == 0:
        return True
    return basis.electron >= 0 and not uncoupled(table, reaction.components, basis.valences)


def uncoupled(table: Table, names: Iterable[str], valences: Collection[str]) -> list[str]:
    """Couples that a reaction with electrons among these components would need, and that are not coupled."""
    missing = []
    for name in names:
        component = table.components[name]
        choices = [component] if component.half_reaction else _valences_of(table, name)
        choices = [choice for choice in choices if choice.couple]
        if choices and not any(choice.name in valences for choice in choices):
            missing.append(choices[0].couple)
    return missing


def _valences_of(table: Table, first: str) -> list[Component]:
    return [
        component
        for component in table.components.values()
        if component.half_reaction and first != PROTON and first in component.half_reaction.components
    ]
