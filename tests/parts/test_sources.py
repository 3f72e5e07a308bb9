from __future__ import annotations

from typing import Any

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.parts.diode import DiodeData
from opto_ckt.parts.laser import LaserData
from opto_ckt.parts.led import LedData
from tests.near import near

LASER = {
    "wavelength": "1310 nm",
    "plane": "facet",
    "threshold_current": "12 mA",
    "characteristic_temperature": "60 K",
    "slope_efficiency": "0.3 W/A",
    "turn_on_voltage": "0.9 V",
    "series_resistance": "5 Ω",
    "current_max": "60 mA",
    "power_max": "8 mW",
    "reverse_voltage_max": "2 V",
    "junction_to_case": "60 K/W",
    "case_max": "85 °C",
    "common": "none",
}
FORWARD = [{"current": "1 mA", "voltage": "1 V"}, {"current": "100 mA", "voltage": {"typ": "1.4 V", "max": "1.6 V"}}]
LED = {
    "wavelength": "850 nm",
    "forward": FORWARD,
    "power": [{"current": "50 mA", "power": "10 µW"}, {"current": "100 mA", "power": {"typ": "18 µW", "min": "12 µW"}}],
    "plane": "fibre",
    "lifetime": "3 ns",
    "capacitance": "55 pF",
    "current_max": "100 mA",
    "reverse_voltage_max": "1.8 V",
    "junction_to_ambient": "300 K/W",
    "junction_max": "110 °C",
}
DIODE = {"forward": FORWARD, "reverse_voltage_max": "30 V", "capacitance": "10 pF"}


def laser(drop: tuple[str, ...] = (), **fields: Any) -> LaserData:
    return LaserData.model_validate({key: value for key, value in LASER.items() if key not in drop} | fields)


def led(**fields: Any) -> LedData:
    return LedData.model_validate(LED | fields)


THRESHOLD = ("threshold_current", "characteristic_temperature")


def test_threshold_of_an_edge_emitter_grows_exponentially():
    assert laser().threshold_at(ROOM_TEMPERATURE) == near(12e-3)
    assert laser().threshold_at(np.array([ROOM_TEMPERATURE + 60])) == near(np.array([12e-3 * np.e]))
    assert laser().threshold_at(ROOM_TEMPERATURE, threshold=np.array([10e-3, 20e-3])) == near(np.array([10e-3, 20e-3]))


def test_threshold_of_a_surface_emitter_is_least_at_its_minimum():
    surface = laser(
        THRESHOLD, threshold_minimum="1.5 mA", threshold_minimum_temperature="20 °C", threshold_curvature="1e-4 1/K²"
    )
    assert surface.threshold_at(np.array([293.15, 393.15, 193.15])) == near(np.array([1.5e-3, 3e-3, 3e-3]))
    assert surface.threshold_figure.nominal == 1.5e-3


def test_threshold_through_points_keeps_its_characteristic_temperature():
    points = [
        {"temperature": "85 °C", "current": "40 mA"},
        {"temperature": "25 °C", "current": "10 mA"},
    ]
    listed = laser(THRESHOLD, threshold_points=points)
    assert listed.threshold_at(np.array([298.15, 328.15, 358.15])) == near(np.array([10e-3, 20e-3, 40e-3]))
    assert listed.threshold_at(418.15) == near(160e-3)
    assert listed.threshold_at(328.15, threshold=15e-3) == near(30e-3)
    assert listed.threshold_figure.nominal == 10e-3


def test_slope_follows_the_unit_of_its_coefficient():
    hot = np.array([ROOM_TEMPERATURE, ROOM_TEMPERATURE + 50])
    assert laser().slope_at(hot) == near(np.array([0.3, 0.3]))
    assert laser(slope_temperature="200 K").slope_at(hot) == near(np.array([0.3, 0.3 * np.exp(-0.25)]))
    falling = laser(slope_temperature="-0.4 %/K")
    assert falling.slope_at(hot) == near(np.array([0.3, 0.24]))
    assert falling.slope_at(hot, slope=0.1) == near(np.array([0.1, 0.08]))
    assert falling.slope_at(ROOM_TEMPERATURE + 300) == 0.0


def test_forward_voltage_of_a_laser():
    assert laser().forward_voltage_at(np.array([20e-3, 40e-3])) == near(np.array([1.0, 1.1]))
    assert laser().forward_voltage_at(20e-3, turn_on_voltage=1.0, series_resistance=10.0) == near(1.2)
    listed = laser(("turn_on_voltage", "series_resistance"), forward=FORWARD)
    assert listed.forward_voltage_at(10e-3) == near(1.2)


def test_forward_voltage_runs_through_the_points_logarithmically_then_straight():
    part = DiodeData.model_validate(DIODE)
    assert part.forward_voltage_at(np.array([1e-3, 10e-3, 100e-3])) == near(np.array([1.0, 1.2, 1.4]))
    assert part.forward_voltage_at(199e-3) == near(1.8)
    assert part.forward_voltage_at(0.1e-3) == near(0.8)
    assert part.forward_voltage_at(0.0) == 0.0


def test_position_moves_between_the_limits_of_the_sheet():
    part = DiodeData.model_validate(DIODE | {"forward_voltage_temperature": "-2 mV/K"})
    assert part.forward_voltage_at(100e-3, position=np.array([-1.0, 0.0, 0.5, 1.0])) == near(
        np.array([1.4, 1.4, 1.5, 1.6])
    )
    assert part.forward_voltage_at(100e-3, ROOM_TEMPERATURE + 50) == near(1.3)


def test_one_point_alone_is_kept():
    part = DiodeData.model_validate(DIODE | {"forward": FORWARD[:1]})
    assert part.forward_voltage_at(np.array([0.0, 1.0])) == near(np.array([1.0, 1.0]))


@given(st.floats(0, 1), st.floats(0, 1))
def test_more_current_never_takes_less_voltage(first: float, second: float):
    low, high = sorted((first, second))
    part = led()
    assert part.forward_voltage_at(low) <= part.forward_voltage_at(high) + 1e-12


def test_power_of_an_led():
    assert led().power_at(np.array([0.0, 25e-3, 75e-3, 100e-3, 125e-3])) == near(
        np.array([0, 5e-6, 14e-6, 18e-6, 22e-6])
    )
    assert led().power_at(100e-3, position=np.array([-1.0, 1.0])) == near(np.array([12e-6, 18e-6]))


@pytest.mark.parametrize(
    ("coefficient", "share"), [("-1 %/K", np.exp(-0.5)), ("-0.02 dB/K", 10**-0.1)], ids=["relative", "decibel"]
)
def test_power_of_a_hot_led(coefficient: str, share: float):
    part = led(power_temperature=coefficient)
    assert part.power_at(50e-3, ROOM_TEMPERATURE + 50) == near(10e-6 * share)
    assert part.power_at(50e-3, ROOM_TEMPERATURE) == near(10e-6)


def test_a_forward_voltage_that_falls_with_current_is_refused():
    """Points are put in order of their currents first."""
    points = [{"current": "60 mA", "voltage": "1.7 V"}, {"current": "5 mA", "voltage": "1.8 V"}]
    with pytest.raises(ValueError, match=r"1\.70 V at 60\.0 mA is not above 1\.80 V at 5\.00 mA"):
        led(forward=points)


def test_more_light_than_power_fed_into_the_led_is_refused():
    with pytest.raises(ValueError, match=r"1\.00 W of light at 50\.0 mA is no less than the 6\d\.\d mW fed"):
        led(power=[{"current": "50 mA", "power": "1 W"}])
