"""One writer at a time, and a dead one does not count."""

from __future__ import annotations

import errno
import os
import signal

import pytest
from tests.support.killing import in_a_child

from gossan.base.errors import ResultError
from gossan.store.lock import Lock

fcntl = pytest.importorskip("fcntl")


def test_a_second_writer_is_refused_and_told_by_whom(tmp_path):
    lock = Lock(tmp_path / "gate.h5")
    with pytest.raises(ResultError, match=rf"is being written by process {os.getpid()} on"):
        Lock(tmp_path / "gate.h5")
    lock.release()
    assert not list(tmp_path.iterdir())
    Lock(tmp_path / "gate.h5").release()


def test_another_process_is_refused_too(tmp_path):
    lock = Lock(tmp_path / "gate.h5")

    def work(tell):
        with pytest.raises(ResultError):
            Lock(tmp_path / "gate.h5")
        tell(1)

    assert in_a_child(work) == (1, 0)
    lock.release()


def test_a_lock_left_by_a_dead_process_is_no_reason_to_refuse(tmp_path):
    def work(tell):
        Lock(tmp_path / "gate.h5")
        os.kill(os.getpid(), signal.SIGKILL)

    assert in_a_child(work)[1] == -signal.SIGKILL
    assert (tmp_path / "gate.h5.lock").exists()
    # not even where the dead one's number is in use again: this process wears it
    (tmp_path / "gate.h5.lock").write_text(f"process {os.getpid()} on here\n")
    Lock(tmp_path / "gate.h5").release()


def test_a_file_system_without_locks_is_no_reason_to_refuse(tmp_path, monkeypatch):
    def refuse(handle, how):
        raise OSError(errno.ENOLCK, "No locks available")

    monkeypatch.setattr(fcntl, "flock", refuse)
    Lock(tmp_path / "gate.h5").release()
