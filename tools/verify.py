"""Write docs/verification.md from the files of tests/verification: `python tools/verify.py`.

A file of tests/verification begins with a docstring: what it compares, and its citations (`  key  citation`).
One that names a list CHECKS (tests/support/agreement.py) has every number printed here beside the program's.
"""

from __future__ import annotations

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


def page(files: list[Path] | None = None) -> str:
    """The whole page as Markdown."""
    modules = [load(path) for path in files or sorted(FILES.glob("test_*.py"))]
    return "\n".join([HEAD, *(section(module) for module in modules if module.__doc__)])


def load(path: Path) -> ModuleType:
    """A file of tests as a module."""
    spec = importlib.util.spec_from_file_location(path.stem, path)
    assert spec is not None
    assert spec.loader is not None
    module = importlib.util.module_from_spec(spec)
    sys.modules.setdefault(path.stem, module)  # dataclasses look their module up
    spec.loader.exec_module(module)
    return module


def citations(module: ModuleType) -> dict[str, str]:
    """Key and text of the citations in a docstring."""
    _, _, listed = (module.__doc__ or "").partition("\nCitations\n")
    entries = re.findall(r"^  (\S+) +(.+(?:\n {4,}.+)*)", listed, re.M)
    return {key: " ".join(text.split()) for key, text in entries}


def section(module: ModuleType) -> str:
    """One file: its words, its numbers, its citations."""
    words = (module.__doc__ or "").partition("\nCitations\n")[0].strip()
    title, _, rest = words.partition("\n\n")
    parts = [f"## {' '.join(title.split()).rstrip('.')}", f"`tests/verification/{module.__name__}.py`"]
    if rest:
        parts.append(rest)
    checks: list[Check] = getattr(module, "CHECKS", [])
    if checks:
        rows = ["| what | published | found | digits | source | read | reason of the tolerance |",
                "|---|---|---|---|---|---|---|"]  # fmt: skip
        parts.append("\n".join(rows + [row(check) for check in checks]))
    cited = citations(module)
    if cited:
        parts.append("\n".join(f"- {key}: {text}" for key, text in cited.items()))
    return "\n\n".join(parts) + "\n"


def row(check: Check) -> str:
    """One comparison; digits stay empty where a range was published."""
    found = check.found()
    agreement = ""
    if not isinstance(check.published, Between):
        agreement = f"{digits(found, check.published, check.logarithmic):.1f}"
    read = "read" if check.seen else "from memory"
    shown = f"{found:.3f}" if check.logarithmic else f"{found:.4g}"
    cells = (check.name, check.published, shown, agreement, check.source, read, check.why)
    return f"| {' | '.join(str(cell).replace('|', '/') for cell in cells)} |"


if __name__ == "__main__":
    PAGE.write_text(page(), encoding="utf-8")
    sys.stderr.write(f"wrote {PAGE.name}\n")
