from __future__ import annotations

import math
from itertools import pairwise

import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opto_ckt.preferred import (
    ABSOLUTE_LETTERS,
    CHIP_RESISTORS,
    CLASS_1_VOLTAGE_FACTOR,
    DIELECTRICS,
    POWER_RATINGS,
    RELATIVE_LETTERS,
    SERIES,
    VOLTAGE_RATINGS,
    Series,
    commonness,
    decade,
    derated_power,
    excess_noise_index,
    nearest,
    neighbours,
    power_rating_above,
    series_for_tolerance,
    tolerance_letter,
    values,
    voltage_rating_above,
    working_voltage,
)

repeatable = settings(derandomize=True, deadline=None)  # same cases on every run, however slow the machine

NAMES = st.sampled_from(list(SERIES))
POSITIVE = st.floats(1e-13, 1e10)
DRAWER = (10.0, 22.0, 47.0, 100.0, 1e3, 4.7e3)


@pytest.mark.parametrize("name", SERIES)
def test_a_decade_has_as_many_values_as_its_name_says(name: str) -> None:
    row = decade(name)
    assert len(row) == int(name[1:])
    assert row[0] == 1.0
    assert all(1 <= low < high < 10 for low, high in pairwise(row))


def test_which_series_hold_which() -> None:
    nested = [("E3", "E6"), ("E6", "E12"), ("E12", "E24"), ("E48", "E96"), ("E96", "E192")]
    assert all(set(decade(coarse)) <= set(decade(fine)) for coarse, fine in nested)
    assert not set(decade("E24")) <= set(decade("E96"))


def test_values_are_the_floats_that_an_engineer_writes() -> None:
    assert values("E24", 3.3e-13, 4.0e-13) == [3.3e-13, 3.6e-13, 3.9e-13]
    assert values("E96", 4.6e3, 4.8e3) == [4640.0, 4750.0]
    assert all(value == float(f"{value:.3g}") for value in values("E192", 1e-13, 1e9))


def test_windows() -> None:
    assert values("E6", 10, 10) == [10.0]
    assert values("E6", 11, 14) == []
    assert values("E6", 20, 10) == []
    assert values(DRAWER, 20, 100) == [22.0, 47.0, 100.0]
    for low, high in ((0, 1), (-1, 1), (1, math.inf), (math.nan, 1)):
        with pytest.raises(ValueError, match="positive and bounded"):
            values("E6", low, high)


@pytest.mark.parametrize("name", ["E7", "e96", ""])
def test_other_names_are_refused(name: str) -> None:
    for call in (lambda: decade(name), lambda: values(name, 1, 10), lambda: nearest(1.0, name)):
        with pytest.raises(ValueError, match="is no E series"):
            call()


def _distance(value: float, exact: float) -> float:
    return abs(math.log(value / exact))


@repeatable
@given(POSITIVE, NAMES | st.just(DRAWER))
def test_nearest_is_nearest_in_ratio(value: float, series: Series) -> None:
    found = nearest(value, series)
    around = DRAWER if isinstance(series, tuple) else values(series, value / 11, value * 11)
    assert _distance(found, value) <= min(_distance(other, value) for other in around) + 1e-11


@repeatable
@given(POSITIVE, NAMES | st.just(DRAWER), st.integers(1, 9), st.floats(1e-3, 1e3), st.floats(1, 1e4))
def test_neighbours_are_the_nearest_within_the_window(
    exact: float, series: Series, count: int, start: float, width: float
) -> None:
    low, high = exact * start, exact * start * width
    found = neighbours(exact, series, count, low, high)
    expected = sorted(values(series, low, high), key=lambda value: _distance(value, exact))[:count]
    found_distances, expected_distances = ([_distance(value, exact) for value in some] for some in (found, expected))
    assert found_distances == pytest.approx(expected_distances)
    assert all(low <= value <= high for value in found)
    assert len(set(found)) == len(found)


def test_neighbours_at_the_edges() -> None:
    assert neighbours(100.0, "E3", 5, 0, math.inf) == [100.0, 47.0, 220.0, 22.0, 470.0]
    assert neighbours(100.0, "E12", 3, 0, 100.0) == [100.0, 82.0, 68.0]
    assert neighbours(1.0, "E12", 2, 100.0, 1e3) == [100.0, 120.0]
    assert neighbours(100.0, "E12", 3, 101.0, 119.0) == []
    assert neighbours(100.0, "E12", 3, -2.0, -1.0) == []
    for exact in (0.0, -1e-13, math.inf, math.nan):
        with pytest.raises(ValueError, match="positive figure"):
            neighbours(exact, "E12", 3, 1.0, 10.0)
    with pytest.raises(ValueError, match="drawer"):
        nearest(1.0, ())


