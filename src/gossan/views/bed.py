"""What clogging leaves of a column's conductivity, from the porosities that a run recorded."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import dataclass
from functools import cached_property, partial

import numpy as np

from gossan.case.build import clogging_of
from gossan.case.model import Case
from gossan.store.read import Result
from gossan.transport.clogging import Clogging, conductivity_left

LEVELS = {"half": 0.5, "tenth": 0.1, "hundredth": 0.01}  # what is left: where practice renews, and the end
NEAR = 1e-6  # of an interval: where a level lies in it
CHANGED = 0.05  # of the conductivity, by any law: less is no reason to compare them

# For sands no critical porosity is known well: 0.3 to 0.6 of the first is an estimate; this is its far end.
CRITICAL_SHARE = 0.6
# What a bed's porosities would leave by laws that are held for sands; the first porosity to a law.
LAWS: dict[str, Callable[[float], Clogging]] = {
    "kozeny-carman": lambda first: Clogging(),
    "power 3": lambda first: Clogging("power", 3.0),
    "power 8": lambda first: Clogging("power", 8.0),
    "threshold": lambda first: Clogging("threshold", 3.0, CRITICAL_SHARE * first),
}
SPOKEN = {  # in print
    "kozeny-carman": "Kozeny-Carman (even coats)",
    "power 3": "third power",
    "power 8": "eighth power (cement in throats)",
    "threshold": f"third power above {CRITICAL_SHARE:g} of the porosity",
}


@dataclass(frozen=True, slots=True)
class Fall:
    """When what is left first fell to a level, and half the interval between frames there, s."""

    at: float
    error: float


@dataclass(frozen=True)
class Left:
    """What is left of a conductivity, as a share of that at the start."""

    through_time: np.ndarray  # (time,)
    falls: dict[str, Fall | None]  # by name of LEVELS; None where it never did

    @property
    def last(self) -> float:
        """At the end of the run."""
        return float(self.through_time[-1])


@dataclass(frozen=True, eq=False)
class Bed:
    """The pores of a run and the laws of its layers."""

    time: np.ndarray  # (time,) s
    x: np.ndarray  # (x,) m
    porosity: np.ndarray  # (time, x)
    first: np.ndarray  # (x,) 1: where the clean conductivity was measured
    clean: np.ndarray  # (x,) m s-1, NaN where it is not given
    width: np.ndarray  # (x,) m
    layer: np.ndarray  # (x,) int
    laws: tuple[Clogging, ...]  # of each layer, as the case says

    @property
    def known(self) -> bool:
        """Whether any layer has a conductivity."""
        return bool(np.isfinite(self.clean).any())

    @property
    def in_series(self) -> bool:
        """Whether all layers have one, so that the column as a whole does."""
        return bool(np.isfinite(self.clean).all())

    @cached_property
    def cells(self) -> np.ndarray:
        """(time, x): what each cell keeps of its conductivity; NaN where none is given."""
        return np.array([self._left(self.laws, porosity) for porosity in self.porosity])

    @cached_property
    def least_cell(self) -> Left:
        """What is left of the cell that has lost most at the time."""
        return self._told(lambda porosity: float(np.nanmin(self._left(self.laws, porosity))))

    @cached_property
    def column(self) -> Left:
        """What is left of the whole column, its cells in series (equations.md, 86)."""
        return self._told(partial(self._series, self.laws))

    @cached_property
    def band(self) -> dict[str, Left]:
        """The same by other laws, had the pores gone the same way."""
        firsts = [float(self.first[np.argmax(self.layer == number)]) for number in range(len(self.laws))]
        found = {}
        for name, law in LAWS.items():
            laws = tuple(law(first) for first in firsts)
            found[name] = self._told(partial(self._series, laws))
        return found

    @property
    def has_band(self) -> bool:
        """Whether there is anything that laws could differ about."""
        return self.in_series and max(np.ptp(left.through_time) for left in self.band.values()) > CHANGED

    def _left(self, laws: tuple[Clogging, ...], porosity: np.ndarray) -> np.ndarray:
        left = conductivity_left(laws, self.layer, porosity, self.first)
        return np.where(np.isfinite(self.clean), left, np.nan)

    def _series(self, laws: tuple[Clogging, ...], porosity: np.ndarray) -> float:
        left = self._left(laws, porosity)
        if left.min() <= 0.0:
            return 0.0
        return float(np.sum(self.width / self.clean) / np.sum(self.width / (self.clean * left)))

    def _told(self, of: Callable[[np.ndarray], float]) -> Left:
        through = np.array([of(porosity) for porosity in self.porosity])
        return Left(through, {name: self._fall(of, through, level) for name, level in LEVELS.items()})

    def _fall(
        self, of: Callable[[np.ndarray], float], through: np.ndarray, level: float
    ) -> Fall | None:
        """When it first falls to a level; between frames pores go straight, and the law is that of pores."""
        below = np.flatnonzero(through <= level)
        if not len(below):
            return None
        i = int(below[0])
        if i == 0:
            return Fall(float(self.time[0]), 0.0)
        before, after, low, high = self.porosity[i - 1], self.porosity[i], 0.0, 1.0
        while high - low > NEAR:
            middle = 0.5 * (low + high)
            if of(before + middle * (after - before)) <= level:
                high = middle
            else:
                low = middle
        interval = float(self.time[i] - self.time[i - 1])
        return Fall(float(self.time[i - 1]) + high * interval, 0.5 * interval)


def bed_of(result: Result, case: Case) -> Bed:
    """The bed of a result; case is the one it came from."""
    names = [layer.name for layer in case.layers]
    layer = np.array([names.index(name) for name in result.axes.layer])
    clean = [said.conductivity.si if said.conductivity else np.nan for said in case.layers]
    return Bed(
        time=result.profiles.time.values,
        x=np.asarray(result.axes.x),
        porosity=result.profiles.porosity.values,
        first=np.array([said.porosity for said in case.layers])[layer],
        clean=np.array(clean)[layer],
        width=np.diff(result.axes.face),
        layer=layer,
        laws=tuple(clogging_of(said) for said in case.layers),
    )


@dataclass(frozen=True, slots=True)
class Bottleneck:
    """The cell that kept least of its conductivity, and what grew there."""

    fraction: float  # of its conductivity, the least it ever had
    at: float  # m
    layer: str
    filled_by: dict[str, float]  # share of the volume that grew there, by mineral, the largest first


def bottleneck_of(result: Result, case: Case, bed: Bed) -> Bottleneck | None:
    """Where a bed has closed most; None where no conductivity is given."""
    if not bed.known:
        return None
    frame, cell = np.unravel_index(int(np.nanargmin(bed.cells)), bed.cells.shape)
    minerals = case.table.minerals
    grown = {}
    for index, name in enumerate(result.axes.mineral):
        amount = result.profiles.solid.values[:, index, cell]
        if name in minerals and amount[frame] > amount[0]:
            grown[name] = float(amount[frame] - amount[0]) * minerals[name].molar_volume.value
    whole = sum(grown.values())
    order = sorted(grown, key=lambda name: -grown[name])
    return Bottleneck(
        float(bed.cells[frame, cell]), float(bed.x[cell]), result.axes.layer[cell],
        {name: grown[name] / whole for name in order},
    )  # fmt: skip


@dataclass(frozen=True, eq=False)
class HeadLoss:
    """The loss of head over each layer at a few times."""

    time: np.ndarray  # (time,) s
    layers: tuple[str, ...]
    loss: np.ndarray  # (time, layer) m

    @property
    def whole(self) -> np.ndarray:
        """(time,) m, over the column."""
        return self.loss.sum(axis=1)


def head_loss_of(result: Result, times: np.ndarray | None = None) -> HeadLoss | None:
    """The loss of head over each layer at the given times (s), on straight lines between frames, or at all.

    None where heads are not known.
    """
    head = result.profiles.head.values
    if not np.isfinite(head).all():
        return None
    frames = result.profiles.time.values
    times = frames if times is None else times
    layers = result.axes.layer
    starts = [i for i in range(len(layers)) if i == 0 or layers[i] != layers[i - 1]]
    at_edges = head[:, [*starts, len(layers)]]
    between = np.array([np.interp(times, frames, each) for each in (at_edges[:, :-1] - at_edges[:, 1:]).T])
    return HeadLoss(times, tuple(layers[i] for i in starts), between.T)
