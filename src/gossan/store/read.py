"""Reading a result file, whether its run has ended, still goes on or was killed."""

from __future__ import annotations

import json
import time
from collections.abc import Callable, Iterable, Iterator, Mapping
from pathlib import Path
from typing import TYPE_CHECKING, Any, TypeVar

import h5py
import numpy as np

from gossan.base.errors import ResultError
from gossan.store import file
from gossan.store.field import Field
from gossan.store.layout import growing_axis, variable, variables

if TYPE_CHECKING:
    import xarray

# when a limit was first exceeded; by how much that may be off between steps; when it was in the shadow; s
Crossing = tuple[float, float, float | None]
_Read = TypeVar("_Read")

# A running file changes under the reader's eyes: what cannot be read now may be whole in a moment.
_TRIES = 8
_PAUSE = 0.005  # s, doubled each time: 0.6 s in all, far above the time of a flush


def open_result(path: str | Path) -> Result:
    """Open a result file: what is committed now, and no more however long its run goes on.

    Raises ResultError where the file is missing, damaged or not a result file.
    """
    path = Path(path)

    def look(opened: h5py.File) -> Result:
        attributes = {name: _plain(value) for name, value in opened.attrs.items()}
        axes = file.read_axes(opened)
        counts = file.committed(opened, axes.groups)
        groups = {name: Group(path, attributes["started"], name, axes, counts[name]) for name in axes.groups}
        return Result(path, attributes, axes, groups)

    return _read(path, look)


class Group:
    """The variables of one group, each a Field, read when first asked for."""

    def __init__(self, path: Path, started: str, name: str, axes: file.Axes, count: int):
        self.name = name
        self.count = count  # committed records
        self._path, self._started, self._axes = path, started, axes
        self._arrays: dict[str, np.ndarray] = {}

    def __getattr__(self, name: str) -> Field:
        if name.startswith("_"):
            raise AttributeError(name)
        try:
            return self[name]
        except KeyError:
            raise AttributeError(f"{self.name} has no {name!r}; it has {', '.join(self)}") from None

    def __getitem__(self, name: str) -> Field:
        row = variable(self.name, name)
        if not self._axes.has(row):
            raise KeyError(name)
        coords = {dim: self._values(dim) for dim in row.dims}
        return Field(name, self._values(name), row.dims, coords, row.unit, row.long_name)

    def __iter__(self) -> Iterator[str]:
        return (row.name for row in variables(self.name) if self._axes.has(row))

    def __dir__(self) -> list[str]:
        return [*super().__dir__(), *self]

    def __repr__(self) -> str:
        return f"<{self.name}: {self.count} records of {', '.join(self)}>"

    def _values(self, name: str) -> np.ndarray:
        if name not in self._arrays:
            _read(self._path, lambda opened: self._take(opened, (name,)))
        return self._arrays[name]

    def _take(self, opened: h5py.File, names: Iterable[str]) -> None:
        """Read variables of this group from its open file, those not yet read."""
        for name in names:
            if name in self._arrays:
                continue
            row = variable(self.name, name)
            shape = self._axes.shape(row)
            if row.kind == "axis" and name != growing_axis(self.name):
                self._arrays[name] = np.asarray(self._axes.along(row, self.name))
            elif 0 in shape:  # nothing stands along one of its axes, so the file leaves it out
                self._arrays[name] = np.empty((self.count, *shape))
            else:
                dataset = opened[self.name][name]
                if opened.attrs["started"] != self._started or len(dataset) < self.count:
                    raise ResultError(f"{self._path} has been written anew meanwhile: open it again")
                self._arrays[name] = dataset[: self.count]


