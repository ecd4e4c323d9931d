"""Interaction coefficients of ions, read from a constants file and checked."""

from __future__ import annotations

from collections.abc import Collection

from gossan.base.errors import Fault
from gossan.base.notation import charge_of, normal_ion
from gossan.base.wrong import Wrong, did_you_mean
from gossan.constants.document import Document, read_constant
from gossan.constants.entries import Interaction

SECTION, HOLDS = "interactions", "holds"
BACKGROUND = ("ClO4^-",)  # ions of the salts in which constants are measured; no water here holds them
UNIT = "kg/mol"


def read_interactions(
    document: Document, known: Collection[str], sources: dict[str, str], faults: list[Fault]
) -> dict[tuple[str, str], Interaction]:
    """Read the pairs of a file, `"Na^+/Cl^-" = {value, sd, source, seen, note, holds}`, and list faults.

    known  names of components and species, the ions that a pair may be made of beside BACKGROUND
    """
    found = document.tables.get(SECTION, {})
    made: dict[tuple[str, str], Interaction] = {}
    for pair, number in found.items() if isinstance(found, dict) else ():
        try:
            first, second = _ions(pair, known)
            holds = _complexes(number, known)
            bare = {key: part for key, part in number.items() if key != HOLDS} if holds else number
            coefficient = read_constant(bare, sources, 1.0, UNIT, sd_needed=True)
        except Wrong as wrong:
            line = document.line_of(SECTION, "", pair)
            faults.append(Fault(document.file, line, f"{SECTION}.{pair}", wrong.wrong, wrong.right))
            continue
        made[first, second] = Interaction(first, second, coefficient, holds)
    return made


def _complexes(number: object, known: Collection[str]) -> tuple[str, ...]:
    """The complexes that a coefficient says it holds."""
    names = number.get(HOLDS, []) if isinstance(number, dict) else []
    if not isinstance(names, list):
        raise Wrong(f"has {HOLDS} = {names!r}", 'write a list of complexes: ["NaSO4^-"]')
    for name in names:
        if name not in known:
            raise Wrong(f"holds {name}, which the table lacks", did_you_mean(str(name), known, quote=""))
    return tuple(names)


def _ions(pair: str, known: Collection[str]) -> tuple[str, str]:
    """Both ions of a pair; the cation or the neutral species stands first, so that no pair comes twice."""
    ions = pair.split("/")
    if len(ions) != 2:
        raise Wrong("is no pair of ions", "write the cation, a slash, the anion: Na^+/Cl^-")
    for ion in ions:
        try:
            normal = normal_ion(ion)
        except ValueError as error:
            raise Wrong(f"is no pair of ions ({error})", "write it like Na^+/Cl^-") from None
        if normal != ion:
            raise Wrong("is not the plain form of the pair", f"write {normal} for '{ion}'")
        if ion not in known and ion not in BACKGROUND:
            raise Wrong(f"names {ion}, which the table lacks", did_you_mean(ion, known, quote=""))
    first, second = ions
    charges = charge_of(first), charge_of(second)
    if charges[0] * charges[1] > 0:
        raise Wrong("are ions of one sign", "in this law only ions of opposite sign interact")
    if charges == (0, 0):
        raise Wrong("are two neutral species", "in this law a neutral species interacts with ions")
    if charges[0] < 0 or charges[1] == 0:
        raise Wrong("stands the wrong way round", f"write {second}/{first}: the cation or the neutral first")
    return first, second
