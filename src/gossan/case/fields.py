"""The kinds of value that a case holds: each reads one value of the TOML and says what it would rather have.

A field of the model is `Annotated[type, kind]`. The same kind serves the reader of cases (which knows the
line), pydantic (which validates a model built in Python) and the schema.
"""

from __future__ import annotations

import datetime
import math
from dataclasses import dataclass
from typing import Annotated, Any

from pydantic_core import core_schema

from gossan.base.wrong import Wrong, did_you_mean


def shown(value: Any) -> str:
    """A value as it stands in the case."""
    if isinstance(value, bool):
        return str(value).lower()
    if isinstance(value, str):
        return f'"{value}"'
    if isinstance(value, float):
        return f"{value:.12g}"
    if isinstance(value, (list, dict)):
        return "a list" if isinstance(value, list) else "a table"
    if isinstance(value, (datetime.date, datetime.time)):
        return "a date or time"
    return str(value)


def is_number(value: Any) -> bool:
    """Whether a value is an integer or real number; true and false are not."""
    return isinstance(value, (int, float)) and not isinstance(value, bool)


class Kind:
    """One kind of value; `read` returns what the model holds, or raises Wrong."""

    unit = ""  # the words for the unit or form, for the page and the schema
    example = ""  # as it would stand in a case
    schema: dict[str, Any] = {}  # noqa: RUF012  (read only)

    def read(self, value: Any, line: int = 0) -> Any:
        raise NotImplementedError

    def __get_pydantic_core_schema__(self, source: Any, handler: Any) -> core_schema.CoreSchema:
        return core_schema.no_info_plain_validator_function(self.read)

    def __get_pydantic_json_schema__(self, schema: Any, handler: Any) -> dict[str, Any]:
        return {**self.schema}


@dataclass(frozen=True)
class Text(Kind):
    """A text; a name (of a layer, a water, a port) has at least one character and no slash."""

    is_name: bool = False
    example: str = '"..."'
    unit = "text"
    schema = {"type": "string"}  # noqa: RUF012

    def read(self, value: Any, line: int = 0) -> str:
        if not isinstance(value, str):
            raise Wrong(f"is {shown(value)}; a text is needed", f"write {self.example}")
        if self.is_name:
            check_name(value)
        return value


def check_name(name: str) -> None:
    """Refuse a name that could not stand in keys, messages and the groups of a result file."""
    if not name.strip():
        raise Wrong("is empty", "give it a name")
    if "/" in name or name in (".", ".."):
        raise Wrong(f'is "{name}"', "a name has no slash: it names a group of the result file")


@dataclass(frozen=True)
class Flag(Kind):
    """true or false."""

    example = "true"
    unit = "true or false"
    schema = {"type": "boolean"}  # noqa: RUF012

    def read(self, value: Any, line: int = 0) -> bool:
        if not isinstance(value, bool):
            raise Wrong(f"is {shown(value)}; true or false is needed, without quotes")
        return value


@dataclass(frozen=True)
class Number(Kind):
    """A number without dimension, within bounds (open: the bounds themselves are outside)."""

    what: str
    low: float = -math.inf
    high: float = math.inf
    is_open: bool = False
    is_share: bool = False  # where 38 may mean 38 %
    whole: bool = False
    example: str = "1"
    unit = "number"

    @property
    def schema(self) -> dict[str, Any]:  # type: ignore[override]
        bounds = {"exclusiveMinimum": self.low, "exclusiveMaximum": self.high}
        if not self.is_open:
            bounds = {"minimum": self.low, "maximum": self.high}
        finite = {name: bound for name, bound in bounds.items() if math.isfinite(bound)}
        return {"type": "integer" if self.whole else "number", **finite}

    def read(self, value: Any, line: int = 0) -> float:
        if not is_number(value):
            raise Wrong(f"is {shown(value)}; {self.what} is a number without quotes", self._unquoted(value))
        if not math.isfinite(value):
            raise Wrong(f"is {value}; {self.what} is a finite number", f"such as {self.example}")
        if self.whole and value != int(value):
            raise Wrong(f"is {shown(value)}; {self.what} is a whole number", f"did you mean {round(value)}?")
        inside = self.low < value < self.high if self.is_open else self.low <= value <= self.high
        if not inside:
            raise Wrong(f"is {shown(value)}; {self.what} is {self._range()}", self._percent(value))
        return int(value) if self.whole else float(value)

    def _range(self) -> str:
        if math.isinf(self.high):
            return f"{'more than' if self.is_open else 'at least'} {self.low:g}"
        return f"between {self.low:g} and {self.high:g}"

    def _unquoted(self, value: Any) -> str:
        """The cure of a number given as text, per cent included."""
        if not isinstance(value, str):
            return f"such as {self.example}"
        text = value.strip().replace(",", ".")
        try:
            number = float(text.rstrip("% ")) / (100 if text.endswith("%") else 1)
        except ValueError:
            return f"such as {self.example}"
        return f"did you mean {number:.12g}?" if math.isfinite(number) else f"such as {self.example}"

    def _percent(self, value: float) -> str:
        """The cure of a share given in per cent."""
        if self.is_share and 1 < value < 100:
            return f"did you mean {value / 100:.12g}?"
        return f"such as {self.example}"


@dataclass(frozen=True)
class Choice(Kind):
    """One of a few words; some of them may not have landed yet."""

    options: tuple[str, ...]
    not_landed: tuple[str, ...] = ()

    @property
    def example(self) -> str:  # type: ignore[override]
        return f'"{self.options[0]}"'

    @property
    def unit(self) -> str:  # type: ignore[override]
        return " | ".join(f'"{option}"' for option in self.options)

    @property
    def schema(self) -> dict[str, Any]:  # type: ignore[override]
        return {"enum": list(self.options)}

    def read(self, value: Any, line: int = 0) -> str:
        if value in self.not_landed:
            raise Wrong(f'is "{value}", which is part of the contract but has not landed yet',
                        did_you_mean("", self.options))
        if not isinstance(value, str) or value not in self.options:
            close = did_you_mean(value if isinstance(value, str) else "", self.options)
            raise Wrong(f"is {shown(value)}, which is not a choice", close)
        return value


@dataclass(frozen=True)
class Names(Kind):
    """A list of names."""

    example: str = '["sphalerite"]'
    unit = "list of names"
    schema = {"type": "array", "items": {"type": "string"}}  # noqa: RUF012

    def read(self, value: Any, line: int = 0) -> tuple[str, ...]:
        if isinstance(value, str):
            raise Wrong(f'is "{value}"; a list is needed', f'did you mean ["{value}"]?')
        if not isinstance(value, (list, tuple)):
            raise Wrong(f"is {shown(value)}; a list of names is needed", f"such as {self.example}")
        for item in value:
            if not isinstance(item, str):
                wrong = f"holds {shown(item)}; a list of names in quotes is needed"
                raise Wrong(wrong, f"such as {self.example}")
        doubled = next((item for item in value if value.count(item) > 1), None)
        if doubled is not None:
            raise Wrong(f'names "{doubled}" twice', "once is enough")
        return tuple(value)


@dataclass(frozen=True)
class NotLanded(Kind):
    """A key of the contract whose part of the program is not there yet."""

    unit = "not landed yet"
    schema = {"not": {}}  # noqa: RUF012  (no value is valid)

    def read(self, value: Any, line: int = 0) -> None:
        if value is not None:
            raise Wrong("is part of the contract but has not landed yet", "leave it out for now")


Later = Annotated[Any, NotLanded()]
