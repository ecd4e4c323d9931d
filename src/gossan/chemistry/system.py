"""A chemical system at one temperature: which components, species and minerals, and their matrices."""

from __future__ import annotations

from collections.abc import Collection, Iterable, Mapping
from dataclasses import dataclass

import numpy as np

from gossan.base.notation import molar_mass
from gossan.chemistry.activity import DAVIES, SIT, Activity, activity_model
from gossan.chemistry.kernel.matrices import Matrices
from gossan.chemistry.layout import matrices_of
from gossan.chemistry.pairs import held_complexes, interaction_matrix
from gossan.chemistry.redox import ELECTRON, PROTON, WATER, WATERS_OWN, Basis, basis_of, is_made_of
from gossan.constants.entries import Component, Constant, Gas, Mineral, Reaction, Species, Table
from gossan.constants.temperature import log10_k_at
from gossan.constants.water import debye_huckel, density

# e^- as an ion of the basis: it is counted and has an activity, and is not in the water
ELECTRONS = Component(ELECTRON, -1, ion_size=Constant(4e-10, None, "m", "kielland1937", True, "not used"))
NO_IONS = {ELECTRON: ELECTRONS, WATER: Component(WATER, 0)}
LN10 = np.log(10.0)


@dataclass(frozen=True, eq=False)
class System:
    """Names, stoichiometry and constants of a chemical system; nothing in it ever changes.

    Axes: component, what is conserved and carried (H^+ first; e^- last where anything is coupled); basis, the
    components, the valences that are coupled, and under SIT water; species (the basis first, in the same
    order); mineral, limited gases among them; gas.
    """

    temperature: float  # K
    water_density: float  # kg of water per m3 of water
    activity: Activity
    components: tuple[str, ...]
    basis: tuple[str, ...]
    species: tuple[str, ...]
    minerals: tuple[str, ...]
    gases: tuple[str, ...]
    open_gases: tuple[str, ...]  # those held in every cell
    component_charge: np.ndarray  # (component,)
    conserved: np.ndarray  # (basis, component) what of each component one of the basis is counted as
    species_charge: np.ndarray  # (species,)
    stoichiometry: np.ndarray  # (species, basis) of formation
    ln_k: np.ndarray  # (species,) of formation
    may_form: np.ndarray  # (mineral,) bool; False: it may only dissolve
    mineral_water: np.ndarray  # (mineral,) mol of H2O that one mol frees on dissolving
    molar_volume: np.ndarray  # (mineral,) m3/mol
    mineral_mass: np.ndarray  # (mineral,) kg/mol
    gas_stoichiometry: np.ndarray  # (gas, basis) of what one molecule dissolves to
    gas_ln_k: np.ndarray  # (gas,) of dissolution, molal per atm
    matrices: Matrices

    @property
    def mineral_stoichiometry(self) -> np.ndarray:
        """(mineral, component): what one formula dissolves to, as it is counted."""
        return self.matrices.supplied[: len(self.minerals)]

    @property
    def gas_supply(self) -> np.ndarray:
        """(open gas, component): what one molecule of an open gas gives, as it is counted."""
        return self.matrices.supplied[len(self.matrices.supplied) - len(self.open_gases) :]

    @property
    def valences(self) -> tuple[str, ...]:
        """The members of the basis that couples tie to components."""
        return self.basis[len(self.components) :][: len(self.matrices.first)]

    @property
    def electron(self) -> int:
        """Where e^- stands among the components, -1 where nothing is coupled."""
        return self.matrices.electron

    @property
    def signed(self) -> tuple[int, ...]:
        """Components whose totals may be negative: H^+, and e^- where anything is coupled."""
        return (0,) if self.electron < 0 else (0, self.electron)

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
    coupled: Collection[str] = (),
    open_gases: Mapping[str, float] | None = None,
    limited_gases: Mapping[str, float] | None = None,
) -> System:
    """Put together the system of these components from the table.

    components  names of what waters and solids hold, in any valence; H^+ is added
    minerals    what may form and dissolve: names in the table, those with absent components left out;
                None is the default list
    dissolving  minerals that are there at the start and may only dissolve, unless listed above
    temperature K
    activity    "davies", "debye-hueckel", "sit" or "ideal"
    excluded    species and minerals to leave out
    coupled     names of held components, such as "Fe^3+", that are at redox equilibrium with the first ion of
                their element
    open_gases  pressures, atm, of gases held in every cell, of which there is no end
    limited_gases  pressures, atm, of gases of which there is so much: they join the minerals as "CO2(g)"
    """
    open_gases, limited_gases = open_gases or {}, limited_gases or {}
    gaseous = [name for gas in (*open_gases, *limited_gases) for name in table.gases[gas].reaction.components]
    interacting = activity == SIT
    basis = basis_of(table, {*components, *gaseous}, coupled, water=interacting)
    names = basis.names
    if interacting:
        excluded = {*excluded, *held_complexes(table)}
    if minerals is None:
        minerals = [name for name, mineral in table.minerals.items() if mineral.forms]
    forming = [name for name in minerals if name not in excluded]
    solids = [
        table.minerals[name]
        for name in dict.fromkeys([*forming, *dissolving])
        if is_made_of(table.minerals[name], basis, table)
    ]
    complexes = [
        entry
        for name, entry in table.species.items()
        if entry.default and name not in excluded and name not in names and is_made_of(entry, basis, table)
    ]
    gases = [gas for gas in table.gases.values() if is_made_of(gas, basis, table)]
    place = {name: b for b, name in enumerate(names)}

    def rows(entries: Iterable[Species | Mineral | Gas]) -> np.ndarray:
        return _rows((entry.reaction for entry in entries), place)

    def ln_k_of(entries: Iterable[Component | Species | Mineral | Gas]) -> np.ndarray:
        return LN10 * np.array([log10_k_at(entry, temperature) for entry in entries])

    ions = [NO_IONS.get(name) or table.components[name] for name in names]
    species = (*names, *(entry.name for entry in complexes))
    charge = np.array([ion.charge for ion in ions] + [entry.charge for entry in complexes], float)
    sizes = [ion.ion_size for ion in ions] + [entry.ion_size for entry in complexes]
    pairs = interaction_matrix(table, species) if interacting else None
    law = activity_model(activity, *debye_huckel(temperature), charge, sizes, pairs)
    held = [table.gases[name] for name in open_gases]
    limited = [table.gases[name] for name in limited_gases]
    pressures = np.log(np.array([*limited_gases.values(), *open_gases.values()], float))
    ties = basis.ties()
    formation = np.vstack([np.eye(len(names)), rows(complexes)])
    ln_k = np.concatenate([np.zeros(len(names)), ln_k_of(complexes)])
    matrices = matrices_of(
        basis,
        law,
        formation=formation,
        ln_k=ln_k,
        hidden=_waters_own(table, basis, temperature),
        solid=np.vstack([rows(solids), rows(limited), ties, rows(held)]),
        solid_ln_k=np.concatenate([
            ln_k_of(solids), ln_k_of(limited) + pressures[: len(limited)],
            ln_k_of(table.components[name] for name in basis.valences),
            ln_k_of(held) + pressures[len(limited):],
        ]),
        minerals=len(solids) + len(limited),
    )  # fmt: skip
    return System(
        temperature=temperature,
        water_density=density(temperature),
        activity=law,
        components=basis.components,
        basis=names,
        species=species,
        minerals=(*(mineral.name for mineral in solids), *(f"{gas.name}(g)" for gas in limited)),
        gases=tuple(gas.name for gas in gases),
        open_gases=tuple(open_gases),
        component_charge=charge[: len(basis.components)],
        conserved=basis.conserved,
        species_charge=charge,
        stoichiometry=formation,
        ln_k=ln_k,
        may_form=np.array([mineral.name in forming for mineral in solids] + [True] * len(limited), bool),
        mineral_water=np.array(
            [mineral.reaction.water for mineral in solids] + [gas.reaction.water for gas in limited]
        ),
        molar_volume=np.array([mineral.molar_volume.value for mineral in solids] + [0.0] * len(limited)),
        mineral_mass=np.array(
            [mineral.molar_mass for mineral in solids] + [molar_mass(gas.name) for gas in limited]
        ),
        gas_stoichiometry=rows(gases),
        gas_ln_k=ln_k_of(gases),
        matrices=matrices,
    )