class Result:
    """What a run recorded: `result.profiles.dissolved`, `result.ports["outlet"].pH`, `result.ledger.error`.

    status, reason, title, caution and case (the whole text) are the file's own; attributes holds them all.
    """

    def __init__(self, path: Path, attributes: Mapping[str, Any], axes: file.Axes,
                 groups: Mapping[str, Group]):
        self.path = path
        self.attributes = dict(attributes)
        self.axes = axes
        self._groups = dict(groups)

    @property
    def title(self) -> str:
        return self.attributes["title"]

    @property
    def status(self) -> str:
        """`running` (also where the run was killed), `finished`, `stopped` or `failed`."""
        return self.attributes["status"]

    @property
    def reason(self) -> str:
        return self.attributes["reason"]

    @property
    def case(self) -> str:
        return self.attributes["case"]

    @property
    def constants(self) -> str:
        """The text of the user's own constants; empty without."""
        return str(self.attributes.get("constants", ""))

    @property
    def files(self) -> dict[str, str]:
        """The texts of the other files that the case names, by name."""
        found: dict[str, str] = json.loads(self.attributes.get("files", "{}"))
        return found

    @property
    def crossings(self) -> dict[str, dict[str, Crossing]]:
        """When limits were first exceeded, step by step: see `crossings` in docs/result-file.md."""
        found: dict[str, dict[str, Crossing]] = json.loads(self.attributes.get("crossings", "{}"))
        return found

    @property
    def coarse(self) -> dict[str, dict[str, float]] | None:
        """When limits were first exceeded in half the cells, s, by port and quantity; None: not asked."""
        found: dict[str, dict[str, float]] = json.loads(self.attributes.get("coarse") or "null")
        return found

    @property
    def warnings(self) -> tuple[str, ...]:
        """What the run went beyond, such as the range of its activity law; a sentence each."""
        return tuple(str(self.attributes.get("warnings", "")).splitlines())

    @property
    def caution(self) -> str:
        return self.attributes["caution"]

    @property
    def profiles(self) -> Group:
        return self._groups["profiles"]

    @property
    def ports(self) -> dict[str, Group]:
        """The ports by name, in flow order."""
        return {name: self._groups[f"ports/{name}"] for name in self.axes.ports}

    @property
    def ledger(self) -> Group:
        return self._groups["ledger"]

    @property
    def steps(self) -> Group:
        return self._groups["steps"]

    def loaded(self) -> Result:
        """Read everything now, so that the file may go; returns the result itself."""
        def take_all(opened: h5py.File) -> None:
            for group in self._groups.values():
                group._take(opened, group)

        _read(self.path, take_all)
        return self

    def to_xarray(self, group: str = "profiles") -> xarray.Dataset:
        """One group as an xarray Dataset; ResultError where xarray is not installed."""
        try:
            import xarray
        except ImportError:
            raise ResultError("xarray is not installed: install gossan[xarray]") from None
        if group not in self._groups:
            raise ResultError(f"{self.path} has no group {group!r}; it has {', '.join(self._groups)}")
        fields = [self._groups[group][name] for name in self._groups[group]]
        axes = {row.name for row in variables(group) if row.kind == "axis"}
        made = {field.name: (field.dims, field.values, {"units": field.unit, "long_name": field.long_name})
                for field in fields}
        return xarray.Dataset({name: value for name, value in made.items() if name not in axes},
                              {name: value for name, value in made.items() if name in axes}, self.attributes)

    def __repr__(self) -> str:
        state = f"{self.status} ({self.reason})" if self.reason else self.status
        lines = [f"<Result {self.title!r}, {state}, {self.path}", *(f"  {group!r}" for group in
                 self._groups.values())]
        return "\n".join(lines) + ">"

    def _repr_html_(self) -> str:
        from gossan.store.show import page

        return page(self)


def _read(path: Path, look: Callable[[h5py.File], _Read]) -> _Read:
    """Look into the file, again where its run tore the look."""
    if not path.is_file():
        raise ResultError(f"{path} is a folder, not a file" if path.is_dir() else f"{path} does not exist")
    for attempt in range(_TRIES):
        try:
            with file.open_to_read(path) as opened:
                if "gossan_version" not in opened.attrs:
                    raise ResultError(f"{path} is not a result file of gossan")
                return look(opened)
        except PermissionError:
            raise ResultError(f"{path} may not be read by you") from None
        except (OSError, KeyError, RuntimeError, ValueError) as error:
            fault = error
        if not h5py.is_hdf5(path):
            raise ResultError(f"{path} is not a result file: it is not HDF5")
        time.sleep(_PAUSE * 2**attempt)
    raise ResultError(f"{path} is damaged and cannot be read: {fault}")


def _plain(value: Any) -> Any:
    return value.item() if isinstance(value, np.generic) else value
