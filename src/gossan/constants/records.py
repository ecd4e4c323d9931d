"""The records of the table, made from entries of a file and their reduced reactions."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

from gossan.base.notation import charge_of, molar_mass
from gossan.constants.document import Entry
from gossan.constants.entries import Component, Constant, Gas, Mineral, Species, TemperatureFit
from gossan.constants.reduce import Faulty, Published, Reducer, solid_of
from gossan.constants.temperature import NEAR_REFERENCE, WITH_ENTHALPY, combined

ASSUMED_ION_SIZE = Constant(4e-10, None, "m", "kielland1937", True, "assumed, as usual for complexes")

OF_A_CONSTANT = ("log10_k", "enthalpy", "temperature_fit", "valid")

Maker = Callable[[Entry, Published | None, Reducer, dict[str, str]], Component | Species | Mineral | Gas]


def read_published(entry: Entry, sources: dict[str, str]) -> Published | None:
    """Read what an entry says of its printed reaction; None where it has no constant or a faulty one."""
    log10_k = entry.constant("log10_k", sources)
    enthalpy, fit, valid = entry.constant("enthalpy", sources), entry.fit(), entry.valid()
    if valid is None:
        valid = WITH_ENTHALPY if enthalpy or fit else NEAR_REFERENCE
    return None if log10_k is None else Published(log10_k, enthalpy, fit, valid)


def component(
    entry: Entry, published: Published | None, reducer: Reducer, sources: dict[str, str]
) -> Component:
    """Make a component; one with a half reaction is reduced to first ions."""
    held = "half_reaction" in entry.keys
    if held and "log10_k" not in entry.keys:
        entry.fault("log10_k", "is missing: a half reaction has a constant")
    if not held and "couple" in entry.keys:
        entry.fault("couple", "is given to a first ion", "it belongs to the valences made from it")
    if not held and any(key in entry.keys for key in OF_A_CONSTANT):
        entry.fault("half_reaction", "is missing: a first ion has no constant")
    charge = charge_of(entry.name)
    half = reducer.reduced(entry.kind, entry.name, held=False) if held else None
    return Component(
        entry.name,
        charge,
        ion_size=_ion_size(entry, charge, sources),
        diffusion=entry.constant("diffusion", sources),
        half_reaction=half.reaction(entry.keys["half_reaction"]) if half else None,
        half_log10_k=published.log10_k if published else None,
        half_enthalpy=published.enthalpy if published else None,
        half_fit=half.fit if half else None,
        couple=entry.typed("couple", str, ""),
        half_valid=half.valid if half else None,
        note=entry.typed("note", str, ""),
        alternatives=entry.alternatives(sources),
    )


def species(entry: Entry, published: Published | None, reducer: Reducer, sources: dict[str, str]) -> Species:
    """Make a dissolved complex."""
    charge = charge_of(entry.name)
    made = reducer.reduced(entry.kind, entry.name)
    log10_k, printed = _both(published, made.log10_k, made.direct)
    return Species(
        entry.name,
        charge,
        made.reaction(entry.keys["reaction"]),
        log10_k,
        enthalpy=published.enthalpy if published else None,
        fit=made.fit,
        valid=made.valid,
        ion_size=_ion_size(entry, charge, sources),
        diffusion=entry.constant("diffusion", sources),
        default=entry.typed("default", bool, True),
        note=entry.typed("note", str, ""),
        alternatives=entry.alternatives(sources),
        published=printed,
    )


def mineral(entry: Entry, published: Published | None, reducer: Reducer, sources: dict[str, str]) -> Mineral:
    """Make a mineral."""
    made = reducer.reduced(entry.kind, entry.name)
    log10_k, printed = _both(published, -made.log10_k, made.direct)
    volume = entry.constant("molar_volume", sources)
    if volume is None:
        raise Faulty
    formula = solid_of(entry)
    return Mineral(
        entry.name,
        formula,
        made.reaction(entry.keys["reaction"]),
        log10_k,
        volume,
        molar_mass(formula),
        entry.typed("forms", bool, False),
        enthalpy=published.enthalpy if published else None,
        fit=_dissolving(made.fit),
        valid=made.valid,
        also_called=entry.names("also_called"),
        note=entry.typed("note", str, ""),
        alternatives=entry.alternatives(sources),
        published=printed,
    )


def gas(entry: Entry, published: Published | None, reducer: Reducer, sources: dict[str, str]) -> Gas:
    """Make a gas."""
    made = reducer.reduced(entry.kind, entry.name)
    log10_k, printed = _both(published, -made.log10_k, made.direct)
    return Gas(
        entry.name,
        made.reaction(entry.keys["reaction"]),
        log10_k,
        enthalpy=published.enthalpy if published else None,
        fit=_dissolving(made.fit),
        valid=made.valid,
        note=entry.typed("note", str, ""),
        alternatives=entry.alternatives(sources),
        published=printed,
    )


MAKERS: dict[str, Maker] = {"components": component, "species": species, "minerals": mineral, "gases": gas}


def _ion_size(entry: Entry, charge: int, sources: dict[str, str]) -> Constant | None:
    return entry.constant("ion_size", sources) or (ASSUMED_ION_SIZE if charge else None)


def _both(published: Published | None, value: float, direct: bool) -> tuple[Constant, Constant | None]:
    """Constant of the reduced reaction, and the printed one where it is another."""
    if published is None:
        raise Faulty
    if direct:
        return published.log10_k, None
    return replace(published.log10_k, value=value), published.log10_k


def _dissolving(forming: TemperatureFit) -> TemperatureFit:
    return combined([(-1.0, forming)])
