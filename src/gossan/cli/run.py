"""`gossan run`: a column into a result file, or on with one."""

from __future__ import annotations

import argparse
from collections.abc import Callable
from pathlib import Path
from typing import TYPE_CHECKING

from gossan.base.errors import DONE, GAVE_UP, LIMIT_EXCEEDED, STOPPED, Fault, InputError, ResultError
from gossan.cli import shell
from gossan.cli.compiling import announce_compiling

if TYPE_CHECKING:
    from gossan.case.model import Case
    from gossan.recording import Ending
    from gossan.recording import Progress as Tell


def parser() -> argparse.ArgumentParser:
    """The command's arguments."""
    made = argparse.ArgumentParser(
        prog="gossan run",
        usage="gossan run CASE [-o FILE] [--overwrite] [options]\n       gossan run --resume FILE [options]",
        description="Run a column into a result file, or go on with one that stopped.",
    )
    made.add_argument("case", nargs="?", metavar="CASE", help="the case file (TOML)")
    made.add_argument("-o", "--output", metavar="FILE", help="default: the case's stem + .h5 in this folder")
    made.add_argument("--overwrite", action="store_true", help="replace FILE where it exists")
    made.add_argument("--resume", metavar="FILE", help="go on with this result file from its last checkpoint")
    made.add_argument(
        "--grid-check", action="store_true",
        help="run half the cells first, and state how far each answer depends on them",
    )
    made.add_argument(
        "--threads", type=_count, metavar="N",
        help="threads for the cells of long columns, to the same bits; default: half the processors",
    )
    made.add_argument("--enforce-limits", action="store_true", help="exit code 1 where a limit is exceeded")
    made.add_argument("--json", action="store_true", help="print the outcome as JSON, SI inside")
    made.add_argument("--quiet", action="store_true", help="no progress and no tables")
    return made


def _count(text: str) -> int:
    """A number of threads."""
    if not text.isdecimal() or int(text) < 1:
        raise argparse.ArgumentTypeError(f"{text} is no number of threads: give 1 or more")
    return int(text)


def run(args: argparse.Namespace) -> int:
    """Run or resume; returns the exit code."""
    if args.resume is not None:
        return _resumed(args)
    if args.case is None:
        raise InputError([Fault("gossan run", 0, "", "no case is named", "gossan run CASE.toml")])
    from gossan.case.read import read_case

    case = read_case(args.case)
    case.require_column()
    path = Path(args.output) if args.output else Path(Path(args.case).stem + ".h5")
    announce_compiling()
    from gossan.recording import run_case

    def walk(tell: Tell) -> Ending:
        coarse = _in_half_the_cells(args, case, path, tell) if args.grid_check else None
        return run_case(case, path, overwrite=args.overwrite, progress=tell, coarse=coarse,
                        threads=args.threads)

    return _walked(args, case, path, walk)


def _in_half_the_cells(
    args: argparse.Namespace, case: Case, path: Path, tell: Tell
) -> dict[str, dict[str, float]]:
    """When limits are exceeded in half the cells, found before the run itself, which keeps it in its file."""
    from gossan.study.grid import crossed_in_half_the_cells

    if path.exists() and not args.overwrite:
        raise ResultError(f"{path} exists: name another file, or give --overwrite to replace it")
    if not args.quiet:
        shell.say("first in half the cells, then in all of them")
    return crossed_in_half_the_cells(case, tell)


def _resumed(args: argparse.Namespace) -> int:
    if args.case is not None or args.output or args.overwrite or args.grid_check:
        wrong = "takes its case from the file: give nothing else but --enforce-limits, --json, --quiet"
        raise InputError([Fault("gossan run --resume", 0, "", wrong)])
    from gossan.recording import case_of
    from gossan.store.read import open_result

    path = Path(args.resume)
    result = open_result(path)
    case = case_of(result)
    if result.status == "finished":
        shell.say(f"{path} has finished: there is nothing to resume")
        return _told(args, case, path, None)
    announce_compiling()
    from gossan.recording import resume

    return _walked(args, case, path, lambda tell: resume(path, progress=tell, threads=args.threads))


def _walked(args: argparse.Namespace, case: Case, path: Path, walk: Callable[[Tell], Ending]) -> int:
    """Walk with progress shown and Ctrl-C minded, then tell what came of it."""
    from gossan.cli.progress import Progress, stopping_between_steps

    began = _mark(path)
    try:
        with Progress(case.pore_length, shown=not args.quiet) as progress, stopping_between_steps(progress):
            ending = walk(progress.tell)
    except KeyboardInterrupt:
        if _mark(path) == began:
            raise  # before there was a file
        shell.say(f"interrupted; go on with: gossan run --resume {path}")
        return STOPPED
    return _told(args, case, path, ending)


def _mark(path: Path) -> int | None:
    """Which file stands at a path, to tell a new one from one that was there before."""
    return path.stat().st_ino if path.exists() else None


def _told(args: argparse.Namespace, case: Case, path: Path, ending: Ending | None) -> int:
    from gossan.store.read import open_result
    from gossan.views.summary import run_json, summary_of

    summary = summary_of(open_result(path), case)
    if args.json:
        shell.print_json(run_json(summary))
    elif not args.quiet:
        from gossan.views.run_sheets import run_sheets

        shell.print_sheets(run_sheets(summary))
        shell.say(f"\n{summary.result.caution}")
    for warning in summary.result.warnings:
        shell.say(f"warning: {warning}")
    if ending is not None and ending.status != "finished":
        return _stopped(path, ending)
    if ending is not None and ending.detail:
        shell.say(f"ended: {ending.detail}")
    for verdict in summary.exceeded if args.enforce_limits else ():
        assert verdict.bound
        shell.say(f"limit exceeded: {verdict.quantity} at {verdict.port} (limit {verdict.bound.text})")
    return LIMIT_EXCEEDED if args.enforce_limits and summary.exceeded else DONE


def _stopped(path: Path, ending: Ending) -> int:
    if ending.status == "failed":
        shell.say(f"the numerics gave up: {ending.detail}\ngo on with: gossan run --resume {path}")
        return GAVE_UP
    shell.say(f"stopped: {ending.detail or ending.reason}; go on with: gossan run --resume {path}")
    return STOPPED
