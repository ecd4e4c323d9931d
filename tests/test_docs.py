"""What the pages say is so: cases are read, commands exist, equations are numbered, links lead somewhere."""

from __future__ import annotations

import doctest
import importlib
import re
import shlex
import tomllib
from pathlib import Path

import pytest

import gossan
from gossan.base.errors import InputError
from gossan.case.read import case_from_text
from gossan.cli.main import COMMANDS, NOT_LANDED
from gossan.constants.load import load_table

ROOT = Path(__file__).resolve().parents[1]
README = ROOT / "README.md"
EQUATIONS = ROOT / "docs" / "equations.md"
PAGES = [
    README, ROOT / "DEVELOPERS.md", *sorted(ROOT.glob("docs/*.md")), *sorted(ROOT.glob("cases/*/README.md"))
]  # fmt: skip
IDS = [page.relative_to(ROOT).as_posix() for page in PAGES]

FENCE = re.compile(r"^```(\w*)\n(.*?)^```$", re.M | re.S)
WATER = '[waters.any]\nanalysis = {Ca = "40 mg/L", SO4 = "96 mg/L"}\n'
SERIES = "feed.csv"  # what the pages call a series
CONSTANTS = "site.toml"  # what the pages call a user's own file of constants


def text_of(page: Path) -> str:
    return page.read_text(encoding="utf-8")


def blocks(page: Path, language: str) -> list[str]:
    """The fenced blocks of a language; "" is plain text."""
    return [found[2] for found in FENCE.finditer(text_of(page)) if found[1] == language]


def prose(page: Path) -> str:
    return FENCE.sub("", text_of(page))


def is_constants(block: str) -> bool:
    sections = {"sources", "components", "species", "minerals", "gases", "interactions"}
    return not sections.isdisjoint(tomllib.loads(block))


@pytest.mark.parametrize("page", PAGES, ids=IDS)
def test_every_case_of_a_page_is_accepted(page, tmp_path):
    """A block without waters goes on with those before it, or is tried with any water."""
    before = ""
    found = blocks(page, "toml")
    for block in blocks(page, "csv"):
        (tmp_path / SERIES).write_text(block, encoding="utf-8")
    for block in filter(is_constants, found):
        (tmp_path / CONSTANTS).write_text(block, encoding="utf-8")
        load_table(tmp_path / CONSTANTS)
    for block in (block for block in found if not is_constants(block)):
        told = tomllib.loads(block)
        used = [layer["water"] for layer in told.get("layers", [])]
        used += [feed["water"] for feed in told.get("flow", {}).get("feed", [])]
        goes_on = not set(used) <= set(told.get("waters", {}))
        case = case_from_text(before * goes_on + ("" if "waters" in told else WATER) + block, folder=tmp_path)
        if "run" in told:
            case.require_column()
        before = block


def command_lines(page: Path) -> list[str]:
    """What a reader would type: the lines of shell blocks, and code within sentences."""
    shells = [line for block in blocks(page, "sh") for line in block.splitlines()]
    inline = re.findall(r"`([^`\n]+)`", prose(page))
    lines = [part.strip() for line in [*shells, *inline] for part in line.split("&&")]
    return [line.removeprefix(".venv/bin/") for line in lines]


@pytest.mark.parametrize("page", PAGES, ids=IDS)
def test_every_command_of_a_page_exists(page):
    for line in command_lines(page):
        words = shlex.split(line) if re.match(r"gossan [a-z]|gossan --", line) else []
        if not words or words[1] == "state":  # the first line of a checkpoint
            continue
        assert words[1] in COMMANDS or words[1] in NOT_LANDED, line
        if words[1] in COMMANDS and len(words) > 2:
            values = ["ports" if word == "WHAT" else word for word in words[2:]]
            importlib.import_module(f"gossan.cli.{words[1]}").parser().parse_args(values)


@pytest.mark.parametrize("page", PAGES, ids=IDS)
def test_every_tool_of_a_page_exists(page):
    for line in command_lines(page):
        tool = re.match(r"python (?:-m (tools[\w.]+)|(tools/\S+))", line)
        if tool:
            path = ROOT / (tool[2] or tool[1].replace(".", "/") + ".py")
            if path.with_suffix("").is_dir():
                path = path.with_suffix("") / "__main__.py"
            assert path.is_file(), line
            for option in re.findall(r"--[a-z-]+", line):
                assert f'"{option}"' in text_of(path), line


@pytest.mark.parametrize("page", PAGES, ids=IDS)
def test_every_file_that_a_page_names_exists(page):
    """A path in code marks, whole from the root, or its end below src/gossan; NAME stands for any."""
    known = [path.relative_to(ROOT).as_posix() for path in (ROOT / "src").rglob("*.py")]
    for name in re.findall(r"`((?:[\w.-]+/)+(?:[\w-]+\.[a-z]+)?)`", prose(page)):
        below = any(path.endswith(f"/{name}") for path in known)
        assert (ROOT / name).exists() or below or name == "kernel/" or "NAME" in name, name


def slug(heading: str) -> str:
    return re.sub(r"[^\w\- ]", "", heading.lower().replace("`", "")).strip().replace(" ", "-")


