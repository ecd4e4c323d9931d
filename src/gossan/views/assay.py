"""What a laboratory report says once its water is worked out: balance, species, minerals, gases."""

from __future__ import annotations

import math
from collections.abc import Mapping
from dataclasses import dataclass
from functools import cached_property
from pathlib import Path
from typing import Any

from gossan.base.errors import Fault, InputError
from gossan.base.wrong import did_you_mean
from gossan.case.model import Case
from gossan.case.read import case_from_data, read_case
from gossan.case.waters import detection_notes, excluded_by, read_waters
from gossan.chemistry.certificate import Certificate, certify_water
from gossan.chemistry.redox import ELECTRON, PROTON
from gossan.chemistry.validity import validity_note
from gossan.chemistry.water import REFUSE_PERCENT, WARN_PERCENT, Water
from gossan.constants.find import find_mineral
from gossan.constants.oxygen import air_saturated
from gossan.constants.potential import potential_of_pe

BAR_PER_ATMOSPHERE = 1.01325  # exact
# ppm of H2S in air.  Source: NIOSH ceiling (10 minutes) and concentration immediately dangerous to life, as
# tabulated in PMC5777517, table T3
H2S_CEILING, H2S_DANGEROUS = 10.0, 100.0


@dataclass(frozen=True, slots=True)
class Part:
    """A dissolved species, and its share of one component."""

    component: str
    species: str
    molality: float  # mol per kg of water
    share: float  # of the component's total


