"""A table to print: heads, rows of text, a note below."""

from __future__ import annotations

from dataclasses import dataclass


@dataclass(frozen=True, slots=True)
class Sheet:
    """One table; every value is text already.

    left  how many of the first columns are words, set to the left; numbers are set to the right
    wraps whether the last column is a sentence, which may go on in the next line
    """

    title: str
    heads: tuple[str, ...]
    rows: tuple[tuple[str, ...], ...]
    left: int = 1
    wraps: bool = False
    note: str = ""
