"""A Result gives arrays with names and units, shows itself, and says what is wrong with a file."""

from __future__ import annotations

import html.parser
from pathlib import Path

import h5py
import numpy as np
import pytest
import xarray
from tests.support import pretend

from gossan.base.errors import ResultError
from gossan.store.read import Result, open_result


@pytest.fixture(scope="module")
def path(tmp_path_factory) -> Path:
    path = tmp_path_factory.mktemp("read") / "gate.h5"
    pretend.march(path, steps=12)
    return path


@pytest.fixture
def result(path) -> Result:
    return open_result(path)


def test_a_field_knows_what_it_is(result):
    field = result.profiles.dissolved
    assert (field.unit, field.dims, field.values.shape) == ("mol m-3", ("time", "component", "x"), (5, 4, 12))
    assert list(field.coords["component"]) == list(pretend.axes().component)
    assert np.array_equal(np.asarray(field), field.values)
    assert "mol m-3" in repr(field)
    assert result.profiles.time.coords["time"] is result.profiles.time.values
    assert float(result.ports["outlet"].x.values) == 1.2
    assert list(result.ports) == ["Brunnen östlich", "outlet"], "in flow order"


def test_selecting_by_name_and_by_nearest_number(result):
    time = result.profiles.time.values
    zinc = result.profiles.dissolved.sel(component="Zn^2+", time=time[2] + 0.01)
    assert zinc.dims == ("x",)
    assert np.array_equal(zinc.values, result.profiles.dissolved.values[2, 0])
    assert result.profiles.pH.sel(x=1.19, time=0.0).values == result.profiles.pH.values[0, -1]


def test_a_wrong_name_is_answered_with_the_right_one(result):
    with pytest.raises(ResultError, match=r"did you mean Zn\^2\+"):
        result.profiles.dissolved.sel(component="Zn2+")
    with pytest.raises(ResultError, match="no axis 'mineral'"):
        result.profiles.dissolved.sel(mineral="sphalerite")
    with pytest.raises(AttributeError, match="profiles has no 'dissolvd'; it has time, x"):
        _ = result.profiles.dissolvd
    with pytest.raises(ResultError, match="has no group 'port'"):
        result.to_xarray("port")


@pytest.mark.parametrize("group", ["profiles", "ports/outlet", "ledger", "steps"])
def test_to_xarray_is_what_xarray_reads(result, path, group):
    with xarray.open_dataset(path, group=group, engine="h5netcdf") as expected:
        xarray.testing.assert_equal(result.to_xarray(group), expected)
        assert set(result.to_xarray(group).coords) == set(expected.coords)


def test_it_reads_while_xarray_holds_the_same_file(path):
    with xarray.open_dataset(path, group="profiles", engine="h5netcdf"):
        assert open_result(path).profiles.pH.values.shape == (5, 12)


def test_a_loaded_result_needs_no_file(path, tmp_path):
    copy = tmp_path / "copy.h5"
    copy.write_bytes(path.read_bytes())
    result = open_result(copy).loaded()
    copy.unlink()
    assert result.profiles.dissolved.values.shape == (5, 4, 12)
    assert result.steps.dt.values.shape == (12,)


def test_a_file_that_was_replaced_is_not_mixed_in(tmp_path):
    path = tmp_path / "gate.h5"
    pretend.march(path, steps=12)
    result = open_result(path)
    assert result.profiles.pH.values.shape == (5, 12)
    pretend.march(path, steps=12, overwrite=True)
    with pytest.raises(ResultError, match="written anew"):
        _ = result.profiles.pe


def test_it_shows_itself(result):
    text = repr(result)
    assert "pretend" in text
    assert "finished" in text
    page = result._repr_html_()
    for part in ("no physics", "Brunnen östlich", "finished", "flux-averaged", "mol m-3", "5 records"):
        assert part in page

    class Balanced(html.parser.HTMLParser):
        open: list[str] = []  # noqa: RUF012

        def handle_starttag(self, tag, attributes):
            self.open.append(tag)

        def handle_endtag(self, tag):
            assert self.open.pop() == tag

    Balanced().feed(page)
    assert not Balanced.open


def test_a_title_cannot_write_into_the_page(path):
    result = open_result(path)
    result.attributes["title"] = "<script>alert(1)</script>"
    assert "<script>" not in result._repr_html_()


@pytest.mark.parametrize(("data", "says"), [
    (None, "does not exist"),
    (b"", "not HDF5"),
    (b"title = 'a case'", "not HDF5"),
])
def test_no_result_file_is_said_in_a_sentence(tmp_path, data, says):
    path = tmp_path / "gate.h5"
    if data is not None:
        path.write_bytes(data)
    with pytest.raises(ResultError, match=says):
        open_result(path)


def test_other_folders_files_and_pieces_are_refused(tmp_path, path):
    with pytest.raises(ResultError, match="folder"):
        open_result(tmp_path)
    other = tmp_path / "other.h5"
    with h5py.File(other, "w") as file:
        file["x"] = [1.0]
    with pytest.raises(ResultError, match="not a result file of gossan"):
        open_result(other)
    whole = path.read_bytes()
    for part in (0.1, 0.5, 0.95):
        other.write_bytes(whole[: int(len(whole) * part)])
        with pytest.raises(ResultError, match="damaged"):
            open_result(other).loaded()


def test_a_flipped_byte_in_packed_data_is_noticed(tmp_path, path):
    data = bytearray(path.read_bytes())
    with h5py.File(path, "r") as file:
        chunk = file["profiles/dissolved"].id.get_chunk_info(0)
    data[chunk.byte_offset + chunk.size // 2] ^= 1
    other = tmp_path / "other.h5"
    other.write_bytes(data)
    with pytest.raises(ResultError, match="damaged"):
        _ = open_result(other).profiles.dissolved
