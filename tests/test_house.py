"""The plan of the house, kept: which room may import which, what a kernel may hold, what lies where."""

from __future__ import annotations

import ast
import os
import re
import subprocess
import sys
import tomllib
from collections.abc import Iterator
from fnmatch import fnmatch
from pathlib import Path

import pytest

ROOT = Path(__file__).resolve().parents[1]
PACKAGE = ROOT / "src" / "gossan"
# imports go to the left only; rooms on one step do not import each other
STAIRS = (
    "base", "constants", "chemistry | transport", "coupling", "case", "store", "observing", "recording",
    "study", "views", "cli",
)  # fmt: skip
STEP = {room: step for step, rooms in enumerate(STAIRS) for room in rooms.split(" | ")}
DOORS = ("__init__", "__main__")  # they open on every room; the first one lazily
KERNELS_IMPORT = ("__future__", "math", "typing", "numpy", "gossan.base.jit", "gossan.base.outcome")
TOP = {"README.md", "DEVELOPERS.md", "pyproject.toml", "src", "cases", "tests", "tools", "docs"}
MOST_LINES = 400


def sources(*folders: str) -> list[Path]:
    return sorted(path for folder in folders for path in (ROOT / folder).rglob("*.py"))


def tracked() -> list[str]:
    """Names of the files in version control, from the top of the repository."""
    if not (ROOT / ".git").exists():
        pytest.skip("not a clone")
    listed = subprocess.run(["git", "ls-files", "-z"], cwd=ROOT, capture_output=True, text=True, check=True)
    return [name for name in listed.stdout.split("\0") if name and (ROOT / name).exists()]


def imports(path: Path) -> Iterator[tuple[int, str]]:
    """Line and full name of every module that a file imports, wherever it does."""
    for node in ast.walk(ast.parse(path.read_text(encoding="utf-8"))):
        if isinstance(node, ast.Import):
            yield from ((node.lineno, alias.name) for alias in node.names)
        elif isinstance(node, ast.ImportFrom):
            assert node.level == 0, f"{path}:{node.lineno}: write the whole name of the module"
            # of `from gossan import cli, __version__` the first is a room
            rooms = [f"gossan.{alias.name}" for alias in node.names] if node.module == "gossan" else []
            yield from ((node.lineno, name) for name in rooms or [node.module or ""])


def room_of(path: Path) -> str:
    return path.relative_to(PACKAGE).with_suffix("").parts[0]


def kernels(path: Path) -> Iterator[ast.FunctionDef]:
    """The functions that `kernel` decorates."""
    for node in ast.parse(path.read_text(encoding="utf-8")).body:
        if isinstance(node, ast.FunctionDef) and any("kernel" in ast.unparse(d) for d in node.decorator_list):
            yield node


KERNEL_FILES = [path for path in sources("src") if path.parent.name == "kernel"]
KERNELS = [pytest.param(path, node, id=node.name) for path in KERNEL_FILES for node in kernels(path)]


def test_every_room_stands_on_the_stairs():
    rooms = {room_of(path) for path in sources("src/gossan")} - {*DOORS}
    assert rooms <= set(STEP)
    assert {"chemistry", "transport", "coupling", "cli"} <= rooms


def test_imports_go_down_the_stairs():
    broken = []
    for path in sources("src/gossan"):
        room = room_of(path)
        for line, name in imports(path):
            other = name.split(".")[1] if name.startswith("gossan.") else room
            if room in DOORS or other == room or other not in STEP:
                continue
            if STEP[other] >= STEP[room]:
                broken.append(f"{path.relative_to(ROOT)}:{line}: {room} imports {name}")
    assert not broken, "\n".join(broken)


def test_the_program_imports_no_tests():
    broken = [
        f"{path.relative_to(ROOT)}:{line}: {name}"
        for path in sources("src")
        for line, name in imports(path)
        if name.split(".")[0] in ("tests", "tools", "pytest", "hypothesis", "mpmath", "cvxpy", "cantera")
    ]
    assert not broken, "\n".join(broken)


def test_what_the_program_imports_is_declared():
    declared = tomllib.loads((ROOT / "pyproject.toml").read_text())["project"]
    needed = {re.split(r"[<>=~! ]", entry)[0] for entry in declared["dependencies"]}
    needed |= {re.split(r"[<>=~! ]", entry)[0] for entry in declared["optional-dependencies"]["xarray"]}
    own = {"gossan", "__future__", "pydantic_core", *sys.stdlib_module_names}  # the core comes with pydantic
    used = {name.split(".")[0] for path in sources("src") for _, name in imports(path)} - own
    assert used <= needed
    assert all(">=" in entry for entry in declared["dependencies"]), "a dependency without its least version"


@pytest.mark.parametrize("path", KERNEL_FILES, ids=lambda path: f"{path.parents[1].name}/{path.stem}")
def test_kernels_import_kernels(path):
    for line, name in imports(path):
        allowed = name in KERNELS_IMPORT or re.fullmatch(r"gossan\.\w+\.kernel\.\w+", name)
        assert allowed, f"{path.relative_to(ROOT)}:{line}: {name}"


FORBIDDEN = (
    ast.Raise, ast.Try, ast.Assert, ast.With, ast.Lambda, ast.JoinedStr, ast.Yield, ast.Global,
    ast.FunctionDef, ast.Dict, ast.DictComp, ast.Set, ast.SetComp, ast.List, ast.ListComp, ast.GeneratorExp,
)  # fmt: skip
SCALARS = {"float64", "int64", "int8", "inf", "nan", "pi"}  # all that a kernel takes from numpy


