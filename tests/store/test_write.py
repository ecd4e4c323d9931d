"""What the writer writes, readers of netCDF-4 read: while it writes, after a kill and at the end."""

from __future__ import annotations

import json
import subprocess
import sys
from dataclasses import replace
from pathlib import Path

import h5py
import numpy as np
import pytest
import xarray
from tests.support import pretend
from tests.support.killing import assert_frames, contents

from gossan.base.errors import ResultError
from gossan.store import file
from gossan.store.layout import variables
from gossan.store.read import open_result
from gossan.store.write import ResultWriter

PARTS = {"state": pretend.start()[0]}
GROUPS = ["profiles", "ports/outlet", "ports/Brunnen östlich", "ledger", "steps"]


@pytest.fixture(scope="module")
def finished(tmp_path_factory) -> Path:
    path = tmp_path_factory.mktemp("finished") / "gate.h5"
    pretend.march(path, steps=12)
    return path


@pytest.fixture(scope="module")
def running(tmp_path_factory) -> Path:
    """A file as a killed run leaves it."""
    path = tmp_path_factory.mktemp("running") / "gate.h5"
    state, pace = pretend.start()
    with ResultWriter(path, pretend.axes(), "pretend", pretend.CASE, "no physics") as writer:
        pretend.record(writer, state, pace)
        for _ in range(12):
            state, pace = pretend.stepped(state, pace)
            pretend.record(writer, state, pace)
    return path


@pytest.mark.parametrize("kind", ["running", "finished"])
@pytest.mark.parametrize("group", GROUPS)
def test_xarray_reads_every_group_with_its_coordinates(kind, group, request):
    path = request.getfixturevalue(kind)
    with xarray.open_dataset(path, group=group, engine="h5netcdf") as data:
        for row in variables(group):
            assert data[row.name].dims == row.dims
            assert data[row.name].attrs["units"] == row.unit
            assert data[row.name].attrs["long_name"] == row.long_name
            assert (row.name in data.coords) == (row.kind == "axis")
        assert not [dim for dim in data.dims if "phony" in str(dim)]
        if group != "steps":
            assert list(data.component.values) == list(pretend.axes().component)
    assert_frames(path, 5)


@pytest.mark.parametrize("options", [{}, {"decode_timedelta": True}, {"decode_times": True}])
def test_seconds_stay_numbers(finished, options):
    for group in GROUPS:
        with xarray.open_dataset(finished, group=group, engine="h5netcdf", **options) as data:
            assert data.time.dtype == np.float64
    with xarray.open_dataset(finished, group="steps", engine="h5netcdf", **options) as data:
        assert data.dt.dtype == data.seconds.dtype == np.float64


def test_xarray_selects_by_name(finished):
    with xarray.open_dataset(finished, group="profiles", engine="h5netcdf") as data:
        zinc = data.dissolved.sel(component="Zn^2+").isel(time=0)
        assert np.array_equal(zinc.values, pretend.start()[0].dissolved[0])
        assert list(data.layer.values[[0, -1]]) == ["sand", "Sülfid-Gitter №1"]
        long = "fresh zinc sulfide, a name of more than thirty-two letters"
        assert data.solid.sel(mineral=long).shape == (5, pretend.CELLS)


def test_the_whole_tree_opens(finished):
    with xarray.open_datatree(finished, engine="h5netcdf") as tree:
        assert {"/profiles", "/ports/outlet", "/ledger", "/steps"} <= set(tree.groups)


def test_the_finished_file_is_packed_and_alone(finished):
    with h5py.File(finished, "r") as data:
        dissolved = data["profiles/dissolved"]
        assert (dissolved.compression, dissolved.compression_opts) == ("gzip", 1)
        assert dissolved.shuffle
        assert dissolved.fletcher32
        assert data.attrs["Conventions"] == "CF-1.11"
    assert [other.name for other in finished.parent.iterdir()] == [finished.name]


WATCH = """
import json, sys
import xarray
with xarray.open_dataset(sys.argv[1], group="profiles", engine="h5netcdf") as data:
    print(json.dumps([len(data.time), data.dissolved.values.sum(axis=(1, 2)).tolist()]))
"""


def test_another_process_reads_every_frame_committed_so_far(tmp_path):
    path = tmp_path / "gate.h5"
    state, pace = pretend.start()
    sums = []
    with ResultWriter(path, pretend.axes(), "pretend", pretend.CASE) as writer:
        for n in range(4):
            writer.frame(state.time, pretend.profile(state))
            sums.append(float(state.dissolved.sum()))
            writer.checkpoint({"state": state})
            state, pace = pretend.stepped(state, pace)
            if n in (0, 3):
                watch = [sys.executable, "-c", WATCH, path]
                seen = subprocess.run(watch, capture_output=True, check=True).stdout
                assert json.loads(seen) == [n + 1, pytest.approx(sums, rel=1e-14)]
            assert open_result(path).profiles.count == n + 1


