"""Files that are there whole or not at all."""

from __future__ import annotations

import os
from pathlib import Path


def beside(path: Path, ending: str) -> Path:
    """The neighbour of a result file: `gate.h5.state-1` for the ending `state-1`."""
    return path.with_name(f"{path.name}.{ending}")


def write_whole(path: Path, data: bytes) -> None:
    """Put data on disk under a name that never shows half of it."""
    new = beside(path, "new")
    with open(new, "wb") as file:
        file.write(data)
        file.flush()
        os.fsync(file.fileno())
    replace(new, path)


def sync(path: Path) -> None:
    """Wait until a closed file is on the disk itself."""
    handle = os.open(path, os.O_RDWR)
    try:
        os.fsync(handle)
    finally:
        os.close(handle)


def replace(new: Path, path: Path) -> None:
    """Rename over what may be there, and wait until the folder on disk says so."""
    os.replace(new, path)
    _sync_folder(path.parent)


def remove(*paths: Path) -> None:
    """Delete, in this order, what is there."""
    for path in paths:
        path.unlink(missing_ok=True)
    _sync_folder(paths[-1].parent)


def _sync_folder(folder: Path) -> None:
    if os.name != "posix":  # elsewhere a folder cannot be opened
        return
    handle = os.open(folder, os.O_RDONLY)
    try:
        os.fsync(handle)
    finally:
        os.close(handle)
