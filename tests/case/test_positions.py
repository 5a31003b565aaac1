"""The position scanner: the paths it finds are those of the standard library, each on its own line."""

import tomllib

import pytest
import tomlkit
from hypothesis import given, settings
from hypothesis import strategies as st

from retrofit.case.positions import key_lines

HARD = '''\
# a remark with [a.header] and key = 1
title = "plain" # a remark

"quoted.dot" = 'literal # no remark'
a."b c".d = 1
"esc\\u0041pe" = 2
[ table . "sub.x" ] # blanks around the dots
text = """
[not.a.header]
fake = "quotes "" inside" \\"""
"""
literal = \'\'\'
[[nor.this]]
it's''\'\'\'
five = """two at the end: """""
list = [ "a]", # with ] in a string and a remark [
  2026-12-01 07:32:00, [1, [2, 3]],
  {x = 1, y.z = "}"}, ]
inline = { a = 1, "b.c" = { d = [ { e = 2 } ] } }

[[many]]
name = 1
[many.below]
x = 1
[[many.each]]
y = 1
[[many.each]]
y = 2
[[many]]
name = 2
[[many.each]]
y = 3

[later.deep]
x = 1
[later]
y = 2
'''


def paths_of(value, path=()):
    """Return every path of parsed TOML data: tables, keys and list items."""
    found = {path}
    if isinstance(value, dict):
        for key, item in value.items():
            found |= paths_of(item, (*path, key))
    elif isinstance(value, list):
        for index, item in enumerate(value):
            found |= paths_of(item, (*path, index))
    return found


@pytest.mark.parametrize("text", [HARD, HARD.replace("\n", "\r\n"), "", "\n", "# only a remark", "a = 1"])
def test_the_paths_found_are_those_of_the_standard_library(text):
    """Headers and keys inside strings are not found; every real one is."""
    assert set(key_lines(text)) == paths_of(tomllib.loads(text))


def test_each_path_has_the_line_it_stands_on():
    """Lines are counted from 1; a table's line is its header, also if a table below it came first."""
    lines = key_lines(HARD)
    text = HARD.split("\n")

    assert text[lines["title",] - 1].startswith("title")
    assert text[lines["quoted.dot",] - 1].startswith('"quoted.dot"')
    assert text[lines["a", "b c", "d"] - 1].startswith('a."b c".d')
    assert text[lines["escApe",] - 1].startswith('"esc')
    assert text[lines["table", "sub.x", "five"] - 1].startswith("five")
    assert text[lines["table", "sub.x", "list", 3, "y", "z"] - 1].startswith("  {x = 1")
    assert text[lines["table", "sub.x", "inline", "b.c", "d", 0, "e"] - 1].startswith("inline")
    assert text[lines["many", 1, "each", 0, "y"] - 1] == "y = 3"
    assert text[lines["later",] - 1] == "[later]"


def test_windows_line_ends_do_not_shift_lines():
    """The same file with CRLF has the same lines."""
    assert key_lines(HARD.replace("\n", "\r\n")) == key_lines(HARD)


KEYS = st.text("abZ09-_ .\"'\\#=[]é\t", min_size=1, max_size=6)
SCALARS = (
    st.integers(-(10**12), 10**12)
    | st.booleans()
    | st.floats(allow_nan=False, allow_infinity=False)
    | st.text("ab \"'\\#=[]{}\n,é", max_size=12)
    | st.datetimes()
    | st.dates()
    | st.times()
)
VALUES = st.recursive(
    SCALARS,
    lambda inner: st.lists(inner, max_size=3) | st.dictionaries(KEYS, inner, max_size=3),
    max_leaves=12,
)


@settings(deadline=None)
@given(data=st.dictionaries(KEYS, VALUES, max_size=5))
def test_the_paths_of_any_written_file_are_found(data):
    """Whatever a TOML writer makes of any data, the scanner finds exactly the parser's paths."""
    text = tomlkit.dumps(data)

    lines = key_lines(text)

    assert set(lines) == paths_of(tomllib.loads(text))
    assert all(1 <= line <= text.count("\n") + 1 for line in lines.values())


@given(
    keys=st.lists(st.from_regex(r"[a-z]{1,5}", fullmatch=True), unique=True, max_size=20),
    gap=st.integers(0, 3),
)
def test_every_key_stands_on_the_line_given(keys, gap):
    """With any number of empty lines between keys, the line given begins with the key."""
    text = ("\n" * (gap + 1)).join(f"{key} = '''\n{key} = 1'''" for key in keys)

    lines = key_lines(text)

    assert all(text.split("\n")[lines[key,] - 1] == f"{key} = '''" for key in keys)
