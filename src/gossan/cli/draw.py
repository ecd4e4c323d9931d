"""`gossan draw`: figures of a result file."""

from __future__ import annotations

import argparse
from pathlib import Path

from gossan.base.errors import DONE, InputError, ResultError
from gossan.cli import shell


def parser() -> argparse.ArgumentParser:
    """The command's arguments."""
    made = argparse.ArgumentParser(
        prog="gossan draw",
        description="Figures of a result file: breakthrough at the ports, profiles through time, porosity "
        "and conductivity, capacity and ledger. Existing figures of the same names are replaced.",
    )  # fmt: skip
    made.add_argument("file", metavar="FILE", help="a result file")
    made.add_argument("-o", "--output", metavar="DIR", default=".", help="their folder; default: this one")
    made.add_argument("--format", choices=("png", "pdf", "svg"), default="png", help="default: png")
    return made


def run(args: argparse.Namespace) -> int:
    """Draw all figures; returns the exit code."""
    from gossan.case.bounds import bounds_of, tracer_masses
    from gossan.recording import case_of
    from gossan.store.read import open_result
    from gossan.views.figures import all_figures
    from gossan.views.style import PIXELS_PER_INCH

    result = open_result(args.file).loaded()
    try:
        case = case_of(result)
        bounds, masses = bounds_of(case), tracer_masses(case)
    except InputError as error:
        shell.say(f"limits are left out, the case in {args.file} can no longer be read:\n{error}")
        bounds, masses = [], {}
    folder = Path(args.output)
    try:
        folder.mkdir(parents=True, exist_ok=True)
        for name, figure in all_figures(result, bounds, masses):
            path = folder / f"{Path(args.file).stem}-{name}.{args.format}"
            figure.savefig(path, dpi=PIXELS_PER_INCH)
            shell.write([f"{path}\n"])
    except OSError as error:
        reason = (error.strerror or "it cannot be opened").lower()
        raise ResultError(f"figures cannot be written to {folder} ({reason})") from None
    return DONE