def test_a_reader_beside_a_fast_writer_sees_only_whole_frames(tmp_path, monkeypatch):
    """Reads again and again, through the changes to a larger file and the packing at the end."""
    path = tmp_path / "gate.h5"
    command = [sys.executable, "-m", "tests.support.pretend", str(path), "--steps", "900"]
    seen = set()
    with subprocess.Popen(command, stdout=subprocess.DEVNULL, cwd=Path(__file__).parents[2]) as writer:
        while writer.poll() is None:
            if path.exists():
                assert_frames(path, 1)
                seen.add(open_result(path).profiles.count)
    assert writer.returncode == 0
    assert len(seen) >= 3
    assert open_result(path).profiles.count == 301


def test_an_existing_file_is_kept_unless_told_otherwise(finished, tmp_path):
    before = finished.read_bytes()
    with pytest.raises(ResultError, match=r"exists.*--overwrite"):
        ResultWriter(finished, pretend.axes(), "t", "c")
    assert finished.read_bytes() == before
    path = tmp_path / "gate.h5"
    path.write_bytes(before)
    with ResultWriter(path, pretend.axes(), "anew", "c", overwrite=True) as writer:
        assert path.read_bytes() == before, "the old file stands until the new one can be resumed"
        writer.checkpoint(PARTS)
        assert open_result(path).title == "anew"


def test_what_never_had_a_checkpoint_leaves_nothing(tmp_path):
    with ResultWriter(tmp_path / "gate.h5", pretend.axes(), "t", "c") as writer:
        writer.frame(0.0, pretend.profile(pretend.start()[0]))
    assert not list(tmp_path.iterdir())


def test_the_status_says_how_it_ended(tmp_path):
    path = tmp_path / "gate.h5"
    with ResultWriter(path, pretend.axes(), "t", pretend.CASE) as writer:
        writer.checkpoint(PARTS)
        assert (open_result(path).status, open_result(path).reason) == ("running", "")
        writer.finish("stopped", PARTS, "clogged", {"seconds": 1.5})
    result = open_result(path)
    assert (result.status, result.reason, result.attributes["seconds"]) == ("stopped", "clogged", 1.5)
    writer, _ = ResultWriter.resume(path)
    with writer:
        result = open_result(path)
        assert (result.status, result.reason) == ("running", "")
        assert "seconds" not in result.attributes
        writer.finish("finished", PARTS)
    assert open_result(path).status == "finished"


def test_long_text_survives(tmp_path):
    path = tmp_path / "gate.h5"
    case = "# Grün ist die Gosse\n" * 20_000  # beyond the 64 KiB that HDF5 keeps in a header
    with ResultWriter(path, pretend.axes(), "Ünïcode ☂", case, "careful") as writer:
        writer.checkpoint(PARTS)
        assert open_result(path).case == case
        writer.finish("finished", PARTS)
    result = open_result(path)
    assert (result.title, result.case, result.caution) == ("Ünïcode ☂", case, "careful")


def test_a_case_without_minerals_or_ports(tmp_path):
    path = tmp_path / "gate.h5"
    axes = replace(pretend.axes(), mineral=(), ports={})
    state = pretend.start()[0]
    values = pretend.profile(state) | {"solid": np.empty((0, pretend.CELLS)), "saturation": np.empty((0, 12))}
    with ResultWriter(path, axes, "tracer", "c") as writer:
        writer.frame(0.0, values)
        writer.finish("finished", PARTS)
    result = open_result(path)
    assert result.profiles.solid.values.shape == (1, 0, pretend.CELLS)
    assert result.ports == {}
    with xarray.open_dataset(path, group="profiles", engine="h5netcdf") as data:
        assert "solid" not in data


def test_a_group_that_outgrows_its_room_gets_more(tmp_path, monkeypatch):
    whole = tmp_path / "whole.h5"
    pretend.march(whole)
    monkeypatch.setattr(file, "_ROOM", {"profiles": 3})
    monkeypatch.setattr(file, "_ROOM_ELSE", 4)
    grown = tmp_path / "grown.h5"
    pretend.march(grown)
    assert contents(grown) == contents(whole)


def test_a_wrong_shape_or_a_missing_variable_is_a_fault_of_ours(tmp_path):
    values = pretend.profile(pretend.start()[0])
    with pytest.raises(ValueError, match="profiles/pH"), \
            ResultWriter(tmp_path / "a.h5", pretend.axes(), "t", "c") as writer:
        writer.frame(0.0, values | {"pH": np.zeros(3)})
    with pytest.raises(KeyError, match="head"), \
            ResultWriter(tmp_path / "b.h5", pretend.axes(), "t", "c") as writer:
        writer.frame(0.0, {name: value for name, value in values.items() if name != "head"})


@pytest.mark.parametrize("name", ["a/b", ".", ".."])
def test_port_names_that_hdf5_would_read_as_paths_are_refused(tmp_path, name):
    with pytest.raises(ResultError, match="port"):
        ResultWriter(tmp_path / "gate.h5", replace(pretend.axes(), ports={name: 1.0}), "t", "c")


def test_a_folder_that_is_missing_is_told(tmp_path):
    with pytest.raises(ResultError, match="No such file or directory"):
        ResultWriter(tmp_path / "nowhere" / "gate.h5", pretend.axes(), "t", "c")
