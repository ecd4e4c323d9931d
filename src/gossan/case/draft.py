"""A case on its way from TOML to model: every fault gets its place, and what is wrong leaves a hole.

Faults do not stop the reading: a value that cannot be read becomes None, so that the checks across tables
(checks.py) still see all the rest, and one message tells everything.
"""

from __future__ import annotations

import re
from typing import Annotated, Any, get_args, get_origin

from pydantic import BaseModel
from pydantic.fields import FieldInfo

from gossan.base.errors import Fault
from gossan.base.wrong import Wrong, closest, did_you_mean
from gossan.case.fields import Kind, NotLanded, check_name, shown
from gossan.case.lines import Path
from gossan.case.model import Case

PLAIN_KEY = re.compile(r"[^\s.\"]+")
NAMED = ("layers", "ports")  # lists whose tables are called by their name


class Draft:
    """The values of a case with holes, and the faults found so far."""

    def __init__(self, data: dict[str, Any], lines: dict[Path, int], file: str):
        self.data, self.lines, self.file = data, lines, file
        self.faults: list[Fault] = []
        self.case: Any = self.table(Case, data, ())

    def fault(self, path: Path, wrong: str, right: str = "") -> None:
        """Note one fault at a key; a key that is not in the text has the line of the table around it."""
        self.faults.append(Fault(self.file, self.line(path), self.key(path), wrong, right))

    def line(self, path: Path) -> int:
        while path and path not in self.lines:
            path = path[:-1]
        return self.lines.get(path, 0)

    def key(self, path: Path) -> str:
        """The dotted key that people use: a layer or port goes by its name, other lists count from 1."""
        parts: list[str] = []
        for position, part in enumerate(path):
            if isinstance(part, int):
                name = self._name_at(path[: position + 1]) if path[position - 1] in NAMED else ""
                part = name or str(part + 1)
            parts.append(part if PLAIN_KEY.fullmatch(part) else f'"{part}"')
        return ".".join(parts)

    def _name_at(self, path: Path) -> str:
        name = self.at(path).get("name")
        return name if isinstance(name, str) else ""

    def at(self, path: Path) -> dict[str, Any]:
        """The table of the text at a path; empty where there is none."""
        here: Any = self.data
        for part in path:
            if isinstance(here, dict):
                here = here.get(part)
            else:
                here = here[part] if isinstance(here, list) and isinstance(part, int) else None
        return here if isinstance(here, dict) else {}

    def table(self, model: type[BaseModel], data: dict[str, Any], path: Path) -> Any:
        """Read one table of the text into an object of its model, with holes (None) for what is wrong."""
        fields = {info.alias or name: name for name, info in model.model_fields.items()}
        for key in data:
            if key not in fields:
                cure = _unknown_key_cure(key, fields, model)
                self.fault((*path, key), f"is not a key of {_title(path)}", cure)
        values: dict[str, Any] = {}
        for key, name in fields.items():
            info = model.model_fields[name]
            if key in data:
                values[name] = self.value(_annotation(info), data[key], (*path, key))
            elif info.is_required():
                values[name] = None
                self.fault((*path, key), "is missing", f"write {_example_line(key, info)}")
        return model.model_construct(**values)

    def value(self, annotation: Any, value: Any, path: Path) -> Any:
        """Read what stands at a key as its annotation demands; None where it is wrong."""
        kind = _kind_of(annotation)
        if kind is not None:
            try:
                return kind.read(value, self.line(path))
            except Wrong as refused:
                self.fault(path, refused.wrong, refused.right)
                return None
        if get_origin(annotation) is tuple:
            return self._list_of_tables(get_args(annotation)[0], value, path)
        if not isinstance(value, dict):
            name = ".".join(str(part) for part in path)
            wrong = f"is {shown(value)}; a table is needed"
            self.fault(path, wrong, f"write [{name}], single brackets, and its keys below it")
            return None
        if get_origin(annotation) is dict:
            inner = get_args(annotation)[1]
            read = {}
            for name, item in value.items():
                try:
                    check_name(name)
                except Wrong as refused:
                    self.fault((*path, name), refused.wrong, refused.right)
                read[name] = self.value(inner, item, (*path, name))
            return read
        model = next(arm for arm in (annotation, *get_args(annotation)) if _is_model(arm))
        return self.table(model, value, path)

    def _list_of_tables(self, model: type[BaseModel], value: Any, path: Path) -> Any:
        name = ".".join(str(part) for part in path)
        if not isinstance(value, list) or not all(isinstance(item, dict) for item in value):
            self.fault(path, "is not a list of tables", f"write [[{name}]], double brackets, for each")
            return ()
        return tuple(self.table(model, item, (*path, index)) for index, item in enumerate(value))


def _annotation(info: FieldInfo) -> Any:
    """A field's type with the kind of its value, which pydantic keeps apart."""
    kinds = [each for each in info.metadata if isinstance(each, Kind)]
    return Annotated[info.annotation, kinds[0]] if kinds else info.annotation


def _kind_of(annotation: Any) -> Kind | None:
    metadata = getattr(annotation, "__metadata__", ())
    return next((each for each in metadata if isinstance(each, Kind)), None)


def _is_model(annotation: Any) -> bool:
    return isinstance(annotation, type) and issubclass(annotation, BaseModel)


def _example_line(key: str, info: FieldInfo) -> str:
    kind = _kind_of(_annotation(info))
    return f"{key} = {kind.example}" if kind else f"[{key}.NAME]"


def _title(path: Path) -> str:
    if not path:
        return "a case"
    name = ".".join(str(part) for part in path if isinstance(part, str))
    return f"[[{name}]]" if isinstance(path[-1], int) else f"[{name}]"


def _unknown_key_cure(key: str, fields: dict[str, str], model: type[BaseModel]) -> str:
    """The nearest key of this table, or the table where this key belongs."""
    close = closest(key, fields, cutoff=0.75)
    elsewhere = sorted({title for title, names in _homes(Case, "").items() if key in names})
    if close or not elsewhere:
        landed = [name for name, field in fields.items() if not _is_later(model.model_fields[field])]
        return did_you_mean(key, fields if close else landed)
    return f"it is a key of {' and of '.join(elsewhere)}"


def _is_later(info: FieldInfo) -> bool:
    return isinstance(_kind_of(_annotation(info)), NotLanded)


def _homes(model: type[BaseModel], name: str) -> dict[str, set[str]]:
    """The header of every table of a case -> its keys."""
    homes: dict[str, set[str]] = {f"[{name}]" if name else "the top of the file": set()}
    title = next(iter(homes))
    for field, info in model.model_fields.items():
        key = info.alias or field
        homes[title].add(key)
        annotation = info.annotation
        inner = f"{name}.{key}" if name else key
        arms = [arm for arm in (annotation, *get_args(annotation)) if _is_model(arm)]
        if not arms:
            continue
        if get_origin(annotation) is dict:
            inner += ".NAME"
        below = _homes(arms[0], inner)
        if get_origin(annotation) is tuple:
            below = {header.replace(f"[{inner}]", f"[[{inner}]]"): keys for header, keys in below.items()}
        homes |= below
    return homes
