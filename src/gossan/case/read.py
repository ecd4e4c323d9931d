"""From the file of a case to its model, or to one message with everything that is wrong with it."""

from __future__ import annotations

from pathlib import Path
from typing import Any

from gossan.base.errors import Fault, InputError
from gossan.case.checks import check_case
from gossan.case.draft import Draft
from gossan.case.lines import Path as KeyPath
from gossan.case.lines import key_lines
from gossan.case.model import Case
from gossan.case.syntax import parse
from gossan.constants.entries import Table
from gossan.constants.load import load_table


def read_case(path: str | Path) -> Case:
    """Read and check a case file; what a run needs besides is asked for by `Case.require_column`.

    Raises  InputError that lists every fault with its file, line and key
    """
    path = Path(path)
    if path.is_dir():
        inside = path / "case.toml"
        cure = f"did you mean {inside}?" if inside.is_file() else "name the case file in it"
        raise InputError([Fault(str(path), 0, "", "is a folder", cure)])
    try:
        text = path.read_bytes().decode("utf-8-sig")
    except OSError as error:
        reason = (error.strerror or "it cannot be opened").lower()
        raise InputError([Fault(str(path), 0, "", f"cannot be read ({reason})")]) from None
    except UnicodeDecodeError as error:
        line = path.read_bytes().count(b"\n", 0, error.start) + 1
        raise InputError([Fault(str(path), line, "", "is not text in UTF-8", "save it as UTF-8")]) from None
    return case_from_text(text, str(path), path.parent)


def case_from_text(
    text: str, name: str = "case.toml", folder: str | Path = ".", constants: str | None = None,
    files: dict[str, str] | None = None,
) -> Case:
    """Read and check a case given as text; `name` stands in messages, `folder` is where its files are.

    constants  the text of the user's own constants, where their file is not in the folder any more
    files      the same of other files that the case names, by name

    Raises  InputError
    """
    plain = text.replace("\r\n", "\n")
    data, mended, faults = parse(plain, name)
    if data is None:
        raise InputError(faults)
    return _checked(data, key_lines(mended), name, text, Path(folder), faults, constants, files)


def case_from_data(data: dict[str, Any], name: str = "case", folder: str | Path = ".") -> Case:
    """Check a case given as the values of its TOML, such as a parsed case with one value changed.

    Raises  InputError, without lines
    """
    return _checked(data, {}, name, "", Path(folder), [])


def _checked(data: dict[str, Any], lines: dict[KeyPath, int], name: str, text: str, folder: Path,
             faults: list[Fault], constants: str | None = None, files: dict[str, str] | None = None) -> Case:
    draft = Draft(data, lines, name)
    draft.faults[:0] = faults
    table = _table(draft, folder, constants)
    files = dict(files or {})
    check_case(draft, table, files, folder)
    if draft.faults:
        # the case's own faults in the order of lines, then those of other files
        raise InputError(sorted(draft.faults, key=lambda fault: (fault.file != name, fault.line)))
    case: Case = draft.case
    case._file, case._text, case._lines, case._table, case._files = name, text, lines, table, files
    if case.chemistry.constants:
        case._constants_text = constants or (folder / case.chemistry.constants).read_text(encoding="utf-8")
    return case


def _table(draft: Draft, folder: Path, text: str | None) -> Table:
    """The constants of the case; the program's own alone where the user's file is faulty."""
    extra = draft.case.chemistry.constants if draft.case.chemistry else ""
    if not extra:
        return load_table()
    try:
        return load_table(folder / extra, text)
    except InputError as error:
        draft.fault(("chemistry", "constants"), f'is "{extra}", which has faults', "they are listed here too")
        draft.faults += error.faults
        return load_table()
