"""docs/verification.md is what the files of this folder say, and every number in it is cited."""

import importlib.util
from pathlib import Path

import pytest

ROOT = Path(__file__).parents[2]
SPEC = importlib.util.spec_from_file_location("verify_tool", ROOT / "tools" / "verify.py")
TOOL = importlib.util.module_from_spec(SPEC)
SPEC.loader.exec_module(TOOL)

LISTED = [path for path in sorted(TOOL.FILES.glob("test_*.py")) if TOOL.has_checks(path)]


def test_the_page_is_fresh():
    told = "stale: run python tools/verify.py"
    assert TOOL.PAGE.read_text(encoding="utf-8") == TOOL.page(), told


@pytest.mark.parametrize("path", LISTED, ids=lambda path: path.stem)
def test_every_source_is_cited_and_every_citation_used(path):
    module = TOOL.load(path)
    cited = TOOL.citations(module.__doc__)
    assert {check.source for check in module.CHECKS} <= set(cited)
    unused = [key for key in cited if path.read_text(encoding="utf-8").count(key) < 2]
    assert unused == []


@pytest.mark.parametrize("path", LISTED, ids=lambda path: path.stem)
def test_every_tolerance_has_its_reason_and_every_check_its_own_name(path):
    checks = TOOL.load(path).CHECKS
    assert all(len(check.why) > 3 for check in checks)
    assert len({check.name for check in checks}) == len(checks)
