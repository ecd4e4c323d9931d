"""`gossan export`: a result file as CSV."""

from __future__ import annotations

import argparse
import csv
import io
from collections.abc import Iterator
from pathlib import Path

from gossan.base.errors import DONE, ResultError
from gossan.cli import shell
from gossan.cli.compiling import announce_compiling

WHAT = ("ports", "profiles", "ledger", "limits", "bed", "certificate")
LAYOUT = """\
ports     a row per port and record: time, pore volumes, Darcy flux, pH, then
          `dissolved Zn^2+ (mol m-3)` (flux-averaged), `resident ...`, `passed ...`
profiles  in long form, a row per frame and cell: time, x, layer, then all that
          is known there: `dissolved ...`, `solid ...`, `saturation ...`,
          `activity ...` (log10), porosity, conductivity, pH, ionic strength
ledger    a row per record: entered, left, stored, made and error of every solute
limits    a row per limit: when it was first exceeded, the last and the worst value
bed       a row per frame: loss of head over each layer and the column, conductivity
          left of the first to fall of all cells and of the column, also by other laws
certificate
          a row per cell at the last checkpoint: what its equilibrium misses its
          equations by, worked out anew with 32 digits: `balance ...` as a share of
          the largest term, ionic strength as a share, minerals in ln of saturation
          ratio (present: away from 0; absent: above 0; full: below 0),
          `ln_activity ...`, the estimated error of the ln activity; `diluted since`
          is what water that solids freed or bound changed after the solve

Units stand in the heads, decimals have a point, times are in s; a field is empty
where there is nothing to say."""


def parser() -> argparse.ArgumentParser:
    """The command's arguments."""
    made = argparse.ArgumentParser(
        prog="gossan export", description="A result file as CSV, units in the head.", epilog=LAYOUT,
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )  # fmt: skip
    made.add_argument("file", metavar="FILE", help="a result file")
    made.add_argument("what", metavar="WHAT", choices=WHAT, help=", ".join(WHAT))
    made.add_argument("-o", "--output", metavar="CSV", help="default: standard output")
    return made


def run(args: argparse.Namespace) -> int:
    """Export one table; returns the exit code."""
    from gossan.store.read import open_result
    from gossan.views.exports import WHAT as TABLES
    from gossan.views.exports import cell_text

    result = open_result(args.file)
    if args.what == "certificate":
        announce_compiling()
    rows = TABLES[args.what](result)
    lines = _lines([cell_text(cell) for cell in row] for row in rows)
    if args.output is None:
        shell.write(lines)
        return DONE
    try:
        with Path(args.output).open("w", encoding="utf-8", newline="") as out:
            out.writelines(lines)
    except OSError as error:
        reason = (error.strerror or "it cannot be opened").lower()
        raise ResultError(f"{args.output} cannot be written ({reason})") from None
    shell.say(f"wrote {args.output}")
    return DONE


def _lines(rows: Iterator[list[str]]) -> Iterator[str]:
    """Rows as lines of CSV (RFC 4180, but for line ends)."""
    for row in rows:
        line = io.StringIO()
        csv.writer(line, lineterminator="\n").writerow(row)
        yield line.getvalue()
