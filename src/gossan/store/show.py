"""How a Result shows itself in a notebook."""

from __future__ import annotations

from html import escape
from typing import TYPE_CHECKING

from gossan.store.layout import variables

if TYPE_CHECKING:
    from gossan.store.read import Result


def page(result: Result) -> str:
    """A short HTML summary: title, state, caution, and every variable with its axes and unit."""
    state = f"{result.status}: {result.reason}" if result.reason else result.status
    parts = [f"<h4>{escape(result.title)}</h4>",
             f"<p>{escape(state)} &middot; {escape(result.path.name)} &middot; "
             f"{len(result.axes.x)} cells, {len(result.axes.component)} components and tracers, "
             f"{len(result.axes.mineral)} minerals</p>"]
    if result.caution:
        parts.append(f"<p><em>{escape(result.caution)}</em></p>")
    groups = {"profiles": result.profiles, **{f"ports/{name}": group for name, group in result.ports.items()},
              "ledger": result.ledger, "steps": result.steps}
    for name, group in groups.items():
        rows = "".join(
            f"<tr>{_cell(f'<code>{row.name}</code>')}{_cell(', '.join(row.dims))}{_cell(row.unit)}"
            f"{_cell(escape(row.long_name))}</tr>" for row in variables(name))
        parts.append(f"<details><summary>{escape(name)}, {group.count} records</summary>"
                     f"<table>{rows}</table></details>")
    return "<div>" + "".join(parts) + "</div>"


def _cell(text: str) -> str:
    return f"<td style='text-align:left'>{text}</td>"
