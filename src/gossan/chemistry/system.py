"""A chemical system at one temperature: which components, species and minerals, and their matrices."""

from __future__ import annotations

from collections.abc import Collection, Iterable
from dataclasses import dataclass

import numpy as np

from gossan.chemistry.activity import DAVIES, Activity, activity_model
from gossan.chemistry.kernel.matrices import Matrices, padded
from gossan.constants.entries import Gas, Mineral, Reaction, Species, Table
from gossan.constants.temperature import log10_k_at
from gossan.constants.water import debye_huckel, density

LN10 = np.log(10.0)
PROTON = "H^+"
NONE = -1e6  # ln K of a species that does not exist: its molality vanishes


@dataclass(frozen=True, eq=False)
class System:
    """Names, stoichiometry and constants of a chemical system; nothing in it ever changes.

    Axes: component (H^+ first), species (the components first, in the same order), mineral, gas.
    """

    temperature: float  # K
    water_density: float  # kg of water per m3 of water
    activity: Activity
    components: tuple[str, ...]
    species: tuple[str, ...]
    minerals: tuple[str, ...]
    gases: tuple[str, ...]
    component_charge: np.ndarray  # (component,)
    species_charge: np.ndarray  # (species,)
    stoichiometry: np.ndarray  # (species, component) of formation
    may_form: np.ndarray  # (mineral,) bool; False: it may only dissolve
    mineral_water: np.ndarray  # (mineral,) mol of H2O that one mol frees on dissolving
    molar_volume: np.ndarray  # (mineral,) m3/mol
    mineral_mass: np.ndarray  # (mineral,) kg/mol
    gas_stoichiometry: np.ndarray  # (gas, component) of what one molecule dissolves to
    gas_ln_k: np.ndarray  # (gas,) of dissolution, molal per atm
    matrices: Matrices

    @property
    def mineral_stoichiometry(self) -> np.ndarray:
        """(mineral, component): what one formula dissolves to."""
        return self.matrices.solid

    def mineral_charge(self) -> np.ndarray:
        """(mineral,): charge of the components of one formula; 0, since solids are neutral."""
        return self.mineral_stoichiometry @ self.component_charge


def build_system(
    table: Table,
    components: Iterable[str],
    minerals: Iterable[str] | None = None,
    *,
    dissolving: Collection[str] = (),
    temperature: float = 298.15,
    activity: str = DAVIES,
    excluded: Collection[str] = (),
) -> System:
    """Put together the system of these components from the table.

    components  names of what waters and solids hold; H^+ is added
    minerals    what may form and dissolve: names in the table, those with absent components left out;
                None is the default list
    dissolving  minerals that are there at the start and may only dissolve, unless listed above
    temperature K
    activity    "davies", "debye-hueckel" or "ideal"
    excluded    species and minerals to leave out
    """
    wanted = {PROTON, *components}
    names = [PROTON] + [name for name in table.components if name in wanted and name != PROTON]
    place = {name: k for k, name in enumerate(names)}
    if minerals is None:
        minerals = [name for name, mineral in table.minerals.items() if mineral.forms]
    forming = [name for name in minerals if name not in excluded]
    solids = [
        table.minerals[name]
        for name in dict.fromkeys([*forming, *dissolving])
        if _made_of(table.minerals[name], place)
    ]
    complexes = [
        entry
        for name, entry in table.species.items()
        if entry.default and name not in excluded and name not in place and _made_of(entry, place)
    ]
    gases = [gas for gas in table.gases.values() if _made_of(gas, place)]
    charge = np.array(
        [table.components[name].charge for name in names] + [entry.charge for entry in complexes], float
    )
    sizes = [table.components[name].ion_size for name in names] + [entry.ion_size for entry in complexes]
    stoichiometry = np.vstack([np.eye(len(names)), _rows((entry.reaction for entry in complexes), place)])
    ln_k = np.array([0.0] * len(names) + [log10_k_at(entry, temperature) for entry in complexes]) * LN10
    law = activity_model(activity, *debye_huckel(temperature), charge, sizes)
    matrices = Matrices(
        stoichiometry=_filled(stoichiometry).T.copy(),
        ln_k=_filled(ln_k, NONE),
        charge_squared=_filled(law.charge_squared),
        neutral=_filled(law.neutral),
        size=_filled(law.size),
        model=law.model,
        debye_hueckel=law.debye_hueckel,
        solid=_rows((mineral.reaction for mineral in solids), place),
        solid_ln_k=np.array([log10_k_at(mineral, temperature) for mineral in solids]) * LN10,
        signed=0,
    )
    return System(
        temperature=temperature,
        water_density=density(temperature),
        activity=law,
        components=tuple(names),
        species=(*names, *(entry.name for entry in complexes)),
        minerals=tuple(mineral.name for mineral in solids),
        gases=tuple(gas.name for gas in gases),
        component_charge=charge[: len(names)],
        species_charge=charge,
        stoichiometry=stoichiometry,
        may_form=np.array([mineral.name in forming for mineral in solids], bool),
        mineral_water=np.array([mineral.reaction.water for mineral in solids]),
        molar_volume=np.array([mineral.molar_volume.value for mineral in solids]),
        mineral_mass=np.array([mineral.molar_mass for mineral in solids]),
        gas_stoichiometry=_rows((gas.reaction for gas in gases), place),
        gas_ln_k=np.array([log10_k_at(gas, temperature) for gas in gases]) * LN10,
        matrices=matrices,
    )


def _made_of(entry: Species | Mineral | Gas, place: dict[str, int]) -> bool:
    """Whether an entry is made of these components alone, without electrons changing hands."""
    return entry.reaction.electrons == 0 and all(name in place for name in entry.reaction.components)


def _rows(reactions: Iterable[Reaction], place: dict[str, int]) -> np.ndarray:
    rows = []
    for reaction in reactions:
        row = np.zeros(len(place))
        for name, coefficient in reaction.components.items():
            row[place[name]] = coefficient
        rows.append(row)
    return np.array(rows).reshape(-1, len(place))


def _filled(values: np.ndarray, filling: float = 0.0) -> np.ndarray:
    """(species, ...) made longer by species that do not exist, so that they fill vector registers."""
    count = padded(len(values))
    out = np.full((count, *values.shape[1:]), filling)
    out[: len(values)] = values
    return out
