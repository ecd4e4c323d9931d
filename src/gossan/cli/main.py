"""The command `gossan`: finds the sub-command, runs it, and turns every fault into one message."""

from __future__ import annotations

import argparse
import importlib
import os
import sys
from collections.abc import Sequence

from gossan import __version__
from gossan.base.errors import BAD_INPUT, GAVE_UP, GossanError
from gossan.cli import shell

PURPOSE = "How long a bed of sediment or reactive mix holds back the metals of mine water, and why."
COMMANDS = {
    "check": "validate a case and say what would run; runs nothing",
    "assay": "work out the waters of a case: balance, species, saturation",
    "run": "run a column into a result file, or go on with one",
    "draw": "figures of a result file",
    "export": "a result file as CSV",
    "constants": "a constant, its uncertainty and its source",
}
NOT_LANDED = {
    "new": "write a commented starter case",
    "report": "one page for a reviewer",
    "match": "fit the unknowns to a column test",
    "size": "the layer length that holds the limits",
    "spread": "an ensemble over the unknowns",
}
INTERRUPTED = 130  # as shells report a program ended by Ctrl-C; a run stopped so can be resumed and gives 3
DEBUG = "GOSSAN_DEBUG"
EXIT_CODES = """\
exit codes: 0 done, 1 a limit exceeded (--enforce-limits), 2 bad input,
            3 stopped and resumable, 4 the numerics gave up"""


def main(arguments: Sequence[str] | None = None) -> int:
    """Run one command line; returns the exit code."""
    words = list(sys.argv[1:] if arguments is None else arguments)
    for stream in (sys.stdout, sys.stderr):
        if hasattr(stream, "reconfigure"):
            stream.reconfigure(errors="replace")  # a terminal that lacks a sign shows "?" for it
    try:
        return _run(words)
    except GossanError as fault:
        shell.say(str(fault))
        return fault.exit_code
    except KeyboardInterrupt:
        shell.say("interrupted")
        return INTERRUPTED
    except BrokenPipeError:
        shell.silence_output()
        return 0
    except Exception as error:
        if os.environ.get(DEBUG) == "1":
            raise
        shell.say(
            f"this is a bug in gossan {__version__}, not a fault of your input: "
            f"{type(error).__name__}: {error}\n"
            f"please report it with the case; {DEBUG}=1 shows where it happened"
        )
        return GAVE_UP


def _run(words: list[str]) -> int:
    command = words[0] if words else ""
    if command in NOT_LANDED:
        shell.say(f"gossan {command}: part of the contract but has not landed yet")
        return BAD_INPUT
    if command in COMMANDS:
        module = importlib.import_module(f"gossan.cli.{command}")
        parser = module.parser()
        try:
            parsed = parser.parse_args(words[1:])
        except SystemExit as leaving:  # argparse has said all there is to say
            return int(leaving.code or 0)
        return module.run(parsed)
    return _top(words)


def _top(words: list[str]) -> int:
    """The options without a command, or a command that there is not."""
    if words and not words[0].startswith("-"):
        from gossan.base.wrong import did_you_mean

        cure = did_you_mean(words[0], COMMANDS, quote="")
        shell.say(f'gossan: there is no command "{words[0]}": {cure}')
        return BAD_INPUT
    parser = _parser()
    try:
        parser.parse_args(words)
    except SystemExit as leaving:
        return int(leaving.code or 0)
    parser.print_help(sys.stderr)
    return BAD_INPUT


def _parser() -> argparse.ArgumentParser:
    width = max(map(len, COMMANDS))
    commands = "\n".join(f"  {name:<{width}}  {says}" for name, says in COMMANDS.items())
    parser = argparse.ArgumentParser(
        prog="gossan",
        usage="gossan COMMAND ...",
        description=PURPOSE,
        epilog=f"commands:\n{commands}\n\n`gossan COMMAND --help` says more.\n{EXIT_CODES}",
        formatter_class=argparse.RawDescriptionHelpFormatter,
    )  # fmt: skip
    parser.add_argument("--version", action="version", version=f"gossan {__version__}")
    return parser


if __name__ == "__main__":
    sys.exit(main())
