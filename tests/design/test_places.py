from __future__ import annotations

import tomllib
from typing import Any

from hypothesis import given
from hypothesis import strategies as st

from opto_ckt.design.places import Path, find_places

BARE = st.from_regex(r"[A-Za-z0-9_-]{1,5}", fullmatch=True)
TEXTS = st.text(alphabet="ab #=[]{}\",.\\'\n\té", max_size=6)
SCALARS = st.sampled_from(
    [
        "1",
        "true",
        "1979-05-27 07:32:00",
        "'#]}, x'",
        '"a\\"]#"',
        "'''x]\ny'''",
        '"""a\\"""b\n"""',
        '""" " ""x"""""',
        "-1e3",
    ]
)


def quoted(text: str) -> str:
    escapes = {"\\": "\\\\", '"': '\\"', "\n": "\\n", "\t": "\\t"}
    return '"' + "".join(escapes.get(letter, letter) for letter in text) + '"'


KEYS = st.one_of(BARE, TEXTS.map(quoted))
BREAKS = st.sampled_from(["", " ", "\n", " # ] } , \" '''\n", "\n\n  "])


def inline(entries: list[tuple[str, str]]) -> str:
    return "{ " + ", ".join(f"{key} = {value}" for key, value in entries) + " }"


@st.composite
def arrays(draw: st.DrawFn, inner: st.SearchStrategy[str]) -> str:
    entries = draw(st.lists(inner, max_size=3))
    text = "["
    for position, entry in enumerate(entries):
        text += (
            draw(BREAKS) + entry + draw(BREAKS) + ("," if position < len(entries) - 1 or draw(st.booleans()) else "")
        )
    return text + draw(BREAKS) + "]"


@st.composite
def inlines(draw: st.DrawFn, inner: st.SearchStrategy[str]) -> str:
    return inline([(draw(KEYS), draw(inner)) for _ in range(draw(st.integers(0, 3)))])


VALUES = st.recursive(SCALARS, lambda inner: st.one_of(arrays(inner), inlines(inner)), max_leaves=5)
DOTTED = st.lists(KEYS, min_size=1, max_size=3).map(" . ".join)
LINES = st.one_of(
    st.builds("{} = {}".format, DOTTED, VALUES),
    st.builds("[ {} ]".format, DOTTED),
    st.builds("[[{}]]".format, DOTTED),
    st.sampled_from(["", "# [a] = 'x", "  "]),
)


@st.composite
def documents(draw: st.DrawFn) -> str:
    """A TOML text, built line by line out of what keeps it valid."""
    text = ""
    for _ in range(draw(st.integers(0, 8))):
        longer = text + draw(LINES) + draw(st.sampled_from(["", " # end"])) + draw(st.sampled_from(["\n", "\r\n"]))
        try:
            tomllib.loads(longer)
        except tomllib.TOMLDecodeError:
            continue
        text = longer
    return text


def paths(value: Any, path: Path = ()) -> set[Path]:
    entries = value.items() if isinstance(value, dict) else enumerate(value) if isinstance(value, list) else ()
    return {path} | {found for key, entry in entries for found in paths(entry, (*path, key))}


@given(documents())
def test_exactly_the_keys_of_the_text_have_a_line(text: str):
    lines = find_places(text).lines
    assert set(lines) == paths(tomllib.loads(text)) - {()}
    assert all(1 <= line <= text.count("\n") + 1 for line in lines.values())


@given(documents(), documents())
def test_text_above_moves_the_lines_down_by_as_many(text: str, other: str):
    above = "# one\n# two\r\n"
    moved = find_places(above + text).lines
    assert moved == {path: line + 2 for path, line in find_places(text).lines.items()}


@given(st.lists(st.tuples(BARE, VALUES), max_size=6, unique_by=lambda pair: pair[0]))
def test_each_key_is_found_where_it_was_written(pairs: list[tuple[str, str]]):
    text, expected = "", {}
    for key, value in pairs:
        expected[key] = text.count("\n") + 1
        text += f"{key} = {value}\n"
        try:
            tomllib.loads(text)
        except tomllib.TOMLDecodeError:  # the same key twice in one inline table
            return
    places = find_places(text)
    assert {key: places.line_of((key,)) for key, _ in pairs} == expected


def test_a_missing_key_has_the_line_of_its_nearest_ancestor():
    places = find_places("title = 1\n\n[a.b]\nc = { d = 1 }\n[[e]]\n[[e]]\nf = [\n 1,\n 2,\n]\n")
    assert places.line_of(("a", "b", "c", "x")) == 4
    assert places.line_of(("a", "b", "x")) == 3
    assert places.line_of(("e", 1, "f", 1)) == 9
    assert places.line_of(("e", 1, "x")) == 6
    assert places.line_of(("x", "y")) is None
