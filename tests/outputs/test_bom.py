from __future__ import annotations

import csv
import io
import re
from dataclasses import replace

import pytest
from hypothesis import given
from hypothesis import strategies as st

from opto_ckt.outputs.bom import bill_of_materials, in_order
from opto_ckt.outputs.bom_csv import BYTE_ORDER_MARK, HEADINGS, bom_csv, harmless
from opto_ckt.outputs.bom_sheet import FORM_FEED, LINES, PAGE, bom_sheet
from opto_ckt.outputs.columns import width
from opto_ckt.outputs.ratings import loads_text
from opto_ckt.result import FoundPart, Result
from tests.outputs.results import C1, HEAD, R1, U1, result


def with_parts(*parts: FoundPart, stem: str = "valley") -> Result:
    return result(parts=parts, head=replace(HEAD, stem=stem))


def rows(text: str, separator: str = ",") -> list[dict[str, str]]:
    return list(csv.DictReader(io.StringIO(text), delimiter=separator))


def test_equal_parts_share_a_line_and_designators_count_up() -> None:
    (line,) = bill_of_materials([with_parts(*(replace(R1, ref=ref) for ref in ("R10", "R2", "R1")))]).lines
    bom = bill_of_materials([with_parts(*(replace(R1, ref=ref) for ref in ("R10", "R2", "R1")))], boards=7)
    assert bom.references(line) == "R1, R2, R10"
    assert bom.quantity(line) == 21


@pytest.mark.parametrize(
    "change",
    [
        {"value": 24.9e3}, {"tolerance": 0.001}, {"characteristic": "25 ppm/K"}, {"size": "0805"},
        {"required_rating": {"power": 0.2, "voltage": 2.0}}, {"fitted": False}, {"kind": "thermistor"},
    ],
)  # fmt: skip
def test_parts_that_differ_in_anything_bought_do_not_share_a_line(change: dict[str, object]) -> None:
    other = replace(R1, ref="R2", **change)  # type: ignore[arg-type]  # one field of many types
    assert len(bill_of_materials([with_parts(R1, other)]).lines) == 2


def test_loads_within_one_class_of_rating_share_a_line_that_states_the_larger() -> None:
    other = replace(
        R1, ref="R2", stress={"power": 3e-4, "voltage": 1.0}, required_rating={"power": 6e-4, "voltage": 1.0}
    )
    (line,) = bill_of_materials([with_parts(R1, other)]).lines
    assert line.required_rating == {"power": 6e-4, "voltage": 2.0}
    assert line.stress == {"power": 3e-4, "voltage": 2.0}


def test_parts_without_a_name_are_like_no_other() -> None:
    unnamed = replace(U1, part="")
    bom = bill_of_materials([with_parts(unnamed, replace(unnamed, ref="U2"))])
    assert [bom.references(line) for line in bom.lines] == ["U1", "U2"]
    assert {row["Value"] for row in rows(bom_csv(bom))} == {"not named"}


def test_capacitors_of_different_rating_do_not_share_a_line() -> None:
    other = replace(C1, ref="C2", required_rating={"voltage": 10.0})
    assert len(bill_of_materials([with_parts(C1, other)]).lines) == 2


def test_designs_merge_and_say_which_board() -> None:
    bom = bill_of_materials([with_parts(R1, stem="mast"), with_parts(R1, U1, stem="valley")], boards=2)
    first = bom.lines[0]
    assert bom.references(first) == "mast R1; valley R1"
    assert bom.quantity(first) == 4


def test_two_designs_of_one_stem_are_told_apart() -> None:
    bom = bill_of_materials([with_parts(R1), with_parts(R1)])
    assert bom.references(bom.lines[0]) == "valley#1 R1; valley#2 R1"


def test_a_place_left_empty_is_listed_but_not_bought() -> None:
    bom = bill_of_materials([with_parts(R1, replace(C1, value=0.0, fitted=False))])
    last = bom.lines[-1]
    assert not last.fitted
    assert bom.quantity(last) == 0
    assert "DO NOT FIT" in bom_sheet(bom)
    assert rows(bom_csv(bom))[-1]["Fitted"] == "do not fit"


def test_designators_sort_by_number() -> None:
    assert sorted(["U1", "R10", "R9", "C1"], key=in_order) == ["C1", "R9", "R10", "U1"]


def test_csv_comes_back_as_it_was() -> None:
    row, *_ = rows(bom_csv(bill_of_materials([with_parts(R1, U1)], boards=3)))
    assert (row["Quantity"], row["References"], row["Value"], row["Code"]) == ("3", "R1", "24.3 kΩ", "24K3")
    assert (row["Tolerance"], row["Size"], row["Function"], row["Chosen rating"]) == (
        "±1 %",
        "0603 inch",
        "feedback",
        "",
    )
    assert row["Required rating"] == "330 µW, 2 V"
    assert row["Worst stress"] == "160 µW, 2 V"
    assert HEAD.digest in row["Design"]