@dataclass(frozen=True, eq=False)
class WaterAssay:
    """One water worked out; amounts in mol per kg of water, gases in bar."""

    water: Water
    balanced_on: str  # the ion that took up the charge imbalance, "pH", or ""
    forms: frozenset[str]  # minerals that the case lets form
    said: tuple[str, ...]  # what is to be told of the report and its water
    validity: str  # what is to be told of constants at its temperature, or ""

    @property
    def warnings(self) -> tuple[str, ...]:
        """All that is to be told of it."""
        return (*self.said, self.validity) if self.validity else self.said

    @property
    def name(self) -> str:
        """As the case calls it."""
        return self.water.name

    @property
    def pH(self) -> float:
        """-log10 of the activity of H^+."""
        return self.water.pH

    @property
    def pe(self) -> float:
        """-log10 of the activity of e^-; NaN where nothing is coupled."""
        return self.water.pe

    @property
    def water_activity(self) -> float:
        """Activity of the water itself."""
        return float(self.water.equilibrium.water_activity()[0])

    @property
    def Eh(self) -> float:
        """The same as a potential against the hydrogen electrode, V."""
        return potential_of_pe(self.pe, self.temperature)

    @property
    def reported_Eh(self) -> float:
        """The potential that the report states, or that its pe or oxygen stands for, V; NaN without."""
        return potential_of_pe(self.water.reported_pe, self.temperature)

    @property
    def oxygen_percent(self) -> float:
        """Dissolved oxygen in % of what air would leave in the water; NaN where it is no solute."""
        found = self.water.valences.get("O2", math.nan)
        return 100.0 * found / air_saturated(self.temperature)

    @property
    def temperature(self) -> float:
        """In K."""
        return self.water.system.temperature

    @property
    def ionic_strength(self) -> float:
        """In mol per kg of water."""
        return self.water.ionic_strength

    @property
    def charge_error_percent(self) -> float:
        """Of the report, before anything was balanced."""
        return self.water.charge_error_percent

    @property
    def acceptance(self) -> str:
        """What the trade's limits of a charge error say of the report."""
        error = abs(self.charge_error_percent)
        if error <= WARN_PERCENT:
            return f"within the usual limit of {WARN_PERCENT:g} %"
        if error <= REFUSE_PERCENT:
            return f"above the usual limit of {WARN_PERCENT:g} %, within {REFUSE_PERCENT:g} %"
        return f"above {REFUSE_PERCENT:g} %: not acceptable as it stands"

    @property
    def dissolved(self) -> dict[str, float]:
        """Totals by component, what is coupled under the first ion of its element."""
        return self.water.totals

    @property
    def valences(self) -> dict[str, float]:
        """Totals by valence, coupled or not."""
        return self.water.valences

    @property
    def coupled(self) -> dict[str, float]:
        """Totals of the coupled valences, each first ion before what its element is divided into."""
        system, held = self.water.system, self.valences
        count = len(system.components)
        found: dict[str, float] = {}
        for k, first in enumerate(system.components):
            others = [name for v, name in enumerate(system.valences, count) if system.conserved[v, k]]
            if others and first not in (PROTON, ELECTRON):
                found |= {name: held[name] for name in (first, *others)}
        return found | {name: held[name] for name in system.valences}

    @property
    def species(self) -> dict[str, tuple[float, float]]:
        """Molality and log10 of the activity by species."""
        found = self.water.equilibrium
        molality, activity = found.molality()[:, 0].tolist(), found.log10_activity()[:, 0].tolist()
        return dict(zip(found.system.species, zip(molality, activity, strict=True), strict=True))

    @property
    def saturation(self) -> dict[str, float]:
        """Saturation index by mineral, the largest first; NaN, last, where a component is absent."""
        system = self.water.system
        indices = dict(zip(system.minerals, self.water.equilibrium.saturation()[:, 0].tolist(), strict=True))
        return dict(sorted(indices.items(), key=lambda item: math.inf if math.isnan(item[1]) else -item[1]))

    @property
    def gases(self) -> dict[str, float]:
        """Partial pressure by gas, bar; NaN where a component is absent."""
        system = self.water.system
        pressures = BAR_PER_ATMOSPHERE * self.water.equilibrium.gas_pressure()[:, 0]
        return dict(zip(system.gases, pressures.tolist(), strict=True))

    @cached_property
    def certificate(self) -> Certificate:
        """How well the water meets its equations, worked out with 32 digits."""
        return certify_water(self.water.equilibrium)

    def parts(self, least: float = 0.001) -> list[Part]:
        """The species that hold at least this share of a component, the largest of each first."""
        found = self.water.equilibrium
        system, molality = found.system, found.molality()[:, 0]
        parts = []
        for component, total in self.valences.items():
            if component == PROTON or total <= 0.0:
                continue
            held = system.stoichiometry[:, system.basis.index(component)] * molality
            for s in sorted(range(len(held)), key=lambda s: -held[s]):
                share = float(held[s]) / total
                if share >= least:
                    parts.append(Part(component, system.species[s], float(molality[s]), share))
        return parts


@dataclass(frozen=True, eq=False)
class Assay:
    """The waters of a case, worked out, by name."""

    waters: dict[str, WaterAssay]

    def __getitem__(self, name: str) -> WaterAssay:
        return self.waters[name]

    def __repr__(self) -> str:
        lines = [f"  {name}: pH {one.pH:.2f}, {_pe_told(one)}ionic strength {one.ionic_strength:.3g} mol/kg, "
                 f"charge error {one.charge_error_percent:+.1f} %" for name, one in self.waters.items()]
        return "\n".join(["<Assay", *lines]) + ">"

    def to_json(self, certificates: bool = False) -> dict[str, Any]:
        """The machine-readable result of `gossan assay` (contract, section 3), with certificates if asked."""
        waters = {name: _json(one) for name, one in self.waters.items()}
        if certificates:
            for name, one in self.waters.items():
                waters[name]["certificate"] = _certified(one.certificate)
        return {"waters": waters}


