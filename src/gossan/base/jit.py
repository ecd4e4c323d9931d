"""The one decorator of all kernels: compiled code, cached on disk, keyed by every kernel's source.

Numba's own cache looks at the file that defines a function and not at the files it calls into, nor at
the switch that turns bounds checks on; so the folder of the cache is named by a digest of all of them.
"""

from __future__ import annotations

import hashlib
import os
from collections.abc import Callable
from pathlib import Path
from typing import Any

import numba

PACKAGE = Path(__file__).resolve().parents[1]


def cache_home() -> Path:
    """The folder below which compiled kernels are kept: NUMBA_CACHE_DIR, or `gossan` in the user's cache."""
    chosen = os.environ.get("NUMBA_CACHE_DIR")
    return Path(chosen or Path(os.environ.get("XDG_CACHE_HOME") or Path.home() / ".cache") / "gossan")


def sources_digest() -> str:
    """A digest of every kernel source and of the switch for bounds checks."""
    digest = hashlib.sha256(os.environ.get("NUMBA_BOUNDSCHECK", "0").encode())
    digest.update(Path(__file__).read_bytes())
    for path in sorted(PACKAGE.glob("*/kernel/*.py")):
        digest.update(path.name.encode())
        digest.update(path.read_bytes())
    return digest.hexdigest()[:16]


def cache_folder() -> Path:
    """Where the compiled kernels of exactly these sources are kept."""
    return cache_home() / f"kernels-{sources_digest()}"


def is_compiled() -> bool:
    """Whether an earlier run left compiled kernels of these sources behind."""
    return any(cache_folder().rglob("*.nbc"))


# not through the environment: a child process may check bounds where this one does not
numba.config.CACHE_DIR = str(cache_folder())  # type: ignore[attr-defined]


def kernel(function: Callable | None = None, **options: Any) -> Any:
    """Compile a function on plain arrays at its first call, and keep the code on disk.

    The global lock is released, division follows IEEE, and no fast-math is used: same input, same bits.
    Without numba's runtime (`_nrt`) a kernel cannot allocate, and no array is counted as it is passed on.
    """
    settings: dict[str, Any] = {"cache": True, "nogil": True, "error_model": "numpy", "_nrt": False} | options
    return numba.njit(**settings)(function) if function else numba.njit(**settings)
