"""An HDF5 file in the result file's layout: created, extended, copied.

A running file never changes its structure where others can see it. Measured by replaying every prefix of
the writes that HDF5 makes: a kill while HDF5 places a new chunk, splits a chunk index or moves the end of the
file can make *all* frames unreadable. So a group has room for many rows in one chunk per variable, placed
before the file gets its name; a row is then raw data in place and, in a second flush, a longer axis.
"""

from __future__ import annotations

from collections.abc import Iterable, Iterator, Mapping
from dataclasses import dataclass, field
from pathlib import Path

import h5py
import numpy as np

from gossan.store.layout import Variable, growing_axis, recorded, variable, variables

Datasets = dict[str, dict[str, h5py.h5d.DatasetID]]

_TEXT = h5py.string_dtype()

# Rows that a group has room for at first: the defaults of a case need 101 frames and 1001 port rows.
_ROOM = {"profiles": 128, "steps": 16384}
_ROOM_ELSE = 1024

_LARGEST_CHUNK = 2**31  # bytes; HDF5 allows 4 GiB
_PACKED_CHUNK = 2**20  # bytes, about: small enough to read one frame, large enough to read one variable
_PACKED_ROWS = 16  # rows at least: fewer compress badly and make reading through time slow
_SLAB = 2**24  # bytes copied at once


@dataclass(frozen=True)
class Axes:
    """What stands along the axes of a result file.

    component, mineral, species  names; the tracers stand behind the components
    x, face                      m from the inlet, (cell,) and (cell + 1,)
    layer                        (cell,) names
    ports                        name to m from the inlet
    parts                        of the layout's PARTS, those that the case has
    """

    component: tuple[str, ...]
    mineral: tuple[str, ...]
    species: tuple[str, ...]
    x: np.ndarray
    face: np.ndarray
    layer: tuple[str, ...]
    ports: dict[str, float] = field(default_factory=dict)
    parts: frozenset[str] = frozenset()

    @property
    def groups(self) -> tuple[str, ...]:
        """The groups of a file with these axes, the checkpoint's left out."""
        return ("profiles", *(f"ports/{name}" for name in self.ports), "ledger", "steps")

    def along(self, row: Variable, group: str) -> np.ndarray | tuple[str, ...] | float:
        """What an axis holds in a group, the growing ones left out."""
        return getattr(self, row.name) if row.dims else self.ports[group.removeprefix("ports/")]

    def shape(self, row: Variable) -> tuple[int, ...]:
        """The shape of one record of a variable: its dimensions without the growing axis."""
        return tuple(len(getattr(self, dim)) for dim in row.dims if dim != growing_axis(row.group))

    def written(self, group: str) -> tuple[Variable, ...]:
        """The recorded variables of a group, without those along an axis on which nothing stands."""
        return tuple(row for row in recorded(group) if self.has(row) and 0 not in self.shape(row))

    def has(self, row: Variable) -> bool:
        """Whether the case has the part that a variable tells of."""
        return not row.part or row.part in self.parts


def rooms(axes: Axes, counts: Mapping[str, int] | None = None) -> dict[str, int]:
    """Rows of each group to make room for: the usual number, doubled until one more than counts fits."""
    room = {}
    for group in axes.groups:
        room[group] = _ROOM.get(group, _ROOM_ELSE)
        while room[group] <= (counts or {}).get(group, 0):
            room[group] *= 2
    return room


def open_running(path: Path) -> h5py.File:
    """Open a file to go on writing it.

    Without a chunk cache rows go straight to their place. `earliest` because `latest` marks the file as open,
    and a killed writer would leave it so.
    """
    return h5py.File(path, "r+", libver="earliest", locking=False, rdcc_nbytes=0)


def open_to_read(path: Path) -> h5py.File:
    """Open a file to read it, while another process may write it; OSError where it is no whole HDF5 file.

    HDF5 wants one way of locking per file and process, so one that is already open the usual way, in xarray
    say, is opened the usual way again.
    """
    try:
        return h5py.File(path, "r", locking=False)
    except OSError:
        return h5py.File(path, "r")


def create(path: Path, axes: Axes, attributes: Mapping[str, str], room: Mapping[str, int]) -> None:
    """Write a file with all axes and no rows yet."""
    with h5py.File(path, "w", libver="earliest", locking=False) as file:
        _lay_out(file, axes, attributes, {group: (0, rows, {}) for group, rows in room.items()})


def create_packed(path: Path, axes: Axes, attributes: Mapping[str, str], source: h5py.File,
                  counts: Mapping[str, int], checkpoint: bytes) -> None:
    """Write a file that will not grow: the first rows of source, compressed, and the checkpoint."""
    filters = {"compression": "gzip", "compression_opts": 1, "shuffle": True, "fletcher32": True}
    with h5py.File(path, "w", libver="earliest", locking=False) as file:
        _lay_out(file, axes, attributes, {group: (rows, 0, filters) for group, rows in counts.items()})
        copy_rows(source, file, axes, counts)
        data = np.frombuffer(checkpoint, np.uint8)
        state = file.create_dataset("checkpoint/state", data=data, **filters)
        state.make_scale("state")
        state.attrs.update(units="1", long_name="everything needed to go on bit for bit")


