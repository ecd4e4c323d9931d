"""Files for the commands to work on, and a way to start them."""

from __future__ import annotations

import subprocess
import sys
from pathlib import Path

import pytest
from tests.support.small_cases import GYPSUM, WATERS

from gossan.cli.main import main


@pytest.fixture
def case_file(tmp_path: Path) -> Path:
    path = tmp_path / "gypsum.toml"
    path.write_text(GYPSUM)
    return path


@pytest.fixture
def waters_file(tmp_path: Path) -> Path:
    path = tmp_path / "waters.toml"
    path.write_text(WATERS)
    return path


@pytest.fixture(scope="session")
def finished(tmp_path_factory: pytest.TempPathFactory) -> Path:
    """The result file of the gypsum column."""
    folder = tmp_path_factory.mktemp("finished")
    case = folder / "gypsum.toml"
    case.write_text(GYPSUM)
    out = folder / "gypsum.h5"
    assert main(["run", str(case), "-o", str(out), "--quiet"]) == 0
    return out


@pytest.fixture
def started():
    """Start `gossan` with arguments as a process of its own."""
    def start(*arguments: str, **options) -> subprocess.Popen:
        command = [sys.executable, "-m", "gossan", *arguments]
        pipes = {"stdout": subprocess.PIPE, "stderr": subprocess.PIPE, "text": True}
        return subprocess.Popen(command, **(pipes | options))

    return start
