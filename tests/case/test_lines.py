"""Every path that tomllib finds has a line, and that line holds the key."""

import json
import tomllib

from hypothesis import given
from hypothesis import strategies as st

from gossan.case.lines import key_lines

TEXT = '''\
# a comment with [brackets] and x = 1
title = "a # b"
temperature.value = 12

[waters."mine water"]   # quoted
pH = 5.9
"Zn^2+" = """long
[not.a.table]
"""
'lit.eral' = \'\'\'x = [1\'\'\'
[[layers]]
name = "a"
cells = [1,
  2, # two
  {deep = "x"}]
  [layers.minerals]
  calcite = {amount = "3 wt%", reactive = 0.4}
[[layers]]
name = "b\\"]"
minerals.calcite = "1 wt%"
when = 1979-05-27 07:32:00
empty = []
none = {}
[[flow.feed]]
from = "0 d"
[[flow.feed]]
from = "1 d"
'''


def paths(value, at=()):
    """Every path of a parsed text."""
    if at:
        yield at
    if isinstance(value, dict):
        for key, inner in value.items():
            yield from paths(inner, (*at, key))
    if isinstance(value, list):
        for index, inner in enumerate(value):
            yield from paths(inner, (*at, index))


def test_each_key_is_on_the_line_that_holds_it():
    lines = key_lines(TEXT)
    assert set(lines) == set(paths(tomllib.loads(TEXT)))
    rows = TEXT.split("\n")
    for path, line in lines.items():
        last = next(part for part in reversed(path) if isinstance(part, str))
        if isinstance(path[-1], str):
            assert last in rows[line - 1], path
    assert lines["layers", 1, "minerals", "calcite"] == rows.index('minerals.calcite = "1 wt%"') + 1
    assert lines["layers", 0, "cells", 1] == rows.index("  2, # two") + 1
    assert lines["flow", "feed", 1, "from"] == len(rows) - 1


SCALARS = st.one_of(
    st.integers(-1000, 1000),
    st.booleans(),
    st.text(st.characters(exclude_categories=("Cs", "Cc"), exclude_characters="\x7f"), max_size=8),
)
KEYS = st.text(st.sampled_from("abZ9_-.^+ #\"'é\\"), min_size=1, max_size=5)
VALUES = st.recursive(
    SCALARS,
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(KEYS, inner, max_size=3),
    max_leaves=8,
)


def pairs(table):
    """The rows `key = value` of a table."""
    return [f"{json.dumps(key, ensure_ascii=False)} = {inline(value)}" for key, value in table.items()]


def inline(value):
    """A value as TOML writes it inline; JSON's strings and numbers are TOML's."""
    if isinstance(value, dict):
        return "{" + ", ".join(pairs(value)) + "}"
    if isinstance(value, list):
        return "[" + ", ".join(map(inline, value)) + "]"
    return json.dumps(value, ensure_ascii=False)


@given(st.dictionaries(KEYS, VALUES, max_size=4), st.dictionaries(KEYS, VALUES, max_size=3))
def test_any_valid_text_is_followed(top, inner):
    text = "\n".join([*pairs(top), "# [comment]", "[['the table']] # more", *pairs(inner)])
    lines = key_lines(text)
    assert set(lines) == set(paths(tomllib.loads(text)))
    for number, key in enumerate(top, start=1):
        assert lines[key,] == number
