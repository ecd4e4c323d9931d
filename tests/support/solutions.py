"""Solutions made up from moles, as publications state them, brought to equilibrium by the program."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass, field, replace

import numpy as np

from gossan.chemistry.activity import DEBYE_HUCKEL
from gossan.chemistry.equilibrium import Equilibrium
from gossan.chemistry.reservoir import fixed_pe, fixed_ph, held_to, saturated, under_gas
from gossan.chemistry.system import System, build_system
from gossan.constants.entries import Constant, Table
from gossan.constants.load import load_table
from gossan.constants.temperature import van_t_hoff
from gossan.constants.water import debye_huckel

BATES_GUGGENHEIM = "bates-guggenheim"  # the convention of the pH standards: B times ion size is 1.5 for all
Quantity = Callable[[Equilibrium], float]


@dataclass(frozen=True)
class Solution:
    """What a publication says of a solution.

    totals   mol per kg of water by component or valence; without pH the charge is made up by H^+ or OH^-
    pH       held, whatever that does to the charge; so is pe
    minerals, gases  that it is in contact with, at saturation index 0 and at a pressure in atm
    excluded species left out; activity a law, or BATES_GUGGENHEIM
    log10_k  constants of the source, in the form of the table's, in place of the table's
    indexed  minerals that do not form, whose saturation index is wanted
    coupled  valences at redox equilibrium with the first ion of their element
    """

    totals: dict[str, float] = field(default_factory=dict)
    celsius: float = 25.0
    pH: float | None = None
    minerals: tuple[str, ...] = ()
    gases: dict[str, float] = field(default_factory=dict)
    excluded: tuple[str, ...] = ()
    activity: str = "davies"
    log10_k: dict[str, float] = field(default_factory=dict)
    indexed: tuple[str, ...] = ()
    coupled: tuple[str, ...] = ()
    pe: float | None = None

    def equilibrium(self) -> Equilibrium:
        system = self._system()
        totals = np.zeros(len(system.components))
        for name, amount in self.totals.items():
            totals += amount * system.conserved[system.basis.index(name)]
        totals[0] -= float(totals @ system.component_charge)
        conditions = [fixed_ph(system, self.pH)] if self.pH is not None else []
        conditions += [fixed_pe(system, self.pe)] if self.pe is not None else []
        conditions += [saturated(system, name, 0.0) for name in self.minerals]
        conditions += [under_gas(system, name, pressure) for name, pressure in self.gases.items()]
        return held_to(system, totals, conditions)

    def _system(self) -> System:
        table = self._table()
        components = {name for name, total in self.totals.items() if total}
        for name in self.minerals:
            components |= set(table.minerals[name].reaction.components)
        for name in self.gases:
            components |= set(table.gases[name].reaction.components)
        return build_system(
            table,
            components,
            (*self.minerals, *self.indexed),
            temperature=273.15 + self.celsius,
            activity=DEBYE_HUCKEL if self.activity == BATES_GUGGENHEIM else self.activity,
            excluded=self.excluded,
            coupled=self.coupled,
        )

    def _table(self) -> Table:
        """The program's constants, with those of the source in their place."""
        table = load_table()
        species, minerals = dict(table.species), dict(table.minerals)
        for name, value in self.log10_k.items():
            fit = van_t_hoff(value, 0.0)
            if name in species:
                species[name] = replace(species[name], fit=fit)
            else:
                minerals[name] = replace(minerals[name], fit=fit)
        components = table.components
        if self.activity == BATES_GUGGENHEIM:
            size = Constant(1.5 / debye_huckel(273.15 + self.celsius)[1], None, "m", "")
            components = {name: replace(each, ion_size=size) for name, each in components.items()}
            species = {name: replace(each, ion_size=size) for name, each in species.items()}
        return replace(table, components=components, species=species, minerals=minerals)


def ph(found: Equilibrium) -> float:
    """-log10 of the activity of H^+."""
    return -float(found.log10_activity()[0, 0])


def molality(name: str) -> Quantity:
    """Of one species, mol/kg."""
    return lambda found: float(found.molality()[found.system.species.index(name), 0])


def log10_activity(name: str) -> Quantity:
    """Of one species."""
    return lambda found: float(found.log10_activity()[found.system.species.index(name), 0])


def total(component: str) -> Quantity:
    """Dissolved in all species, mol/kg."""
    return lambda found: float(found.amount[found.system.components.index(component), 0])


def log10_total(component: str) -> Quantity:
    """Log10 of what is dissolved in all species, mol/kg."""
    return lambda found: float(np.log10(total(component)(found)))


def percent(species: str, component: str) -> Quantity:
    """How much of a component a species holds."""

    def found_in(found: Equilibrium) -> float:
        system = found.system
        times = system.stoichiometry[system.species.index(species), system.components.index(component)]
        return 100.0 * float(times) * molality(species)(found) / total(component)(found)

    return found_in


def log10_ratio(one: str, other: str) -> Quantity:
    """Log10 of the molality of one species over another's."""
    return lambda found: float(np.log10(molality(one)(found) / molality(other)(found)))


def index(mineral: str) -> Quantity:
    """Saturation index."""
    return lambda found: float(found.saturation()[found.system.minerals.index(mineral), 0])


def mean_activity_coefficient(salt: dict[str, int], concentration: float) -> Quantity:
    """Stoichiometric: ion pairs count as the ions that they are made of.

    salt  ions of one formula with their numbers; concentration mol/kg of it
    """
    number = sum(salt.values())

    def found_in(found: Equilibrium) -> float:
        logs = 0.0
        for ion, times in salt.items():
            logs += times * (log10_activity(ion)(found) - float(np.log10(times * concentration)))
        return 10.0 ** (logs / number)

    return found_in
