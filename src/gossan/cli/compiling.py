"""A word before the wait: kernels are compiled at their first use on a machine."""

from __future__ import annotations

from gossan.cli import shell


def announce_compiling() -> None:
    """Say that the first run takes longer, where it does."""
    from gossan.base.jit import is_compiled

    if not is_compiled():
        shell.say("compiling, first run only")
