"""`gossan assay`: what a laboratory report says once its water is worked out."""

from __future__ import annotations

import argparse
from pathlib import Path

from gossan.base.errors import DONE, Fault, InputError
from gossan.cli import shell
from gossan.cli.compiling import announce_compiling

TABLES = (".csv", ".tsv", ".xlsx", ".xls")


def parser() -> argparse.ArgumentParser:
    """The command's arguments."""
    made = argparse.ArgumentParser(
        prog="gossan assay",
        description="Charge balance, ionic strength, species and saturation indices of the waters of a case.",
    )
    made.add_argument("case", metavar="CASE", help="a case file (TOML); [waters] is enough")
    made.add_argument("water", nargs="?", metavar="WATER", help="one water of it; default: all")
    made.add_argument("--json", action="store_true", help="print the findings as JSON, SI inside")
    made.add_argument("--certificate", action="store_true",
                      help="say how well each water meets its equations, worked out with 32 digits")
    return made


def run(args: argparse.Namespace) -> int:
    """Work out waters; returns the exit code."""
    if Path(args.case).suffix.lower() in TABLES:
        wrong = "is a table, and reading one is part of the contract but has not landed yet"
        raise InputError([Fault(args.case, 0, "", wrong, "write the water into a case, as [waters.NAME]")])
    from gossan.case.read import read_case

    case = read_case(args.case)
    announce_compiling()
    from gossan.views.assay import assay

    found = assay(case, args.water)
    if args.json:
        shell.print_json(found.to_json(args.certificate))
        return DONE
    from gossan.views.assay_sheets import assay_sheets

    for one in found.waters.values():
        for warning in one.warnings:
            shell.say(f"warning: water {one.name}: {warning}")
    shell.print_sheets(
        sheet for one in found.waters.values() for sheet in assay_sheets(one, args.certificate)
    )
    return DONE
