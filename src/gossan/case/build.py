"""From the model of a case to the problem that it states."""

from __future__ import annotations

from functools import lru_cache, partial

import numpy as np

from gossan.base.amounts import Amount
from gossan.case.bounds import PH, bounds_of
from gossan.case.build_feeds import feeds_of, frames_of, records_of, waters_entering
from gossan.case.build_initial import initial_state
from gossan.case.build_retention import decay_of, isotherms_of, stagnant_of
from gossan.case.entries import course, series_of, waters_of_rows
from gossan.case.model import Case, Layer
from gossan.case.quantities import Solid
from gossan.case.redox import coupled_by
from gossan.case.waters import ATMOSPHERE, excluded_by, read_waters
from gossan.chemistry.system import System, build_system
from gossan.chemistry.valences import valence_totals
from gossan.chemistry.water import Water
from gossan.constants.couples import applicable
from gossan.constants.entries import Mineral, Table
from gossan.constants.find import find_mineral
from gossan.coupling.drive import Drive
from gossan.coupling.pace import Pace
from gossan.coupling.problem import Port, Problem, Watched
from gossan.coupling.schedule import Schedule
from gossan.transport import clogging, grid
from gossan.transport.faces import transport_of
from gossan.transport.tortuosity import Tortuosity

SYSTEMS = 256  # temperatures whose chemistry is kept: those of a year in steps of a day and a half


def build(case: Case) -> Problem:
    """Set up a column: waters read, solids in moles, every cell at equilibrium with its own minerals.

    Raises   InputError where the case lacks what a run needs, or a water cannot be what it says; SolveError
    """
    case.require_column()
    assert case.flow is not None
    assert case.run is not None
    table = case.table
    series = series_of(case)
    feed = course(case, series)
    told = case.model_copy(update={"waters": {**case.waters, **waters_of_rows(case, series)}})
    used = dict.fromkeys([layer.water for layer in case.layers]) | waters_entering(feed)
    if case.flow.outlet == "concentration":
        used[case.flow.outlet_water] = None
    waters = read_waters(told, list(used))
    solids = [_starting_solids(layer, table) for layer in case.layers]
    system_at = lru_cache(maxsize=SYSTEMS)(partial(system_of, case, table, waters, solids))
    system = system_at(feed.pieces[0].first.temperature)
    gases = {f"{gas}(g)": held.amount.si for gas, held in case.chemistry.gases.items() if held.amount}
    solids = [{**solid, **gases} for solid in solids]
    cells = grid.grid_of([_cut(layer) for layer in case.layers])
    tracers = case.tracer_names
    composition = {name: _composition(told, name, water, system) for name, water in waters.items()}
    porosity = np.array([layer.porosity for layer in case.layers])[cells.layer]
    chemical = len(system.components)
    by_volume = case.run.duration.unit == "PV"
    stagnant, isotherms = stagnant_of(case, cells), isotherms_of(case, cells, system.components)
    ports = tuple(
        Port(name, cells.face_at(x), float(cells.edges[cells.face_at(x)]))
        for name, x in case.port_positions.items()
    )
    return Problem(
        system=system,
        tracers=tracers,
        transport=transport_of(
            cells,
            _groups(chemical, len(tracers)),
            case.flow.inlet,
            case.run.limiter,
            composition[case.flow.outlet_water] if case.flow.outlet == "concentration" else None,
            _gradients(case, chemical) if case.flow.outlet == "gradient" else None,
        ),
        feeds=feeds_of(feed, composition),
        system_at=system_at,
        reference_temperature=case.temperature.si,
        conductivity=np.array(
            [layer.conductivity.si if layer.conductivity else np.nan for layer in case.layers]
        )[cells.layer],
        clogging=tuple(clogging_of(layer) for layer in case.layers),
        porosity=porosity,
        initial=initial_state(case, system, cells, composition, solids, len(ports), stagnant, isotherms),
        end=Schedule(np.array([case.run.duration.si]), by_volume),
        frames=frames_of(case, feed),
        records=records_of(case, feed),
        ports=ports,
        coupling=case.run.coupling,
        accuracy=case.run.accuracy,
        max_courant=case.run.max_courant,
        watched=_watched(case, ports, (*system.components, *tracers)),
        errors_carried=case.run.errors == "carried",
        decay=decay_of(case, cells, chemical),
        isotherms=isotherms,
        stagnant=stagnant,
    )


def _watched(case: Case, ports: tuple[Port, ...], solutes: tuple[str, ...]) -> tuple[Watched, ...]:
    """The limits of a case on what it holds."""
    names = [port.name for port in ports]
    return tuple(
        Watched(names.index(bound.port), -1 if bound.quantity == PH else solutes.index(bound.quantity),
                bound.low, bound.high)
        for bound in bounds_of(case) if bound.quantity in (PH, *solutes)
    )  # fmt: skip


def first_pace(problem: Problem) -> Pace:
    """Where a run begins: a short step, which grows as fast as its error allows."""
    flux = float(Drive(problem, problem.initial).flow(1.0)[0][0])
    crossing = problem.pore_volume / flux if flux > 0.0 else 86400.0
    return Pace(crossing / (50.0 * len(problem.grid.width)))


def _cut(layer: Layer) -> grid.Layer:
    return grid.Layer(
        name=layer.name,
        length=layer.length.si,
        cells=layer.mesh[0],
        growth=layer.mesh[1],
        dispersivity=layer.dispersivity.si,
        diffusion=layer.diffusion.si,
        tortuosity=_tortuosity(layer),
    )


