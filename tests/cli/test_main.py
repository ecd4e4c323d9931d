"""The door: help without heavy imports, faults in one message, no traceback."""

from __future__ import annotations

import os
import subprocess
import sys
import time

import pytest

import gossan
from gossan.cli import main as door
from gossan.cli.main import main

HEAVY = ("numba", "pint", "h5py", "matplotlib", "numpy", "pydantic", "rich", "scipy")


@pytest.mark.parametrize("option", ["--help", "--version"])
def test_help_and_version_import_nothing_heavy(option):
    code = f"import sys; from gossan.cli.main import main; main([{option!r}]); print(*sys.modules)"
    printed = subprocess.run([sys.executable, "-c", code], capture_output=True, text=True, check=True).stdout
    loaded = set(printed.splitlines()[-1].split())
    assert not loaded & set(HEAVY)
    assert "gossan.cli.main" in loaded


def test_help_and_version_are_fast():
    def taken(option: str) -> float:
        began = time.perf_counter()
        subprocess.run([sys.executable, "-m", "gossan", option], capture_output=True, check=True)
        return time.perf_counter() - began

    # the best of several: other work on the machine only ever adds
    for option in ("--help", "--version"):
        assert min(taken(option) for _ in range(5)) < 0.25


def test_reading_a_case_imports_no_compiler(case_file):
    code = f"import sys, gossan; gossan.load_case({str(case_file)!r}); print('numba' in sys.modules)"
    assert subprocess.run([sys.executable, "-c", code], capture_output=True, text=True).stdout == "False\n"


def test_help_names_every_command_and_goes_to_standard_output(capsys):
    assert main(["--help"]) == 0
    printed = capsys.readouterr()
    assert all(command in printed.out for command in door.COMMANDS)
    assert printed.err == ""


def test_no_command_shows_help_as_a_fault(capsys):
    assert main([]) == 2
    assert "usage" in capsys.readouterr().err


@pytest.mark.parametrize("command", ["new", "report", "match", "size", "spread"])
def test_commands_to_come_are_refused_in_those_words(command, capsys):
    assert main([command, "x"]) == 2
    assert "part of the contract but has not landed yet" in capsys.readouterr().err


def test_a_mistyped_command_gets_a_suggestion(capsys):
    assert main(["asay"]) == 2
    assert "did you mean assay?" in capsys.readouterr().err


@pytest.mark.parametrize("command", list(door.COMMANDS))
def test_every_command_has_help(command, capsys):
    assert main([command, "--help"]) == 0
    assert command in capsys.readouterr().out


def test_an_unknown_option_is_bad_input(capsys):
    assert main(["check", "--frobnicate"]) == 2
    assert "--frobnicate" in capsys.readouterr().err


def broken(*_, **__):
    raise RuntimeError("wheels came off")


def test_an_unforeseen_fault_is_called_a_bug_without_a_traceback(monkeypatch, capsys):
    monkeypatch.setattr(door, "_run", broken)
    monkeypatch.delenv("GOSSAN_DEBUG", raising=False)
    assert main(["constants"]) == 4
    said = capsys.readouterr().err
    assert "bug" in said
    assert "wheels came off" in said
    assert "Traceback" not in said


def test_debugging_shows_an_unforeseen_fault(monkeypatch):
    monkeypatch.setattr(door, "_run", broken)
    monkeypatch.setenv("GOSSAN_DEBUG", "1")
    with pytest.raises(RuntimeError, match="wheels"):
        main(["constants"])


def test_a_reader_that_leaves_early_is_no_fault(started):
    reader, writer = os.pipe()
    os.close(reader)
    process = started("constants", stdout=writer)
    os.close(writer)
    said = process.communicate(timeout=60)[1]
    assert process.returncode == 0
    assert said == ""


def test_the_python_face_is_there_and_lazy():
    for name in ("load_case", "run", "open_result", "assay", "equilibrate"):
        assert callable(getattr(gossan, name))
    with pytest.raises(AttributeError, match="simulate"):
        gossan.simulate  # noqa: B018
