from __future__ import annotations

import math

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opto_ckt.units import UnitError, known, read, si_unit, write
from opto_ckt.units.table import UNITS, spellings

repeatable = settings(derandomize=True, deadline=None)  # same cases on every run, however slow the machine

READINGS = [
    ("3.3 V", "V", 3.3),
    ("3.3V", "V", 3.3),
    ("+5 V", "V", 5.0),
    ("-5 V", "V", -5.0),
    ("\u22125 V", "V", -5.0),
    (".5 V", "V", 0.5),
    ("1e-13 F", "F", 1e-13),
    ("0.36 pF", "F", 3.6e-13),
    ("230 MHz", "Hz", 230e6),
    ("230 mHz", "Hz", 0.23),
    ("10 kΩ", "Ω", 10e3),
    ("10 k\u2126", "Ω", 10e3),
    ("10 kohm", "Ω", 10e3),
    ("10 kOhm", "Ω", 10e3),
    ("10 ohms", "Ω", 10.0),
    ("1 MΩ", "Ω", 1e6),
    ("1 mΩ", "Ω", 1e-3),
    ("4k7", "Ω", 4700.0),
    ("4K7", "Ω", 4700.0),
    ("4k7Ω", "Ω", 4700.0),
    ("2R2", "Ω", 2.2),
    ("R47", "Ω", 0.47),
    ("R005", "Ω", 0.005),
    ("5L0", "Ω", 0.005),
    ("470R", "Ω", 470.0),
    ("47K3", "Ω", 47300.0),
    ("4M7", "Ω", 4.7e6),
    ("10k0", "Ω", 10e3),
    ("10p", "F", 10e-12),
    ("4n7", "F", 4.7e-9),
    ("1u0", "F", 1e-6),
    ("4u7", "H", 4.7e-6),
    ("1310 nm", "m", 1310e-9),
    ("62.5 um", "m", 62.5e-6),
    ("3 cm", "m", 0.03),
    ("0.2 mm²", "m²", 0.2e-6),
    ("0.2 mm^2", "m²", 0.2e-6),
    ("1 cm²", "m²", 1e-4),
    ("25 °C", "°C", 298.15),
    ("25 degC", "°C", 298.15),
    ("25 ℃", "°C", 298.15),
    ("77 K", "°C", 77.0),
    ("0 K", "°C", 0.0),
    ("10 K", "K", 10.0),
    ("150 K/W", "K/W", 150.0),
    ("150 °C/W", "K/W", 150.0),
    ("1.5 K/mW", "K/W", 1500.0),
    ("6.5 nV/√Hz", "V/√Hz", 6.5e-9),
    ("6.5 nV/rtHz", "V/√Hz", 6.5e-9),
    ("6.5 nV/sqrt(Hz)", "V/√Hz", 6.5e-9),
    ("6.5 nV/Hz^0.5", "V/√Hz", 6.5e-9),
    ("6.5 nV / √Hz", "V/√Hz", 6.5e-9),
    ("2 fA/√Hz", "A/√Hz", 2e-15),
    ("5 pW/√Hz", "W/√Hz", 5e-12),
    ("0.9 A/W", "A/W", 0.9),
    ("0.9 mA/mW", "A/W", 0.9),
    ("300 mW/A", "W/A", 0.3),
    ("0.3 mW/mA", "W/A", 0.3),
    ("40 mA/V", "A/V", 0.04),
    ("40 mS", "A/V", 0.04),
    ("24 kΩ", "V/A", 24e3),
    ("24 V/mA", "V/A", 24e3),
    ("310 V/µs", "V/s", 310e6),
    ("310 V/us", "V/s", 310e6),
    ("-2 mV/°C", "V/K", -2e-3),
    ("100 ppm/K", "1/K", 100e-6),
    ("100 ppm/°C", "1/K", 100e-6),
    ("0.5 %/K", "1/K", 0.005),
    ("1e-4 1/K", "1/K", 1e-4),
    ("80 ppm/K²", "1/K²", 80e-6),
    ("0.3 nm/K", "m/K", 0.3e-9),
    ("2 nC", "C", 2e-9),
    ("10 Mbit/s", "bit/s", 10e6),
    ("10 Mb/s", "bit/s", 10e6),
    ("1.25 Gbit/s", "bit/s", 1.25e9),
    ("100 dB", "V/V", 1e5),
    ("200 V/mV", "V/V", 2e5),
    ("10", "V/V", 10.0),
    (10, "V/V", 10.0),
    ("10 dB", "W/W", 10.0),
    (9.5, "W/W", 9.5),
    ("40 %", "W/W", 0.4),
    ("-3 dB", "dB", -3.0),
    ("-0.02 dB/K", "dB/K", -0.02),
    ("-145 dB/Hz", "dB/Hz", -145.0),
    ("5 %", "1", 0.05),
    ("50 ppm", "1", 50e-6),
    (1e-9, "1", 1e-9),
    (3, "1", 3.0),
    ("65°", "°", 65.0),
    ("65 deg", "°", 65.0),
    ("-30 dBm", "W", 1e-6),
    ("0 dBm", "W", 1e-3),
    ("5 ns", "s", 5e-9),
    ("2 min", "s", 120.0),
    ("1 h", "s", 3600.0),
    ("\u00a05\u202fV ", "V", 5.0),
]

