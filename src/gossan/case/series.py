"""A series of what enters, from the text of a CSV file: a header with units, a row for each time."""

from __future__ import annotations

import csv
import re
from collections.abc import Collection
from dataclasses import dataclass, field
from itertools import pairwise
from typing import Any

from gossan.base.amounts import Amount
from gossan.base.errors import Fault
from gossan.base.units import NUMBER
from gossan.base.wrong import Wrong, closest
from gossan.case.feed import DARCY_FLUX, HEAD_DROP, TEMPERATURE, TIME
from gossan.case.fields import Number
from gossan.case.quantities import InWater, Quantity
from gossan.constants.names import component_named

HEADER = re.compile(r"\s*(?P<name>.*?)\s*(?:[(\[](?P<unit>[^()\[\]]*(?:\([^()]*\)[^()\[\]]*)*)[)\]])?\s*")
MEASURED = {"time": TIME, "darcy_flux": DARCY_FLUX, "head_drop": HEAD_DROP, "temperature": TEMPERATURE}
PH = Number("a pH", -2, 16, example="5.9")
MOST_FAULTS = 20  # of one file; then it is another kind of file


@dataclass(frozen=True)
class Row:
    """What enters at one time of a series; None and empty for what the file has no column of."""

    line: int
    time: Amount  # s or PV since the entry's `from`
    water: str = ""
    darcy_flux: Amount | None = None
    head_drop: Amount | None = None
    temperature: Amount | None = None
    pH: float | None = None
    solutes: dict[str, Amount] = field(default_factory=dict)  # by the names of an analysis, or of tracers


@dataclass(frozen=True)
class Series:
    """A file that has been read without a fault in it."""

    file: str
    columns: tuple[str, ...]
    rows: tuple[Row, ...]


@dataclass(frozen=True)
class _Column:
    place: int
    name: str
    unit: str
    kind: Quantity | None  # None: no unit


def read_series(
    text: str, file: str, tracers: Collection[str], components: Collection[str]
) -> tuple[Series | None, list[Fault]]:
    """Read the text of a series.

    tracers, components  whose amounts may stand in a column, components under any name a laboratory uses
    Returns  the series (None where there is a fault) and all that is wrong, each with line and column
    """
    reader = _Reader(file, tracers, components)
    lines = text.replace("\r\n", "\n").split("\n")
    kept = [(number, line) for number, line in enumerate(lines, 1) if line.strip() and line.strip()[0] != "#"]
    if not kept:
        reader.fault(0, "", "is empty", 'write a header, such as "time (d),darcy_flux (m/d)", and rows')
        return None, reader.faults
    columns = reader.header(*kept[0])
    rows = [reader.row(number, line, columns) for number, line in kept[1:]] if columns else []
    if columns and not rows:
        reader.fault(kept[0][0], "", "has a header and no row", "write a row for each time")
    reader.check_times([row for row in rows if row])
    if reader.faults:
        return None, reader.faults[:MOST_FAULTS]
    return Series(file, tuple(column.name for column in columns), tuple(row for row in rows if row)), []


