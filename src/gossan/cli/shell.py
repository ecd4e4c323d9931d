"""Where the program meets the shell: tables to standard output, messages to standard error."""

from __future__ import annotations

import json
import math
import os
import sys
from collections.abc import Iterable
from typing import TYPE_CHECKING, Any, Literal, TextIO

if TYPE_CHECKING:
    from rich.console import Console

    from gossan.views.sheet import Sheet

ENDLESS = 100_000  # columns of an output that is no terminal: nothing is wrapped or cut there


def say(message: str) -> None:
    """A message for the person at the terminal."""
    print(message, file=sys.stderr, flush=True)


def silence_output() -> None:
    """Nobody reads standard output any more (`| head`): what is still to come goes nowhere."""
    try:
        os.dup2(os.open(os.devnull, os.O_WRONLY), sys.stdout.fileno())
    except (OSError, ValueError):
        sys.stdout = open(os.devnull, "w")  # noqa: SIM115


def write(lines: Iterable[str]) -> None:
    """Lines to standard output, as long as somebody reads them."""
    try:
        for line in lines:
            sys.stdout.write(line)
        sys.stdout.flush()
    except BrokenPipeError:
        silence_output()


def print_json(value: Any) -> None:
    """One JSON document to standard output; null for what is not a finite number."""
    write([json.dumps(plain(value), indent=2, ensure_ascii=False, allow_nan=False), "\n"])


def plain(value: Any) -> Any:
    """A value as JSON knows it.

    >>> plain({"a": (1.5, float("nan"))})
    {'a': [1.5, None]}
    """
    if isinstance(value, dict):
        return {str(key): plain(each) for key, each in value.items()}
    if isinstance(value, (list, tuple)):
        return [plain(each) for each in value]
    if value is None or isinstance(value, (str, bool, int)):
        return value
    number = float(value)
    return number if math.isfinite(number) else None


def print_sheets(sheets: Iterable[Sheet]) -> None:
    """Tables to standard output: with styles in a terminal, plain text elsewhere or where NO_COLOR is set."""
    console = console_of(sys.stdout)
    for number, sheet in enumerate(sheets):
        with console.capture() as printed:
            _print(console, sheet)
        gap = "\n" if number else ""
        write([gap, *(f"{line.rstrip()}\n" for line in printed.get().splitlines())])


def console_of(stream: TextIO) -> Console:
    """Rich's console on a stream."""
    from rich.console import Console

    width = None if stream.isatty() else ENDLESS
    colours: Literal["auto"] | None = None if os.environ.get("NO_COLOR") else "auto"
    return Console(file=stream, width=width, color_system=colours, highlight=False, emoji=False, markup=False)


def _print(console: Console, sheet: Sheet) -> None:
    from rich.table import Table
    from rich.text import Text

    console.print(Text(sheet.title, style="bold"), soft_wrap=True)
    has_heads = any(sheet.heads)
    table = Table(box=None, padding=(0, 2, 0, 0), show_header=has_heads, header_style="underline")
    for index, head in enumerate(sheet.heads):
        last = sheet.wraps and index == len(sheet.heads) - 1
        is_word = index < sheet.left or last
        side: Literal["left", "right"] = "left" if is_word else "right"
        table.add_column(Text(head), justify=side, no_wrap=not last, overflow="fold")
    for row in sheet.rows:
        table.add_row(*(Text(cell) for cell in row))
    console.print(table, crop=False, soft_wrap=False)
    if sheet.note:
        console.print(Text(f"({sheet.note})", style="dim"))
