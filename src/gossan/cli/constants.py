"""`gossan constants`: a constant, its uncertainty and its source; the solubilities that follow."""

from __future__ import annotations

import argparse
from pathlib import Path
from typing import TYPE_CHECKING

from gossan.base.errors import DONE, Fault, GossanError, InputError
from gossan.base.wrong import Wrong
from gossan.cli import shell
from gossan.cli.compiling import announce_compiling

if TYPE_CHECKING:
    from gossan.constants.entries import Table

LEAST_PH, MOST_PH = -2.0, 16.0  # as in a case


def parser() -> argparse.ArgumentParser:
    """The command's arguments."""
    made = argparse.ArgumentParser(
        prog="gossan constants",
        description="The constants of components, species, minerals and gases, and interactions of ions: "
        "value, uncertainty, source, temperatures they are known for.",
    )
    says = "an ion, mineral or gas by any of its names, or a pair of ions (Na^+/Cl^-); default: a list of all"
    made.add_argument("name", nargs="?", metavar="NAME", help=says)
    made.add_argument("--temperature", metavar="T", help='show log10 K at this temperature too, "12 degC"')
    made.add_argument("--constants", metavar="FILE", help="a file of your own, laid over the program's")
    made.add_argument("--json", action="store_true", help="print as JSON")
    water = made.add_argument_group("what every solid leaves dissolved of its metal")
    water.add_argument("--solubility", action="store_true",
                       help="print it, by metal; with NAME only of that ion or solid")  # fmt: skip
    water.add_argument("--pH", type=float, metavar="PH", help="of the water (default 7)")
    water.add_argument("--pe", type=float, metavar="PE", help="of the water, for solids whose reaction needs "
                       "electrons; divides Fe, Mn and Cu (default: valences are held)")  # fmt: skip
    water.add_argument("--Eh", metavar="EH", help='or its redox potential, "-150 mV"')
    water.add_argument("--sulfide", metavar="AMOUNT", help='total sulfide, "1e-4 mol/L" (default none)')
    water.add_argument("--carbonate", metavar="AMOUNT", help="total inorganic carbon (default none)")
    water.add_argument("--with", dest="others", action="append", default=[], metavar="ION=AMOUNT",
                       help='total of another component, SO4="10 mmol/L"; may be repeated')  # fmt: skip
    return made


def run(args: argparse.Namespace) -> int:
    """Show constants; returns the exit code."""
    from gossan.constants.load import load_table

    redox = args.pe is not None or args.Eh
    asked = args.pH is not None or redox or args.sulfide or args.carbonate or args.others
    if asked and not args.solubility:
        wrong = "--pH, --pe, --Eh, --sulfide, --carbonate and --with say what a solubility is wanted in"
        raise _faulty(wrong, "add --solubility")
    table = load_table(Path(args.constants) if args.constants else None)
    temperature = _kelvin(args.temperature) if args.temperature else None
    if args.solubility:
        return _solubility(args, table, temperature)
    return _constants(args, table, temperature)


def _constants(args: argparse.Namespace, table: Table, temperature: float | None) -> int:
    from gossan.constants.find import UnknownName, find, find_pair
    from gossan.views import constants_sheets as views

    if args.name is None:
        if args.json:
            groups = (table.components, table.species, table.minerals, table.gases)
            entries = [each for group in groups for each in group.values()]
            listed = [views.entry_json(each, table, temperature) for each in entries]
            listed += [views.entry_json(each, table) for each in table.interactions.values()]
            shell.print_json(listed)
        else:
            shell.print_sheets(views.list_sheets(table))
        return DONE
    try:
        found = (find_pair(table, args.name),) if "/" in args.name else find(table, args.name)
    except UnknownName as unknown:
        raise GossanError(str(unknown)) from None
    if args.json:
        shell.print_json([views.entry_json(entry, table, temperature) for entry in found])
    else:
        shell.print_sheets(
            sheet for entry in found for sheet in views.entry_sheets(entry, table, temperature)
        )
    return DONE


def _solubility(args: argparse.Namespace, table: Table, temperature: float | None) -> int:
    from gossan.constants.find import UnknownName
    from gossan.constants.temperature import REFERENCE

    pH = 7.0 if args.pH is None else args.pH
    if not LEAST_PH <= pH <= MOST_PH:
        raise _faulty(f"--pH is {pH:g}", f"a pH is between {LEAST_PH:g} and {MOST_PH:g}")
    temperature = temperature or REFERENCE
    pe = _pe(args, temperature)
    given = [pair for pair in (("HS", args.sulfide), ("CO3", args.carbonate)) if pair[1]]
    for text in args.others:
        ion, separated, amount = text.partition("=")
        if not separated:
            raise _faulty(f'--with is "{text}"', 'write an ion and its amount, like SO4="10 mmol/L"')
        given.append((ion, amount))
    announce_compiling()
    from gossan.views.solubility import work_out
    from gossan.views.solubility_sheets import solubility_sheets

    try:
        found = work_out(table, pH, given, temperature, args.name or "", pe)
    except Wrong as wrong:
        raise _faulty(f"the water {wrong.wrong}", wrong.right) from None
    except UnknownName as unknown:
        raise GossanError(str(unknown)) from None
    if args.json:
        shell.print_json(found.to_json())
        return DONE
    for warning in found.warnings:
        shell.say(f"warning: {warning}")
    shell.print_sheets(solubility_sheets(found))
    return DONE


def _pe(args: argparse.Namespace, temperature: float) -> float | None:
    from gossan.case.model import POTENTIAL
    from gossan.constants.potential import pe_of_potential

    if args.Eh is None:
        return None if args.pe is None else float(args.pe)
    if args.pe is not None:
        raise _faulty("--pe and --Eh say the same twice", "keep one of them")
    try:
        return pe_of_potential(float(POTENTIAL.read(args.Eh).si), temperature)
    except Wrong as wrong:
        raise _faulty(f"--Eh {wrong.wrong}", wrong.right) from None


def _kelvin(text: str) -> float:
    from gossan.case.model import TEMPERATURE

    try:
        return float(TEMPERATURE.read(text).si)
    except Wrong as wrong:
        raise _faulty(f"--temperature {wrong.wrong}", wrong.right) from None


def _faulty(wrong: str, right: str) -> InputError:
    return InputError([Fault("gossan constants", 0, "", wrong, right)])
