"""Figures that standards and makers print about the parts around the circuit."""

from __future__ import annotations

import math
from itertools import pairwise

import pytest

from opto_ckt.preferred import (
    CHIP_RESISTORS,
    DC_BIAS_MEASUREMENTS,
    DIELECTRICS,
    SERIES,
    derated_power,
    excess_noise_index,
    nearest,
    tolerance_letter,
    working_voltage,
)
from opto_ckt.units import dbm, read, read_rkm


@pytest.mark.parametrize(("series", "digits", "total"), [
    ("E24", 10, 901), ("E48", 100, 18313), ("E96", 100, 37070), ("E192", 100, 74599),
])  # fmt: skip
def test_sum_of_one_decade(series: str, digits: int, total: int) -> None:
    """IEC 60063, whole tables; sums of one decade in integers."""
    assert sum(round(digits * mantissa) for mantissa in SERIES[series]) == total


def test_the_one_exception_of_e192() -> None:
    """IEC 60063: the rule gives 9.19 for k = 185, the table has 9.20; it is the only one in E48, E96 and E192."""
    assert round(10 ** (185 / 192), 2) == 9.19
    assert SERIES["E192"][185] == 9.20
    for count in (48, 96, 192):
        exceptions = [k for k, mantissa in enumerate(SERIES[f"E{count}"]) if mantissa != round(10 ** (k / count), 2)]
        assert exceptions == ([185] if count == 192 else [])


def test_the_exceptions_of_e24() -> None:
    """IEC 60063: eight values of E24 are not those of the rule."""
    ruled = [round(10 * 10 ** (k / 24)) for k in range(24)]
    tabled = [round(10 * mantissa) for mantissa in SERIES["E24"]]
    exceptions = [digits for digits, rule in zip(tabled, ruled, strict=True) if digits != rule]
    assert exceptions == [27, 30, 33, 36, 39, 43, 47, 82]


def test_nearest_by_ratio() -> None:
    """Computed on the tables of IEC 60063: 4.7 kΩ is no value of E96."""
    assert nearest(1234, "E96") == 1240
    assert nearest(4700, "E96") == 4750


@pytest.mark.parametrize(("series", "step", "worst"), [("E96", (1.33, 1.37), 0.014926), ("E24", (1.3, 1.5), 0.074172)])
def test_worst_rounding(series: str, step: tuple[float, float], worst: float) -> None:
    """Computed on the tables of IEC 60063: half of the widest step, in ratio."""
    row = (*SERIES[series], 10.0)
    assert max(pairwise(row), key=lambda pair: pair[1] / pair[0]) == step
    midpoint = math.sqrt(step[0] * step[1])
    assert nearest(midpoint * (1 - 1e-9), series) == step[0]
    assert nearest(midpoint * (1 + 1e-9), series) == step[1]
    assert midpoint / step[0] - 1 == pytest.approx(worst, abs=5e-7)


@pytest.mark.parametrize(("code", "value"), [
    ("R47", 0.47), ("4R7", 4.7), ("470R", 470), ("4K7", 4700), ("47K3", 47300), ("4M7", 4.7e6),
])  # fmt: skip
def test_resistor_codes(code: str, value: float) -> None:
    """IEC 60062, examples of the table in Wikipedia, "RKM code"."""
    assert read_rkm(code, "Ω") == value
    assert read(code, "Ω") == value


@pytest.mark.parametrize(("code", "value"), [("10p", 10e-12), ("4n7", 4.7e-9), ("1u0", 1e-6)])
def test_capacitor_codes(code: str, value: float) -> None:
    """IEC 60062, examples of an article on the RKM code (probsee.com)."""
    assert read_rkm(code, "F") == value
    assert read(code, "F") == value


def test_tolerance_letters() -> None:
    """IEC 60062, as used in the order codes of the Yageo RC_L data sheet: B, D, F, J."""
    assert [tolerance_letter(tolerance) for tolerance in (0.001, 0.005, 0.01, 0.05)] == ["B", "D", "F", "J"]


def test_derating_of_an_0603_at_100_celsius() -> None:
    """Linear from 70 °C to 155 °C, curve in thick-film type sheets; 0.1 W is the raised grade of the size."""
    chip = CHIP_RESISTORS["0603"]
    left = derated_power(0.1, read("100 °C", "°C"), chip.knee_temperature, chip.zero_power_temperature)
    assert left == pytest.approx(0.0647059, abs=5e-8)


def test_working_voltage_of_an_0603() -> None:
    """Multicomp type sheet, 0603: 1/16 W, 50 V; above 40 kΩ the voltage rules."""
    assert working_voltage("0603", 10e3) == 25
    assert working_voltage("0603", 40e3) == working_voltage("0603", 1e6) == 50


@pytest.mark.parametrize(("size", "resistance", "corner", "half_digit"), [
    ("0402", 100e3, 60.746e6, 500.0), ("0603", 1e6, 3.9492e6, 100.0),
])  # fmt: skip
def test_corner_of_a_bare_chip(size: str, resistance: float, corner: float, half_digit: float) -> None:
    """Vishay, "Frequency response of thin film chip resistors", table 1: 0.0262 pF for 0402, 0.0403 pF for 0603.

    The note prints the capacitances; the corners 1/(2π R C) are computed from them.
    """
    capacitance = CHIP_RESISTORS[size].body_capacitance
    assert 1 / (2 * math.pi * resistance * capacitance) == pytest.approx(corner, abs=half_digit)


def test_loss_under_dc_voltage() -> None:
    """M. Fortunato, EDN, 26 November 2012: 4.7 µF, 16 V, X7R at 12 V; 0805 loses 68 %, 1206 28 %."""
    changes = {point.size: point.change for point in DC_BIAS_MEASUREMENTS if point.bias == 12}
    assert changes["0805"] == pytest.approx(-0.68085, abs=5e-6)
    assert changes["1206"] == pytest.approx(-0.28, abs=5e-3)
    assert not any(DIELECTRICS[point.dielectric].fit_for_signal for point in DC_BIAS_MEASUREMENTS)


def test_excess_noise_of_a_thick_film_resistor() -> None:
    """IEC 60115-1, 4.12, limit as printed in the Yageo RC0603 data sheet: 46 dB from 100 kΩ to 1 MΩ.

    With 60 mV across it, S = (V NI)²/(f ln 10) is 7.89 µV/√Hz at 1 Hz; the unit of the limit, 1 µV per volt and
    decade, is from memory.
    """
    index = excess_noise_index(470e3)
    assert index == 46
    density = 0.06 * 1e-6 * 10 ** (index / 20) / math.sqrt(1.0 * math.log(10))
    assert density == pytest.approx(7.8894e-6, abs=5e-11)


def test_power_in_decibels_above_a_milliwatt() -> None:
    """Definition: 50 µW is -13.0103 dBm."""
    assert dbm(50e-6, 4) == "-13.0103 dBm"
    assert read("-13.0103 dBm", "W") == pytest.approx(50e-6, rel=5e-5 * math.log(10) / 10)
