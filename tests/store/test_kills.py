"""A kill at any instant: what was committed reads, and the resumed run ends in the same bits."""

from __future__ import annotations

import io
import os
import sys
from pathlib import Path

import h5py
import pytest
from tests.support import pretend
from tests.support.killing import assert_frames, campaign, contents, in_a_child, remove_all

from gossan.store import file
from gossan.store.read import open_result
from gossan.store.write import ResultWriter

pytestmark = [pytest.mark.skipif(not hasattr(os, "pidfd_open"), reason="kills processes the Linux way"),
              pytest.mark.filterwarnings("ignore:This process:DeprecationWarning")]


def test_twenty_kills_at_random_moments(tmp_path):
    hit = campaign(tmp_path / "gate.h5", kills=20, seed=20261201)
    assert hit["running"] >= 5, f"too few kills hit a run in its course: {hit}"


@pytest.fixture(autouse=True)
def no_waiting_for_the_disk(monkeypatch):
    """What a process has written outlives it without fsync, which is there for power cuts."""
    monkeypatch.setattr(os, "fsync", lambda handle: None)


class Recorded(io.FileIO):
    """A file that keeps what HDF5 does to it, in order."""

    def __init__(self, path: Path):
        super().__init__(path, "r+")
        self.before = path.read_bytes()
        self.path = path
        self.done: list[tuple[int, bytes | None]] = []  # where, what; None: the file is cut there

    def write(self, data) -> int:
        self.done.append((self.tell(), bytes(data)))
        return super().write(data)

    def truncate(self, size=None) -> int:
        self.done.append((self.tell() if size is None else size, None))
        return super().truncate(size)


def test_no_instant_between_two_writes_of_hdf5_is_fatal(tmp_path, monkeypatch):
    """Replays every prefix of what HDF5 wrote, changes to a larger file included: each can be read."""
    monkeypatch.setattr(file, "_ROOM", {"profiles": 4})
    monkeypatch.setattr(file, "_ROOM_ELSE", 8)
    sessions: list[tuple[Recorded, list[tuple[int, int]]]] = []  # each opening of FILE; (writes, frames)

    def opened(path: Path) -> h5py.File:
        if path != target:
            return usual(path)
        record = Recorded(path)
        sessions.append((record, [(0, frames())]))
        return h5py.File(record, "r+", libver="earliest", rdcc_nbytes=0)

    def frames() -> int:
        return h5py.File(io.BytesIO(target.read_bytes()), "r")["profiles/time"].shape[0]

    target = tmp_path / "gate.h5"
    usual = file.open_running
    monkeypatch.setattr(file, "open_running", opened)
    pretend.march(target, steps=15, tell=lambda n: sessions[-1][1].append((len(sessions[-1][0].done), n))
                  if sessions else None)

    instants = 0
    copy = tmp_path / "copy.h5"
    for record, told in sessions:
        record.close()
        data = bytearray(record.before)
        for n, (where, what) in enumerate(record.done, 1):
            if what is None:
                del data[where:]
                data.extend(bytes(where - len(data)))
            else:
                data.extend(bytes(max(0, where + len(what) - len(data))))
                data[where:where + len(what)] = what
            copy.write_bytes(data)
            assert_frames(copy, max(count for writes, count in told if writes <= n))
            instants += 1
    assert len(sessions) >= 3, "the rooms were meant to overflow"
    assert instants > 200


@pytest.mark.parametrize("old", ["none", "killed"])
def test_no_instant_between_two_changes_of_the_folder_is_fatal(tmp_path, old):
    """Ends the process before the first, second, third ... opening to write, renaming and deleting."""
    whole = tmp_path / "whole.h5"
    pretend.march(whole, steps=8)
    expected = contents(whole)
    path = tmp_path / "gate.h5"
    for last in range(1, 200):
        remove_all(path)
        if old == "killed":
            unfinished(path)

        def work(tell, last=last):
            end_before(last, path)
            pretend.march(path, steps=8, tell=tell, overwrite=old != "none")

        told, code = in_a_child(work)
        assert code in (0, 9)
        if path.exists():
            assert_frames(path, told)
            pretend.march(path, resume=True, steps=8)
        else:
            pretend.march(path, steps=8)
        assert contents(path) == expected
        left = {p.name for p in path.parent.glob(f"{path.name}*")}
        assert not left & {"gate.h5.lock", "gate.h5.state-1", "gate.h5.state-2"}
        if code == 0:
            break
    assert 10 < last < 199


@pytest.mark.parametrize("ended", [True, False])
def test_resuming_can_itself_be_killed(tmp_path, ended):
    whole = tmp_path / "whole.h5"
    pretend.march(whole, steps=8)
    path = tmp_path / "gate.h5"
    pretend.march(path, steps=7) if ended else unfinished(path)
    for last in range(1, 100):
        def work(tell, last=last):
            end_before(last, path)
            ResultWriter.resume(path)[0].close()

        _, code = in_a_child(work)
        assert_frames(path, 1)
        if code == 0:
            break
    assert 3 < last < 99
    pretend.march(path, resume=True, steps=8)
    assert contents(path) == contents(whole)


def unfinished(path: Path) -> None:
    """Leave what a kill leaves, of another run of the same case."""
    writer = ResultWriter(path, pretend.axes(), "pretend", pretend.CASE, "no physics")
    with writer:
        pretend.record(writer, *pretend.start())
    assert open_result(path).status == "running"


def end_before(last: int, path: Path) -> None:
    """Let this process vanish right before its last-th change of files named like path."""
    seen = 0

    def watch(event: str, arguments: tuple) -> None:
        nonlocal seen
        opens = event == "open" and arguments[2] & (os.O_WRONLY | os.O_RDWR)
        if (opens or event in ("os.rename", "os.remove")) and path.name in str(arguments[0]):
            seen += 1
            if seen == last:
                os._exit(9)

    sys.addaudithook(watch)
