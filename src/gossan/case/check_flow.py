"""Checks of what drives the column: the feed, its times, its series."""

from __future__ import annotations

from dataclasses import replace
from pathlib import Path as FilePath

from gossan.base.amounts import Amount
from gossan.base.errors import Fault
from gossan.case.check_column import check_water_name
from gossan.case.check_waters import check_tracer, solute_named
from gossan.case.course import Course, course_of
from gossan.case.draft import Draft
from gossan.case.entries import entries_of
from gossan.case.feed import Feed
from gossan.case.lines import Path
from gossan.case.series import Row, Series, read_series
from gossan.constants.entries import Table

DRIVES = ("darcy_flux", "head_drop")


def check_flow(draft: Draft, table: Table, files: dict[str, str], folder: FilePath) -> None:
    """One way of driving the water at every time; feeds that start at zero and go on in order.

    files   texts of the files of the case, by name; those that are read from the folder are added
    """
    flow = draft.case.flow
    if flow is None:
        return
    _check_one_drive(draft, ("flow",))
    series: dict[int, Series] = {}
    before = len(draft.faults)
    for index, feed in enumerate(flow.feed or ()):
        path: Path = ("flow", "feed", index)
        _check_one_drive(draft, path)
        if feed.over is not None and index == 0:
            draft.fault((*path, "over"), "stands in the first feed: there is none before to come from",
                        "leave it out")
        found = _series(draft, table, feed, path, files, folder) if feed.series else None
        if found is not None:
            series[index] = found
        _check_water(draft, feed, found, path)
        _check_driven(draft, feed, found, path)
    if not flow.feed:
        _check_driven(draft, None, None, ("flow",))
    if len(draft.faults) == before and flow.feed and not _holes(draft):
        _check_times(draft, series)


def _check_one_drive(draft: Draft, path: Path) -> None:
    if all(key in draft.at(path) for key in DRIVES):
        draft.fault((*path, "head_drop"), "stands beside darcy_flux: only one can be held",
                    "keep one of the two")


def _check_water(draft: Draft, feed: Feed, series: Series | None, path: Path) -> None:
    """Every moment has a water: the entry's, or one in each row."""
    named = "water" in draft.at(path)
    if feed.series and series is None and not named:
        return  # the file has its own faults, and may name waters
    if series is not None and "water" in series.columns:
        if named:
            wrong = f"stands beside the waters of {series.file}: the same fact twice"
            draft.fault((*path, "water"), wrong, "keep one of the two")
        return
    if not named:
        draft.fault((*path, "water"), "is missing", 'write water = "mine"')
    elif feed.water is not None:
        check_water_name(draft, feed.water, (*path, "water"))


def _check_driven(draft: Draft, feed: Feed | None, series: Series | None, path: Path) -> None:
    """Every moment has a flux or a head."""
    given = [draft.at(("flow",))] + ([draft.at(path)] if feed else [])
    if any(key in table for key in DRIVES for table in given):
        return
    if series is not None and any(key in series.columns for key in DRIVES):
        return
    if feed is not None and feed.series and series is None:
        return
    if path != ("flow",) and any(key in each for key in DRIVES for each in _feeds(draft)):
        wrong = "is missing, and [flow] has none for the feeds that have none of their own"
        draft.fault((*path, "darcy_flux"), wrong, 'write darcy_flux = "0.12 m/d", or a head_drop')
    elif path in (("flow",), ("flow", "feed", 0)):
        draft.fault(("flow", "darcy_flux"), "is missing", 'write darcy_flux = "0.12 m/d", or a head_drop')


def _feeds(draft: Draft) -> list[dict]:
    feeds = draft.at(("flow",)).get("feed")
    count = len(feeds) if isinstance(feeds, list) else 0
    return [draft.at(("flow", "feed", index)) for index in range(count)]


def _holes(draft: Draft) -> bool:
    """Whether some value that times depend on could not be read."""
    flow, layers = draft.case.flow, draft.case.layers or ()
    tables = [(flow, draft.at(("flow",)))]
    tables += [(feed, draft.at(("flow", "feed", index))) for index, feed in enumerate(flow.feed)]
    keys = {"from": "from_", "over": "over", **{key: key for key in (*DRIVES, "temperature", "between")}}
    for read, written in tables:
        if any(key in written and getattr(read, name) is None for key, name in keys.items()):
            return True
    if any(feed.from_ is None for feed in flow.feed) or draft.case.temperature is None:
        return True
    return not layers or any(layer.length is None or layer.porosity is None for layer in layers)


