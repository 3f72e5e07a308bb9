"""Diode law, its inverse and its fit."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.special import lambertw, wrightomega

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.diode import (
    current_at_voltage,
    dynamic_resistance,
    fit,
    forward_voltage,
    lambert,
    voltage_drift,
)
from tests.near import near

decades = st.floats(-25, -6).map(lambda exponent: 10**exponent)
currents = st.floats(-9, 0.5).map(lambda exponent: 10**exponent)


def test_lambert_against_scipy():
    arguments = np.geomspace(1e-300, 1e300, 2001)
    np.testing.assert_allclose(lambert(np.log(arguments)), lambertw(arguments).real, rtol=1e-11)
    logarithms = np.linspace(-600, 1e4, 20001)
    np.testing.assert_allclose(lambert(logarithms), wrightomega(logarithms), rtol=1e-13)


@given(decades, st.floats(1, 3), st.floats(-3, 3).map(lambda exponent: 10**exponent), currents, st.floats(230, 400))
def test_inverse_of_the_law(saturation, emission, series, current, temperature):
    law = {
        "saturation_current": saturation,
        "emission": emission,
        "series_resistance": series,
        "temperature": temperature,
    }
    voltage = forward_voltage(current=current, **law)
    assert current_at_voltage(voltage=voltage, **law) == near(current, rel=1e-9)


def test_inverse_near_zero_and_in_reverse():
    law = {"saturation_current": 1e-9, "emission": 1.5, "series_resistance": 10.0, "temperature": 300.0}
    voltages = np.array([-0.2, -1e-3, 0.0, 1e-6, 1e-3])
    found = current_at_voltage(voltage=voltages, **law)
    np.testing.assert_allclose(forward_voltage(current=found, **law), voltages, rtol=1e-6, atol=1e-9)


def test_dynamic_resistance_is_the_slope():
    law = {"saturation_current": 1e-18, "emission": 2.0, "series_resistance": 3.0, "temperature": 300.0}
    rise = forward_voltage(current=20.001e-3, **law) - forward_voltage(current=19.999e-3, **law)
    assert dynamic_resistance(current=20e-3, **law) == near(rise / 2e-6, rel=1e-6)


def test_drift_of_a_silicon_junction():
    """Derivative of V_j at constant current with I_s ∝ T³ exp(-E_g/kT): -1.8 mV/K at 0.65 V."""
    gap = 1.12 * ELEMENTARY_CHARGE

    def junction(temperature):
        thermal = BOLTZMANN * temperature / ELEMENTARY_CHARGE
        return thermal * (np.log(1e9 * 300.0**3 / temperature**3) + gap / (BOLTZMANN * temperature)) - 0.9

    def at_zero(temperature):
        return junction(temperature) + 0.9

    slope = (at_zero(300.01) - at_zero(299.99)) / 0.02
    drift = voltage_drift(junction_voltage=at_zero(300.0), band_gap=gap, temperature=300.0)
    assert drift == near(slope, rel=1e-6)
    assert voltage_drift(junction_voltage=0.65, band_gap=gap, temperature=300.0) == pytest.approx(-1.8e-3, abs=0.05e-3)


@given(decades, st.floats(1.05, 3), st.floats(0.1, 20))
def test_three_points_give_the_law_back(saturation, emission, series):
    points = np.array([1e-3, 20e-3, 100e-3])
    voltages = forward_voltage(
        current=points, saturation_current=saturation, emission=emission, series_resistance=series, temperature=298.15
    )
    law = fit(currents=list(points), voltages=list(voltages), temperature=298.15)
    assert law.emission == near(emission, rel=1e-4)
    assert law.series_resistance == pytest.approx(series, rel=1e-3, abs=1e-3)
    assert law.misfit < 1e-6


def test_fit_stays_physical_on_rounded_points():
    straight = fit(currents=[0.02, 0.06, 0.1], voltages=[1.5, 1.65, 1.8], temperature=298.15)
    assert straight.emission == 1.0
    assert straight.misfit == pytest.approx(5.0e-3, abs=0.1e-3)
    bent = fit(currents=[1e-3, 10e-3, 100e-3], voltages=[1.5, 1.7, 1.85], temperature=298.15)
    assert bent.series_resistance == 0.0
    assert bent.emission > 1


def test_fit_of_two_points_and_of_one():
    law = fit(currents=[20e-3, 100e-3], voltages=[1.5, 1.8], temperature=298.15)
    assert law.emission == 2.0
    assert law.misfit < 1e-12
    close = fit(currents=[1e-3, 100e-3], voltages=[1.5, 1.7], temperature=298.15)
    assert close.series_resistance == 0.0
    assert close.emission < 2.0
    assert close.misfit < 1e-12
    one = fit(currents=[20e-3], voltages=[1.5], temperature=298.15)
    assert (one.emission, one.series_resistance) == (2.0, 0.0)
    assert one.misfit < 1e-12


@pytest.mark.parametrize(
    ("points", "volts"), [([], []), ([1e-3], [1.5, 1.6]), ([0.0], [1.5]), ([1e-3, 2e-3], [1.6, 1.5]), ([1e-3], [0.0])]
)
def test_fit_refuses(points, volts):
    with pytest.raises(ValueError, match="expected"):
        fit(currents=points, voltages=volts, temperature=298.15)
