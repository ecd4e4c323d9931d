"""The records of the table: what a constant, a component, a species, a mineral and a gas are."""

from __future__ import annotations

from dataclasses import dataclass, field
from math import inf

ANY_TEMPERATURE = (0.0, inf)  # K: where no limit is known


@dataclass(frozen=True, slots=True)
class Constant:
    """A number from the literature and what is known of its error."""

    value: float
    sd: float | None  # standard uncertainty, same unit; None where the source gives none
    unit: str  # "1" for a log10 K
    source: str  # key in sources.toml
    from_memory: bool = False  # recalled from the named source, not yet seen there
    note: str = ""


@dataclass(frozen=True, slots=True)
class TemperatureFit:
    """log10 K = constant + linear T + inverse / T + log10 log10(T) + inverse_square / T^2, T in K."""

    constant: float = 0.0
    linear: float = 0.0
    inverse: float = 0.0
    log10: float = 0.0
    inverse_square: float = 0.0


@dataclass(frozen=True, slots=True)
class Alternative:
    """A published value that was not chosen."""

    value: float
    source: str
    from_memory: bool
    note: str = ""


@dataclass(frozen=True, slots=True)
class Reaction:
    """A balanced reaction, reduced to components.

    components maps a component's name to its coefficient in one mole of the species (or in what a mole of
    the mineral or gas dissolves to); water and electrons are the coefficients of H2O and of e^-. Electrons
    other than 0 need coupled redox.
    """

    text: str  # as published, perhaps through other species
    components: dict[str, float]
    water: float = 0.0
    electrons: float = 0.0


@dataclass(frozen=True, slots=True)
class Component:
    """A building stone of waters: every species and mineral is made of components, water and electrons."""

    name: str  # plain-text IUPAC, "Zn^2+"
    charge: int
    ion_size: Constant | None = None  # m, Kielland's parameter
    diffusion: Constant | None = None  # m2/s at 25 degC in free water
    half_reaction: Reaction | None = None  # formation from the first ion of its element; None for a first ion
    half_log10_k: Constant | None = None  # of half_reaction as published
    half_enthalpy: Constant | None = None  # J/mol, the same
    half_fit: TemperatureFit | None = None  # of half_reaction, reduced to first ions
    couple: str = ""  # "Fe(II)/Fe(III)": what couples it to its first ion; "" for what never is coupled
    half_valid: tuple[float, float] | None = None  # K, from and to, of half_fit
    note: str = ""
    alternatives: tuple[Alternative, ...] = ()


@dataclass(frozen=True, slots=True)
class Species:
    """A dissolved complex, formed from components with this constant."""

    name: str
    charge: int
    reaction: Reaction
    log10_k: Constant  # at 25 degC, of formation from components; its sd is that of the published constant
    enthalpy: Constant | None = None  # J/mol of reaction.text as published
    fit: TemperatureFit | None = None  # of formation from components; the loader fills it always
    valid: tuple[float, float] = ANY_TEMPERATURE  # K, from and to, of log10_k and fit
    ion_size: Constant | None = None  # m
    diffusion: Constant | None = None  # m2/s at 25 degC in free water
    default: bool = True  # False: only where a case asks for it
    note: str = ""
    alternatives: tuple[Alternative, ...] = ()
    published: Constant | None = None  # log10 K of reaction.text, where that runs through other species


@dataclass(frozen=True, slots=True)
class Mineral:
    """A solid phase, dissolving to components with this constant."""

    name: str
    formula: str
    reaction: Reaction
    log10_k: Constant  # at 25 degC, of dissolution to components; its sd is that of the published constant
    molar_volume: Constant  # m3/mol
    molar_mass: float  # kg/mol
    forms: bool  # on the default list: forms on the time scale of a column
    enthalpy: Constant | None = None  # J/mol of reaction.text as published
    fit: TemperatureFit | None = None  # of dissolution to components; the loader fills it always
    valid: tuple[float, float] = ANY_TEMPERATURE  # K, from and to, of log10_k and fit
    also_called: tuple[str, ...] = ()
    note: str = ""
    alternatives: tuple[Alternative, ...] = ()
    published: Constant | None = None  # log10 K of reaction.text, where that runs through other species


@dataclass(frozen=True, slots=True)
class Gas:
    """A gas, dissolving to components with this constant (mol/kg per atm)."""

    name: str  # "CO2"
    reaction: Reaction
    log10_k: Constant  # at 25 degC, of dissolution to components; its sd is that of the published constant
    enthalpy: Constant | None = None  # J/mol of reaction.text as published
    fit: TemperatureFit | None = None  # of dissolution to components; the loader fills it always
    valid: tuple[float, float] = ANY_TEMPERATURE  # K, from and to, of log10_k and fit
    note: str = ""
    alternatives: tuple[Alternative, ...] = ()
    published: Constant | None = None  # log10 K of reaction.text, where that runs through other species


@dataclass(frozen=True, slots=True)
class Interaction:
    """What two ions, or a neutral species and an ion, do to each other's activity (SIT)."""

    first: str  # the cation, or the neutral species
    second: str  # the anion, or the ion beside the neutral species
    coefficient: Constant  # kg/mol at 25 degC
    holds: tuple[str, ...] = ()  # complexes that were counted as free ions: left out beside this coefficient

    @property
    def name(self) -> str:
        """The pair as it is written: `Na^+/Cl^-`."""
        return f"{self.first}/{self.second}"


@dataclass(frozen=True, slots=True)
class Table:
    """All constants by name, and the list of their sources."""

    components: dict[str, Component] = field(default_factory=dict)
    species: dict[str, Species] = field(default_factory=dict)
    minerals: dict[str, Mineral] = field(default_factory=dict)
    gases: dict[str, Gas] = field(default_factory=dict)
    interactions: dict[tuple[str, str], Interaction] = field(default_factory=dict)  # by (first, second)
    sources: dict[str, str] = field(default_factory=dict)
