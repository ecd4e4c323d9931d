"""The table of constants: the program's own, with a user's file over it."""

from __future__ import annotations

import re
import tomllib
from functools import lru_cache
from pathlib import Path

from gossan.base.errors import Fault, InputError
from gossan.base.notation import normal_ion
from gossan.base.wrong import did_you_mean
from gossan.constants.document import KEYS, Document, Entry
from gossan.constants.entries import Table
from gossan.constants.find import UnknownName, find, find_mineral
from gossan.constants.interactions import SECTION, read_interactions
from gossan.constants.records import MAKERS, read_published
from gossan.constants.reduce import Faulty, Reducer

__all__ = ["UnknownName", "find", "find_mineral", "load_table"]

BUILT_IN = ("sources", "components", "species", "minerals", "gases", "interactions")


def load_table(extra: Path | None = None, text: str | None = None) -> Table:
    """Read the program's constants, and a user's own file of the same form over them.

    text     the content of that file, where it is at hand already
    extra    a TOML file whose entries are added, or replace whole entries of the same name
    Returns  the table; without extra always the same one
    Raises   InputError that lists every fault: a reaction that does not balance in charge and elements, a
             term or source that is not there, a missing uncertainty, a name used twice

    >>> load_table().minerals["gypsum"].reaction.water
    2.0
    """
    return _built_in() if extra is None else _assembled((*_own_documents(), _user_document(extra, text)))


@lru_cache(maxsize=1)
def _built_in() -> Table:
    return _assembled(_own_documents())


@lru_cache(maxsize=1)
def _own_documents() -> tuple[Document, ...]:
    folder = Path(__file__).parent
    return tuple(_document(folder / f"{name}.toml", f"{name}.toml") for name in BUILT_IN)


def _user_document(path: Path, text: str | None) -> Document:
    try:
        return _document(path, str(path), text)
    except OSError as error:
        reason = error.strerror or "cannot be read"
        raise InputError([Fault(str(path), 0, "", f"cannot be read ({reason})")]) from None
    except UnicodeDecodeError:
        raise InputError([Fault(str(path), 0, "", "is not text in UTF-8")]) from None
    except tomllib.TOMLDecodeError as error:
        at = re.search(r"at line (\d+)", str(error))
        hint = 'names that hold ^, ( or · stand in quotes, like [species."CaOH^+"]'
        fault = Fault(str(path), int(at[1]) if at else 0, "", f"is not TOML ({error})", hint)
        raise InputError([fault]) from None


def _document(path: Path, shown: str, text: str | None = None) -> Document:
    if text is None:
        text = path.read_text(encoding="utf-8")
    return Document(shown, text, tomllib.loads(text))


def _assembled(documents: tuple[Document, ...]) -> Table:
    """Merge the documents, check every entry, reduce every reaction."""
    faults: list[Fault] = []
    entries: dict[str, dict[str, Entry]] = {kind: {} for kind in KEYS}
    sources: dict[str, str] = {}
    for document in documents:
        _merge_sources(document, sources, faults)
        _merge_entries(document, entries, faults)
    _check_names(entries)
    table = _records(entries, sources, faults)
    known = {*entries["components"], *entries["species"]}
    for document in documents:
        table.interactions.update(read_interactions(document, known, sources, faults))
    if faults:
        raise InputError(faults)
    return table


def _merge_sources(document: Document, sources: dict[str, str], faults: list[Fault]) -> None:
    def fault(key: str, wrong: str, right: str) -> None:
        line = document.line_of("sources", "", key)
        faults.append(Fault(document.file, line, f"sources.{key}" if key else "sources", wrong, right))

    found = document.tables.get("sources", {})
    if not isinstance(found, dict):
        fault("", "is no section", "write [sources] and a line for each key")
        return
    for key, text in found.items():
        if not isinstance(text, str) or not text.strip():
            fault(key, "is no text", "write author, year and journal in quotes")
        elif key in sources:
            fault(key, "is a source of the table already", "choose another key")
        else:
            sources[key] = text


def _merge_entries(document: Document, entries: dict[str, dict[str, Entry]], faults: list[Fault]) -> None:
    sections = (*KEYS, SECTION, "sources")
    for kind, found in document.tables.items():
        if kind != "sources" and (kind not in sections or not isinstance(found, dict)):
            right = did_you_mean(kind, sections, quote="")
            wrong = "is no section of a constants file"
            faults.append(Fault(document.file, document.line_of(kind), kind, wrong, right))
            continue
        for name, keys in found.items() if kind in KEYS else ():
            entry = Entry(kind, name, keys if isinstance(keys, dict) else {}, document, faults)
            entries[kind][name] = entry


def _check_names(entries: dict[str, dict[str, Entry]]) -> None:
    """Note names that are not in the normal form, and names that two entries claim."""
    for kind in ("components", "species", "gases"):
        for name, entry in entries[kind].items():
            try:
                normal = normal_ion(name)
            except ValueError as error:
                entry.fault("", str(error))
                continue
            if normal != name:
                entry.fault("", "is not the plain form of the name", f"write {normal}")
            elif kind == "species" and (name in entries["components"] or name in ("H2O", "e^-")):
                entry.fault("", "is a component already; it cannot be a species too")
    claimed = {name.casefold(): entry for name, entry in entries["minerals"].items()}
    for name, entry in entries["minerals"].items():
        for alias in entry.names("also_called"):
            other = claimed.setdefault(alias.casefold(), entry)
            if other is not entry:
                entry.fault("also_called", f"holds '{alias}', which means {other.name} already")
        if claimed[name.casefold()] is not entry:
            entry.fault("", f"is also the name of {claimed[name.casefold()].name}")


def _records(entries: dict[str, dict[str, Entry]], sources: dict[str, str], faults: list[Fault]) -> Table:
    published = {}
    for kind, named in entries.items():
        for name, entry in named.items():
            entry.check_keys()
            published[kind, name] = read_published(entry, sources)
    reducer = Reducer(entries, published)
    table = Table(sources=sources)
    for kind, named in entries.items():
        records = getattr(table, kind)
        for name, entry in named.items():
            try:
                record = MAKERS[kind](entry, published[kind, name], reducer, sources)
            except Faulty:
                continue
            records[name] = record
    return table
