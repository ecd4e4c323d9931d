"""Small chemical systems as plain arrays, taken from the project's table of constants at 25 degC."""

from __future__ import annotations

import math
from collections.abc import Sequence
from dataclasses import dataclass

import numpy as np

from gossan.constants.entries import Component, Mineral, Species
from gossan.constants.load import load_table

MINE_COMPONENTS = (
    "H^+", "Na^+", "Ca^2+", "Mg^2+", "Fe^2+", "Zn^2+", "Cu^2+", "SO4^2-", "HS^-", "CO3^2-", "Cl^-",
)  # fmt: skip
MINE_COMPLEXES = (
    "OH^-", "HCO3^-", "CO2", "HSO4^-", "H2S",
    "NaSO4^-", "CaSO4", "MgSO4", "FeSO4", "CuSO4", "ZnSO4",
    "FeHS^+", "ZnHS^+", "Zn(HS)2", "Zn(HS)3^-",
    "CaHCO3^+", "CaCO3", "MgHCO3^+", "MgCO3", "FeHCO3^+", "FeCO3", "CuCO3", "ZnHCO3^+", "ZnCO3",
    "MgOH^+", "FeOH^+", "CuOH^+", "Cu(OH)3^-", "ZnOH^+", "Zn(OH)2", "Zn(OH)3^-",
    "FeCl^+", "CuCl^+", "ZnCl^+",
)  # fmt: skip
MINE_MINERALS = (
    "sphalerite", "covellite", "mackinawite", "calcite", "smithsonite", "gypsum",
    "iron(II) hydroxide", "spertiniite",
)  # fmt: skip
# everything that the first batch of constants covers, each valence held
WIDE_COMPONENTS = (
    "H^+", "Na^+", "K^+", "Mg^2+", "Ca^2+", "Mn^2+", "Fe^2+", "Fe^3+", "Co^2+", "Ni^2+", "Cu^2+", "Zn^2+",
    "Cd^2+", "Pb^2+", "Al^3+", "Cl^-", "SO4^2-", "HS^-", "CO3^2-", "NO3^-", "H4SiO4", "C2O4^2-",
)  # fmt: skip


@dataclass(frozen=True)
class PlainSystem:
    """Everything an equilibrium needs, in plain arrays: the components themselves are the first species.

    formation   (species, component), 1: components in one species; identity in the first rows
    ln_k        (species,), ln of the formation constant; 0 for components
    charge      (species,), 1
    ion_size    (species,), m; NaN where the table gives none
    dissolution (mineral, component), 1: components that one formula of the mineral dissolves to
    mineral_ln_k (mineral,), ln of the dissolution constant
    endless     how many of the last minerals there is always enough of, to give or to take: open gases
    ln_k_rest, mineral_ln_k_rest  what doubles lose of constants that are sums: the constant is both together
    """

    components: tuple[str, ...]
    species: tuple[str, ...]
    minerals: tuple[str, ...]
    formation: np.ndarray
    ln_k: np.ndarray
    charge: np.ndarray
    ion_size: np.ndarray
    dissolution: np.ndarray
    mineral_ln_k: np.ndarray
    endless: int = 0
    ln_k_rest: np.ndarray | None = None
    mineral_ln_k_rest: np.ndarray | None = None

    def held_open(self) -> np.ndarray:
        """(mineral,) bool: those that there is always enough of."""
        return np.arange(len(self.minerals)) >= len(self.minerals) - self.endless

    def with_only(self, kept: np.ndarray) -> PlainSystem:
        """The part of the system that is left where only these components are there.

        kept    (component,) bool
        """
        dissolved = np.all(self.formation[:, ~kept] == 0, axis=1)
        solid = np.all(self.dissolution[:, ~kept] == 0, axis=1)
        return PlainSystem(
            components=_chosen(self.components, kept),
            species=_chosen(self.species, dissolved),
            minerals=_chosen(self.minerals, solid),
            formation=self.formation[np.ix_(dissolved, kept)],
            ln_k=self.ln_k[dissolved],
            charge=self.charge[dissolved],
            ion_size=self.ion_size[dissolved],
            dissolution=self.dissolution[np.ix_(solid, kept)],
            mineral_ln_k=self.mineral_ln_k[solid],
            endless=int(solid[self.held_open()].sum()),
            ln_k_rest=None if self.ln_k_rest is None else self.ln_k_rest[dissolved],
            mineral_ln_k_rest=None if self.mineral_ln_k_rest is None else self.mineral_ln_k_rest[solid],
        )


def plain_system(
    components: Sequence[str], complexes: Sequence[str] | None = None, minerals: Sequence[str] = ()
) -> PlainSystem:
    """The system of these components; complexes None takes all default ones that they can form."""
    table = load_table()
    if complexes is None:
        complexes = [
            name
            for name, record in table.species.items()
            if record.default
            and name not in components
            and not record.reaction.electrons
            and set(record.reaction.components) <= set(components)
        ]
    records = [table.species[name] for name in complexes]
    solids = [table.minerals[name] for name in minerals]
    own = [table.components[name] for name in components]
    dissolved: list[Component | Species] = [*own, *records]
    return PlainSystem(
        components=tuple(components),
        species=(*components, *complexes),
        minerals=tuple(minerals),
        formation=np.vstack([np.eye(len(components)), _coefficients(records, components)]),
        ln_k=np.array([0.0] * len(own) + [record.log10_k.value for record in records]) * math.log(10),
        charge=np.array([float(record.charge) for record in dissolved]),
        ion_size=np.array([record.ion_size.value if record.ion_size else math.nan for record in dissolved]),
        dissolution=_coefficients(solids, components),
        mineral_ln_k=np.array([record.log10_k.value for record in solids]) * math.log(10),
    )


def mine_water() -> PlainSystem:
    """The battery's system: 11 components, 45 dissolved species, 8 minerals."""
    return plain_system(MINE_COMPONENTS, MINE_COMPLEXES, MINE_MINERALS)


def _chosen(names: tuple[str, ...], kept: np.ndarray) -> tuple[str, ...]:
    return tuple(name for name, keep in zip(names, kept, strict=True) if keep)


def _coefficients(records: Sequence[Species | Mineral], components: Sequence[str]) -> np.ndarray:
    """Rows of reaction coefficients; a component outside the list is a mistake of the caller."""
    for record in records:
        strange = set(record.reaction.components) - set(components)
        if strange:
            raise ValueError(f"{record.name} needs {', '.join(sorted(strange))}, not among the components")
    rows = [[record.reaction.components.get(name, 0.0) for name in components] for record in records]
    return np.array(rows, dtype=float).reshape(len(records), len(components))