def assay(water: Case | str | Path | Mapping[str, Any], name: str | None = None, **settings: Any) -> Assay:
    """Work out the waters of a case, or one water given as the keys of its table.

    water     a Case, the path of its file, or {"pH": 6.5, "analysis": {"Zn": "24 mg/L"}}
    name      of one water of the case; default all of them
    settings  other tables of a case beside a water given as keys: temperature="12 degC", chemistry={...}
    Raises    InputError
    """
    if isinstance(water, Mapping):
        case = case_of_water(water, name, settings)
    else:
        case = water if isinstance(water, Case) else read_case(water)
    names = None if name is None else [known_water(case, name)]
    forms = named_forms(case)
    found = read_waters(case, names)
    return Assay({each: _worked_out(case, each, read, forms) for each, read in found.items()})


def work_out(case: Case, name: str) -> WaterAssay:
    """One water of a case; raises InputError."""
    return assay(case, name)[name]


def case_of_water(water: Mapping[str, Any], name: str | None, settings: Mapping[str, Any]) -> Case:
    """A case of one water, given as the keys of its table, and other tables beside it."""
    return case_from_data({**settings, "waters": {name or "water": dict(water)}}, "assay")


def _worked_out(case: Case, name: str, water: Water, forms: frozenset[str]) -> WaterAssay:
    said = (*water.warnings, *detection_notes(case, name), *_cautions(water))
    validity = validity_note(case.table, water.system, water.system.temperature)
    return WaterAssay(water, case.waters[name].balance_on, forms, said, validity)


def known_water(case: Case, name: str) -> str:
    """The name of a water of a case; raises InputError where the case has none of that name."""
    if name not in case.waters:
        cure = did_you_mean(name, case.waters)
        raise InputError([Fault(case.file, 0, "", f'no water is called "{name}"', cure)])
    return name


def named_forms(case: Case) -> frozenset[str]:
    """The minerals that a case lets form."""
    chemistry, table = case.chemistry, case.table
    if chemistry.minerals is not None:
        listed = {find_mineral(table, name).name for name in chemistry.minerals}
    else:
        listed = {name for name, mineral in table.minerals.items() if mineral.forms}
        listed |= {find_mineral(table, name).name for name in chemistry.also}
    return frozenset(listed - excluded_by(case, table))


def _cautions(water: Water) -> list[str]:
    system = water.system
    if "H2S" not in system.gases:
        return []
    ppm = 1e6 * float(water.equilibrium.gas_pressure()[system.gases.index("H2S"), 0])
    if not ppm > H2S_CEILING:
        return []
    return [
        f"hydrogen sulfide: air over this water can hold {ppm:.3g} ppm; the ceiling for people is "
        f"{H2S_CEILING:g} ppm and {H2S_DANGEROUS:g} ppm is immediately dangerous (NIOSH); smell is no warning"
    ]


def _certified(certificate: Certificate) -> dict[str, Any]:
    """What each part is off by: relative, relative, in ln."""
    system = certificate.system
    balance, off = certificate.balance[:, 0].tolist(), certificate.ln_activity[:, 0].tolist()
    return {
        "balance": dict(zip(system.components, balance, strict=True)),
        "ionic_strength": float(certificate.ionic_strength[0]),
        "ln_activity": dict(zip(system.species[: len(off)], off, strict=True)),
    }
def _pe_told(one: WaterAssay) -> str:
    return "" if math.isnan(one.pe) else f"pe {one.pe:.2f}, "


def _json(one: WaterAssay) -> dict[str, Any]:
    return {
        "pH": one.pH,
        "pe": one.pe,
        "Eh_V": one.Eh,
        "temperature_K": one.temperature,
        "ionic_strength": one.ionic_strength,
        "water_activity": one.water_activity,
        "charge_error_percent": one.charge_error_percent,
        "dissolved": one.dissolved,
        "valences": one.valences,
        "oxygen_saturation_percent": one.oxygen_percent,
        "species": {
            name: {"molality": molality, "log10_activity": activity}
            for name, (molality, activity) in one.species.items()
        },
        "saturation": one.saturation,
        "gases": one.gases,
        "warnings": list(one.warnings),
    }
