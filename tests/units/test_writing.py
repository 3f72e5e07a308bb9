from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opto_ckt.units import dbm, percent, read, write
from opto_ckt.units.table import UNITS, spellings

repeatable = settings(derandomize=True, deadline=None)  # same cases on every run, however slow the machine

WRITINGS = [
    (9.312e6, "Hz", "9.31 MHz"),
    (9.3e6, "Hz", "9.30 MHz"),
    (24300, "Ω", "24.3 kΩ"),
    (5, "V", "5.00 V"),
    (-0.0021, "V/K", "-2.10 mV/K"),
    (348.15, "°C", "75 °C"),
    (273.14, "°C", "0 °C"),
    (233.15, "°C", "-40 °C"),
    (358.49, "°C", "85.3 °C"),
    (0, "Hz", "0 Hz"),
    (-0.0, "V", "0 V"),
    (0, "1/K", "0 ppm/K"),
    (999.96, "Hz", "1.00 kHz"),
    (999.4, "Hz", "999 Hz"),
    (999.6e-9, "V", "1.00 µV"),
    (3.6e-13, "F", "0.360 pF"),
    (1e-6, "F", "1.00 µF"),
    (1e-15, "A", "1.00 fA"),
    (6.5e-9, "V/√Hz", "6.50 nV/√Hz"),
    (1e-4, "1/K", "100 ppm/K"),
    (-5e-3, "1/K", "-0.500 %/K"),
    (1310e-9, "m", "1310 nm"),
    (62.5e-6, "m", "62.5 µm"),
    (0.2e-6, "m²", "0.200 mm²"),
    (310e6, "V/s", "310 V/µs"),
    (0.3e-9, "m/K", "0.300 nm/K"),
    (0.5, "dB", "0.50 dB"),
    (-1e-9, "dB", "0.00 dB"),
    (104.04, "dB", "104.0 dB"),
    (-145.0, "dB/Hz", "-145.0 dB/Hz"),
    (1e5, "V/V", "100000 V/V"),
    (10, "W/W", "10.0"),
    (1e-9, "1", "1.00e-9"),
    (63.27, "°", "63.3°"),
    (1500, "K/W", "1500 K/W"),
    (10e6, "bit/s", "10.0 Mbit/s"),
    (math.inf, "Hz", "∞ Hz"),
    (-math.inf, "V", "-∞ V"),
    (math.nan, "V", "undefined V"),
]


@pytest.mark.parametrize(("value", "unit", "text"), WRITINGS)
def test_writes(value: float, unit: str, text: str) -> None:
    assert write(value, unit) == text


def test_trimmed_writing_is_for_part_values() -> None:
    values = [(10e3, "Ω"), (4.7e3, "Ω"), (0.36e-12, "F"), (100e-9, "F"), (1e-9, "1"), (3.0, "dB"), (100.0, "Ω")]
    assert [write(value, unit, trim=True) for value, unit in values] == [
        "10 kΩ", "4.7 kΩ", "0.36 pF", "100 nF", "1e-9", "3 dB", "100 Ω",
    ]  # fmt: skip


def test_digits_are_significant() -> None:
    figures = [write(1234.5678, "Hz", digits) for digits in (1, 2, 4, 6)]
    assert figures == ["1 kHz", "1.2 kHz", "1.235 kHz", "1.23457 kHz"]
    assert write(123.4, "V", 2) == "123 V"  # none before the decimal point is rounded away


def test_percent_and_dbm() -> None:
    assert [percent(value) for value in (0.01, 0.005, 0.123456, -0.3, 0.0, 1.0, math.inf)] == [
        "1 %", "0.5 %", "12.3 %", "-30 %", "0 %", "100 %", "∞ %",
    ]  # fmt: skip
    assert [dbm(watts) for watts in (1e-3, 50e-6, 0.0, math.nan)] == ["0.0 dBm", "-13.0 dBm", "-∞ dBm", "undefined"]
    assert dbm(50e-6, 4) == "-13.0103 dBm"


@pytest.mark.parametrize("unit", UNITS)
def test_every_step_is_a_spelling_of_the_unit(unit: str) -> None:
    for step in UNITS[unit].steps:
        assert step.text in UNITS[unit].curves or spellings(unit)[step.text] == (1, step.exponent)
    assert [step.least for step in UNITS[unit].steps] == sorted(step.least for step in UNITS[unit].steps)


PLAIN_UNITS = sorted(unit for unit in UNITS if unit != "°C" and not UNITS[unit].decimals)


@repeatable
@given(
    st.floats(1e-18, 1e15) | st.floats(-1e15, -1e-18),
    st.sampled_from(PLAIN_UNITS),
    st.integers(3, 12),
    st.booleans(),
)
def test_what_is_written_reads_back(value: float, unit: str, digits: int, trim: bool) -> None:
    """The reader accepts whatever the writer writes, to within half of the last digit."""
    again = read(write(value, unit, digits, trim=trim), unit)
    assert abs(again / value - 1) <= 0.5000001 * 10.0 ** (1 - digits)


@repeatable
@given(st.floats(0, 2000))
def test_temperatures_read_back_to_half_a_tenth(kelvin: float) -> None:
    text = write(max(kelvin, 0.1), "°C")
    assert abs(read(text, "°C") - max(kelvin, 0.1)) <= 0.0500001


@repeatable
@given(st.floats(-300, 300), st.sampled_from(["dB", "dB/Hz"]))
def test_decibels_read_back_to_their_decimals(value: float, unit: str) -> None:
    assert abs(read(write(value, unit), unit) - value) <= (0.00500001 if abs(value) < 100 else 0.0500001)


@repeatable
@given(st.floats(1e-30, 1e3))
def test_optical_power_in_dbm_reads_back(watts: float) -> None:
    assert read(dbm(watts, 9), "W") == pytest.approx(watts, rel=1e-9)