class _Reader:
    """Reads lines of one file and notes what is wrong with them."""

    def __init__(self, file: str, tracers: Collection[str], components: Collection[str]):
        self.file, self.tracers, self.components = file, tracers, components
        self.faults: list[Fault] = []

    def fault(self, line: int, column: str, wrong: str, right: str = "") -> None:
        self.faults.append(Fault(self.file, line, column, wrong, right))

    def header(self, line: int, text: str) -> list[_Column]:
        """The columns; none where the time is missing or something else is wrong."""
        names = _cells(text)
        if len(names) == 1 and (";" in text or "\t" in text):
            cure = "columns are separated by commas, the decimal sign is a point"
            self.fault(line, "", "has one column", cure)
            return []
        columns: list[_Column] = []
        before = len(self.faults)
        for place, name in enumerate(names):
            column = self._column(line, place, name)
            if column and column.name in [other.name for other in columns]:
                self.fault(line, column.name, "is a column twice", "keep one of the two")
            elif column:
                columns.append(column)
        found = [column.name for column in columns]
        if len(self.faults) == before and "time" not in found:
            self.fault(line, "time", "is missing among the columns", 'write "time (d)" in the header')
        elif len(self.faults) == before and found == ["time"]:
            self.fault(line, "time", "is the only column", 'add what changes, such as "darcy_flux (m/d)"')
        return columns if len(self.faults) == before else []

    def _column(self, line: int, place: int, text: str) -> _Column | None:
        match = HEADER.fullmatch(text)
        name, unit = (match["name"], match["unit"] or "") if match else (text.strip(), "")
        if not name:
            self.fault(line, "", f"has no name over column {place + 1}", "give it one, or leave it out")
            return None
        if name in ("water", "pH"):
            if unit:
                self.fault(line, name, f'has the unit "{unit}"', f'write "{name}" alone')
            return _Column(place, name, "", None)
        kind = MEASURED.get(name) or self._amounts(line, name)
        if kind is None:
            return None
        example = kind.example.strip('"').split(" ", 1)[1]
        if not unit:
            self.fault(line, name, "has no unit in the header", f'write "{name} ({example})"')
            return None
        try:
            kind.parse(f"1 {unit}", line)
        except Wrong:
            self.fault(line, name, f'has the unit "{unit}", which {kind.what} has not',
                       f'such as "{name} ({example})"')
            return None
        return _Column(place, name, unit, kind)

    def _amounts(self, line: int, name: str) -> Quantity | None:
        """The kind of a column of amounts; None, and a fault, where nothing is called so."""
        if name in self.tracers:
            return InWater()
        try:
            component_named(name, self.components)
        except Wrong as wrong:
            close = closest(name, [*MEASURED, "water", "pH", *self.tracers])
            cure = f'did you mean "{close}"?' if close else wrong.right
            others = ", ".join(["water", "pH", *MEASURED])
            self.fault(line, name, f"is no column of a series, which are {others}, solutes and tracers", cure)
            return None
        return InWater()

    def row(self, line: int, text: str, columns: list[_Column]) -> Row | None:
        """One row; None after a fault."""
        cells = _cells(text)
        width = max(column.place for column in columns) + 1
        if len(cells) != width:
            cure = "the decimal sign is a point, and a text with a comma stands in quotes"
            self.fault(line, "", f"has {len(cells)} cells under a header of {width} columns", cure)
            return None
        values: dict[str, Any] = {}
        solutes: dict[str, Amount] = {}
        for column in columns:
            try:
                value = _value(column, cells[column.place].strip(), line)
            except Wrong as wrong:
                self.fault(line, column.name, wrong.wrong, wrong.right)
                continue
            if isinstance(column.kind, InWater):
                solutes[column.name] = value
            else:
                values[column.name] = value
        if len(values) + len(solutes) < len(columns):
            return None
        return Row(line=line, solutes=solutes, **values)

    def check_times(self, rows: list[Row]) -> None:
        """Times begin at 0 and rise."""
        if rows and rows[0].time.si != 0.0 and not self.faults:
            wrong = f'is "{rows[0].time}" in the first row'
            self.fault(rows[0].line, "time", wrong, "time counts from the entry's `from`: begin with 0")
        for before, row in pairwise(rows):
            if row.time.si <= before.time.si:
                wrong = f'is "{row.time}", not later than "{before.time}" in the row before'
                self.fault(row.line, "time", wrong, "put the rows in order of time")


def _cells(text: str) -> list[str]:
    return next(csv.reader([text], skipinitialspace=True))


def _value(column: _Column, cell: str, line: int) -> Any:
    """What a cell holds; raises Wrong."""
    if not cell:
        raise Wrong("is empty", "every row has a value in every column")
    if column.name == "water":
        return cell
    plain = cell.lstrip("< ") if isinstance(column.kind, InWater) else cell
    if not NUMBER.fullmatch(plain):
        unit = f": the unit stands in the header, ({column.unit})" if column.unit else ""
        raise Wrong(f'is "{cell}"', f"a number is needed{unit}")
    if column.kind is None:
        return PH.read(float(plain))
    return column.kind.read(f"{cell} {column.unit}", line)