@pytest.mark.parametrize(("path", "node"), KERNELS)
def test_a_kernel_holds_numbers_alone(path, node):
    """No raise, no text, no dictionary, no list, nothing of numpy that makes an array; and a docstring."""
    assert ast.get_docstring(node), f"{node.name} does not say what it does"
    for inner in (part for statement in node.body[1:] for part in ast.walk(statement)):
        where = f"{path.relative_to(ROOT)}:{getattr(inner, 'lineno', node.lineno)} in {node.name}"
        assert not isinstance(inner, FORBIDDEN), f"{where}: {type(inner).__name__}"
        assert not (isinstance(inner, ast.Constant) and isinstance(inner.value, str)), f"{where}: text"
        if isinstance(inner, ast.Attribute) and isinstance(inner.value, ast.Name) and inner.value.id == "np":
            assert inner.attr in SCALARS, f"{where}: np.{inner.attr}"


def test_numba_has_one_door():
    """Whatever is compiled goes through `kernel`, which keys the cache."""
    doors = {path for path in sources("src") for _, name in imports(path) if name.split(".")[0] == "numba"}
    assert doors == {PACKAGE / "base" / "jit.py"}


def test_files_are_short():
    long = {}
    for path in sources("src", "tests", "tools"):
        lines = len(path.read_text(encoding="utf-8").splitlines())
        if lines >= MOST_LINES:
            long[str(path.relative_to(ROOT))] = lines
    assert not long


def test_the_top_of_the_repository():
    assert {name.split("/")[0] for name in tracked() if not name.startswith(".")} == TOP


def test_no_machine_and_no_registry_is_named():
    """Paths that exist on one computer, and hosts that packages come from."""
    told = re.compile(
        r"(?<![\w.])/(home|root|work|Users|tmp|mnt|opt|srv)/\w|\b[A-Z]:\\\\?\w|pypi\b|pythonhosted"
        r"|--(extra-)?index-url|artifactory|anaconda\.org|\b(10|127|192\.168)\.\d+\.\d+\.\d+\b",
        re.IGNORECASE,
    )
    found = []
    for name in tracked():
        try:
            text = (ROOT / name).read_text(encoding="utf-8")
        except UnicodeDecodeError:
            continue  # a picture
        for number, line in enumerate(text.splitlines(), 1):
            if told.search(line) and name != "tests/test_house.py":
                found.append(f"{name}:{number}: {line.strip()}")
    assert not found, "\n".join(found)


def test_everything_in_the_package_is_installed():
    """What is no Python is named in pyproject.toml, or it would be missing from all but editable installs."""
    packaging = tomllib.loads((ROOT / "pyproject.toml").read_text())["tool"]["setuptools"]
    patterns = packaging["package-data"]["gossan"]
    for name in tracked():
        if name.startswith("src/gossan/") and not name.endswith(".py"):
            inside = name.removeprefix("src/gossan/")
            assert any(fnmatch(inside, pattern.removeprefix("**/")) for pattern in patterns), name
    for folder in {path.parent for path in sources("src/gossan")}:
        assert (folder / "__init__.py").exists(), folder


def block(heading: str) -> str:
    """The one fenced block under a heading of README.md."""
    text = (ROOT / "README.md").read_text(encoding="utf-8")
    section = re.search(rf"^## {heading}\n(.*?)(?=^## |\Z)", text, re.MULTILINE | re.DOTALL)
    assert section, f"README.md has no heading {heading}"
    blocks = re.findall(r"^```\w*\n(.*?)^```$", section[1], re.MULTILINE | re.DOTALL)
    assert len(blocks) == 1, f"{heading}: one block, with the command alone"
    return blocks[0].strip()


@pytest.mark.parametrize("heading", ["Run it", "Test it"])
def test_the_readme_s_commands_need_nothing_but_python(heading):
    command = block(heading)
    assert "\n" not in command
    first, *rest = command.split(" && ")
    assert first == "python3 -m venv .venv"
    assert all(part.startswith(".venv/bin/") for part in rest)


def test_ci_runs_what_the_readme_says():
    script = ROOT / ".ci" / "run"
    assert os.access(script, os.X_OK)
    said = [line for line in script.read_text().splitlines() if line and not line.startswith("#")]
    assert said == ["set -euo pipefail", 'cd "$(dirname "${BASH_SOURCE[0]}")/.."', block("Test it")]


def loaded_after(*lines: str) -> set[str]:
    """Modules that a fresh interpreter has loaded after these lines."""
    program = "\n".join(["import sys", *lines, "print('|'.join(sys.modules), file=sys.stderr)"])
    done = subprocess.run([sys.executable, "-c", program], capture_output=True, text=True, check=True)
    return set(done.stderr.strip().splitlines()[-1].split("|"))


SLOW = {"numba", "llvmlite", "matplotlib", "scipy", "pint", "h5py", "xarray"}


@pytest.mark.parametrize(
    "words",
    [
        ["--help"],
        ["--version"],
        ["run", "--help"],
        ["check", "--help"],
        ["constants", "gypsum"],
        ["nonsense"],
    ],
    ids=" ".join,
)
def test_a_word_of_help_loads_nothing_slow(words):
    loaded = loaded_after("from gossan.cli.main import main", f"main({words!r})")
    assert "gossan.cli.main" in loaded
    assert not loaded & SLOW


def test_the_package_itself_loads_nothing():
    loaded = loaded_after("import gossan")
    assert not loaded & {*SLOW, "numpy", "pydantic", "rich"}


def test_a_wrong_case_is_refused_without_kernels(tmp_path):
    case = tmp_path / "case.toml"
    case.write_text('[waters.mine]\npH = 19\n[[layers]]\nporosity = 38\n')
    loaded = loaded_after("from gossan.cli.main import main", f"main(['check', {str(case)!r}])")
    assert "gossan.case.read" in loaded
    assert not loaded & {"numba", "llvmlite", "matplotlib"}
