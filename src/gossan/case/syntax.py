"""The text of a case to TOML values; the usual slips of TOML are named, mended and read past.

A case that forgets the quotes around `5 mg/L` has one fault of syntax, and perhaps others further down: the
mended line lets the reading go on, so that they are all told at once.
"""

from __future__ import annotations

import re
import tomllib
from typing import Any, NamedTuple

from gossan.base.errors import Fault

MOST_SLIPS = 50  # then the text is not a case at all

_PLACE = re.compile(r"\s*\(at (?:line (\d+), column \d+|end of document)\)")
_VALUE = r"\s*(?P<value>[^#]*?)\s*(?:#.*)?"
_BARE_PAIR = re.compile(r"\s*(?P<key>[^\s\"'=:#\[\]{}][^\"'=:#\[\]{}]*?)\s*(?P<sign>[=:])" + _VALUE)
_PAIR = re.compile(r"\s*(?P<key>[\w.\-]+|\"[^\"]*\"|'[^']*')\s*=" + _VALUE)
_PLAIN_KEY = re.compile(r"[A-Za-z0-9_.-]+")
_UNQUOTED = re.compile(r"(?!\d+$)[<+\-]?\s*[\w.][^\"'=\[\]{}]*")
_HEADER = re.compile(r"\s*\[+\s*([^\]]*?)\s*\]")
_DECIMAL_COMMA = re.compile(r"[+-]?\d+,\d+")


def parse(text: str, file: str) -> tuple[dict[str, Any] | None, str, list[Fault]]:
    """Read TOML as far as it goes.

    Returns  the values (None where a fault of syntax cannot be mended), the text that they were read from
             (line for line the given one), and the faults of syntax
    """
    faults: list[Fault] = []
    rows = text.split("\n")
    while True:
        try:
            return tomllib.loads("\n".join(rows)), "\n".join(rows), faults
        except tomllib.TOMLDecodeError as error:
            message = str(error)
        place = _PLACE.search(message)
        line = int(place[1]) if place and place[1] else len(rows)
        slip = _twice(rows[line - 1]) if message.startswith("Cannot overwrite") else _slip(rows[line - 1])
        if slip is None or len(faults) >= MOST_SLIPS:
            faults.append(_plain(message, line, file))
            return None, text, faults
        key = _table_around(rows, line) + slip.key
        faults.append(Fault(file, line, key, slip.wrong, slip.right))
        rows[line - 1] = slip.mended


class Slip(NamedTuple):
    """What a person did to a line, and the line as it was meant."""

    key: str
    wrong: str
    right: str
    mended: str


def _twice(row: str) -> Slip:
    return Slip(row.partition("=")[0].strip(), "is given twice", "keep one of the two lines", "")


def _slip(row: str) -> Slip | None:
    """The slip in a line that is not TOML by itself; None where the line says nothing of what was meant."""
    if _is_toml(row):
        return None
    match = _BARE_PAIR.fullmatch(row)
    if match and (match["sign"] == ":" or not _PLAIN_KEY.fullmatch(match["key"])):
        key = match["key"]
        quoted = key if _PLAIN_KEY.fullmatch(key) else f'"{key}"'
        meant = f"{quoted} = {match['value']}"
        wrong = "is followed by a colon" if match["sign"] == ":" else "has characters that need quotes"
        return Slip(key, wrong, f"write {meant}", meant)
    match = _PAIR.fullmatch(row)
    if not match:
        return None
    key, value = match["key"], match["value"]
    if not value:
        return Slip(key, "has no value", "give it one, or leave the line out", "")
    if value in ("True", "TRUE", "False", "FALSE"):
        return Slip(key, f"is {value}", f"write {value.lower()}", f"{key} = {value.lower()}")
    if _DECIMAL_COMMA.fullmatch(value):
        meant = value.replace(",", ".")
        return Slip(key, f"is {value}", f"the decimal sign is a point: {meant}", f"{key} = {meant}")
    if _UNQUOTED.fullmatch(value):
        return Slip(key, f"is {value}, without quotes", f'write "{value}"', f'{key} = "{value}"')
    return None


def _is_toml(row: str) -> bool:
    try:
        tomllib.loads(row)
    except tomllib.TOMLDecodeError:
        return False
    return True


def _table_around(rows: list[str], line: int) -> str:
    """The name of the table that a line stands in, with its dot."""
    headers = [match for row in rows[:line] if (match := _HEADER.match(row))]
    return f"{headers[-1][1]}." if headers else ""


def _plain(message: str, line: int, file: str) -> Fault:
    """What TOML itself says, in the words of a person."""
    said = _PLACE.sub("", message)
    twice = re.fullmatch(r"Cannot declare \((.*?),?\) twice", said)
    if twice:
        name = ".".join(part.strip(" '\"") for part in twice[1].split(","))
        return Fault(file, line, name, "is a table that is begun twice", "keep one, or use another name")
    cures = {
        "Unclosed array": "close the list with ]",
        "Unclosed inline table": "close the table with }",
        "Illegal character": 'a text ends on its line, with the same quote: "..."',
        "Unterminated string": 'a text ends with the quote it began with: "..."',
        "Expected ']'": "close the header with ]",
        "Expected newline": "one key = value on a line; a text stands in quotes",
        "Invalid value": 'a text stands in quotes: "..."',
    }
    cure = next((cure for start, cure in cures.items() if said.startswith(start)), "write key = value")
    return Fault(file, line, "", f"this is not TOML ({said[:1].lower()}{said[1:]})", cure)
