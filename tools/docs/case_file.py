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

## What an activity law is worth

| `activity` | meant for I up to, mol/kg | mean activity coefficients of salts, against handbooks |
|---|---|---|
| "davies" | 0.5 | 2 % at 0.01 mol/kg, 5 % at 0.1; ZnSO4 and CuSO4 with their pairs 10 % |
| "debye-hueckel" | 0.1 | as "davies"; ions by their size |
| "sit" | 3.5 | 3 to 6 % to 1 mol/kg: chlorides of H, Na, K, Mg, Ca, Mn, Co, Ni, Cu, nitrates of Co, Cd |
| "ideal" | - | for tests and traces |

Under "sit" some salts are described less well, to 1 mol/kg: sulfates of Zn, Cu, Ni, Mn and Cd within 7 %
to 0.2 mol/kg and 14 % (too active) at 0.5 and 1, those of Fe and Co by analogy; MgSO4 within 6 %, Na2SO4
16 %; CdCl2, ZnCl2 and FeCl2 within 8 %; AlCl3 within 12 % to 0.5 mol/kg. Pb(NO3)2 comes out 18 to 31 %
too active. Where zinc is a trace in a brine of more than 1 mol/kg of chloride, its higher chloride
complexes are left out and it counts up to 0.45 in log10 more active. A water or run beyond the range is
told so, and its numbers there are bounded, not right: 1 mol/kg of AlCl3 (I = 6) comes out a third too
low. Saturation indices inherit all of this: 10 % of a mean coefficient is 0.08 in the index of a mineral
of two ions.

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
