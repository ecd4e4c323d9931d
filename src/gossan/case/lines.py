"""On which line of a TOML text each key stands; tomllib gives the values but not their places."""

from __future__ import annotations

import re
import tomllib

Path = tuple[str | int, ...]  # ("layers", 0, "minerals", "calcite"): keys, and indices from 0

_SPACE = re.compile(r"(?:[ \t\r\n]|#[^\n]*)*")
_BLANK = re.compile(r"[ \t]*")
_BARE_KEY = re.compile(r"[A-Za-z0-9_-]+")
_BASIC = re.compile(r'"((?:[^"\\]|\\.)*)"')
_LITERAL = re.compile(r"'([^']*)'")
_LONG_LITERAL = re.compile(r"'''.*?'''(?:'{0,2}(?!'))", re.S)
_LONG_BASIC = re.compile(r'"""(?:[^\\]|\\.)*?"""(?:"{0,2}(?!"))', re.S)
_PLAIN = re.compile(r"[^\s,\]}#]+(?: \d\d:[^\s,\]}#]+)?")  # numbers, booleans, dates (which may hold a space)


def key_lines(text: str) -> dict[Path, int]:
    """The line, from 1, of every table, key and array element of a text that tomllib accepts.

    A table named by several headers keeps the first line; values in arrays and inline tables are followed.

    >>> key_lines('[waters.mine]\\npH = 5.9\\n')
    {('waters',): 1, ('waters', 'mine'): 1, ('waters', 'mine', 'pH'): 2}
    """
    return _Scan(text.replace("\r\n", "\n")).document()


class _Scan:
    """A walk through valid TOML that notes where keys are; it does not check anything again."""

    def __init__(self, text: str):
        self.text, self.at = text, 0
        self.lines: dict[Path, int] = {}
        self.elements: dict[Path, int] = {}  # how many [[tables]] of an array have begun
        self.line, self.counted = 1, 0

    def document(self) -> dict[Path, int]:
        table: Path = ()
        while True:
            self.skip(_SPACE)
            if self.at >= len(self.text):
                return self.lines
            if self.peek("[["):
                self.at += 2
                table = self.header(array=True)
                self.at += 2
            elif self.peek("["):
                self.at += 1
                table = self.header(array=False)
                self.at += 1
            else:
                self.pair(table)

    def header(self, array: bool) -> Path:
        """Note a table's header; names of arrays of tables stand for their latest element."""
        here, keys = self.here(), self.key()
        path: Path = ()
        for position, key in enumerate(keys):
            path = (*path, key)
            self.lines.setdefault(path, here)
            if array and position == len(keys) - 1:
                self.elements[path] = self.elements.get(path, -1) + 1
            if path in self.elements:
                path = (*path, self.elements[path])
                self.lines.setdefault(path, here)
        return path

    def pair(self, table: Path) -> None:
        """Note a key (dotted or not) and go through its value."""
        here, path = self.here(), table
        for key in self.key():
            path = (*path, key)
            self.lines.setdefault(path, here)
        self.skip(_BLANK)
        self.at += 1  # the equals sign
        self.skip(_BLANK)
        self.value(path)

    def value(self, path: Path) -> None:
        if self.peek("["):
            self.at += 1
            index = 0
            while not self.closing("]"):
                self.lines.setdefault((*path, index), self.here())
                self.value((*path, index))
                index += 1
            return
        if self.peek("{"):
            self.at += 1
            while not self.closing("}"):
                self.pair(path)
            return
        for pattern in (_LONG_BASIC, _LONG_LITERAL, _BASIC, _LITERAL, _PLAIN):
            match = pattern.match(self.text, self.at)
            if match:
                self.at = match.end()
                return
        self.at = len(self.text)

    def closing(self, bracket: str) -> bool:
        """Step over blanks and a comma; True past the closing bracket."""
        self.skip(_SPACE)
        if self.peek(","):
            self.at += 1
            self.skip(_SPACE)
        if self.peek(bracket) or self.at >= len(self.text):
            self.at += 1
            return True
        return False

    def key(self) -> list[str]:
        """The parts of a key, `a."b c".d`; the scan stands behind it afterwards."""
        parts: list[str] = []
        while True:
            self.skip(_BLANK)
            for pattern in (_BASIC, _LITERAL, _BARE_KEY):
                match = pattern.match(self.text, self.at)
                if match:
                    break
            else:
                return parts
            self.at = match.end()
            part = match.group(1) if pattern is not _BARE_KEY else match.group()
            parts.append(_unescaped(part) if pattern is _BASIC else part)
            self.skip(_BLANK)
            if not self.peek("."):
                return parts
            self.at += 1

    def here(self) -> int:
        self.line += self.text.count("\n", self.counted, self.at)
        self.counted = self.at
        return self.line

    def peek(self, text: str) -> bool:
        return self.text.startswith(text, self.at)

    def skip(self, pattern: re.Pattern[str]) -> None:
        match = pattern.match(self.text, self.at)
        self.at = match.end() if match else self.at


def _unescaped(key: str) -> str:
    """A quoted key with its escapes resolved, by TOML's own rules."""
    if "\\" not in key:
        return key
    return tomllib.loads(f'k = "{key}"')["k"]
