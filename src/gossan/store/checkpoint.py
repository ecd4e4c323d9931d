"""Everything needed to go on bit for bit, as bytes that prove themselves whole."""

from __future__ import annotations

import hashlib
import json
from dataclasses import dataclass, fields, is_dataclass
from pathlib import Path
from typing import Any, Literal

import numpy as np

from gossan.store.disk import beside, write_whole

_MAGIC = b"gossan state 1\n"
_DIGEST = hashlib.sha256().digest_size


@dataclass(frozen=True, slots=True)
class Checkpoint:
    """A run at one instant.

    serial   counts the checkpoints of a run: the newest has the largest
    started  when the run began, as in the result file: whose checkpoint this is
    version  the program that wrote it: another one need not end in the same bits
    case     digest of the case's text
    counts   committed rows of every group of the result file
    parts    what the run keeps, by name: numbers, strings, arrays, dicts, lists and tuples of these.
             A dataclass goes in as it is and comes out as the dict of its fields.
    """

    serial: int
    started: str
    version: str
    case: str
    counts: dict[str, int]
    parts: dict[str, Any]


def digest(text: str) -> str:
    """The fingerprint of a text."""
    return hashlib.sha256(text.encode()).hexdigest()


def encode(checkpoint: Checkpoint) -> bytes:
    """Magic, length of the header, header (JSON), arrays (raw, little-endian), SHA-256 of all that.

    Raises TypeError, with its place, for what cannot be kept exactly.
    """
    blocks: list[bytes] = []
    values = {part.name: getattr(checkpoint, part.name) for part in fields(checkpoint)}
    header = json.dumps({name: _tree(value, name, blocks) for name, value in values.items()}).encode()
    body = b"".join([_MAGIC, len(header).to_bytes(8, "little"), header, *blocks])
    return body + hashlib.sha256(body).digest()


def decode(data: bytes) -> Checkpoint:
    """The checkpoint in these bytes; ValueError where they are not whole."""
    body, seal = data[:-_DIGEST], data[-_DIGEST:]
    if not body.startswith(_MAGIC) or hashlib.sha256(body).digest() != seal:
        raise ValueError("a damaged checkpoint")
    start = len(_MAGIC) + 8
    length = int.from_bytes(body[len(_MAGIC) : start], "little")
    tree = json.loads(body[start : start + length])
    values = {name: _value(node, body, start + length) for name, node in tree.items()}
    return Checkpoint(**values)


def save(path: Path, checkpoint: Checkpoint) -> None:
    """Write the state file of the result file at path whose turn it is; the other one stays whole."""
    write_whole(_file(path, checkpoint.serial), encode(checkpoint))


def state_files(path: Path) -> tuple[Path, Path]:
    """Where the two newest checkpoints of a running result file stand."""
    return _file(path, 1), _file(path, 2)


def saved(path: Path) -> list[Checkpoint]:
    """The checkpoints beside the result file at path that can be read, a damaged one left out."""
    found = []
    for file in state_files(path):
        try:
            found.append(decode(file.read_bytes()))
        except (FileNotFoundError, ValueError):
            continue
    return found


def _file(path: Path, serial: int) -> Path:
    return beside(path, f"state-{2 - serial % 2}")


def _tree(value: Any, place: str, blocks: list[bytes]) -> Any:
    """Turn a value into JSON; arrays go to blocks and leave dtype, shape, order and offset behind."""
    if value is None or isinstance(value, bool | str):
        return value
    if isinstance(value, np.ndarray | np.generic):
        if value.dtype.hasobject:
            raise TypeError(f"{place}: an array of Python objects cannot be kept in a checkpoint")
        # numpy adds in memory's order, so the order is part of "the same bits"
        order: Literal["C", "F"] = "C" if value.flags.c_contiguous or not value.flags.f_contiguous else "F"
        raw = np.asarray(value).astype(value.dtype.newbyteorder("<"), copy=False)
        kind = "array" if isinstance(value, np.ndarray) else "scalar"
        node = {kind: [raw.dtype.str, list(raw.shape), order, sum(map(len, blocks))]}
        blocks.append(raw.tobytes(order=order))
        return node
    if isinstance(value, int | float):
        return value  # JSON's shortest form of a float reads back to the same bits
    if is_dataclass(value) and not isinstance(value, type):
        value = {part.name: getattr(value, part.name) for part in fields(value)}
    if isinstance(value, dict) and all(isinstance(key, str) for key in value):
        return {"dict": {key: _tree(item, f"{place}.{key}", blocks) for key, item in value.items()}}
    if isinstance(value, list | tuple):
        kind = "list" if isinstance(value, list) else "tuple"
        return {kind: [_tree(item, f"{place}[{i}]", blocks) for i, item in enumerate(value)]}
    raise TypeError(f"{place}: a {type(value).__name__} cannot be kept in a checkpoint")


def _value(node: Any, body: bytes, start: int) -> Any:
    if not isinstance(node, dict):
        return node
    ((kind, inner),) = node.items()
    if kind == "dict":
        return {key: _value(item, body, start) for key, item in inner.items()}
    if kind in ("list", "tuple"):
        items = [_value(item, body, start) for item in inner]
        return items if kind == "list" else tuple(items)
    dtype, shape, order, offset = inner
    count = int(np.prod(shape, dtype=np.int64))
    flat = np.frombuffer(body, np.dtype(dtype), count, start + offset)
    array = flat.reshape(shape, order=order).astype(np.dtype(dtype).newbyteorder("="), order=order, copy=True)
    return array if kind == "array" else array[()]
