"""What goes into a checkpoint comes out, bit for bit, or not at all."""

from __future__ import annotations

from dataclasses import dataclass, replace

import numpy as np
import pytest

from gossan.store.checkpoint import Checkpoint, decode, digest, encode, save, saved, state_files


@dataclass(frozen=True, slots=True)
class Inner:
    dt: float
    names: tuple[str, ...]


def checkpoint(serial=1, **parts) -> Checkpoint:
    return Checkpoint(serial, "2026-12-01T08:00:00+00:00", "0.1.0", digest("case"), {"profiles": 3}, parts)


ARRAYS = [
    np.array([0.1, -0.0, np.nan, -np.inf, 5e-324, np.finfo(float).max]),
    np.frombuffer(np.uint64(0x7FF8000000000ABC).tobytes(), float),  # a NaN that carries a payload
    np.asfortranarray(np.arange(6.0).reshape(2, 3)),
    np.arange(24.0).reshape(2, 3, 4)[:, ::2, 1:],
    np.array([[1, 0, 2]], np.int8),
    np.zeros((0, 5)),
    np.array(3.5),
    np.array([1, -2], ">i8"),
    np.array(["Zn^2+", "Grün"]),
    np.array([True, False]),
]


@pytest.mark.parametrize("array", ARRAYS)
def test_arrays_keep_bits_type_shape_and_order(array):
    back = decode(encode(checkpoint(a=array, b=1))).parts["a"]
    assert back.dtype == array.dtype.newbyteorder("=")
    assert back.shape == array.shape
    assert back.tobytes() == array.astype(back.dtype).tobytes()
    assert back.flags.f_contiguous == array.flags.f_contiguous or not array.flags.forc
    assert back.flags.writeable


def test_numbers_text_and_nests_come_back_as_they_were():
    inner = Inner(0.1 + 0.2, ("a", "Ü"))
    parts = {"pace": inner, "n": 2**70, "x": float("nan"), "flag": True, "none": None, "list": [1, (2, -0.0)],
             "scalar": np.float64(1 / 3)}
    back = decode(encode(checkpoint(**parts))).parts
    assert back["pace"] == {"dt": inner.dt, "names": inner.names}
    assert Inner(**back["pace"]) == inner
    assert repr([back[name] for name in ("n", "x", "flag", "none", "list", "scalar")]) == repr(
        [parts[name] for name in ("n", "x", "flag", "none", "list", "scalar")])


@pytest.mark.parametrize("thing", [object(), {1: 2}, {1, 2}, np.array([object()]), 1j])
def test_what_cannot_be_kept_exactly_is_refused_with_its_place(thing):
    with pytest.raises(TypeError, match=r"parts\.state\.inner"):
        encode(checkpoint(state={"inner": thing}))


def test_no_flipped_byte_and_no_cut_goes_unseen():
    data = encode(checkpoint(a=np.arange(4.0)))
    for i in range(len(data)):
        bad = bytearray(data)
        bad[i] ^= 1
        with pytest.raises(ValueError, match="damaged"):
            decode(bytes(bad))
        with pytest.raises(ValueError, match="damaged"):
            decode(data[:i])


def test_the_two_newest_are_kept_and_a_damaged_one_is_left_out(tmp_path):
    path = tmp_path / "gate.h5"
    for serial in range(1, 6):
        save(path, replace(checkpoint(), serial=serial))
    assert sorted(found.serial for found in saved(path)) == [4, 5]
    assert {file.name for file in tmp_path.iterdir()} == {"gate.h5.state-1", "gate.h5.state-2"}
    state_files(path)[0].write_bytes(b"gossan state 1\nand then the power failed")
    assert [found.serial for found in saved(path)] == [4]
