"""Writing a result file so that a kill at any instant leaves every committed row."""

from __future__ import annotations

import contextlib
import json
from collections.abc import Iterable, Iterator, Mapping
from datetime import UTC, datetime
from pathlib import Path
from types import TracebackType
from typing import Any

import h5py
import numpy as np

from gossan import __version__
from gossan.base.errors import ResultError
from gossan.store import disk, file
from gossan.store.checkpoint import Checkpoint, decode, digest, encode, save, saved, state_files
from gossan.store.file import Axes
from gossan.store.layout import ATTRIBUTES, CONVENTIONS, growing_axis
from gossan.store.lock import Lock

_Rows = list[Mapping[str, Any]]


class ResultWriter:
    """A result file while its run goes on; a context manager, which closes it whatever happens.

    Rows wait in memory until frame, flush, checkpoint or finish commits them. The file gets its name at the
    first checkpoint: from then on it can be resumed. Only finish ends it; a with-block left without finish
    leaves what a kill would leave, committed rows and state files.
    """

    def __init__(self, path: str | Path, axes: Axes, title: str, case: str, caution: str = "",
                 overwrite: bool = False, constants: str = "", files: Mapping[str, str] | None = None,
                 coarse: str = ""):
        """Take the lock and begin a file; ResultError where it exists, unless overwrite."""
        self.path = Path(path)
        if self.path.exists() and not overwrite:
            raise ResultError(f"{self.path} exists: name another file, or give --overwrite to replace it")
        for port in axes.ports:
            if not port.strip(".") or "/" in port:
                raise ResultError(f"a port cannot be named {port!r}: use a name without '/', not only dots")
        started = datetime.now(UTC).isoformat()
        attributes = {"Conventions": CONVENTIONS, "title": title, "status": "running", "reason": "",
                      "gossan_version": __version__, "case": case, "constants": constants,
                      "files": json.dumps(dict(files or {}), ensure_ascii=False), "caution": caution,
                      "warnings": "", "crossings": "{}", "coarse": coarse, "started": started}
        with _told(self.path):
            lock = Lock(self.path)
        with _released_on_error(lock), _told(self.path):
            born = disk.beside(self.path, "new")
            file.create(born, axes, attributes, file.rooms(axes))
            self._begin(lock, born, axes, attributes, dict.fromkeys(axes.groups, 0), serial=0)

    def _begin(self, lock: Lock, at: Path, axes: Axes, attributes: dict[str, str], counts: dict[str, int],
               serial: int) -> None:
        self._lock: Lock | None = lock
        self._at = at  # where the file stands: self.path once it can be resumed
        self.axes = axes
        self._attributes = attributes
        self.counts = counts  # committed rows of every group
        self._serial = serial
        self._room = file.rooms(axes, counts)
        self._pending: dict[str, _Rows] = {group: [] for group in axes.groups}
        self._open()

    def _open(self) -> None:
        self._file = file.open_running(self._at)
        self._datasets = file.datasets(self._file, self.axes)

    @classmethod
    def resume(cls, path: str | Path) -> tuple[ResultWriter, dict[str, Any]]:
        """Go on with a file from its newest checkpoint; returns the writer and the parts that were kept.

        Rows committed after that checkpoint are dropped: the run will write them again, the same bits.
        Works on running, killed, stopped, failed and finished files. Dataclasses come back as dicts of their
        fields. Raises ResultError where there is nothing to go on with, and says why.
        """
        path = Path(path)
        if not path.exists():
            raise ResultError(f"{path} does not exist: there is nothing to resume")
        with _told(path):
            lock = Lock(path)
        with _released_on_error(lock), _told(path):
            born = disk.beside(path, "new")
            with _opened(path) as old:
                axes, attributes, checkpoint = _last_seen(path, old)
                attributes |= {"status": "running", "reason": "", "warnings": "", "crossings": "{}"}
                file.create(born, axes, attributes, file.rooms(axes, checkpoint.counts))
                with file.open_running(born) as new:
                    file.copy_rows(old, new, axes, checkpoint.counts)
            if checkpoint.serial not in [point.serial for point in saved(path)]:
                save(path, checkpoint)  # it stood within the file, whose place is taken now
            disk.sync(born)
            disk.replace(born, path)
            writer = cls.__new__(cls)
            writer.path = path
            writer._begin(lock, path, axes, attributes, dict(checkpoint.counts), checkpoint.serial)
        return writer, checkpoint.parts

    def frame(self, time: float, values: Mapping[str, np.ndarray], commit: bool = True) -> None:
        """Record the profiles at time (s): every variable of that group by name.

        commit: on return others can see it; without, the arrays are kept as they are until the next flush.
        """
        self._pending["profiles"].append({"time": time, **values})
        if commit:
            self.flush()

    def port(self, name: str, time: float, values: Mapping[str, Any]) -> None:
        """Record one port at time (s)."""
        self._pending[f"ports/{name}"].append({"time": time, **values})

    def ledger(self, time: float, values: Mapping[str, Any]) -> None:
        """Record the ledger at time (s)."""
        self._pending["ledger"].append({"time": time, **values})

    def steps(self, rows: Iterable[Mapping[str, float]]) -> None:
        """Record accepted steps, each with all variables of the group steps; they are numbered here."""
        self._pending["steps"].extend(rows)

    def flush(self) -> None:
        """Commit all rows that wait: values first, then the axes that say how many there are."""
        blocks = {group: self._block(group, rows) for group, rows in self._pending.items() if rows}
        if not blocks:
            return
        after = self.counts | {group: self.counts[group] + len(self._pending[group]) for group in blocks}
        with _told(self.path):
            # A new chunk moves things in the file: that is done in a copy once others can see it.
            if self._at == self.path and any(not 0 < self.counts[group] <= after[group] <= self._room[group]
                                             for group in blocks):
                self._rebuild(blocks, after)
            else:
                _extend(self._file, self._datasets, blocks, self.counts)
        self.counts = after
        for group in blocks:
            self._pending[group].clear()

    def checkpoint(self, parts: Mapping[str, Any]) -> None:
        """Commit all rows and save what the run needs to go on from here; the file appears with the first.

        parts: by name, what checkpoint.Checkpoint can hold. A later resume gives it back. Costs some
        milliseconds (the disk is waited for): call it every few seconds.
        """
        self.flush()
        checkpoint = self._checkpoint(parts)
        with _told(self.path):
            if self._at != self.path:
                self._clear_the_way()
            save(self.path, checkpoint)
            if self._at != self.path:
                self._file.close()
                disk.sync(self._at)
                disk.replace(self._at, self.path)
                self._at = self.path
                self._open()
        self._serial = checkpoint.serial

    def finish(self, status: str, parts: Mapping[str, Any], reason: str = "",
               figures: Mapping[str, Any] | None = None, counts: Mapping[str, int] | None = None) -> None:
        """End the file: compress it, put the last checkpoint in, remove the state files, give back the lock.

        status  `finished`, `stopped` or `failed`; reason in a few words
        parts   as in checkpoint: the state behind the last row, or the last good one
        figures root attributes known only now: what depends on the wall clock, and warnings
        counts  rows of every group that a run keeps which goes on from here; default all
        """
        self.flush()
        attributes = self._attributes | {"status": status, "reason": reason} | dict(figures or {})
        packed = disk.beside(self.path, "packed")
        with _told(self.path):
            file.create_packed(packed, self.axes, attributes, self._file, self.counts,
                               encode(self._checkpoint(parts, counts)))
            disk.sync(packed)
            self._file.close()
            if self._at != self.path:
                self._clear_the_way()
            disk.replace(packed, self.path)
            disk.remove(*state_files(self.path))
        self.close()

    def close(self) -> None:
        """Commit what waits, close the file and give back the lock, leaving the file to be resumed."""
        if self._lock is None:
            return
        try:
            if self._file:
                self.flush()
                self._file.close()
        finally:
            if self._at != self.path:
                self._at.unlink(missing_ok=True)  # never had a checkpoint: nothing to go on from
            self._lock.release()
            self._lock = None

    def __enter__(self) -> ResultWriter:
        return self

    def __exit__(self, kind: type[BaseException] | None, error: BaseException | None,
                 trace: TracebackType | None) -> None:
        self.close()

    def _checkpoint(self, parts: Mapping[str, Any], counts: Mapping[str, int] | None = None) -> Checkpoint:
        return Checkpoint(self._serial + 1, self._attributes["started"], __version__,
                          digest(self._attributes["case"]), dict(counts or self.counts), dict(parts))

    def _clear_the_way(self) -> None:
        """Remove the run that is overwritten: its file first, so that no file is ever without its states."""
        disk.remove(self.path, *state_files(self.path))

    def _rebuild(self, blocks: Mapping[str, dict[str, np.ndarray]], after: Mapping[str, int]) -> None:
        """Put a copy with more room in the file's place, the new rows already in it."""
        born = disk.beside(self.path, "new")
        room = file.rooms(self.axes, after)
        file.create(born, self.axes, self._attributes, room)
        with file.open_running(born) as new:
            file.copy_rows(self._file, new, self.axes, self.counts)
            _extend(new, file.datasets(new, self.axes), blocks, self.counts)
        self._file.close()
        disk.replace(born, self.path)
        self._room = room
        self._open()

    def _block(self, group: str, rows: _Rows) -> dict[str, np.ndarray]:
        """Stack rows into one array per variable, the growing axis last."""
        block: dict[str, np.ndarray] = {}
        for row in self.axes.written(group):
            shape = (len(rows), *self.axes.shape(row))
            block[row.name] = np.empty(shape)
            for i, values in enumerate(rows):
                value = np.asarray(values[row.name])
                if value.shape != shape[1:]:
                    raise ValueError(f"{group}/{row.name}: shape {value.shape} instead of {shape[1:]}")
                block[row.name][i] = value
        axis = growing_axis(group)
        if axis == "step":
            block[axis] = self.counts[group] + np.arange(1, len(rows) + 1, dtype=np.int64)
        else:
            block[axis] = np.array([row[axis] for row in rows], np.float64)
        return block