REFUSALS = [
    ("1M", "Ω", "two ways"),
    ("1m", "Ω", "two ways"),
    ("1m", "F", "write '1 mF'"),
    ("1M", "Hz", "write '1 MHz'"),
    ("4.7k", "Ω", "'4.7 kΩ' or '4k7'"),
    ("10k", "Ω", "'10 kΩ' or '10k0'"),
    ("10 K", "Ω", "'10 kΩ' or '10k0'"),
    ("470K", "Ω", "'470 kΩ' or '470k0'"),
    ("4m7", "Ω", "unknown unit"),
    ("10 KΩ", "Ω", "write 'kΩ'"),
    ("1meg", "Ω", "write M"),
    ("1,5 kΩ", "Ω", "write 1.5 kΩ"),
    ("1,500 Ω", "Ω", "1.500 or 1500"),
    ("1.234,5 Ω", "Ω", "comma"),
    ("1 000 Ω", "Ω", "thousands separator"),
    ("1'000 Ω", "Ω", "thousands separator"),
    ("1_000 Ω", "Ω", "thousands separator"),
    ("10", "Ω", "has no unit"),
    (10, "Ω", "has no unit"),
    (0, "V", "has no unit"),
    (4.7, "F", "has no unit"),
    (10**400, "1", "finite"),
    (math.nan, "1", "finite"),
    (math.inf, "1", "finite"),
    (True, "1", "not a value"),
    ("230 MHx", "Hz", "unknown unit 'MHx'; a figure in Hz is expected, such as '230 MHz'"),
    ("230 KHz", "Hz", "write 'kHz'"),
    ("230 mhz", "Hz", "write 'mHz' or 'MHz'"),
    ("nan V", "V", "does not begin with a number"),
    ("inf V", "V", "does not begin with a number"),
    ("1e999 V", "V", "beyond any figure"),
    ("1e-999 V", "V", "beyond any figure"),
    ("1e9999 dBm", "W", "beyond any figure"),
    ("1e99999 dB", "V/V", "beyond any figure"),
    ("1e" + "9" * 5000 + " V", "V", "too long"),
    ("", "V", "is empty"),
    ("  ", "V", "is empty"),
    ("5 V V", "V", "unknown unit"),
    ("5 A", "V", "unknown unit 'A'"),
    ("5 🙂", "V", "unknown unit"),
    ("🙂", "V", "does not begin with a number"),
    ("٥ V", "V", "does not begin with a number"),
    ("3-5 V", "V", "two numbers"),
    ("5 ± 1 V", "V", "two numbers"),
    ("1/2 V", "V", "two numbers"),
    ("0x10 V", "V", "unknown unit"),
    ("--5 V", "V", "does not begin with a number"),
    ("10 °C", "K", "temperature difference"),
    ("25", "°C", "needs °C or K"),
    ("25 C", "°C", "coulomb"),
    ("-300 °C", "°C", "absolute zero"),
    ("-1 K", "°C", "absolute zero"),
    ("100 C/W", "K/W", "coulomb"),
    ("10 Mbaud", "bit/s", "symbols"),
    ("10 MB/s", "bit/s", "byte"),
    ("10 MBps", "bit/s", "byte"),
    ("5 S", "s", "siemens"),
    ("3 dB", "Ω", "unknown unit"),
    ("5", "dB", "write dB"),
    ("470 R", "Ω", "without a space"),
    ("2R2", "V", "unknown unit"),
]


