"""What is no case at all, or a case spoilt at random: refused with faults, never with anything else."""

import pytest
from hypothesis import given
from hypothesis import strategies as st
from tests.support.good_case import GOOD, faults_of

from gossan.base.errors import InputError
from gossan.case.read import case_from_text, read_case


@pytest.mark.parametrize(
    ("content", "words"),
    [
        (None, "cannot be read (no such file"),
        (b"title = '\xff'", "case.toml:1: is not text in UTF-8: save it"),
    ],
)
def test_a_file_that_cannot_be_read(tmp_path, content, words):
    path = tmp_path / "case.toml"
    if content is not None:
        path.write_bytes(content)
    with pytest.raises(InputError) as caught:
        read_case(path)
    assert words.removeprefix("case.toml:1: ") in str(caught.value)


def test_a_folder_is_not_a_case(tmp_path):
    (tmp_path / "case.toml").write_text(GOOD)
    with pytest.raises(InputError, match="is a folder: did you mean"):
        read_case(tmp_path)


def test_faults_of_the_users_constants_are_listed_too(tmp_path):
    (tmp_path / "site.toml").write_text("[mineral.x]\n")
    (tmp_path / "case.toml").write_text(GOOD.replace('exclude = ["siderite"]', 'constants = "site.toml"'))
    with pytest.raises(InputError) as caught:
        read_case(tmp_path / "case.toml")
    assert len(caught.value.faults) >= 2
    assert any("site.toml" in fault.file for fault in caught.value.faults)


@pytest.mark.parametrize(
    "text", ["", "[waters]\n", "waters = 3\n", "layers = 3\n[waters.a]\n", "flow = []\n[waters.a]"]
)
def test_odd_shapes_are_refused_not_raised(text):
    assert faults_of(text)


LINES = GOOD.splitlines()


def is_read_or_refused(text):
    """Whether a text is a case with waters, or is refused with faults; any other error comes through."""
    try:
        return bool(case_from_text(text).waters)
    except InputError as error:
        return bool(error.faults and str(error))


@given(st.data())
def test_a_spoilt_case_never_raises_anything_else(data):
    """Lines left out, doubled, swapped or with another value: a Case or an InputError, nothing besides."""
    rows = list(LINES)
    for _ in range(data.draw(st.integers(1, 4))):
        index = data.draw(st.integers(0, len(rows) - 1))
        other = data.draw(st.sampled_from(LINES))
        value = data.draw(
            st.sampled_from(["3", "-1.5", '"x"', "true", "[]", "{}", "[{}]", "nan", "1979-05-27", '""'])
        )
        key = rows[index].partition("=")[0]
        change = data.draw(st.sampled_from(["drop", "double", "swap", "value"]))
        rows[index : index + 1] = {
            "drop": [],
            "double": [rows[index], rows[index]],
            "swap": [other],
            "value": [f"{key} = {value}"],
        }[change] or [""]
    assert is_read_or_refused("\n".join(rows))
