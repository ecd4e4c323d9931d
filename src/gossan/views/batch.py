"""A water in a beaker with solids and gases, brought to equilibrium: `gossan.equilibrate`."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path
from typing import Any, overload

import numpy as np

from gossan.base.amounts import in_water
from gossan.base.errors import Fault, InputError
from gossan.base.wrong import Wrong, did_you_mean
from gossan.case.build import counted_in, system_of
from gossan.case.feed import TEMPERATURE
from gossan.case.model import Case
from gossan.case.quantities import GasPressure, HeldGas
from gossan.case.read import read_case
from gossan.chemistry.certificate import Certificate, certify
from gossan.chemistry.equilibrium import Equilibrium
from gossan.chemistry.equilibrium import equilibrate as solve
from gossan.chemistry.system import System
from gossan.chemistry.validity import validity_note
from gossan.chemistry.water import Water, beyond_strength
from gossan.constants.find import UnknownName, find_mineral
from gossan.constants.water import density
from gossan.views.assay import WaterAssay, case_of_water, named_forms, work_out

NOT_THERE = 1e-15  # mol/kg: less of a solid is not worth a line


@dataclass(frozen=True, eq=False)
class Batch(WaterAssay):
    """A water at equilibrium with solids and gases; amounts in mol per kg of water, gases in bar."""

    before: WaterAssay  # the water alone, as it was read
    put_in: dict[str, float]  # solids by mineral

    @property
    def solid(self) -> dict[str, float]:
        """What there is of each mineral now."""
        found = self.water.equilibrium
        amounts = dict(zip(found.system.minerals, found.solid[:, 0].tolist(), strict=True))
        return {name: amount for name, amount in amounts.items() if amount > NOT_THERE}

    @property
    def formed(self) -> dict[str, float]:
        """What there is now of each mineral less what was put in: below zero where it has dissolved."""
        solid = self.solid
        names = [name for name in self.water.system.minerals if name in solid or name in self.put_in]
        return {name: solid.get(name, 0.0) - self.put_in.get(name, 0.0) for name in names}

    @property
    def given(self) -> dict[str, float]:
        """What each gas that is held has given to the water; below zero where it took."""
        found = self.water.equilibrium
        return dict(zip(found.system.open_gases, found.given[:, 0].tolist(), strict=True))

    @cached_property
    def certificate(self) -> Certificate:
        """How well water and solids meet their equations, worked out with 32 digits."""
        return certify(self.water.equilibrium)

    def __repr__(self) -> str:
        pe = "" if math.isnan(self.pe) else f"pe {self.pe:.2f}, "
        first = f"<Batch {self.name}: pH {self.pH:.2f}, {pe}ionic strength {self.ionic_strength:.3g} mol/kg"
        lines = [
            f"  {name}: {1e3 * change:+.4g} mmol/kg, {1e3 * self.solid.get(name, 0.0):.4g} there"
            for name, change in self.formed.items()
        ]
        lines += [f"  {name}: {1e3 * amount:.4g} mmol/kg given" for name, amount in self.given.items()]
        return "\n".join([first, *lines]) + ">"


@overload
def equilibrate(
    system: System, dissolved: np.ndarray, solid: np.ndarray | None = None, /
) -> Equilibrium: ...
@overload
def equilibrate(
    system: System, /, *, dissolved: np.ndarray, solid: np.ndarray | None = None
) -> Equilibrium: ...
@overload
def equilibrate(
    water: Case | str | Path | Mapping[str, Any], /, name: str | None = None, *,
    minerals: Mapping[str, str] | None = None, gases: Mapping[str, str] | None = None,
    temperature: str | None = None, **settings: Any,
) -> Batch: ...
def equilibrate(
    water: System | Case | str | Path | Mapping[str, Any],
    /,
    name: Any = None,
    solid: np.ndarray | None = None,
    *,
    dissolved: np.ndarray | None = None,
    minerals: Mapping[str, str] | None = None,
    gases: Mapping[str, str] | None = None,
    temperature: str | None = None,
    **settings: Any,
) -> Equilibrium | Batch:
    """Bring a water to equilibrium with solids and gases, as in a beaker.

    water        a Case, the path of its file, or a water given by the keys of its table; what forms is what
                 the case lets form. Or a System, and arrays `dissolved` and `solid` in mol per kg of water:
                 then an Equilibrium comes back, as from `gossan.chemistry.equilibrium.equilibrate`
    name         of one water of the case; may be left out where there is only one
    minerals     solids put in, by name: {"calcite": "1 g/L"}, per volume or kg of water; one that is not on
                 the list of what forms may only dissolve
    gases        pressures held, {"CO2": "0.01 atm"}; those that the case holds are held too
    temperature  of the beaker, "10 degC"; default the water's own
    settings     other tables of a case beside a water given as keys: chemistry={"redox": "coupled"}
    Returns      a Batch: pH, pe, dissolved, saturation, gases as of an assay; solid, formed, given
    Raises       InputError, SolveError
    """
    if isinstance(water, System):
        return solve(water, name if dissolved is None else dissolved, solid)
    case = _case(water, name, settings)
    name = name or _only_water(case)
    before = work_out(case, name)
    kelvin = before.temperature
    try:
        if temperature is not None:
            kelvin = _kelvin(temperature)
        case = _under(case, gases or {})
        put_in = _solids(case, minerals or {}, kelvin)
    except Wrong as wrong:
        raise InputError([Fault("gossan.equilibrate", 0, "", wrong.wrong, wrong.right)]) from None
    joint = system_of(case, case.table, {name: before.water}, [put_in], kelvin)
    grains = np.array([[put_in.get(mineral, 0.0)] for mineral in joint.minerals])
    found = solve(joint, counted_in(before.water, joint), grains.reshape(-1, 1))
    after = Water(name, found, before.charge_error_percent, tuple(beyond_strength(found)))
    said = tuple(dict.fromkeys((*before.said, *after.warnings)))
    validity = validity_note(case.table, joint, kelvin)
    return Batch(after, "", named_forms(case), said, validity, before, put_in)


def _kelvin(text: str) -> float:
    try:
        return float(TEMPERATURE.read(text).si)
    except Wrong as wrong:
        raise Wrong(f"temperature {wrong.wrong}", wrong.right) from None


def _case(water: Case | str | Path | Mapping[str, Any], name: str | None, settings: dict[str, Any]) -> Case:
    if isinstance(water, Mapping):
        return case_of_water(water, name, settings)
    if settings:
        wrong = f"a case has its own {', '.join(settings)}"
        raise InputError([Fault("gossan.equilibrate", 0, "", wrong, "change it in the case")])
    return water if isinstance(water, Case) else read_case(water)


def _only_water(case: Case) -> str:
    if len(case.waters) == 1:
        return next(iter(case.waters))
    wrong = f"the case has {len(case.waters)} waters"
    raise InputError([Fault(case.file, 0, "", wrong, f"name one: {', '.join(case.waters)}")])


def _under(case: Case, gases: Mapping[str, str]) -> Case:
    """The case with these gases held besides its own; what is limited in a column is held in a beaker."""
    held = {gas: HeldGas(one.pressure) for gas, one in case.chemistry.gases.items()}
    for gas, pressure in gases.items():
        if gas not in case.table.gases:
            raise Wrong(f'"{gas}" is no gas of the table of constants', did_you_mean(gas, case.table.gases))
        try:
            held[gas] = HeldGas(GasPressure().read(pressure).pressure)
        except Wrong as wrong:
            raise Wrong(f"gases[{gas!r}] {wrong.wrong}", wrong.right) from None
    return case.model_copy(update={"chemistry": case.chemistry.model_copy(update={"gases": held})})


def _solids(case: Case, minerals: Mapping[str, str], kelvin: float) -> dict[str, float]:
    """mol per kg of water by mineral."""
    found: dict[str, float] = {}
    for name, text in minerals.items():
        try:
            mineral = find_mineral(case.table, name)
            amount = in_water(text, example="1 g/L")
        except UnknownName as unknown:
            raise Wrong(unknown.wrong, unknown.right) from None
        except Wrong as wrong:
            raise Wrong(f"minerals[{name!r}] {wrong.wrong}", wrong.right) from None
        if amount.unit.startswith("eq") or amount.as_formula or amount.si < 0.0:
            raise Wrong(f'minerals[{name!r}] is "{text}"', "give the mass or the moles of the mineral itself")
        per_kg = amount.si if amount.unit.endswith("/kg") else amount.si / density(kelvin)
        moles = per_kg if amount.unit.startswith("mol") else per_kg / mineral.molar_mass
        found[mineral.name] = found.get(mineral.name, 0.0) + moles
    return found
