"""Finding an entry of the table by what people call it."""

from __future__ import annotations

import re

from gossan.base.notation import charge_of, normal_ion, parse_formula
from gossan.base.wrong import Wrong, did_you_mean
from gossan.constants.couples import couple_named
from gossan.constants.entries import Component, Gas, Interaction, Mineral, Species, Table
from gossan.constants.names import component_named, is_bare_element

GAS = "(g)"
# a charge as it is often typed: Zn2+ and SO42-, Zn+2 and SO4-2
CHARGE_LAST, SIGN_FIRST = re.compile(r"(.*[A-Za-z\d)])(\d)([+-])"), re.compile(r"(.*[A-Za-z\d)])([+-])(\d)")


class UnknownName(LookupError):
    """A name that the table lacks, or a formula that several minerals share.

    wrong and right are the two halves of a Fault.
    """

    def __init__(self, wrong: str, right: str):
        super().__init__(wrong, right)
        self.wrong, self.right = wrong, right

    def __str__(self) -> str:
        return f"{self.wrong}: {self.right}" if self.right else self.wrong


def find_mineral(table: Table, name: str) -> Mineral:
    """Find a mineral by its name, another name of it, or its formula where no other mineral has the same.

    Raises  UnknownName, with the nearest name, or the minerals that share the formula

    >>> from gossan.constants.load import load_table
    >>> find_mineral(load_table(), "Zinc oxide").name, find_mineral(load_table(), "ZnO").name
    ('zincite', 'zincite')
    """
    wanted = " ".join(name.split()).casefold()
    called = {}
    for mineral in table.minerals.values():
        called.update({alias.casefold(): mineral for alias in (mineral.name, *mineral.also_called)})
    if wanted in called:
        return called[wanted]
    sharing = _with_formula(table, name)
    if len(sharing) == 1:
        return sharing[0]
    if sharing:
        names = [mineral.name for mineral in sharing]
        wrong = f"'{name}' is the formula of {len(names)} minerals"
        raise UnknownName(wrong, f"name one: {', '.join(names)}")
    raise UnknownName(f"no mineral is called '{name}'", did_you_mean(wanted, called, quote=""))


def find_interaction(table: Table, pair: str) -> Interaction:
    """Find the interaction coefficient of two ions, `Na^+/Cl^-`, whichever stands first.

    Raises  UnknownName, with the pairs that the table has of the first ion
    """
    ions = [_ion(table, ion) for ion in pair.split("/")]
    for both in (tuple(ions), tuple(reversed(ions))):
        if len(both) == 2 and both in table.interactions:
            return table.interactions[both]
    others = [each.name for each in table.interactions.values() if ions[0] in (each.first, each.second)]
    right = f"of {ions[0]} it has {', '.join(others)}" if others else ""
    raise UnknownName(f"the table has no interaction coefficient of {' and '.join(ions)}", right)


def find_pair(table: Table, name: str) -> Interaction | Component:
    """Find the interaction coefficient of two ions, or what a couple such as Fe(II)/Fe(III) holds apart.

    Raises  UnknownName, with the pairs that the table has of the first ion
    """
    try:
        return find_interaction(table, name)
    except UnknownName:
        sides = [_ion(table, side) for side in name.split("/")]
        try:
            return table.components[couple_named("/".join(sides), table)]
        except Wrong:
            pass
        raise


def find(table: Table, name: str) -> tuple[Component | Species | Mineral | Gas, ...]:
    """Find everything that bears a name: CO2 is a species and a gas, CaCO3 a species and three minerals.

    A name that is nobody's own may be one that laboratories use: zinc, SO4, Fe(III), S(-II).
    Raises  UnknownName, with the nearest name
    """
    ion = _normal(name)
    if ion.endswith(GAS) and ion.removesuffix(GAS) in table.gases:
        return (table.gases[ion.removesuffix(GAS)],)
    groups = (table.components, table.species, table.gases)
    found: list[Component | Species | Mineral | Gas] = [
        group[each] for each in dict.fromkeys((ion, *_typed(name))) for group in groups if each in group
    ]
    if is_bare_element(name):
        found += _in_a_laboratory(table, name)  # Zn is the ion first, and the metal
    try:
        found.append(find_mineral(table, name))
    except UnknownName as unknown:
        found += _with_formula(table, name)
        found = found or [*_in_a_laboratory(table, name)]
        if not found:
            known = [each for group in groups for each in group]
            near = did_you_mean(ion, known, quote="") or unknown.right
            near = near or "gossan constants lists all it has"
            raise UnknownName(f"the table has no '{name}'", near) from None
    return tuple(found)


def _normal(ion: str) -> str:
    try:
        return normal_ion(ion)
    except ValueError:
        return ion.strip()


def _ion(table: Table, text: str) -> str:
    """An ion of a pair, however it is typed."""
    known = [
        each
        for each in (_normal(text), *_typed(text))
        if each in table.components or each in table.species
    ]
    called = known or [component.name for component in _in_a_laboratory(table, text)]
    return called[0] if called else _normal(text)


def _typed(name: str) -> list[str]:
    """The ions that a charge without its ^ may mean."""
    last, first = CHARGE_LAST.fullmatch(name.strip()), SIGN_FIRST.fullmatch(name.strip())
    if last:
        return [f"{last[1]}^{last[2]}{last[3]}"]
    return [f"{first[1]}^{first[3]}{first[2]}"] if first else []


def _in_a_laboratory(table: Table, name: str) -> list[Component]:
    """The component that a laboratory means by a name."""
    try:
        return [table.components[component_named(name, table.components).component]]
    except Wrong:
        return []


def _with_formula(table: Table, formula: str) -> list[Mineral]:
    """Minerals of this composition, however the formula is written."""
    try:
        counts = parse_formula(formula)
        charged = charge_of(formula) != 0
    except ValueError:
        return []
    if charged:
        return []
    return [mineral for mineral in table.minerals.values() if parse_formula(mineral.formula) == counts]
