"""Write docs/case-file.md from the model of a case: `python tools/docs/case_file.py`."""

from __future__ import annotations

import sys
from pathlib import Path
from typing import Any, get_args, get_origin

from pydantic import BaseModel
from pydantic.fields import FieldInfo

from gossan.base.amounts import Amount
from gossan.base.units import KINDS, TABLE
from gossan.case.fields import Choice, Kind, NotLanded
from gossan.case.model import Case

PAGE = Path(__file__).parents[2] / "docs" / "case-file.md"

HEAD = """\
# The case file

<!-- Derived from src/gossan/case/model.py by tools/docs/case_file.py; edit there. -->

A case is a text in TOML 1.0: tables in brackets, `key = value` below them, comments after `#`. A
quantity is a text with its unit (`"0.12 m/d"`, `"24 mg/L"`); a bare number is taken only where
there is no dimension. A key that is not listed here is refused, and so is one that has not landed
yet: nothing is ignored silently. All faults of a case come in one message, each with its line and
its cure.

`gossan assay` needs only `[waters]`; what runs a column needs `[[layers]]`, `[flow]` with a feed,
and `[run]`.
"""

NOTES = """\
## Names and amounts of a water

An analysis names an element, an ion or the usual name: `Zn`, `"Zn^2+"`, `"Zn²⁺"`, `zinc`;
`"Fe(II)"` and `"Fe(III)"`; `SO4` or `sulfate`; `HS`, `H2S` or `sulfide`. A key with `^`, `+` or
brackets stands in quotes. The name fixes the mass that is meant: `SiO2 = "10 mg/L"` and `Si = "10
mg/L as SiO2"` are the same. Any of `CO3`, `HCO3`, `CO2`, `C` gives total inorganic carbon, and
excludes an alkalinity. `S` alone and `N` alone are refused. Fe, Mn, Cu, Co and Pb without a valence
are the divalent ion; where the water gives an Eh, pe or dissolved oxygen, Fe, Mn and Cu are divided
by it ([redox](redox.md)).

`mg/L as N` counts the mass as that substance; its atoms are followed. Calcium and magnesium are
also read `as CaCO3`. `meq/L` is divided by the charge of the ion as named. `mg/kg` and `mmol/kg`
are per kg of water. A value below detection is written `"<0.0005 mg/L"`: half the limit is used.
`ppm` is refused, because it can mean three things.

## Units

Besides whatever the unit library knows (`psi`, `gal/d/ft2`, `m s-1`, ...):

"""


def page() -> str:
    """The whole page as Markdown."""
    tables = "\n".join(_table(Case, "The top of the file", ""))
    return f"{HEAD}\n{tables}\n\n{NOTES}{_units()}"


def _table(model: type[BaseModel], title: str, name: str) -> list[str]:
    """The section of one table and those of the tables inside it."""
    rows = [f"## {title}", "", " ".join((model.__doc__ or "").split()), ""]
    rows += ["| key | meaning | form or unit | default |", "|---|---|---|---|"]
    inner: list[str] = []
    for field, info in model.model_fields.items():
        key = info.alias or field
        kind = _kind(info)
        child = next((arm for arm in (info.annotation, *get_args(info.annotation)) if _is_model(arm)), None)
        if child:
            many = get_origin(info.annotation)
            path = f"{name}{key}.NAME" if many is dict else f"{name}{key}"
            header = f"[[{path}]]" if many is tuple else f"[{path}]"
            inner += ["", *_table(child, f"`{header}`", f"{path}.")]
            rows.append(_row(key, info, f"table `{header}`, below", ""))
        elif kind is None:
            rows.append(_row(key, info, f"table: {_form(_kind_of_values(info))}", "none"))
        else:
            rows.append(_row(key, info, _form(kind), _default(info, kind)))
    return rows + inner


def _row(key: str, info: FieldInfo, form: str, default: str) -> str:
    cells = (f"`{key}`", (info.description or "").replace("|", "\\|"), form.replace("|", "\\|"), default)
    return f"| {' | '.join(cells)} |"


def _form(kind: Kind) -> str:
    if isinstance(kind, NotLanded):
        return "*not landed yet*"
    if isinstance(kind, Choice):
        later = [f'"{option}"' for option in kind.not_landed]
        words = ", ".join(f'"{option}"' for option in kind.options)
        return f"{words} (not landed yet: {', '.join(later)})" if later else words
    return f"{kind.unit}; `{kind.example}`" if kind.example else kind.unit


def _default(info: FieldInfo, kind: Kind) -> str:
    if info.is_required():
        return "**required**"
    value = info.default
    if isinstance(kind, NotLanded) or value in (None, "", (), {}):
        return ""
    if isinstance(value, bool):
        return str(value).lower()
    return f'"{value}"' if isinstance(value, (Amount, str)) else f"{value:g}"


def _kind(info: FieldInfo) -> Kind | None:
    return next((each for each in info.metadata if isinstance(each, Kind)), None)


def _kind_of_values(info: FieldInfo) -> Kind:
    """The kind of what a table of free names holds, however deep."""
    here: Any = info.annotation
    while not hasattr(here, "__metadata__"):
        here = get_args(here)[1]
    return next(each for each in here.__metadata__ if isinstance(each, Kind))


def _is_model(annotation: Any) -> bool:
    return isinstance(annotation, type) and issubclass(annotation, BaseModel)


def _units() -> str:
    """The units of the table by what they measure."""
    by_kind: dict[str, list[str]] = {}
    for unit, (_, kind) in TABLE.items():
        if kind != "1":  # shares are plain numbers in a case
            by_kind.setdefault(kind, []).append(f"`{unit}`")
    by_kind["K"].insert(0, "`degC`")
    rows = [f"- {KINDS[kind][0]}: {', '.join(units)}" for kind, units in by_kind.items()]
    rows.append("- one of these over another: `m/d`, `mg/L`, `meq/100g`, `umol/g`, `g/mol`, ...")
    return "\n".join(rows) + "\n"


if __name__ == "__main__":
    PAGE.write_text(page(), encoding="utf-8")
    sys.stderr.write(f"wrote {PAGE.name}\n")