@pytest.mark.parametrize(("text", "unit", "value"), READINGS)
def test_reads(text: str | float, unit: str, value: float) -> None:
    assert read(text, unit) == pytest.approx(value, rel=1e-15, abs=0)


@pytest.mark.parametrize(("text", "unit", "reason"), REFUSALS)
def test_refuses(text: str | float, unit: str, reason: str) -> None:
    with pytest.raises(UnitError) as refusal:
        read(text, unit)
    message = str(refusal.value)
    assert reason in message
    assert "is expected, such as '" in message
    assert len(message) < 250


@pytest.mark.parametrize("unit", [unit for unit in UNITS if any("µ" in spelling for spelling in spellings(unit))])
def test_micro_signs_alike(unit: str) -> None:
    for spelling in spellings(unit):
        if "µ" in spelling:
            texts = {f"7 {spelling.replace('µ', sign)}" for sign in ("u", "\u00b5", "\u03bc")}
            assert len({read(text, unit) for text in texts}) == 1


@pytest.mark.parametrize("unit", UNITS)
def test_every_spelling_reads_as_its_power_of_ten(unit: str) -> None:
    for spelling, (multiple, exponent) in spellings(unit).items():
        assert read(f"1 {spelling}", unit) == multiple * float(f"1e{exponent}")


@pytest.mark.parametrize("unit", UNITS)
def test_every_example_reads(unit: str) -> None:
    for example in UNITS[unit].example.split(" or "):
        assert math.isfinite(read(example, unit))


@pytest.mark.parametrize("unit", UNITS)
def test_another_case_is_never_taken_for_the_right_one(unit: str) -> None:
    """Where case alone tells two spellings apart, each keeps its own meaning; where none does, the text is refused."""
    for spelling in spellings(unit):
        changed = spelling.swapcase()
        if changed != spelling and changed not in spellings(unit) and changed not in UNITS[unit].curves:
            with pytest.raises(UnitError):
                read(f"1 {changed}", unit)


def test_mistakes_in_the_program_are_not_the_users() -> None:
    assert not known("furlong")
    for call in (lambda: read("1 furlong", "furlong"), lambda: write(1.0, "furlong"), lambda: si_unit("furlong")):
        with pytest.raises(KeyError):
            call()


def test_si_units_are_their_own() -> None:
    for unit in UNITS:
        inside = si_unit(unit)
        assert known(inside)
        assert si_unit(inside) == inside


@repeatable
@given(st.text(max_size=30), st.sampled_from(sorted(UNITS)))
def test_any_text_is_read_or_refused(text: str, unit: str) -> None:
    try:
        value = read(text, unit)
    except UnitError:
        return
    assert math.isfinite(value)


@repeatable
@given(
    st.from_regex(r"[-+]?[0-9.,]{1,6}(e[-+]?[0-9]{1,4})? ?[kKMmuµnpRLΩFVHzdB/√%°C]{0,5}", fullmatch=True),
    st.sampled_from(sorted(UNITS)),
)
def test_near_misses_are_read_or_refused(text: str, unit: str) -> None:
    try:
        value = read(text, unit)
    except UnitError:
        return
    assert math.isfinite(value)
