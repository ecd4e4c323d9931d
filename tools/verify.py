"""Write docs/verification.md from the files of tests/verification: `python tools/verify.py`.

A file there begins with a docstring: what it compares, and its citations (`  key  citation`). One that names
a list CHECKS (tests/support/agreement.py) has every number printed beside the program's; of the others the
page gives the first line.
"""

from __future__ import annotations

import ast
import importlib.util
import re
import sys
from pathlib import Path
from types import ModuleType

ROOT = Path(__file__).parents[1]
if str(ROOT) not in sys.path:
    sys.path.insert(0, str(ROOT))  # so that the tool finds tests/ from wherever it is called

from tests.support.agreement import Between, Check, digits  # noqa: E402

PAGE = ROOT / "docs" / "verification.md"
FILES = ROOT / "tests" / "verification"

HEAD = """\
# Verification

<!-- Derived from tests/verification by tools/verify.py; edit there. -->

What the program says beside what others have published or measured. Every comparison is a test: where the
program leaves the tolerance, the build fails. *Digits* is the agreement in decimal digits, -log10 of the
relative difference; where the value is itself a logarithm (a pH, an index), that of the amount it stands
for, so that 0.01 of pH is 1.6 digits. *Read* says whether the value was read in its source or in a page that
quotes it; what was recalled from the source is marked *from memory*, and so is what was calculated from
recalled constants.
"""
FURTHER = """\
## Further comparisons

These files hold exact solutions and whole tables, compared as such.
"""
WAITING = """
## What cannot be compared yet

Published problems that need what the program has not: species fixed to the solid (the reactive column of
the synthetic system of twelve species; its waters and its tracer are above), exchange of ions (a column of
Na, K and Ca; a field injection) and rates (fronts of crystals that dissolve slowly). For the column of acid
tailings of 1994 and the hydraulic problems of 2015 no complete statement is at hand; beds that clog have
exact solutions above.
"""


def page() -> str:
    """The whole page as Markdown."""
    paths = sorted(FILES.glob("test_*.py"))
    listed = [path for path in paths if has_checks(path)]
    others = [path for path in paths if path not in listed and path.stem != "test_page"]
    titles = [f"- `{path.relative_to(ROOT).as_posix()}`: {title(path)}" for path in others]
    return "\n".join([HEAD, *(section(path) for path in listed), FURTHER, *titles, WAITING.rstrip()]) + "\n"


def has_checks(path: Path) -> bool:
    """Whether a file names CHECKS, without running it."""
    tree = ast.parse(path.read_text(encoding="utf-8"))
    targets = [target for node in tree.body if isinstance(node, ast.Assign) for target in node.targets]
    return any(isinstance(target, ast.Name) and target.id == "CHECKS" for target in targets)


def title(path: Path) -> str:
    """The first line of a file's docstring."""
    words = ast.get_docstring(ast.parse(path.read_text(encoding="utf-8"))) or path.stem
    return words.splitlines()[0].rstrip(".")


def load(path: Path) -> ModuleType:
    """A file of tests as a module."""
    spec = importlib.util.spec_from_file_location(f"verification_{path.stem}", path)
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules[spec.name] = module  # dataclasses look their module up there
    spec.loader.exec_module(module)
    return module


def citations(words: str) -> dict[str, str]:
    """Key and text of the citations in a docstring."""
    entries = re.findall(r"^  (\S+) +(.+(?:\n {4,}.+)*)", words.partition("\nCitations\n")[2], re.M)
    return {key: " ".join(text.split()) for key, text in entries}


def section(path: Path) -> str:
    """One file: its words, its numbers, its citations."""
    module = load(path)
    words = module.__doc__ or ""
    rest = words.partition("\nCitations\n")[0].partition("\n\n")[2].strip()
    head = ["| what | published | found | digits | source | read | reason of the tolerance |",
            "|---|---|---|---|---|---|---|"]  # fmt: skip
    parts = [f"## {title(path)}", f"`{path.relative_to(ROOT).as_posix()}`"]
    parts += [rest] if rest else []
    parts.append("\n".join(head + [row(check) for check in module.CHECKS]))
    parts.append("\n".join(f"- {key}: {text}" for key, text in citations(words).items()))
    return "\n\n".join(parts) + "\n"


def row(check: Check) -> str:
    """One comparison; digits stay empty where a range was published."""
    found = check.found()
    agreement = ""
    if not isinstance(check.published, Between):
        agreement = f"{digits(found, check.published, check.logarithmic):.1f}"
    shown = f"{found:.3f}" if check.logarithmic else f"{found:.{_digits_shown(check)}g}"
    read = "read" if check.seen else "from memory"
    cells = (check.name, check.published, shown, agreement, check.source, read, check.why)
    return f"| {' | '.join(str(cell).replace('|', '/') for cell in cells)} |"


def _digits_shown(check: Check) -> int:
    """Four, or as many as were published."""
    value = getattr(check.published, "value", 0.0)
    return max(4, len(f"{value:g}".partition("e")[0].replace(".", "").lstrip("-0")))


if __name__ == "__main__":
    PAGE.write_text(page(), encoding="utf-8")
    sys.stderr.write(f"wrote {PAGE.name}\n")