def _waters_own(table: Table, basis: Basis, temperature: float) -> list[tuple[np.ndarray, float]]:
    """Traces of oxygen and hydrogen that water itself makes: rows (basis,) and ln K.

    Where only some couples are at equilibrium, oxygen or hydrogen may be a solute of its own, or not there at
    all.  Water still bounds how oxidised or reduced it can be, and so a water without any poise has a pe.
    """
    found = []
    for name in WATERS_OWN:
        if basis.electron >= 0 and name not in basis.valences:
            half = table.components[name].half_reaction
            assert half is not None
            row = np.zeros(len(basis.names))
            row[0], row[basis.electron] = half.components[PROTON], half.electrons
            if basis.water:
                row[-1] = half.water
            found.append((row, LN10 * log10_k_at(table.components[name], temperature)))
    return found


def _rows(reactions: Iterable[Reaction], place: dict[str, int]) -> np.ndarray:
    rows = []
    for reaction in reactions:
        row = np.zeros(len(place))
        for name, coefficient in reaction.components.items():
            row[place[name]] = coefficient
        if reaction.electrons:
            row[place[ELECTRON]] = reaction.electrons
        if WATER in place:
            row[place[WATER]] = reaction.water
        rows.append(row)
    return np.array(rows).reshape(-1, len(place))
