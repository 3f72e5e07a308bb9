from __future__ import annotations

from math import inf, nan
from typing import Annotated

import pytest
from hypothesis import given
from hypothesis import strategies as st
from pydantic import ValidationError

from opto_ckt.parts.opamp import OpAmpData
from opto_ckt.parts.record import (
    FROM_FILE,
    Assumed,
    Choice,
    Coefficient,
    Finding,
    FindingsError,
    Points,
    Record,
    Sheet,
    Spread,
    Table,
    Unit,
    facts,
)
from opto_ckt.parts.sections import SECTIONS, records_of
from opto_ckt.units import known, read, write
from tests.near import near

HERTZ = Unit("Hz", "230 MHz")
FIGURES = st.floats(min_value=1e-3, max_value=1e12)
ALL = [record for section in SECTIONS for record in records_of(section)]


@given(FIGURES)
def test_one_text_is_a_typical_value(value: float):
    text = write(value, "Hz", digits=6)
    assert HERTZ.read_spread(text, from_file=True) == Spread(typ=read(text, "Hz"))


@given(st.dictionaries(st.sampled_from(["min", "typ", "max"]), FIGURES, min_size=1))
def test_a_table_is_read_side_by_side_or_refused_for_its_order(sides: dict[str, float]):
    texts = {side: f"{value!r} Hz" for side, value in sides.items()}
    given_ = [sides[side] for side in ("min", "typ", "max") if side in sides]
    if given_ != sorted(given_):
        with pytest.raises(FindingsError, match="min ≤ typ ≤ max is needed"):
            HERTZ.read_spread(texts, from_file=True)
        return
    spread = HERTZ.read_spread(texts, from_file=True)
    assert {side: getattr(spread, side) for side in sides} == near(sides, 1e-15)
    assert spread.low <= spread.nominal <= spread.high
    assert spread.stated == bool({"min", "max"} & set(sides))
    assert HERTZ.read_spread(spread, from_file=True) is spread


@pytest.mark.parametrize(
    ("value", "told"),
    [
        (5, "5 has no unit"),
        ("5", "'5' has no unit"),
        (True, "got true or false"),
        ([1], "got a list"),
        (None, "got None"),
        ("-5 Hz", "'-5 Hz' is not above zero"),
        ("0 Hz", "'0 Hz' is not above zero"),
        ({}, "the table is empty"),
        ({"nom": "5 Hz"}, "nom: is not known here; min, typ and max are"),
        ({"min": "5 Hz", "max": "4 Hz"}, "min: min '5 Hz' is above max '4 Hz'"),
        ({"min": "5 V", "max": "4"}, "min: '5 V'"),
        ("nan Hz", "'nan Hz'"),
        (inf, "inf"),
    ],
)
def test_what_is_no_figure(value: object, told: str):
    with pytest.raises(FindingsError) as caught:
        HERTZ.read_spread(value, from_file=True)
    assert told in str(caught.value)


def test_each_side_that_is_wrong_is_told():
    with pytest.raises(FindingsError) as caught:
        HERTZ.read_spread({"min": "5 V", "typ": "1", "max": 3}, from_file=True)
    assert [finding.path for finding in caught.value.findings] == [("min",), ("typ",), ("max",)]


@pytest.mark.parametrize("sides", [{}, {"typ": nan}, {"max": inf}, {"min": 2.0, "typ": 1.0}, {"typ": 2.0, "max": 1.0}])
def test_a_spread_is_checked_at_the_door(sides: dict[str, float]):
    with pytest.raises(ValueError, match=r"needed|finite"):
        Spread(**sides)


def test_nominal_where_the_sheet_has_no_typical_value():
    assert Spread(min=2.0, max=4.0).nominal == 3.0
    assert Spread(max=4.0).nominal == 4.0
    assert Spread(min=2.0, typ=2.5).high == 2.5
    assert Spread(min=2.0, typ=3.0).scaled(2.0) == Spread(min=4.0, typ=6.0)


def test_an_assumption_spreads_typical_figures_only():
    assumed = Assumed(low=0.3, high=0.5)
    assert assumed.limits(Spread(typ=10.0)) == (10.0, 7.0, 15.0, True)
    assert assumed.limits(Spread(typ=10.0, max=11.0)) == (10.0, 10.0, 11.0, False)
    assert assumed.limits(Spread(typ=-10.0)) == (-10.0, -13.0, -5.0, True)
    assert Assumed().limits(Spread(typ=10.0)) == (10.0, 10.0, 10.0, False)


class Stage(Table):
    """A point."""

    current: Annotated[float, Unit("A", "1 mA")]
    voltage: Annotated[Spread, Unit("V", "1 V")]


class Gadget(Record):
    """A record with one field of each kind."""

    size: Annotated[Spread, Unit("m", "1 mm"), Sheet("size, d"), Assumed(0.1, 0.2)]
    width: Annotated[float | None, Unit("m", "1 mm")] = None
    stages: Annotated[tuple[Stage, ...] | None, Points(2)] = None

    choices = (Choice("the shape", (("width",), ("stages",)), needed=False),)


def test_numbers_are_si_in_python_and_refused_in_files():
    assert Gadget(size=2, width=3).size == Spread(typ=2.0)  # type: ignore[arg-type]  # read by the field
    with pytest.raises(ValidationError):
        Gadget.model_validate({"size": 2}, context=dict(FROM_FILE))


