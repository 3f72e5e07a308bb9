from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opto_ckt.preferred import SERIES
from opto_ckt.units import UnitError, read, read_rkm, write_rkm

repeatable = settings(derandomize=True, deadline=None)  # same cases on every run, however slow the machine

DECADES = {"Ω": range(-3, 10), "F": range(-14, -2), "H": range(-9, 1)}


@pytest.mark.parametrize("unit", DECADES)
def test_rkm_both_ways_for_every_preferred_value(unit: str) -> None:
    codes: dict[str, float] = {}
    for power in DECADES[unit]:
        for mantissa in (*SERIES["E192"], *SERIES["E24"]):
            value = float(f"{mantissa}e{power}")
            code = write_rkm(value, unit)
            assert read_rkm(code, unit) == value
            assert codes.setdefault(code, value) == value
            assert len(code) <= 5


@repeatable
@given(st.floats(1e-15, 1e12), st.sampled_from(sorted(DECADES)))
def test_rkm_both_ways_for_any_value(value: float, unit: str) -> None:
    assert read_rkm(write_rkm(value, unit), unit) == pytest.approx(value, rel=1e-15, abs=0)


@repeatable
@given(st.floats(1e-15, 1e12), st.sampled_from(sorted(DECADES)))
def test_a_code_that_the_reader_takes_means_the_same(value: float, unit: str) -> None:
    """`10K` and `1M0` are good codes; in a design file only those are read that leave one meaning."""
    code = write_rkm(value, unit)
    try:
        again = read(code, unit)
    except UnitError:
        assert code[-1] in "LKMGTmFH"
        return
    assert again == read_rkm(code, unit)


def test_rkm_style() -> None:
    values = (0.0, 0.005, 0.047, 0.1, 0.47, 1.0, 10.0, 470.0, 1e3, 4.7e3, 10e3, 1e6, 1e9)
    assert [write_rkm(value, "Ω") for value in values] == [
        "0R", "5L0", "47L", "R1", "R47", "1R0", "10R", "470R", "1K0", "4K7", "10K", "1M0", "1G0",
    ]  # fmt: skip
    assert [write_rkm(value, "F") for value in (3.6e-13, 1e-12, 3.32e-10, 100e-9, 1e-6, 4.7e-3)] == [
        "p36", "1p0", "332p", "100n", "1u0", "4m7",
    ]  # fmt: skip
    assert write_rkm(10e-6, "H") == "10u"


@pytest.mark.parametrize("code", ["", "k", "47", "4k7k", "4.7k", "4x7", "-4k7", "4 k7", "4p7", "4k7Ω"])
def test_what_is_no_resistor_code(code: str) -> None:
    with pytest.raises(UnitError):
        read_rkm(code, "Ω")


@pytest.mark.parametrize(("value", "unit"), [(-1.0, "Ω"), (math.inf, "Ω"), (math.nan, "F"), (1.0, "V")])
def test_what_has_no_code(value: float, unit: str) -> None:
    with pytest.raises(UnitError):
        write_rkm(value, unit)