def test_commoner_is_coarser() -> None:
    ranked = (1e3, 1.5e3, 1.2e-9, 1.1e3, 1.05e-12, 1.02e3, 1.01e3, 1.03e3)
    assert [commonness(value) for value in ranked] == list(range(8))
    assert [commonness(value, DRAWER) for value in (47.0, 48.0)] == [0, 7]
    assert commonness(0.0) == commonness(-4.7) == commonness(math.inf) == 7


@repeatable
@given(NAMES, st.integers(-13, 9), st.integers(0, 191))
def test_no_value_is_rarer_than_its_series(name: str, power: int, index: int) -> None:
    row = decade(name)
    assert commonness(float(f"{row[index % len(row)]}e{power}")) <= list(SERIES).index(name)


def test_tolerances_and_series() -> None:
    assert [series_for_tolerance(value) for value in (0.001, 0.005, 0.01, 0.02, 0.03, 0.05, 0.1, 0.2, 0.3)] == [
        "E192", "E192", "E96", "E48", "E24", "E24", "E12", "E6", "E3",
    ]  # fmt: skip


def test_tolerance_letters_both_ways() -> None:
    assert all(tolerance_letter(value) == letter for letter, value in RELATIVE_LETTERS.items())
    assert all(tolerance_letter(value, absolute=True) == letter for letter, value in ABSOLUTE_LETTERS.items())
    assert tolerance_letter(0.03) == tolerance_letter(0.01, absolute=True) == ""


def test_larger_chips_bear_no_less() -> None:
    for small, large in pairwise(CHIP_RESISTORS.values()):
        assert small.power <= large.power
        assert small.voltage <= large.voltage
        assert small.body_capacitance <= large.body_capacitance
        if small.thermal_resistance and large.thermal_resistance:
            assert small.thermal_resistance > large.thermal_resistance


@repeatable
@given(st.floats(0, 1e3), st.floats(200, 500))
def test_derating_stays_within_nothing_and_all(power: float, ambient: float) -> None:
    left = derated_power(power, ambient, 343.15, 428.15)
    assert 0 <= left <= power
    assert left >= derated_power(power, ambient + 1, 343.15, 428.15)
    assert derated_power(power, 343.15, 343.15, 428.15) == power
    assert derated_power(power, 428.15, 343.15, 428.15) == 0


def test_working_voltage_turns_at_the_critical_resistance() -> None:
    chip = CHIP_RESISTORS["0805"]
    critical = chip.voltage**2 / chip.power
    assert working_voltage("0805", critical / 4) == pytest.approx(chip.voltage / 2)
    assert working_voltage("0805", critical * 4) == chip.voltage
    with pytest.raises(KeyError):
        working_voltage("0606", 1e3)


def test_ratings_above_a_stress() -> None:
    assert [power_rating_above(stress) for stress in (0.0, 0.025, 0.026, 0.5, 0.51)] == [0.05, 0.05, 0.0625, 1.0, None]
    assert power_rating_above(0.1, 1.0) == 0.1
    assert [voltage_rating_above(stress) for stress in (0.0, 5.0, 5.01, 500.0)] == [4.0, 10.0, 16.0, 1000.0]
    assert voltage_rating_above(501.0) is None
    assert voltage_rating_above(12.0, CLASS_1_VOLTAGE_FACTOR) == 16.0
    assert sorted(POWER_RATINGS) == list(POWER_RATINGS)
    assert sorted(VOLTAGE_RATINGS) == list(VOLTAGE_RATINGS)


def test_excess_noise_limits_rise_with_resistance() -> None:
    resistances = (0.0, 99.0, 100.0, 999.0, 1e3, 9e3, 10e3, 99e3, 100e3, 999e3, 1e6, 22e6)
    limits = [excess_noise_index(resistance) for resistance in resistances]
    assert limits == [10, 10, 20, 20, 30, 30, 40, 40, 46, 46, 48, 48]
    assert excess_noise_index(23e6) is None
    assert excess_noise_index(-1.0) is None


def test_dielectrics() -> None:
    c0g, x7r, y5v, u2j = (DIELECTRICS[code] for code in ("C0G", "X7R", "Y5V", "U2J"))
    assert DIELECTRICS["NP0"] == c0g
    assert (c0g.temperature_coefficient, c0g.temperature_coefficient_tolerance, c0g.ageing) == (0.0, 30e-6, (0.0, 0.0))
    assert c0g.change_high == pytest.approx(30e-6 * 100)
    assert u2j.change_low == pytest.approx(-870e-6 * 100)
    assert (x7r.temperature_low, x7r.temperature_high) == pytest.approx((218.15, 398.15), abs=1e-9)
    assert (x7r.change_low, x7r.change_high, x7r.ageing) == (-0.15, 0.15, (0.01, 0.04))
    assert (round(y5v.temperature_low, 9), y5v.change_low, y5v.ageing) == (243.15, -0.82, (0.06, 0.10))
    assert DIELECTRICS["X7S"].ageing is None
    assert [code for code, one in DIELECTRICS.items() if one.fit_for_signal] == ["C0G", "NP0", "U2J"]
