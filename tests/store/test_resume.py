"""Going on from a checkpoint, or saying why not."""

from __future__ import annotations

import shutil
from pathlib import Path

import h5py
import pytest
from tests.support import pretend
from tests.support.killing import contents

from gossan.base.errors import ResultError
from gossan.store.checkpoint import decode, state_files
from gossan.store.read import open_result
from gossan.store.write import ResultWriter


@pytest.fixture
def killed(tmp_path) -> Path:
    """A run cut off after step 16: checkpoints at steps 7 and 14, frames up to step 15."""
    path = tmp_path / "gate.h5"
    state, pace = pretend.start()
    with ResultWriter(path, pretend.axes(), "pretend", pretend.CASE, "no physics") as writer:
        pretend.record(writer, state, pace)
        for _ in range(16):
            state, pace = pretend.stepped(state, pace)
            pretend.record(writer, state, pace)
    assert open_result(path).profiles.count == 6
    return path


@pytest.fixture(scope="module")
def never_stopped(tmp_path_factory):
    path = tmp_path_factory.mktemp("whole") / "gate.h5"
    pretend.march(path, steps=20)
    return contents(path)


def test_it_ends_in_the_bits_of_a_run_never_stopped(killed, never_stopped):
    writer, parts = ResultWriter.resume(killed)
    with writer:
        assert pretend.Pretended(**parts["state"]).step == 14
        assert writer.counts["profiles"] == 5
        assert open_result(killed).profiles.count == 5, "what came after the checkpoint is written again"
    pretend.march(killed, resume=True, steps=20)
    assert contents(killed) == never_stopped


def test_a_damaged_checkpoint_is_passed_over(killed, never_stopped):
    file = max(state_files(killed), key=lambda file: decode(file.read_bytes()).serial)
    data = bytearray(file.read_bytes())
    data[len(data) // 2] ^= 255
    file.write_bytes(data)
    writer, parts = ResultWriter.resume(killed)
    writer.close()
    assert parts["state"]["step"] == 7
    pretend.march(killed, resume=True, steps=20)
    assert contents(killed) == never_stopped


def test_a_finished_file_goes_on_too(tmp_path, never_stopped):
    path = tmp_path / "gate.h5"
    pretend.march(path, steps=11)
    pretend.march(path, resume=True, steps=20)
    # the end of the first part left a checkpoint at step 11, but no row that the whole run has not
    assert contents(path) == never_stopped


def test_the_states_of_another_run_are_not_taken(killed, tmp_path):
    other = tmp_path / "other.h5"
    with ResultWriter(other, pretend.axes(), "pretend", pretend.CASE) as writer:
        writer.checkpoint({})
    for mine, theirs in zip(state_files(killed), state_files(other), strict=True):
        mine.unlink(missing_ok=True)
        if theirs.exists():
            shutil.copy(theirs, mine)
    with pytest.raises(ResultError, match="no whole checkpoint"):
        ResultWriter.resume(killed)


def test_another_version_is_told(killed, monkeypatch):
    monkeypatch.setattr("gossan.store.write.__version__", "9.9")
    with pytest.raises(ResultError, match=r"written by gossan .*, this is 9\.9"):
        ResultWriter.resume(killed)


@pytest.mark.parametrize(("make", "says"), [
    (lambda path: None, "does not exist"),
    (lambda path: path.write_bytes(b"no HDF5 at all"), "cannot be read"),
    (lambda path: h5py.File(path, "w").close(), "not a result file of gossan"),
])
def test_what_cannot_be_resumed_is_said_in_a_sentence(tmp_path, make, says):
    path = tmp_path / "gate.h5"
    make(path)
    with pytest.raises(ResultError, match=says):
        ResultWriter.resume(path)
    assert not (tmp_path / "gate.h5.lock").exists()


def test_a_run_that_goes_on_is_not_resumed_by_another(killed):
    writer, _ = ResultWriter.resume(killed)
    with writer, pytest.raises(ResultError, match="is being written by"):
        ResultWriter.resume(killed)