def _extend(target: h5py.File, datasets: file.Datasets, blocks: Mapping[str, dict[str, np.ndarray]],
            counts: Mapping[str, int]) -> None:
    """Commit rows behind the first counts of each group."""
    for group, block in blocks.items():
        for name, rows in block.items():
            if name != growing_axis(group):
                file.put(datasets[group][name], counts[group], rows)
    target.flush()
    for group, block in blocks.items():
        axis = growing_axis(group)
        file.put(datasets[group][axis], counts[group], block[axis])
    target.flush()


def last_parts(path: str | Path) -> dict[str, Any]:
    """What the newest checkpoint of a file kept, which is left as it is: parts as in ResultWriter.checkpoint.

    Works while another process writes the file. Raises ResultError where no whole checkpoint is to be had.
    """
    path = Path(path)
    with _told(path), _opened(path) as old:
        return _last_seen(path, old)[2].parts


def _last_seen(path: Path, old: h5py.File) -> tuple[Axes, dict[str, str], Checkpoint]:
    """A file's axes and attributes, and its own newest checkpoint, from beside it or within it."""
    found = saved(path)
    try:
        attributes = {name: str(old.attrs[name]) for name in ATTRIBUTES}
        axes = file.read_axes(old)
        rows = file.committed(old, axes.groups)
        if "checkpoint" in old:
            found.append(decode(old["checkpoint/state"][:].tobytes()))
    except (OSError, KeyError, RuntimeError, ValueError) as error:
        raise ResultError(f"{path} is damaged and cannot be resumed: {error}") from error
    own = [point for point in found
           if point.started == attributes["started"] and point.case == digest(attributes["case"])
           and point.counts.keys() == rows.keys()
           and all(point.counts[group] <= rows[group] for group in rows)]
    if not own:
        raise ResultError(f"{path} has no whole checkpoint, neither inside nor in {path.name}.state-1 or -2 "
                          "beside it: what it recorded can be read, but the case has to be run anew")
    newest = max(own, key=lambda point: point.serial)
    if newest.version != __version__:
        raise ResultError(f"{path} was written by gossan {newest.version}, this is {__version__}: "
                          f"resume it with {newest.version}, or run the case anew")
    return axes, attributes, newest


@contextlib.contextmanager
def _opened(path: Path) -> Iterator[h5py.File]:
    """Open a file of ours for reading; ResultError where it is none."""
    try:
        old = file.open_to_read(path)
    except OSError as error:
        raise ResultError(f"{path} cannot be read as a result file: {error}") from error
    with old:
        if "gossan_version" not in old.attrs:
            raise ResultError(f"{path} is not a result file of gossan")
        yield old


@contextlib.contextmanager
def _told(path: Path) -> Iterator[None]:
    """Say what the system refused, and about which file."""
    try:
        yield
    except OSError as error:
        raise ResultError(f"{path} cannot be written: {error.strerror or error}") from error


@contextlib.contextmanager
def _released_on_error(lock: Lock) -> Iterator[None]:
    try:
        yield
    except BaseException:
        lock.release()
        raise
