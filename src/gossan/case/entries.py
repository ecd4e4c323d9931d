"""The feed of a case, entry by entry: what an entry leaves out filled in, its series read."""

from __future__ import annotations

from collections.abc import Mapping, Sequence

from gossan.base.amounts import Amount
from gossan.case.course import Course, Entry, Node, Values, course_of
from gossan.case.feed import Feed, Flow
from gossan.case.model import Case, Water
from gossan.case.series import Row, Series, read_series
from gossan.constants.names import component_named

AT_ONCE = Amount("0 s", 0.0, "s")


def series_of(case: Case) -> dict[int, Series]:
    """The series of a case that has been checked, by the index of their entry."""
    assert case.flow is not None
    found = {}
    for index, feed in enumerate(case.flow.feed):
        if feed.series:
            text = case.files[feed.series]
            series, _ = read_series(text, feed.series, case.tracer_names, case.table.components)
            assert series is not None
            found[index] = series
    return found


def entries_of(
    feeds: Sequence[Feed], flow: Flow, temperature: float, series: Mapping[int, Series]
) -> list[Entry]:
    """The entries with all their values; temperature K, of the case."""
    entries: list[Entry] = []
    for index, feed in enumerate(feeds):
        own = _values(feed, flow, temperature)
        if index in series:
            nodes = tuple(Node(row.time, _of_row(row, own, series[index])) for row in series[index].rows)
            entries.append(Entry(feed.from_, nodes, feed.between == "linear"))
        elif feed.over is not None and entries:
            begin = entries[-1].nodes[-1].values
            entries.append(Entry(feed.from_, (Node(AT_ONCE, begin), Node(feed.over, own)), True))
        else:
            entries.append(Entry(feed.from_, (Node(AT_ONCE, own),), True))
    return entries


def course(case: Case, series: Mapping[int, Series] | None = None) -> Course:
    """The course of what drives a case that has been checked."""
    assert case.flow is not None
    read = series_of(case) if series is None else series
    entries = entries_of(case.flow.feed, case.flow, case.temperature.si, read)
    return course_of(entries, case.pore_length, _settled)


def _settled(index: int, node: int, wrong: str, right: str) -> None:
    """Nobody to complain to: a case that has been checked has no such fault."""


def waters_of_rows(case: Case, series: Mapping[int, Series]) -> dict[str, Water]:
    """The waters that rows of series with columns of amounts stand for, by the names that `Values` have."""
    assert case.flow is not None
    found = {}
    for index, read in series.items():
        base = case.flow.feed[index].water
        for row in read.rows:
            if row.solutes or row.pH is not None:
                name = water_of_row(row, base, read)
                found[name] = _changed(case.waters[row.water or base], row, case)
    return found


def water_of_row(row: Row, base: str, series: Series) -> str:
    """The name of the water that enters at a row; one of the row's own where it gives amounts."""
    name = row.water or base
    return f"{name} at {series.file}:{row.line}" if row.solutes or row.pH is not None else name


def _of_row(row: Row, own: Values, series: Series) -> Values:
    flux, head = own.darcy_flux, own.head_drop
    if row.darcy_flux is not None:
        flux, head = row.darcy_flux.si, None
    elif row.head_drop is not None:
        flux, head = None, row.head_drop.si
    temperature = row.temperature.si if row.temperature is not None else own.temperature
    return Values(water_of_row(row, own.water, series), flux, head, temperature)


def _values(feed: Feed, flow: Flow, temperature: float) -> Values:
    flux, head = feed.darcy_flux, feed.head_drop
    if flux is None and head is None:
        flux, head = flow.darcy_flux, flow.head_drop
    own = feed.temperature.si if feed.temperature is not None else temperature
    return Values(feed.water, flux.si if flux else None, head.si if head else None, own)


def _changed(water: Water, row: Row, case: Case) -> Water:
    """A water with the amounts of a row in place of its own."""
    analysis, tracers = dict(water.analysis), dict(water.tracers)
    components = case.table.components
    for name, amount in row.solutes.items():
        if name in case.tracer_names:
            tracers[name] = amount
            continue
        component = component_named(name, components).component
        twins = [key for key in analysis if component_named(key, components).component == component]
        for twin in twins:
            del analysis[twin]
        analysis[name] = amount
    changes: dict[str, object] = {"analysis": analysis, "tracers": tracers}
    if row.pH is not None:
        changes["pH"] = row.pH
    return water.model_copy(update=changes)
