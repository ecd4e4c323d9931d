"""All figures of a result: functions from a Result to a Figure, neither shown nor saved."""

from __future__ import annotations

from collections.abc import Iterator
from typing import TYPE_CHECKING

from gossan.case.bounds import Bound
from gossan.store.read import Result
from gossan.views import chosen
from gossan.views.bed_figures import books, pores
from gossan.views.breakthrough import breakthrough
from gossan.views.conductivity_figure import conductivity, is_worth_a_figure
from gossan.views.profile_figures import dissolved_profiles, retained_profiles, solid_profiles

if TYPE_CHECKING:
    from matplotlib.figure import Figure

__all__ = [
    "all_figures", "books", "breakthrough", "conductivity", "dissolved_profiles", "pores",
    "retained_profiles", "solid_profiles",
]  # fmt: skip


def all_figures(
    result: Result, bounds: list[Bound] | None = None, masses: dict[str, float] | None = None
) -> Iterator[tuple[str, Figure]]:
    """Every figure that a result has something for, with a name for its file.

    bounds  limits to draw (`case.bounds.bounds_of`); masses  kg/mol by tracer
    """
    for port in result.ports:
        yield f"breakthrough-{port}", breakthrough(result, port, bounds, masses)
    yield "dissolved", dissolved_profiles(result, bounds, masses)
    if chosen.minerals(result):
        yield "minerals", solid_profiles(result)
    if result.axes.parts & {"isotherms", "immobile"}:
        yield "retention", retained_profiles(result, bounds, masses)
    yield "pores", pores(result)
    if is_worth_a_figure(result):
        yield "conductivity", conductivity(result)
    yield "ledger", books(result)