@pytest.mark.parametrize("page", PAGES, ids=IDS)
def test_every_link_leads_somewhere(page):
    for target in re.findall(r"\]\(([^)\s]+)\)", prose(page)):
        if re.match(r"[a-z]+:", target):
            continue
        file, _, anchor = target.partition("#")
        path = (page.parent / file).resolve() if file else page
        assert path.exists(), target
        if anchor:
            headings = re.findall(r"^#+ (.+)$", prose(path), re.M)
            assert anchor in map(slug, headings), target


def numbers_of(cited: str) -> list[int]:
    """`4-6`, `21 to 23`, `28 and 29`, `8`: the numbers meant."""
    ends = [int(number) for number in re.findall(r"\d+", cited)]
    return list(range(ends[0], ends[-1] + 1)) if re.search(r"-|to", cited) else ends


def test_equations_are_numbered_through_and_all_citations_lead_to_one():
    numbered = [int(number) for number in re.findall(r"^\*\*\((\d+)\)\*\*(?! to )", text_of(EQUATIONS), re.M)]
    assert numbered == list(range(1, len(numbered) + 1))
    cited = set()
    for path in (ROOT / "src").rglob("*.py"):
        source = " ".join(text_of(path).split())
        found = re.findall(r"\(equations\.md, (\d[\d\s,toand-]*)\)", source)
        assert len(found) == source.count("equations.md"), f"{path} cites in another form"
        for one in found:
            assert set(numbers_of(one)) <= set(numbered), f"{path}: {one}"
            cited |= set(numbers_of(one))
    assert cited == set(numbered)
    for page in PAGES:
        for found in re.findall(r"\(equations? (\d[\d toand]*)\)", " ".join(text_of(page).split())):
            assert set(numbers_of(found)) <= set(numbered), f"{page}: {found}"


def test_the_readme_begins_with_the_job_and_has_its_two_commands():
    text = text_of(README)
    first = text.removeprefix("# gossan\n\n").partition("\n\n")[0]
    assert text.startswith("# gossan\n\n")
    assert first
    assert first[0] not in "#`-|"
    for heading in ("## Run it", "## Test it"):
        section = text.partition(f"\n{heading}\n")[2].partition("\n## ")[0]
        assert section.startswith("\n```sh\n"), heading
        assert len(FENCE.findall(section)) == 1, heading
    for heading in ("## What it does not do", "## Cautions", "## Where to read on"):
        assert f"\n{heading}\n" in text, heading


def gate() -> str:
    """The small case of the README."""
    (block,) = blocks(README, "toml")
    return block


def test_the_python_of_the_readme_prints_what_it_says(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    Path("gate.toml").write_text(gate(), encoding="utf-8")
    (block,) = blocks(README, "python")
    session = doctest.DocTestParser().get_doctest(block, {}, "README.md", str(README), 0)
    assert len(session.examples) > 5
    assert doctest.DocTestRunner().run(session).failed == 0


def test_the_python_of_the_first_steps_prints_what_it_says(tmp_path, monkeypatch):
    monkeypatch.chdir(tmp_path)
    start = ROOT / "docs" / "start.md"
    Path("level.toml").write_text(blocks(start, "toml")[0], encoding="utf-8")
    (block,) = blocks(start, "python")
    session = doctest.DocTestParser().get_doctest(block, {}, "start.md", str(start), 0)
    assert len(session.examples) > 3
    assert doctest.DocTestRunner().run(session).failed == 0


def test_the_faults_that_the_readme_shows_are_the_faults_that_are_found():
    shown = next(block for block in blocks(README, "") if block.startswith("gate.toml:4: "))
    slips = {'180 mg/L"': '180 mgg/L"', "porosity = 0.38": "porosity = 38", "dispersivity": "dispersivty"}
    wrong = gate()
    for right, slip in slips.items():
        assert right in wrong
        wrong = wrong.replace(right, slip)
    with pytest.raises(InputError) as found:
        case_from_text(wrong, "gate.toml")
    assert str(found.value) == shown.strip()


def test_the_readme_counts_the_constants_from_memory_as_they_are():
    table = load_table()
    entries = [entry for group in (table.species, table.minerals, table.gases) for entry in group.values()]
    recalled = sum((entry.published or entry.log10_k).from_memory for entry in entries)
    assert f"Of the {len(entries)} constants of reactions, {recalled} are from memory" in " ".join(
        prose(README).split()
    )


def test_the_page_of_dependencies_is_that_of_the_project_file():
    project = tomllib.loads(text_of(ROOT / "pyproject.toml"))["project"]
    extras = project["optional-dependencies"]
    wanted = [*project["dependencies"], *extras["xarray"], *extras["test"]]
    rows = re.findall(r"^\| ([\w-]+) \| ([\d.]+) \|", text_of(ROOT / "docs" / "dependencies.md"), re.M)
    assert [f"{name}>={least}" for name, least in rows] == wanted


def test_the_list_of_changes_knows_this_version():
    assert f"\n## {gossan.__version__}\n" in text_of(ROOT / "docs" / "changes.md")
