"""Driver relations against one another."""

from __future__ import annotations

import numpy as np
from hypothesis import given
from hypothesis import strategies as st

from opto_ckt.formulas.driver import (
    compliance,
    fail_safe_resistance,
    output_current_noise,
    pass_power,
    sense_resistance,
    sensed_current,
    series_current,
    series_resistance,
)
from opto_ckt.formulas.driver_loop import compensation_capacitance, crossover, loop_gain, phase_margin
from opto_ckt.formulas.front_end import bootstrapped_capacitance, cascode_current
from opto_ckt.formulas.leakage import dark_current, shunt_resistance
from opto_ckt.formulas.noise import thermal_current_noise
from opto_ckt.formulas.reference import (
    divided_voltage,
    lower_resistance,
    parallel_resistance,
    soft_start_capacitance,
    soft_start_time,
    upper_resistance,
)
from opto_ckt.formulas.thermal import (
    allowed_power,
    junction_temperature,
    parallel_path,
    sink_resistance_with_parallel_path,
)
from opto_ckt.formulas.transistor import (
    bipolar_transconductance,
    follower_gain,
    follower_input_capacitance,
    gate_source_voltage,
    square_law_transconductance,
)
from tests.near import near


@given(
    st.floats(5, 9).map(lambda x: 10**x),
    st.floats(0, 4).map(lambda x: 10**x),
    st.floats(-12, -8).map(lambda x: 10**x),
    st.floats(-12, -9).map(lambda x: 10**x),
    st.floats(-3, 1).map(lambda x: 10**x),
    st.floats(-1, 3).map(lambda x: 10**x),
)
def test_loop_crosses_one_only_once(gbw, r_o, c_gs, c_gd, g_m, r_s):
    loop = {
        "gain_bandwidth": gbw,
        "output_resistance": r_o,
        "gate_source": c_gs,
        "gate_drain": c_gd,
        "transconductance": g_m,
        "sense_resistance": r_s,
    }
    f = crossover(**loop)
    assert abs(loop_gain(frequency=f, **loop)) == near(1, rel=1e-9)
    steps = np.abs(loop_gain(frequency=f * np.geomspace(1e-6, 1e4, 500), **loop))
    assert np.all(np.diff(steps) <= 0)
    assert -1e-6 < phase_margin(**loop) < 180


def test_loop_lanes():
    loop = {
        "gain_bandwidth": 10e6,
        "output_resistance": 100.0,
        "gate_source": 450e-12,
        "gate_drain": 50e-12,
        "sense_resistance": 10.0,
    }
    lanes = crossover(transconductance=np.array([0.05, 0.5]), **loop)
    assert lanes.tolist() == [crossover(transconductance=0.05, **loop), crossover(transconductance=0.5, **loop)]
    assert phase_margin(transconductance=np.array([0.05, 0.5]), **loop).shape == (2,)


def test_series_resistor_inverts():
    known = {"supply": 5.0, "switch_drop": 0.3, "forward_voltage": 1.6}
    assert series_current(resistance=series_resistance(current=20e-3, **known), **known) == near(20e-3)


def test_fail_safe_resistor_caps_the_current():
    r = fail_safe_resistance(supply=5.25, forward_voltage=1.0, current_limit=0.1, on_resistance=2.0)
    assert (5.25 - 1.0) / (r + 2.0) == near(0.1)


def test_voltages_add_up_to_the_supply():
    left = compliance(supply=5.0, current=0.1, series_resistance=4.0, reverse_drop=0.3, margin=0.2)
    assert left + 0.1 * 4.0 + 0.3 + 0.2 == near(5.0)
    total = pass_power(supply=5.0, forward_voltage=1.5, current=0.1, series_resistance=4.0)
    assert total + 0.1 * 1.5 + 0.1**2 * 4.0 == near(5.0 * 0.1)


def test_current_source():
    r = sense_resistance(reference=0.25, current=50e-3)
    assert sensed_current(reference=0.25, sense_resistance=r, offset_voltage=2.5e-3) == near(50.5e-3)
    quiet = output_current_noise(voltage_noise=0.0, sense_resistance=5.0, temperature=300.0)
    assert quiet == near(thermal_current_noise(resistance=5.0, temperature=300.0))
    assert compensation_capacitance(compensation_resistance=1e3, bandwidth=1e6) == near(159.155e-12, rel=1e-5)


def test_divider():
    lower = lower_resistance(voltage=2.5, tap_voltage=0.5, upper=40e3)
    assert divided_voltage(voltage=2.5, upper=40e3, lower=lower) == near(0.5)
    assert upper_resistance(voltage=2.5, tap_voltage=0.5, lower=lower) == near(40e3)
    assert parallel_resistance(first=40e3, second=lower) == near(8e3)


def test_soft_start_inverts():
    c = soft_start_capacitance(resistance=10e3, duration=30e-3, fraction=0.95)
    assert soft_start_time(resistance=10e3, capacitance=c, fraction=0.95) == near(30e-3)


def test_square_law():
    """g_m is the slope of the current that `gate_source_voltage` inverts."""
    known = {"threshold_voltage": 2.0, "transconductance": 0.5, "stated_current": 0.2}
    rise = gate_source_voltage(current=0.05001, **known) - gate_source_voltage(current=0.04999, **known)
    slope = square_law_transconductance(transconductance=0.5, stated_current=0.2, current=0.05)
    assert 2e-5 / rise == near(slope, rel=1e-6)


def test_followers():
    gain = follower_gain(transconductance=0.1, load_resistance=90.0)
    assert gain == near(0.9)
    assert follower_input_capacitance(
        gate_source=10e-12, gate_drain=2e-12, transconductance=0.1, load_resistance=90.0
    ) == near(3e-12)
    left = bootstrapped_capacitance(diode=100e-12, gate_drain=2e-12, gate_source=10e-12, follower_gain=gain)
    assert left == near(13e-12)


def test_common_base_input_pole():
    current = cascode_current(capacitance=100e-12, bandwidth=123e3, temperature=300.0)
    resistance = 1 / bipolar_transconductance(current=current, temperature=300.0)
    assert 1 / (2 * np.pi * resistance * 100e-12) == near(123e3)
    assert current == near(2e-6, rel=0.01)


def test_leakage_doubles_and_halves():
    hot = {"temperature": 318.15, "reference_temperature": 298.15}
    assert dark_current(dark_current=1e-9, doubling=10.0, **hot) == near(4e-9)
    assert shunt_resistance(shunt_resistance=1e9, halving=10.0, **hot) == near(0.25e9)


def test_parallel_path_inverts():
    sink = sink_resistance_with_parallel_path(
        allowed=17.7, junction_to_ambient=33.0, junction_to_case=3.0, case_to_sink=0.65
    )
    total = parallel_path(junction_to_ambient=33.0, junction_to_case=3.0, case_to_sink=0.65, sink_to_ambient=sink)
    assert total == near(17.7)


def test_allowed_power_just_reaches_the_limit():
    power = allowed_power(junction_limit=398.15, reference_temperature=333.15, thermal_resistance=36.0)
    hot = junction_temperature(reference_temperature=333.15, power=power, thermal_resistance=36.0)
    assert hot - 333.15 == near(65.0)