def test_points_are_put_in_order_and_their_figures_have_units():
    stages = [{"current": "2 mA", "voltage": "1.2 V"}, {"current": "1 mA", "voltage": {"typ": "1 V", "max": "1.1 V"}}]
    gadget = Gadget.model_validate({"size": "1 mm", "stages": stages}, context=dict(FROM_FILE))
    assert gadget.stages is not None
    assert [point.current for point in gadget.stages] == [1e-3, 2e-3]
    assert gadget.stages[0].voltage == Spread(typ=1.0, max=1.1)
    for wrong in ([stages[0]], [stages[0], stages[0]], "x", [stages[0], 5]):
        with pytest.raises(ValidationError):
            Gadget.model_validate({"size": "1 mm", "stages": wrong}, context=dict(FROM_FILE))


def test_records_are_frozen_and_know_their_keys():
    gadget = Gadget(size=Spread(typ=1.0))
    with pytest.raises(ValidationError):
        gadget.width = 1.0  # type: ignore[misc]  # what is tested
    with pytest.raises(ValidationError):
        Gadget(size=Spread(typ=1.0), colour="red")  # type: ignore[call-arg]  # what is tested
    with pytest.raises(ValidationError, match="U\\+000A"):
        Gadget(size=Spread(typ=1.0), document="a\nb")


def test_a_choice_wants_one_whole_group():
    choice = Choice("the noise", (("a", "b"), ("c",)))
    assert list(choice.findings({"c"})) == []
    assert list(choice.findings({"a", "b", "x"})) == []
    assert list(choice.findings({"x"})) == [Finding((), "the noise is missing; give a with b; or c")]
    assert list(choice.findings({"a"})) == [
        Finding(("a",), "the noise needs b beside a; allowed is a with b; or c"),
    ]
    assert list(choice.findings({"a", "b", "c"})) == [
        Finding(("c",), "the noise is stated in more than one way (a, b, c); give a with b; or c"),
    ]
    assert list(choice._replace(needed=False).findings(set())) == []
    with pytest.raises(ValidationError, match="the shape is stated in more than one way"):
        Gadget(size=Spread(typ=1.0), width=1.0, stages=(Stage(current=1, voltage=1), Stage(current=2, voltage=1)))  # type: ignore[arg-type]  # read by the field


def test_facts_are_for_a_starter_to_print():
    fact = facts(Gadget)["size"]
    assert (fact.unit, fact.example, fact.sheet, fact.assumed, fact.needed) == (
        "m", "1 mm", "size, d", Assumed(0.1, 0.2), True,
    )  # fmt: skip
    assert facts(Gadget)["stages"].points is Stage
    assert facts(Gadget)["width"].default is None


@pytest.mark.parametrize("record", ALL, ids=lambda record: record.__name__)
def test_each_field_of_each_record_can_be_started_from(record: type[Record]):
    for name, fact in facts(record).items():
        assert fact.sheet, name
        assert fact.unit or fact.words or fact.points or record.model_fields[name].annotation is str, name
        if fact.unit:
            assert known(fact.unit), name
            read(fact.example, fact.unit)
        for column, point in facts(fact.points).items() if fact.points else ():
            read(point.example, point.unit)
            assert column


def started(record: type[Record], needed_only: bool) -> dict[str, object]:
    """A record filled from its own examples."""
    groups = [set(group) for choice in record.choices for group in choice.groups[1:]]
    first = {key for choice in record.choices if choice.needed for key in choice.groups[0]}
    filled: dict[str, object] = {}
    for name, fact in facts(record).items():
        if any(name in group for group in groups) or not (fact.needed or name in first or not needed_only):
            continue
        point = {column: one.example for column, one in facts(fact.points).items()} if fact.points else {}
        if fact.unit:
            filled[name] = fact.example
        elif fact.words:
            filled[name] = fact.words[0]
        elif point:
            filled[name] = [point]
        else:
            filled[name] = "InGaAs" if name == "material" else "text"
    if record.__name__ == "PhotodiodeData":
        filled["responsivity_wavelength"] = "1310 nm"
    if record.section == "transistor":
        filled["junction_to_ambient"] = "300 K/W"
    return filled


@pytest.mark.parametrize("needed_only", [True, False], ids=["needed", "all"])
@pytest.mark.parametrize("record", ALL, ids=lambda record: record.__name__)
def test_the_examples_of_a_record_make_a_record(record: type[Record], needed_only: bool):
    built = record.model_validate(started(record, needed_only), context=dict(FROM_FILE))
    for nominal, low, high in (limits[:3] for limits in built.limits().values()):
        assert low <= nominal <= high


def test_limits_of_an_amplifier_follow_sheet_then_design_then_record():
    data = started(OpAmpData, needed_only=True) | {"voltage_noise": {"typ": "6 nV/√Hz", "max": "7 nV/√Hz"}}
    limits = OpAmpData.model_validate(data).limits({"slew_rate": Assumed(0.5, 0.0)})
    assert limits["voltage_noise"] == (near(6e-9), near(6e-9), near(7e-9), False)
    assert limits["slew_rate"][:3] == near((290e6, 145e6, 290e6))
    assert limits["gain_bandwidth"] == (near(230e6), near(161e6), near(299e6), True)


def test_a_coefficient_keeps_the_unit_it_was_stated_in():
    laser = next(record for record in ALL if record.section == "laser")
    for text, expected in (("200 K", Coefficient(200.0, "K")), ("-0.4 %/K", Coefficient(-0.004, "1/K"))):
        built = laser.model_validate(started(laser, needed_only=True) | {"slope_temperature": text})
        assert built.slope_temperature == expected  # type: ignore[attr-defined]  # a LaserData
