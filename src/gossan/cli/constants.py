"""`gossan constants`: a constant, its uncertainty and its source."""

from __future__ import annotations

import argparse

from gossan.base.errors import DONE, GossanError
from gossan.cli import shell


def parser() -> argparse.ArgumentParser:
    """The command's arguments."""
    made = argparse.ArgumentParser(
        prog="gossan constants",
        description="The constants of components, species, minerals and gases: value, uncertainty, source.",
    )
    says = "an ion, mineral or gas, by any of its names; default: a list of all"
    made.add_argument("name", nargs="?", metavar="NAME", help=says)
    made.add_argument("--json", action="store_true", help="print as JSON")
    return made


def run(args: argparse.Namespace) -> int:
    """Show constants; returns the exit code."""
    from gossan.constants.load import UnknownName, find, load_table
    from gossan.views import constants_sheets as views

    table = load_table()
    if args.name is None:
        if args.json:
            groups = (table.components, table.species, table.minerals, table.gases)
            shell.print_json([views.entry_json(entry, table) for group in groups for entry in group.values()])
        else:
            shell.print_sheets([views.list_sheet(table)])
        return DONE
    try:
        found = find(table, args.name)
    except UnknownName as unknown:
        raise GossanError(str(unknown)) from None
    if args.json:
        shell.print_json([views.entry_json(entry, table) for entry in found])
    else:
        shell.print_sheets(sheet for entry in found for sheet in views.entry_sheets(entry, table))
    return DONE
