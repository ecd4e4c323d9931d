"""docs/case-file.md is what the model says today."""

import importlib.util
from pathlib import Path

ROOT = Path(__file__).parents[2]


def test_the_page_is_fresh():
    path = ROOT / "tools" / "docs" / "case_file.py"
    spec = importlib.util.spec_from_file_location("case_file", path)
    tool = importlib.util.module_from_spec(spec)
    spec.loader.exec_module(tool)
    told = "stale: run python tools/docs/case_file.py"
    assert (ROOT / "docs" / "case-file.md").read_text(encoding="utf-8") == tool.page(), told