def _lay_out(file: h5py.File, axes: Axes, attributes: Mapping[str, str],
             rows: Mapping[str, tuple[int, int, dict]]) -> None:
    """Make all groups and variables; rows is each group's length, room to grow (0: none) and filters."""
    file.attrs.update(attributes)
    for name in axes.groups:
        group = file.create_group(name)
        grown = growing_axis(name)
        held = {row: axes.along(row, name) for row in variables(name)
                if row.kind == "axis" and row.name != grown}
        made = {row: _axis(group, row, values) for row, values in held.items() if np.size(values)}
        # the growing axis last, so that HDF5 too writes its header last
        for row in (*axes.written(name), variable(name, grown)):
            made[row] = _growing(group, row, axes.shape(row), *rows[name])
        _describe(made)


def _axis(group: h5py.Group, row: Variable, values: np.ndarray | tuple[str, ...] | float) -> h5py.Dataset:
    if isinstance(values, tuple):
        return group.create_dataset(row.name, data=np.array(values, object), dtype=_TEXT)
    return group.create_dataset(row.name, data=np.asarray(values, np.float64))


def _growing(group: h5py.Group, row: Variable, shape: tuple[int, ...], length: int, room: int,
             filters: dict) -> h5py.Dataset:
    size = 8 * int(np.prod(shape, dtype=np.int64))
    if room:
        chunk = min(room, max(1, _LARGEST_CHUNK // size))
    else:
        chunk = max(1, min(length, max(_PACKED_ROWS, _PACKED_CHUNK // size)))
    whole = row.name == "step"
    return group.create_dataset(row.name, (length, *shape), np.int64 if whole else np.float64,
                                maxshape=(None, *shape), chunks=(chunk, *shape),
                                fillvalue=None if whole else np.nan, fill_time="never" if room else "ifset",
                                **filters)


def _describe(made: Mapping[Variable, h5py.Dataset]) -> None:
    """Give every variable of a group its unit and long name, and tie the axes to it."""
    scales = {row.name: dataset for row, dataset in made.items() if row.dims == (row.name,)}
    for name, dataset in scales.items():
        dataset.make_scale(name)
    others = [row for row in made if row.kind == "axis" and row.name not in scales]
    for row, dataset in made.items():
        dataset.attrs["units"] = row.unit
        dataset.attrs["long_name"] = row.long_name
        if row.kind != "axis":
            dataset.attrs["_FillValue"] = np.nan
            also = [other.name for other in others if set(other.dims) <= set(row.dims)]
            if also:
                dataset.attrs["coordinates"] = " ".join(also)
        if row.name not in scales:
            for i, dim in enumerate(row.dims):
                dataset.dims[i].attach_scale(scales[dim])


def datasets(file: h5py.File, axes: Axes) -> Datasets:
    """The growing data sets of every group, the axis last: looking them up by name costs more than a row."""
    return {group: {name: file[group][name].id
                    for name in (*(row.name for row in axes.written(group)), growing_axis(group))}
            for group in axes.groups}


def put(dataset: h5py.h5d.DatasetID, start: int, rows: np.ndarray) -> None:
    """Write rows from start on and let the data set end behind them.

    Straight to HDF5: through h5py's own indexing a frame took three times as long (measured).
    rows  float64 or int64 like the data set, contiguous
    """
    dataset.set_extent((start + len(rows), *rows.shape[1:]))
    space = dataset.get_space()
    space.select_hyperslab((start,) + (0,) * (rows.ndim - 1), rows.shape)
    dataset.write(h5py.h5s.create_simple(rows.shape), space, rows)


def copy_rows(source: h5py.File, target: h5py.File, axes: Axes, counts: Mapping[str, int]) -> None:
    """Copy the first counts rows of every group."""
    for group, names in datasets(target, axes).items():
        for name, new in names.items():
            old = source[group][name]
            for start, stop in _slabs(target[group][name], counts[group]):
                put(new, start, old[start:stop])
            new.set_extent((counts[group], *old.shape[1:]))


def _slabs(dataset: h5py.Dataset, count: int) -> Iterator[tuple[int, int]]:
    """Stretches of rows of about _SLAB bytes that end where a chunk of the data set ends."""
    size = 8 * int(np.prod(dataset.shape[1:], dtype=np.int64))
    chunk = dataset.chunks[0]
    rows = _SLAB // size // chunk * chunk or max(1, min(chunk, _SLAB // size))
    for start in range(0, count, rows):
        yield start, min(start + rows, count)


def read_axes(file: h5py.File) -> Axes:
    """The axes of a file that was written with this layout; KeyError where it was not."""
    profiles = file["profiles"]

    def names(axis: str) -> tuple[str, ...]:
        return tuple(profiles[axis].asstr()[:]) if axis in profiles else ()

    ports = {name: float(group["x"][()]) for name, group in file["ports"].items()} if "ports" in file else {}
    ports = dict(sorted(ports.items(), key=lambda item: item[1]))
    parts = frozenset(
        row.part for group in ("profiles", "ledger") for row in recorded(group)
        if row.part and row.name in file[group]
    )  # fmt: skip
    return Axes(names("component"), names("mineral"), names("species"), profiles["x"][:], profiles["face"][:],
                names("layer"), ports, parts)


def committed(file: h5py.File, groups: Iterable[str]) -> dict[str, int]:
    """How many rows of each group are whole."""
    return {group: len(file[group][growing_axis(group)]) for group in groups}
