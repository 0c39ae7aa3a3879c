"""The line of every key of a TOML text."""

import json
import tomllib

import tomli_w
from hypothesis import given, settings
from hypothesis import strategies as st

from rheo.case.toml_lines import key_lines, line_of

TEXT = '''# a comment with [brackets] and a = sign
schema = 1
title = "a # that is no comment"

[product]  # why
density = "1100 kg/m3"
notes = """
[not.a.table]
key = "no key"
"""
"quoted key" = 1
a.b = { c = 2, d = [1,
  2] }

[[line.discharge]]
part = 'pipe'
[line.discharge.size]
name = "DN 50"
[[line.discharge]]
part = "fitting"
when = 2024-05-06 07:08:09

[fit]
models = [
  "bingham",  # one
  "casson",
]
'''


def test_every_line_is_found():
    lines = key_lines(TEXT)
    assert lines[("schema",)] == 2
    assert lines[("title",)] == 3
    assert lines[("product",)] == 5
    assert lines[("product", "density")] == 6
    assert lines[("product", "notes")] == 7
    assert lines[("product", "quoted key")] == 11
    assert lines[("product", "a", "b", "d", 1)] == 13
    assert lines[("line", "discharge", 0)] == 15
    assert lines[("line", "discharge", 0, "size", "name")] == 18
    assert lines[("line", "discharge", 1, "part")] == 20
    assert lines[("fit", "models", 1)] == 26
    assert not any("not" in path for path in lines)


def test_nearest_table_stands_in_for_a_missing_key():
    lines = key_lines(TEXT)
    assert line_of(lines, ("line", "discharge", 1, "diameter")) == 19
    assert line_of(lines, ("nothing",)) is None


TREES = st.recursive(
    st.booleans() | st.integers(-9, 9) | st.text(max_size=8) | st.floats(allow_nan=False),
    lambda child: (
        st.lists(child, max_size=3)
        | st.dictionaries(st.from_regex(r"[a-z]{1,4}", fullmatch=True), child, max_size=3)
    ),
    max_leaves=12,
)


def paths(tree, at=()):
    if isinstance(tree, dict):
        for key, child in tree.items():
            yield (*at, key)
            yield from paths(child, (*at, key))
    elif isinstance(tree, list):
        for index, child in enumerate(tree):
            yield (*at, index)
            yield from paths(child, (*at, index))


@settings(deadline=None, max_examples=150, derandomize=True)
@given(st.dictionaries(st.from_regex(r"[a-z]{1,4}", fullmatch=True), TREES, max_size=4))
def test_finds_exactly_the_paths_that_the_parser_finds(tree):
    text = tomli_w.dumps(tree, multiline_strings=True)
    lines = key_lines(text)
    parsed = tomllib.loads(text)
    assert set(lines) == set(paths(parsed)), json.dumps(tree)
    for path, line in lines.items():
        if isinstance(path[-1], str):
            assert path[-1] in text.split("\n")[line - 1]