def test_a_part_bought_by_name_has_its_number() -> None:
    (row,) = rows(bom_csv(bill_of_materials([with_parts(U1)])))
    assert (row["Value"], row["Part number"], row["Code"]) == ("HB-OA-400", "HB-OA-400", "")


def test_separator_and_byte_order_mark() -> None:
    bom = bill_of_materials([with_parts(R1)])
    text = bom_csv(bom, separator=";", byte_order_mark=True)
    assert text.startswith(BYTE_ORDER_MARK + "Item;Fit;")
    assert rows(text.removeprefix(BYTE_ORDER_MARK), ";") == rows(bom_csv(bom))


def test_the_marker_is_in_the_heading() -> None:
    assert "opto-ckt" in bom_csv(bill_of_materials([with_parts(R1)])).splitlines()[0]


@pytest.mark.parametrize(
    "text",
    ["=1+1", "+1", "-1", "@SUM(A1)", "  =1", "\t=1", "\r=1", "＝1", "MAR-7", "1-2", "1/2", "3.4.2026", "12:30"],
)
def test_what_would_be_computed_or_taken_for_a_date_is_marked_as_text(text: str) -> None:
    assert harmless(text).startswith("'")


@pytest.mark.parametrize(
    "text", ["2 A", "5 pm", "0603", "1e5", "2E5", "10 %", "TRUE", "Sep 1", "1,5", "(12)", "$3", "1 000"]
)
def test_what_would_be_taken_for_a_number_or_a_time_is_marked_as_text(text: str) -> None:
    assert harmless(text).startswith("'")


@pytest.mark.parametrize(
    "text",
    ["24.3 kΩ", "±1 %", "R47", "4K7", "1p5", "100 ppm/K", "HB-OA-400", "0603 inch", "160 µW, 2 V", "C1, C2", "", "C0G"],
)
def test_what_is_text_already_is_left_alone(text: str) -> None:
    assert harmless(text) == text


@given(st.text())
def test_no_cell_ever_begins_like_a_formula(text: str) -> None:
    cell = harmless(text)
    assert cell.lstrip()[:1] not in tuple("=+-@＝＋－＠|%\t\r\n")
    assert "\n" not in cell
    assert "\r" not in cell


@given(name=st.text(min_size=1), role=st.text(), title=st.text(), separator=st.sampled_from([",", ";", "\t"]))
def test_any_text_comes_back_in_its_own_cell(name: str, role: str, title: str, separator: str) -> None:
    made = result(parts=(replace(U1, part=name, role=role), R1), head=replace(HEAD, title=title))
    found = rows(bom_csv(bill_of_materials([made]), separator=separator), separator)
    assert len(found) == 2
    assert all(set(row) == set(HEADINGS) for row in found)
    assert {row["Part number"] for row in found} == {harmless(name), ""}


def test_the_sheet_states_need_apart_from_stress_and_leaves_room_to_write() -> None:
    text = bom_sheet(bill_of_materials([with_parts(R1)], boards=2))
    assert "[ ]     1    2  24.3 kΩ  24K3  ±1 %" in text
    assert "R1: resistor, feedback; needs 330 µW, 2 V; sees 160 µW, 2 V" in text
    assert re.search(r"rating _+  maker _+  number _+", text)
    assert "2 boards" in text
    assert "Valley receiver, rev A" in text
    assert HEAD.digest in text


def test_pages_repeat_the_head_and_count() -> None:
    many = [replace(R1, ref=f"R{number}", value=1e3 + number) for number in range(1, 41)]
    pages = bom_sheet(bill_of_materials([with_parts(*many)])).split(FORM_FEED)
    assert len(pages) > 2
    for number, text in enumerate(pages, 1):
        assert f"page {number} of {len(pages)}" in text.splitlines()[0]
        assert "item  qty  value" in text
        assert len(text.splitlines()) <= LINES
    assert sum(text.count("[ ]") for text in pages) == 40


def test_the_sheet_keeps_to_the_page_whatever_a_part_is_called() -> None:
    named = replace(U1, part="operational amplifier as it is described in the design file of the valley station")
    text = bom_sheet(bill_of_materials([with_parts(R1, C1, named)]))
    assert all(width(line) <= PAGE for line in text.splitlines())
    assert named.part in text


def test_loads_that_are_next_to_nothing_are_left_out() -> None:
    assert loads_text({"power": 0.0, "voltage": 1e-9, "current": 1e-3}) == "1 mA"
