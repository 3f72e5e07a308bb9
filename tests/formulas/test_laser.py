"""Laser laws against one another, and self-heating against direct iteration."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from opto_ckt.formulas.laser import current_for_power, forward_voltage, optical_power
from opto_ckt.formulas.laser_dynamics import (
    damping_rate,
    intensity_noise_floor,
    modulation_response,
    relaxation_frequency,
    relaxation_quality,
)
from opto_ckt.formulas.laser_heating import settle_at_current, settle_at_power
from opto_ckt.formulas.laser_temperature import (
    characteristic_temperature,
    linear_slope,
    slope_coefficient,
    threshold_current,
    vcsel_threshold,
)
from opto_ckt.formulas.noise import shot_noise
from opto_ckt.formulas.second_order import bandwidth
from tests.near import near


def vcsel(temperature):
    return vcsel_threshold(minimum=1e-3, junction_temperature=temperature, minimum_temperature=310.0, curvature=1.1e-4)


def fading(temperature):
    return linear_slope(
        slope=0.3, junction_temperature=temperature, reference_temperature=298.15, slope_coefficient=-4.2e-3
    )


HEATING = {"turn_on_voltage": 1.5, "series_resistance": 40.0, "threshold": vcsel, "slope": fading}


@given(st.floats(230, 370), st.floats(0.1e-3, 1.5e-3), st.floats(200, 2000))
def test_settled_laser_agrees_with_its_own_heat(case, power, resistance):
    point = settle_at_power(power=power, case_temperature=case, thermal_resistance=resistance, **HEATING)
    t = point.junction_temperature
    voltage = forward_voltage(turn_on_voltage=1.5, current=point.current, series_resistance=40.0)
    assert t == pytest.approx(case + resistance * (voltage * point.current - power), abs=1e-5)
    assert point.current == near(current_for_power(power=power, threshold=vcsel(t), slope=fading(t)))
    held = settle_at_current(current=point.current, case_temperature=case, thermal_resistance=resistance, **HEATING)
    assert held.power == near(power, rel=1e-5)
    assert held.junction_temperature == pytest.approx(t, abs=1e-4)


def test_lanes_are_settled_one_by_one():
    case = np.array([250.0, 300.0, 350.0])
    known = {"power": 1e-3, "thermal_resistance": 1500.0} | HEATING
    lanes = settle_at_power(case_temperature=case, **known)
    singly = [settle_at_power(case_temperature=float(t), **known).current for t in case]
    np.testing.assert_allclose(lanes.current, singly, rtol=1e-12)
    held = settle_at_current(current=lanes.current, case_temperature=case, thermal_resistance=1500.0, **HEATING)
    np.testing.assert_allclose(held.power, 1e-3, rtol=1e-6)


def test_runaway_of_a_linear_slope_is_lost_not_negative():
    """Beyond the temperature at which a linear slope has fallen to nothing there is no laser."""
    point = settle_at_power(power=5e-3, case_temperature=380.0, thermal_resistance=3000.0, **HEATING)
    assert np.isnan(point.current)
    assert np.isnan(point.power)


def test_dark_laser_at_a_small_current():
    point = settle_at_current(current=0.5e-3, case_temperature=300.0, thermal_resistance=1000.0, **HEATING)
    assert point.power == 0.0
    assert point.junction_temperature == near(300.0 + 1000.0 * 0.5e-3 * (1.5 + 0.02))


def test_constants_come_back_from_two_points():
    law = {"threshold": 10e-3, "reference_temperature": 298.15, "characteristic_temperature": 60.0}
    thresholds = [threshold_current(junction_temperature=t, **law) for t in (290.0, 340.0)]
    assert characteristic_temperature(
        first_threshold=thresholds[0], second_threshold=thresholds[1], first_temperature=290.0, second_temperature=340.0
    ) == near(60.0)
    coefficient = slope_coefficient(
        first_slope=fading(298.15), second_slope=fading(340.0), first_temperature=298.15, second_temperature=340.0
    )
    assert coefficient == near(-4.2e-3)


def test_linear_slope_loses_its_coefficient_a_kelvin():
    assert fading(298.15 + 50) == near(0.3 * (1 - 0.21))


def test_power_and_current_invert():
    current = current_for_power(power=2e-3, threshold=10e-3, slope=0.3)
    assert optical_power(current=current, threshold=10e-3, slope=0.3) == near(2e-3)


def test_relaxation_is_the_two_pole_low_pass():
    f_r = relaxation_frequency(stated_frequency=4e9, stated_current=20e-3, current=50e-3, threshold=10e-3)
    assert f_r == near(8e9)
    gamma = damping_rate(relaxation_frequency=f_r, damping_factor=0.3e-9, lifetime=1e-9)
    assert gamma == near(0.3e-9 * 64e18 + 1e9)
    edge = bandwidth(natural_frequency=f_r, quality=relaxation_quality(relaxation_frequency=f_r, damping_rate=gamma))
    assert modulation_response(frequency=edge, relaxation_frequency=f_r, damping_rate=gamma) == near(0.5**0.5)


def test_intensity_noise_floor_is_shot_noise():
    assert intensity_noise_floor(photocurrent=1e-3) ** 0.5 * 1e-3 == near(shot_noise(current=1e-3))
