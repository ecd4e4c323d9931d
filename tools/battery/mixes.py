"""Which systems and waters there are: a mix is a dozen systems from 0 to 50 degC, each with its waters."""

from __future__ import annotations

from collections.abc import Callable, Iterator
from dataclasses import dataclass
from functools import partial

import numpy as np
from tests.support.battery import battery, random_bounds, scaled, stirred, wide_battery
from tests.support.redox_waters import IONS, VALENCES, counted_as, random_waters, totals_of
from tests.support.small_systems import MINE_COMPLEXES, MINE_COMPONENTS, MINE_MINERALS, WIDE_COMPONENTS

from gossan.chemistry.system import System, build_system
from gossan.constants.load import load_table

TEMPERATURES = np.linspace(273.15, 323.15, 12)
MISSING = 0.35  # chance of every reagent to be left out, in the mix of that name
CHANGES = {"scaled": scaled, "stirred": stirred}
# minerals that take years to form; every second system has them, so that stubborn solids meet fresh ones
RIPE = (
    "sulfur", "sphalerite", "covellite", "chalcocite", "pyrite", "goethite", "pyrolusite", "manganite",
    "copper metal", "hausmannite", "magnetite", "cuprite",
)  # fmt: skip


@dataclass(frozen=True, eq=False)
class Batch:
    """Waters of one system; amounts in mol per kg of water."""

    name: str
    system: System
    totals: np.ndarray  # (water, component) solids included
    upper: np.ndarray  # (water, mineral) the most there can be


Maker = Callable[[int, int], Batch]


def mine_system(activity: str = "davies") -> System:
    """The first battery's own: 11 components, 45 species, 8 minerals, valences held, 25 degC."""
    table = load_table()
    others = [name for name in table.species if name not in MINE_COMPLEXES]
    return build_system(table, MINE_COMPONENTS, MINE_MINERALS, activity=activity, excluded=others)


def wide_system(activity: str = "davies") -> System:
    """Twenty-two held components with the default list of minerals, 25 degC."""
    return build_system(load_table(), WIDE_COMPONENTS, activity=activity)


def first_waters(system: System, seed: int, count: int) -> np.ndarray:
    """Totals (water, component) of the waters that go with mine_system or wide_system, in its order."""
    wide = len(system.components) > len(MINE_COMPONENTS)
    names = WIDE_COMPONENTS if wide else MINE_COMPONENTS
    place = [system.components.index(name) for name in names]
    totals = np.zeros((count, len(names)))
    solids = system.mineral_stoichiometry[:, place]
    totals[:, place] = wide_battery(seed, count, names, solids) if wide else battery(seed, count)
    return totals


def redox_water_system(
    index: int, coupled: tuple[str, ...], gases: dict[str, float] | None = None, activity: str = "davies"
) -> System:
    """The system of all ions of redox_waters; its index sets the temperature and whether ripe solids form."""
    table = load_table()
    minerals = [name for name, mineral in table.minerals.items() if mineral.forms]
    if index % 2:
        minerals += [name for name in RIPE if name in table.minerals and name not in minerals]
    return build_system(
        table, IONS, minerals, coupled=coupled, temperature=float(TEMPERATURES[index % 12]),
        activity=activity, open_gases=gases,
    )  # fmt: skip


def batches(mix: str, seed: int, count: int, activity: str = "davies", change: str = "") -> Iterator[Batch]:
    """The batches of a mix, about count waters in all.

    change  "scaled" or "stirred": every water a little other, as a step of a column leaves it
    """
    makers = list(MIXES[mix](seed, activity))
    for index, make in enumerate(makers):
        share = count * (index + 1) // len(makers) - count * index // len(makers)
        if share:
            batch = make(1000 * seed + index, share)
            totals = CHANGES[change](batch.totals, seed) if change else batch.totals
            yield Batch(f"{mix} {index}", batch.system, totals, batch.upper)


def _first(system: Callable[[str], System], seed: int, activity: str) -> Iterator[Maker]:
    def make(own: int, share: int) -> Batch:
        made = system(activity)
        totals = first_waters(made, own, share)
        return Batch("", made, totals, np.full((share, len(made.minerals)), np.inf))

    yield make


def _redox(
    activity: str, index: int, coupled: tuple[str, ...], gases: dict[str, float] | None = None,
    missing: float = 0.0, bounded: bool = False,
) -> Maker:
    def make(own: int, share: int) -> Batch:
        system = redox_water_system(index, coupled, gases, activity)
        waters = random_waters(own, share, missing=missing)
        totals = totals_of(waters, counted_as(load_table(), system.components))
        upper = np.full((share, len(system.minerals)), np.inf)
        return Batch("", system, totals, random_bounds(totals, upper.shape[1], own) if bounded else upper)

    return make


def _some_couples(rng: np.random.Generator) -> tuple[str, ...]:
    """Two to nine of the ten."""
    chosen = rng.permutation(len(VALENCES))[: rng.integers(2, len(VALENCES))]
    return tuple(VALENCES[i] for i in sorted(chosen))


def _any_couples(rng: np.random.Generator, index: int) -> tuple[str, ...]:
    return (VALENCES, (), _some_couples(rng))[index % 3]


def _held(seed: int, activity: str) -> Iterator[Maker]:
    return (_redox(activity, index, ()) for index in range(12))


def _coupled(seed: int, activity: str) -> Iterator[Maker]:
    return (_redox(activity, index, VALENCES) for index in range(12))


def _partial(seed: int, activity: str) -> Iterator[Maker]:
    rng = np.random.default_rng(seed)
    return (_redox(activity, index, _some_couples(rng)) for index in range(12))


def _open(seed: int, activity: str) -> Iterator[Maker]:
    """Carbon dioxide and one gas that carries electrons; where nothing is coupled, all three."""
    rng = np.random.default_rng(seed)
    for index in range(12):
        pressure = dict(zip(("CO2", "O2", "H2S"), (10.0 ** rng.uniform(-6, 0, 3)).tolist(), strict=True))
        coupled = _any_couples(rng, index)
        if coupled:
            del pressure["O2" if rng.random() < 0.5 else "H2S"]
        yield _redox(activity, index, coupled, pressure)


def _missing(seed: int, activity: str) -> Iterator[Maker]:
    rng = np.random.default_rng(seed)
    return (_redox(activity, i, _any_couples(rng, i), missing=MISSING) for i in range(12))


def _bounded(seed: int, activity: str) -> Iterator[Maker]:
    rng = np.random.default_rng(seed)
    return (_redox(activity, i, _any_couples(rng, i), bounded=True) for i in range(12))


MIXES: dict[str, Callable[[int, str], Iterator[Maker]]] = {
    "mine": partial(_first, mine_system),
    "wide": partial(_first, wide_system),
    "held": _held,
    "coupled": _coupled,
    "partial": _partial,
    "open": _open,
    "missing": _missing,
    "bounded": _bounded,
}