def _check_times(draft: Draft, series: dict[int, Series]) -> None:
    """Times that rise, on a clock that can be told, within the run."""
    flow, layers = draft.case.flow, draft.case.layers

    def complain(index: int, node: int, wrong: str, right: str) -> None:
        path: Path = ("flow", "feed", index)
        if node < 0:
            draft.fault((*path, "from"), wrong, right)
        elif index in series:
            read = series[index]
            draft.faults.append(Fault(read.file, read.rows[node].line, "time", wrong, right))
        else:
            draft.fault((*path, "over"), wrong, right)

    before = len(draft.faults)
    entries = entries_of(flow.feed, flow, draft.case.temperature.si, series)
    found = course_of(entries, sum(layer.length.si * layer.porosity for layer in layers), complain)
    if len(draft.faults) == before:
        _check_inside_run(draft, found)
        _check_something_moves(draft, found)


def _check_inside_run(draft: Draft, course: Course) -> None:
    """Feeds begin before the run ends, and the run ends."""
    flow, run = draft.case.flow, draft.case.run
    duration = run.duration if run else None
    if duration is None:
        return
    if duration.unit == "PV" and course.comes_to_rest:
        rest = course.pieces[-1].start
        if course.by_volume or not course.held_flux or course.seconds(duration) > rest:
            draft.fault(("run", "duration"), f'is "{duration}", which never comes: in the end nothing flows',
                        'give a time, such as "80 d"')
            return
    for index, feed in enumerate(flow.feed):
        start, end = _on_one_clock(course, feed.from_, duration)
        if start is not None and end is not None and start >= end:
            wrong = f'is "{feed.from_}", not before the end of the run ("{duration}")'
            draft.fault(("flow", "feed", index, "from"), wrong, "leave it out?")


def _on_one_clock(course: Course, one: Amount, other: Amount) -> tuple[float | None, float | None]:
    if one.unit == other.unit or one.si == 0.0:
        return one.si, other.si
    if not course.held_flux:
        return None, None
    return course.seconds(one), course.seconds(other)


def _check_something_moves(draft: Draft, course: Course) -> None:
    """Water that stands for ever, without diffusion, is a slip."""
    if not all(piece.mean_flux() == 0.0 for piece in course.pieces) or not course.held_flux:
        return
    if all(layer.diffusion is not None and layer.diffusion.si == 0.0 for layer in draft.case.layers):
        draft.fault(("flow", "darcy_flux"), "is zero throughout, and no layer has diffusion: nothing moves",
                    'such as "0.12 m/d"')


def _series(
    draft: Draft, table: Table, feed: Feed, path: Path, files: dict[str, str], folder: FilePath
) -> Series | None:
    """The series of an entry, its own faults and those of its names noted; None where there are some."""
    before = len(draft.faults)
    at = (*path, "series")
    if "over" in draft.at(path):
        draft.fault((*path, "over"), "stands beside a series, which says itself how things change",
                    "leave it out")
    text = files.get(feed.series)
    if text is None:
        try:
            text = (folder / feed.series).read_text(encoding="utf-8-sig")
        except OSError as error:
            reason = (error.strerror or "it cannot be opened").lower()
            draft.fault(at, f'is "{feed.series}", which cannot be read ({reason})',
                        "it stands beside the case")
            return None
        except UnicodeDecodeError:
            draft.fault(at, f'is "{feed.series}", which is not text in UTF-8', "save it as CSV in UTF-8")
            return None
        files[feed.series] = text
    read, faults = read_series(text, feed.series, _tracers(draft), table.components)
    draft.faults += faults
    if read is not None:
        _check_columns(draft, read, path)
        for row in read.rows:
            _check_row(draft, table, read, row, path)
    return read if len(draft.faults) == before else None


def _check_columns(draft: Draft, series: Series, path: Path) -> None:
    """Nothing stands in the entry and in the file, and only one drive in the file."""
    for key in (*DRIVES, "temperature"):
        if key in series.columns and key in draft.at(path):
            draft.fault((*path, key), f"stands in {series.file} as well: the same fact twice",
                        "keep one of the two")
    if all(key in series.columns for key in DRIVES):
        fault = Fault(series.file, 1, "head_drop", "is a column beside darcy_flux: only one can be held",
                      "keep one of the two")
        draft.faults.append(fault)


def _check_row(draft: Draft, table: Table, series: Series, row: Row, path: Path) -> None:
    """The names of a row mean something; what the checks of a case find is told of the file."""
    before = len(draft.faults)
    if "water" in series.columns:
        check_water_name(draft, row.water, (*path, "water"))
    for name, amount in row.solutes.items():
        at = (*path, name)
        if name in _tracers(draft):
            check_tracer(draft, name, amount, at)
        else:
            solute_named(draft, table, name, amount, at)
    for place in range(before, len(draft.faults)):
        fault = draft.faults[place]
        column = fault.key.rpartition(".")[2].strip('"')
        draft.faults[place] = replace(fault, file=series.file, line=row.line, key=column)


def _tracers(draft: Draft) -> set[str]:
    waters = (draft.case.waters or {}).values()
    named = {name for water in waters if water for name in water.tracers or {}}
    return named | set(draft.case.tracers or {})