def _tortuosity(layer: Layer) -> Tortuosity:
    said = layer.tortuosity
    if said is None:
        return Tortuosity()
    numbers = {"exponent": said.exponent, "factor": said.factor}
    return Tortuosity(said.law, **{name: number for name, number in numbers.items() if number is not None})


def clogging_of(layer: Layer) -> clogging.Clogging:
    """The law that a layer says its conductivity follows."""
    said = layer.clogging
    return clogging.Clogging(
        law=said.law,
        exponent=said.exponent or 0.0,
        critical_porosity=said.critical_porosity or 0.0,
        pore_bodies=said.pore_bodies,
        residual=said.residual or 0.0,
    )


def _groups(chemical: int, tracers: int) -> np.ndarray:
    return np.concatenate([np.zeros(chemical, int), 1 + np.arange(tracers)])


def _starting_solids(layer: Layer, table: Table) -> dict[str, float]:
    """mol per m3 of bulk that water reaches, by mineral."""
    found: dict[str, float] = {}
    for name, solid in layer.minerals.items():
        mineral = find_mineral(table, name)
        found[mineral.name] = found.get(mineral.name, 0.0) + _moles_of_solid(solid, mineral, layer)
    return found


def _moles_of_solid(solid: Solid, mineral: Mineral, layer: Layer) -> float:
    """Moles per m3 of bulk that water reaches (equations.md, 44)."""
    dry = layer.grain_density.si * (1.0 - layer.porosity)  # kg of dry solid per m3 of bulk
    amount = solid.amount
    per_bulk = {
        "kg/kg": dry / mineral.molar_mass,
        "mol/kg": dry,
        "m3/m3": 1.0 / mineral.molar_volume.value,
        "mol/m3": 1.0,
    }[amount.unit]
    return amount.si * per_bulk * solid.reactive


def system_of(
    case: Case, table: Table, waters: dict[str, Water], solids: list[dict[str, float]], temperature: float
) -> System:
    """The system, at a temperature in K, of all that is in waters and solids (by mineral, mol) of a case."""
    components = {name for water in waters.values() for name in water.valences}
    dissolving = list(dict.fromkeys(name for layer in solids for name in layer))
    for name in dissolving:
        components |= set(table.minerals[name].reaction.components)
    chemistry = case.chemistry
    pressure = {gas: held.pressure.si / ATMOSPHERE for gas, held in chemistry.gases.items()}
    limited = {gas for gas, held in chemistry.gases.items() if held.amount is not None}
    for gas in pressure:
        components |= set(table.gases[gas].reaction.components)
    listed = None
    if chemistry.minerals is not None:
        listed = [find_mineral(table, name).name for name in chemistry.minerals]
    elif chemistry.also:
        listed = [name for name, mineral in table.minerals.items() if mineral.forms]
        listed += [find_mineral(table, name).name for name in chemistry.also]
    return build_system(
        table,
        components,
        listed,
        dissolving=dissolving,
        temperature=temperature,
        activity=chemistry.activity,
        excluded=excluded_by(case, table),
        coupled=applicable(coupled_by(chemistry, table), components, table),
        open_gases={gas: atm for gas, atm in pressure.items() if gas not in limited},
        limited_gases={gas: atm for gas, atm in pressure.items() if gas in limited},
    )


def _composition(case: Case, name: str, water: Water, system: System) -> np.ndarray:
    """(solute,) mol per m3 of water, as the laboratory counts its litres."""
    chemical = (counted_in(water, system) * water.system.water_density).tolist()
    said = case.waters[name].tracers
    density = water.system.water_density
    return np.array(chemical + [_tracer(case, tracer, said, density) for tracer in case.tracer_names])


def _gradients(case: Case, chemical: int) -> np.ndarray:
    """(solute,) mol m-4 at the outlet."""
    assert case.flow is not None
    found = np.zeros(chemical + len(case.tracer_names))
    for name, gradient in case.flow.outlet_gradient.items():
        of_mole = 1.0
        if gradient.unit == "kg/m4":
            molar_mass = case.tracers[name].molar_mass
            assert molar_mass is not None
            of_mole = molar_mass.si
        found[chemical + case.tracer_names.index(name)] = gradient.si / of_mole
    return found


def counted_in(water: Water, system: System) -> np.ndarray:
    """(component,) mol per kg of a water, in what the column conserves.

    A water that couples the same valences has its totals. One that holds apart what the column couples, or
    the other way round, is counted valence by valence.
    """
    totals = water.totals
    if totals.keys() <= set(system.components):
        return np.array([totals.get(name, 0.0) for name in system.components])
    held = dict(zip(water.system.basis, valence_totals(water.equilibrium).tolist(), strict=True))
    return np.array([held.get(name, 0.0) for name in system.basis]) @ system.conserved


def _tracer(case: Case, name: str, said: dict[str, Amount], water_density: float) -> float:
    """mol per m3 of water of a tracer; a mass is given only for one whose molar mass is declared."""
    amount = said.get(name)
    if amount is None:
        return 0.0
    per_volume = amount.si * (water_density if amount.unit.endswith("/kg") else 1.0)
    if amount.unit.startswith("mol"):
        return per_volume
    molar_mass = case.tracers[name].molar_mass
    assert molar_mass is not None
    return per_volume / molar_mass.si


