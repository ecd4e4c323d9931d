"""The one decorator of all kernels: compiled code, cached on disk, keyed by every kernel's source.

Numba's own cache looks at the file that defines a function and not at the files it calls into, nor at
the switch that turns bounds checks on; so the folder of the cache is named by a digest of all of them.
"""

from __future__ import annotations

import hashlib
import os
from collections.abc import Callable
from functools import partial
from pathlib import Path
from typing import Any

import numba
from numba.core.registry import CPUDispatcher

ENTRIES_FOR_ALL = "GOSSAN_KERNEL_ENTRIES"  # set to 1 by tests that call inner kernels
PACKAGE = Path(__file__).resolve().parents[1]


def _entries_for_all() -> bool:
    return os.environ.get(ENTRIES_FOR_ALL, "0") != "0"


def cache_home() -> Path:
    """The folder below which compiled kernels are kept: NUMBA_CACHE_DIR, or `gossan` in the user's cache."""
    chosen = os.environ.get("NUMBA_CACHE_DIR")
    return Path(chosen or Path(os.environ.get("XDG_CACHE_HOME") or Path.home() / ".cache") / "gossan")


def sources_digest() -> str:
    """A digest of every kernel source and of the switches that change what is compiled of them."""
    switches = os.environ.get("NUMBA_BOUNDSCHECK", "0") + ("+entries" if _entries_for_all() else "")
    digest = hashlib.sha256(switches.encode())
    for own in ("jit.py", "outcome.py"):
        digest.update((PACKAGE / "base" / own).read_bytes())
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


class _Inner(CPUDispatcher):
    """A kernel without an entry from Python, and a word for whoever looks for it there."""

    def __call__(self, *arguments: Any, **named: Any) -> Any:
        """Refuse: what stands there instead of an entry ends the process."""
        name = self.py_func.__name__
        raise TypeError(f"{name} is for other kernels to call; tests set {ENTRIES_FOR_ALL}=1")


def kernel(function: Callable | None = None, *, inner: bool = False, **options: Any) -> Any:
    """Compile a function on plain arrays at its first call, and keep the code on disk.

    inner: only other kernels call it; an entry from Python would take longer to compile than itself.
    forceinline (numba's): for what is called in one place; the bench goes by value, which costs more than
    many a call's work.
    The global lock is released, division follows IEEE, and no fast-math is used: same input, same bits.
    Without numba's runtime (`_nrt`) a kernel cannot allocate, and no array is counted as it is passed on.
    """
    if function is None:
        return partial(kernel, inner=inner, **options)
    settings: dict[str, Any] = {"cache": True, "nogil": True, "error_model": "numpy", "_nrt": False} | options
    if not inner or _entries_for_all():
        return numba.njit(**settings)(function)
    settings |= {"no_cpython_wrapper": True, "no_cfunc_wrapper": True}
    compiled = numba.njit(**settings)(function)
    compiled.__class__ = _Inner
    return compiled
