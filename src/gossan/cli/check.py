"""`gossan check`: is this case right, and what would it run?"""

from __future__ import annotations

import argparse
from typing import TYPE_CHECKING

from gossan.base.errors import DONE, Fault, InputError
from gossan.cli import shell
from gossan.cli.compiling import announce_compiling

if TYPE_CHECKING:
    from gossan.case.model import Case


def parser() -> argparse.ArgumentParser:
    """The command's arguments."""
    made = argparse.ArgumentParser(
        prog="gossan check", description="Validate a case and say what would run; runs nothing."
    )
    made.add_argument("case", nargs="?", metavar="CASE", help="the case file (TOML)")
    made.add_argument("--json", action="store_true", help="print the findings as JSON, SI inside")
    made.add_argument("--schema", action="store_true", help="print the JSON Schema of a case file instead")
    return made


def run(args: argparse.Namespace) -> int:
    """Check one case; returns the exit code."""
    if args.schema:
        from gossan.case.model import case_schema

        shell.print_json(case_schema())
        return DONE
    if args.case is None:
        raise InputError([Fault("gossan check", 0, "", "no case is named", "gossan check CASE.toml")])
    from gossan.case.read import read_case

    case = read_case(args.case)
    announce_compiling()
    from gossan.views import plan

    if not plan.has_column(case):
        return _waters_alone(case, plan.water_warnings(case), args.json)
    found = plan.plan_of(case)
    if args.json:
        shell.print_json(plan.plan_json(found))
        return DONE
    from gossan.views.plan_sheets import plan_sheets

    _say_warnings(found.warnings)
    for warning in found.column_warnings:
        shell.say(f"warning: {warning}")
    if found.seconds is None:
        shell.say("warning: the first steps of this case find no equilibrium; a run will stop there")
    shell.print_sheets(plan_sheets(found))
    shell.say(f"{case.file} is in order")
    return DONE


def _waters_alone(case: Case, warnings: dict[str, tuple[str, ...]], as_json: bool) -> int:
    if as_json:
        found = {"file": case.file, "title": case.title, "waters": list(case.waters), "warnings": warnings}
        shell.print_json(found)
        return DONE
    _say_warnings(warnings)
    shell.say(f"{case.file} is in order: waters for gossan assay, and no column to run")
    return DONE


def _say_warnings(warnings: dict[str, tuple[str, ...]]) -> None:
    for water, said in warnings.items():
        for warning in said:
            shell.say(f"warning: water {water}: {warning}")
