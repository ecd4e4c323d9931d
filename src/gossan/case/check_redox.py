"""Checks of redox: facts that contradict each other, couples that are none, gases that burn each other."""

from __future__ import annotations

from gossan.base.amounts import Amount
from gossan.base.wrong import Wrong, did_you_mean
from gossan.case.draft import Draft
from gossan.case.lines import Path
from gossan.case.model import Water
from gossan.case.redox import carries_electrons, coupled_by
from gossan.constants.couples import couple_named
from gossan.constants.entries import Table

OF_PE = ("Eh", "pe", "dissolved_oxygen")  # each of them says how oxidised a water is


def check_redox(draft: Draft, table: Table) -> None:
    """What waters and `[chemistry]` say of redox."""
    _check_couples(draft, table)
    _check_gases(draft, table)
    for name, water in (draft.case.waters or {}).items():
        if water is not None:
            _check_water(draft, table, water, ("waters", name))


def _check_water(draft: Draft, table: Table, water: Water, path: Path) -> None:
    """One fact of redox at most, and no gas that would say another."""
    given = [key for key in OF_PE if key in draft.at(path)]
    for key in given[1:]:
        wrong = f"stands beside {given[0]}: both say how oxidised the water is"
        draft.fault((*path, key), wrong, "keep the one you trust more")
    if isinstance(water.dissolved_oxygen, Amount):
        _check_oxygen(draft, water.dissolved_oxygen, (*path, "dissolved_oxygen"))
    coupled = coupled_by(draft.case.chemistry, table)
    for gas in water.saturated_with or {}:
        if not given or gas not in table.gases:
            continue
        if gas == "O2" or carries_electrons(gas, coupled, table):
            wrong = f"carries electrons and stands beside {given[0]}: both say how oxidised the water is"
            draft.fault((*path, "saturated_with", gas), wrong, "keep one of the two")


def _check_oxygen(draft: Draft, given: Amount, at: Path) -> None:
    if given.si == 0.0 or given.below_detection:
        wrong = f'is "{given}": oxygen that was not found says nothing of how reduced a water is'
        draft.fault(at, wrong, 'leave it out; give Eh = "-50 mV", or name valences: "Fe(II)" for "Fe"')
    elif given.unit.startswith("eq"):
        draft.fault(at, f'is "{given}", but oxygen has no charge to count', "give mg/L or mmol/L")


def _check_couples(draft: Draft, table: Table) -> None:
    """Couples that the table has, once each, and only where redox is held."""
    chemistry = draft.case.chemistry
    if chemistry is None or not chemistry.coupled:
        return
    if chemistry.redox == "coupled":
        wrong = 'stands beside redox = "coupled", which couples everything'
        draft.fault(("chemistry", "coupled"), wrong, 'leave it out, or write redox = "held"')
    seen: dict[str, str] = {}
    for index, text in enumerate(chemistry.coupled):
        at: Path = ("chemistry", "coupled", index)
        try:
            held = couple_named(text, table)
        except Wrong as wrong:
            draft.fault(at, wrong.wrong, wrong.right)
            continue
        if held in seen:
            draft.fault(at, f'is "{text}", the couple of "{seen[held]}"', "once is enough")
        seen[held] = text


def _check_gases(draft: Draft, table: Table) -> None:
    """Gases that the table has; of those without end at most one carries electrons."""
    chemistry = draft.case.chemistry
    if chemistry is None:
        return
    coupled = coupled_by(chemistry, table)
    burning = ""
    for name, held in (chemistry.gases or {}).items():
        at: Path = ("chemistry", "gases", name)
        if name not in table.gases:
            draft.fault(at, "is no gas of the table of constants", did_you_mean(name, table.gases))
            continue
        if held is None or held.amount is not None or not carries_electrons(name, coupled, table):
            continue
        if burning:
            wrong = f"is held without end, as {burning} is, and both carry electrons: they burn for ever"
            cure = 'hold one of them, give one an amount, or leave the couple of one out: redox = "held"'
            draft.fault(at, wrong, cure)
        burning = burning or name
