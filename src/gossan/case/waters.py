"""The waters of a case, read at the laboratory's word and brought to equilibrium within themselves."""

from __future__ import annotations

from gossan.base.amounts import Amount
from gossan.base.errors import Fault, InputError
from gossan.base.notation import molar_mass, split_ion
from gossan.base.wrong import Wrong
from gossan.case.model import Case
from gossan.case.model import Water as WaterOfCase
from gossan.case.redox import coupled_by
from gossan.chemistry.report import LabReport
from gossan.chemistry.water import Water, read_water
from gossan.constants.entries import Table
from gossan.constants.find import find_mineral
from gossan.constants.names import Named, component_named, equivalents, is_bare_element, moles
from gossan.constants.potential import pe_of_potential
from gossan.constants.water import density

ATMOSPHERE = 101325.0  # Pa, exact
OXYGEN = Named("O2", "O2", 0)


def excluded_by(case: Case, table: Table) -> frozenset[str]:
    """Names of the species and minerals that a case leaves out, as the table has them."""
    return frozenset(
        name if name in table.species else find_mineral(table, name).name for name in case.chemistry.exclude
    )


def read_waters(case: Case, names: list[str] | None = None) -> dict[str, Water]:
    """Read waters of a case by name; all of them by default.

    Raises   InputError with the faults of all of them that cannot be what they say
    """
    table = case.table
    excluded, coupled = excluded_by(case, table), coupled_by(case.chemistry, table)
    found: dict[str, Water] = {}
    faults: list[Fault] = []
    for name in names if names is not None else case.waters:
        try:
            report = lab_report(case, name, table)
            found[name] = read_water(
                report, table, activity=case.chemistry.activity, excluded=excluded, coupled=coupled
            )
        except Wrong as wrong:
            line = case.line_of("waters", name)
            faults.append(Fault(case.file, line, f"waters.{name}", wrong.wrong, wrong.right))
    if faults:
        raise InputError(faults)
    return found


def lab_report(case: Case, name: str, table: Table) -> LabReport:
    """A water of a case in moles per kg of water (equations.md, 40).

    Raises   Wrong for an amount that has no moles
    """
    water = case.waters[name]
    temperature = case.temperature_of(name)
    solutes = [(component_named(key, table.components), amount) for key, amount in water.analysis.items()]
    volume = _water_per_volume(solutes, water.density.si if water.density else None, temperature)
    dissolved = {
        named.component: moles(amount, named) / (1.0 if amount.unit.endswith("/kg") else volume)
        for named, amount in solutes
    }
    alkalinity = None
    if water.alkalinity is not None:
        per_kg = water.alkalinity.unit.endswith("/kg")
        alkalinity = equivalents(water.alkalinity) / (1.0 if per_kg else volume)
    minerals, gases = {}, {}
    for key, wanted in water.saturated_with.items():
        if key in table.gases:
            assert not isinstance(wanted, float)
            gases[key] = wanted.si / ATMOSPHERE
        else:
            minerals[find_mineral(table, key).name] = float(wanted)  # type: ignore[arg-type]
    balance = water.balance_on
    if balance and balance != "pH":
        balance = component_named(balance, table.components).component
    return LabReport(
        name=name,
        temperature=temperature,
        dissolved=dissolved,
        pH=water.pH if "pH" in water.model_fields_set else None,
        pe=pe_of_potential(water.Eh.si, temperature) if water.Eh is not None else water.pe,
        oxygen=_oxygen(water, volume),
        undivided=_undivided(water, solutes),
        alkalinity=alkalinity,
        balance_on=balance or None,
        minerals=minerals,
        gases=gases,
        accept_imbalance=water.accept_imbalance,
    )


def _oxygen(water: WaterOfCase, volume: float) -> float | None:
    """Dissolved oxygen, mol per kg of water, of which `volume` kg are in a m3."""
    if water.dissolved_oxygen is None:
        return None
    per_kg = water.dissolved_oxygen.unit.endswith("/kg")
    return moles(water.dissolved_oxygen, OXYGEN) / (1.0 if per_kg else volume)


def _undivided(water: WaterOfCase, solutes: list[tuple[Named, Amount]]) -> frozenset[str]:
    """Components named as a bare element, no other valence of which is named."""
    bare = {
        named.component: named.formula
        for key, (named, _) in zip(water.analysis, solutes, strict=True)
        if is_bare_element(key)
    }
    elements = [split_ion(named.component)[0] for named, _ in solutes]
    return frozenset(component for component, element in bare.items() if elements.count(element) == 1)


def _water_per_volume(solutes: list[tuple[Named, Amount]], sample: float | None, temperature: float) -> float:
    """kg of water that one m3 of a report stands for.

    Without a density of the sample (kg/m3) a litre counts as a litre of pure water; with it, as what is
    left of the sample's weight once its solutes are taken away.
    """
    if sample is None:
        return density(temperature)
    weight = 0.0
    for named, amount in solutes:
        if not amount.unit.endswith("/kg"):
            weight += moles(amount, named) * molar_mass(split_ion(named.component)[0])
    return sample - weight


def detection_notes(case: Case, name: str) -> list[str]:
    """What was below detection in a water, and what is used in its place."""
    return [
        f"{key} {amount.text} is below detection: half the limit is used"
        for key, amount in case.waters[name].analysis.items()
        if amount.below_detection
    ]
