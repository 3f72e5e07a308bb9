from __future__ import annotations

from hypothesis import given
from hypothesis import strategies as st

from opto_ckt.outputs.columns import aligned, packed, width, wrapped

WORDS = st.lists(st.text(st.characters(categories=["L", "Nd", "P"]), min_size=1, max_size=12), min_size=1, max_size=30)


def test_columns_are_aligned_by_what_characters_take() -> None:
    lines = aligned([("光", "1"), ("kΩ", "22")], "lr")
    assert lines == ["  光   1", "  kΩ  22"]
    assert width(lines[0]) == width(lines[1])


def test_an_empty_last_cell_leaves_no_blanks() -> None:
    assert aligned([("a", ""), ("b", "c")], "ll", indent=0) == ["a", "b  c"]


def test_a_number_stays_with_its_unit() -> None:
    lines = wrapped("the output rises to 2.00 V at 97.7 µA and no more", 0, 24)
    assert len(lines) > 1
    joined = "|".join(lines)
    assert "2.00 V" in joined
    assert "97.7 µA" in joined


def test_nothing_is_wrapped_without_a_limit() -> None:
    sentence = "word " * 100
    assert wrapped(sentence, 2, None) == ["  " + sentence]


@given(words=WORDS, columns=st.integers(20, 120), indent=st.integers(0, 10))
def test_wrapping_keeps_every_word_whole(words: list[str], columns: int, indent: int) -> None:
    lines = wrapped(" ".join(words), indent, columns)
    assert " ".join(line[indent:] for line in lines) == " ".join(words)
    assert all(line.startswith(" " * indent) for line in lines)


@given(items=WORDS, columns=st.integers(20, 120))
def test_packing_keeps_every_item_whole_and_in_order(items: list[str], columns: int) -> None:
    lines = packed(items, 4, columns, before="at  ")
    assert lines[0].startswith("at  ")
    assert " ".join(line[4:] for line in lines) == ", ".join(items).replace(",  ", ", ")
    assert all(width(line) <= max(columns, 24) or line.count(", ") == 0 for line in lines)
