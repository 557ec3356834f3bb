"""The scan for lines against the standard library's reader."""

from __future__ import annotations

import tomllib

from hypothesis import given
from hypothesis import strategies as st

from develop.job.lines import Path, lines_of

ODD = (
    '''# comment with [brackets] and "quotes"
title = "a # no comment" # [x]
[job]
name = """
first line [[piece]]
kind = "no"
say \\"""no\\""" """
other = \'\'\'
it's [fine] # too\'\'\'\'
[defaults]
cut_b = { slope = 30, "long" = 'top' }
offset = [
  0, # right
  "a]b",

  [ 50 ],
]
a.b."c d".e = 1979-05-27 07:32:00Z

[[piece]]
kind = "straight" ; '''.replace(" ; ", "")
    + """
"quoted \\u0061" = 1
'lit.eral' = 0x1F
[piece.cut_a]
slope = 5
[[ piece ]]
  kind   =   "transition"
[piece.deep.er]
x = -inf
[[piece.tag]]
n = 1
[[piece.tag]]
n = 2
[last]"""
)


def paths_of(value: object, path: Path = ()) -> set[Path]:
    found = {path}
    if isinstance(value, dict):
        for key, each in value.items():
            found |= paths_of(each, (*path, key))
    if isinstance(value, list):
        for index, each in enumerate(value):
            found |= paths_of(each, (*path, index))
    return found - {()}


def test_every_key_has_its_line() -> None:
    lines = lines_of(ODD)
    rows = ODD.split("\n")
    assert set(lines) == paths_of(tomllib.loads(ODD))

    def row(*path: str | int) -> str:
        return rows[lines[path] - 1]

    assert row("job") == "[job]"
    assert row("job", "name") == 'name = """'
    assert row("job", "other") == "other = '''"
    assert row("defaults", "cut_b", "long") == rows[lines[("defaults", "cut_b")] - 1]
    assert row("defaults", "offset", 1) == '  "a]b",'
    assert row("defaults", "offset", 2, 0) == "  [ 50 ],"
    assert row("defaults", "a", "b", "c d", "e").startswith("a.b.")
    assert row("piece", 0).startswith("[[piece]]")
    assert row("piece", 0, "quoted a").startswith('"quoted')
    assert row("piece", 0, "lit.eral").startswith("'lit")
    assert row("piece", 0, "cut_a") == "[piece.cut_a]"
    assert row("piece", 0, "cut_a", "slope") == "slope = 5"
    assert row("piece", 1) == "[[ piece ]]"
    assert row("piece", 1, "kind") == '  kind   =   "transition"'
    assert row("piece", 1, "deep", "er", "x") == "x = -inf"
    assert row("piece", 1, "tag", 1, "n") == "n = 2"
    assert row("last") == "[last]"


def test_pieces_as_one_array_have_lines_too() -> None:
    text = 'piece = [\n  { kind = "straight",\n length = 3 },\n  { kind = "x" } ]\n'
    text = text.replace(",\n length", ", length")
    lines = lines_of(text)
    assert (lines[("piece", 0)], lines[("piece", 0, "length")], lines[("piece", 1, "kind")]) == (2, 2, 3)


STRINGS = st.one_of(
    st.text(st.sampled_from("ab #[]{}=.,'\"")).map(
        lambda text: '"' + text.replace("\\", "\\\\").replace('"', '\\"') + '"'
    ),
    st.text(st.sampled_from('ab #[]{}=.,"')).map(lambda text: f"'{text}'"),
    st.text(st.sampled_from("ab #[]{}=\n'")).map(lambda text: f'"""{text}"""'),
    st.text(st.sampled_from('ab #[]{}=\n"')).map(lambda text: f"'''{text}'''"),
)
KEYS = st.one_of(
    st.text(st.sampled_from("abc-_1"), min_size=1),
    STRINGS.filter(lambda text: "\n" not in text and text[:3] not in ('"""', "'''")),
)
VALUES = st.recursive(
    st.one_of(STRINGS, st.sampled_from(["1", "-2.5", "true", "nan", "07:32:00", "1979-05-27 07:32:00"])),
    lambda inner: st.one_of(
        st.lists(inner, max_size=3).map(lambda items: "[ # ]\n" + " ,\n".join(items) + " ]"),
        st.dictionaries(KEYS, inner.filter(lambda text: "\n" not in text), max_size=3).map(
            lambda table: "{ " + ", ".join(f"{key} = {value}" for key, value in table.items()) + " }"
        ),
    ),
    max_leaves=5,
)
TABLES = st.lists(
    st.tuples(
        st.sampled_from(["[[piece]]", "[ 'piece'. part ]", "[x.y]", "[[piece.tag]]", '["z"]']),
        st.lists(st.tuples(KEYS, VALUES), max_size=3),
    ),
    max_size=5,
)


@given(TABLES)
def test_the_scan_finds_the_keys_that_the_reader_finds(
    tables: list[tuple[str, list[tuple[str, str]]]],
) -> None:
    text = ""
    for head, pairs in tables:
        text += f"{head} # comment\n" + "".join(f"{key} = {value} # [end]\n\n" for key, value in pairs)
    try:
        data = tomllib.loads(text)
    except tomllib.TOMLDecodeError:
        return
    lines = lines_of(text)
    assert set(lines) == paths_of(data)
    assert all(1 <= line <= text.count("\n") + 1 for line in lines.values())
