"""Power control: droop and its inverse, densities of ones, the start against plain integration."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st
from scipy.integrate import solve_ivp

from opto_ckt.formulas.laser_modulation import extinction_ratio, modulation_for_extinction
from opto_ckt.formulas.power_loop import (
    bandwidth_for_droop,
    integration_capacitance,
    loop_droop,
    monitor_pole,
    power_loop_bandwidth,
    set_resistance,
    startup,
)
from tests.near import near


@given(st.floats(1e-4, 0.5), st.floats(1e-9, 1e-3))
def test_droop_and_its_bandwidth_invert(droop, duration):
    bandwidth = bandwidth_for_droop(droop=droop, duration=duration)
    assert loop_droop(bandwidth=bandwidth, duration=duration) == near(droop, rel=1e-9)


def test_capacitance_gives_its_bandwidth_back():
    c = integration_capacitance(gain=0.8, resistance=100e3, bandwidth=2e3)
    assert power_loop_bandwidth(
        monitor_responsivity=0.4, slope=2.0, transfer=1.0, resistance=100e3, capacitance=c
    ) == near(2e3)


@given(st.floats(1.5, 50), st.floats(0.1, 0.9))
def test_levels_of_any_mark_density(ratio, density):
    """P_av = m P1 + (1 - m) P0, written out."""
    low = 1.0 / (1 + density * (ratio - 1))
    current = modulation_for_extinction(power=1.0, extinction_ratio=ratio, mark_density=density, slope=0.3)
    assert 0.3 * current == near((ratio - 1) * low, rel=1e-9)
    assert extinction_ratio(power=1.0, modulation_current=current, mark_density=density, slope=0.3) == near(ratio)


def test_set_resistor_and_pole_by_hand():
    r = set_resistance(reference=1.25, monitor_responsivity=0.5, power=0.5e-3)
    assert r == near(5e3)
    assert monitor_pole(resistance=r, capacitance=20e-12) == near(1 / (2 * np.pi * 1e-7))


@pytest.mark.parametrize("soft", [0.3e-3, 1e-3, 5e-3])
@pytest.mark.parametrize("gain", [0.3, 1.0, 4.0])
@pytest.mark.parametrize("threshold", [0.2, 0.9, 2.5])
def test_start_agrees_with_plain_integration(soft, gain, threshold):
    """Integrator with the set level on its + input, laser dark below threshold."""
    unit = 0.4e-3

    def error(t, wound):
        level = -np.expm1(-t / soft)
        light = max(gain * (level + wound[0] - threshold), 0.0)
        return [(level - light) / unit]

    times = np.linspace(0, 60e-3, 60001)
    wound = solve_ivp(error, (0, times[-1]), [0.0], t_eval=times, rtol=1e-9, atol=1e-12, max_step=2e-5).y[0]
    light = np.maximum(gain * (-np.expm1(-times / soft) + wound - threshold), 0.0)
    by_hand = times[int(np.argmax(light >= 0.95))]
    found = startup(
        soft_start=np.array(soft),
        integration=np.array(unit),
        gain=np.array(gain),
        threshold=np.array(threshold),
        fraction=0.95,
    )
    assert float(found) == pytest.approx(by_hand, abs=2e-6 + 1e-3 * by_hand)
