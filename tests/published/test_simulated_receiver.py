"""Figures of ngspice 39 decks of a whole front end, of a multiplied shot noise and of an op amp's noise."""

from __future__ import annotations

from math import hypot, log, sqrt

import pytest

from opto_ckt.analyses import noise, response
from opto_ckt.analyses.network import Evaluation, Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.formulas.avalanche import multiplied_shot_noise
from opto_ckt.formulas.noise import thermal_voltage_noise
from opto_ckt.formulas.photodiode import junction_capacitance
from opto_ckt.formulas.transit import corner_frequency, rise_time
from opto_ckt.topology import GROUND, RIGHT, UP, Capacitor, OpAmp, Photodiode, Resistor, Topology
from tests.near import near
from tests.published.printed import printed

TOPOLOGY = Topology(
    elements=(
        Photodiode("D1", anode=GROUND, cathode="sum", role="detector", at=(3, 0), to=(3, 2), facing=UP),
        Resistor("R1", "sum", "out", role="feedback", at=(5, 4), to=(9, 4)),
        Capacitor("C1", "sum", "out", role="feedback", at=(5, 6), to=(9, 6)),
        OpAmp("U1", plus=GROUND, minus="sum", out="out", role="amplifier", at=(6, 2), facing=RIGHT),
        Resistor("RL", "out", GROUND, role="load", at=(10, 2), to=(10, 0)),
    ),
    input="D1",
    output=("out", GROUND),
    loop="U1",
)
VALUES = {
    "temperature": 300.15,
    "R1": 100e3,
    "C1": 0.15e-12,
    "RL": 1e3,
    "D1.responsivity": 0.6,
    "D1.capacitance": float(
        junction_capacitance(zero_bias_capacitance=20e-12, reverse_bias=5.0, built_in_voltage=0.6, grading=0.45)
    ),
    "D1.series_resistance": 1e-6,
    "D1.shunt_resistance": 1e15,
    "D1.transit_frequency": 1e15,
    "D1.signal_shot": 0.6e-6,
    "D1.ambient_shot": 0.0,
    "D1.dark_shot": 100e-12,
    "U1.gain_bandwidth": 800e6,
    "U1.second_pole": 2e9,
    "U1.open_loop_gain": 20e3,
    "U1.common_capacitance": 1e-12,
    "U1.differential_capacitance": 1e-12,
    "U1.output_resistance": 1e-3,
    "U1.voltage_noise": 4e-9,
    "U1.voltage_noise_corner": 20e3,
    "U1.current_noise": 1.5e-12,
    "U1.current_noise_corner": 1e3,
}


@pytest.fixture(scope="module")
def evaluation() -> Evaluation:
    """100 kΩ and 0.15 pF around 800 MHz with a second pole at 2 GHz, diode of 20 pF at zero bias, 1 µW."""
    return Network(expand(TOPOLOGY)).evaluate(VALUES)


def test_level_at_one_microwatt(evaluation: Evaluation) -> None:
    """-60.0075 mV: 1 µW of 0.6 A/W, 100 pA of the diode and the 5 pA that the simulator's gmin adds at 5 V."""
    gain = float(response.dc_gain(evaluation)[0]) / 0.6
    assert abs(gain) * (0.6e-6 + 100e-12 + 5e-12) == near(0.060007499625, rel=2e-6)


def test_bandwidth_and_rise(evaluation: Evaluation) -> None:
    """14.0433 MHz, 23.93 ns."""
    assert response.bandwidth(evaluation)[0] == near(14043283.74, rel=1e-3)
    assert response.rise_time(evaluation)[0] == near(2.393e-8, rel=1e-3)


def test_noise(evaluation: Evaluation) -> None:
    """163.85 nV/√Hz and 2.7232 pW/√Hz at 1 MHz; 1.2972 mV from 10 Hz to 1 GHz."""
    assert sqrt(noise.output_density(evaluation, 1e6)[0]) == near(1.638476969e-7, rel=1e-3)
    assert sqrt(noise.signal_density(evaluation, 1e6)[0]) == near(2.72321138e-12, rel=1e-3)
    assert noise.output_rms(evaluation, (10.0, 1e9))[0] == near(1.2972218e-3, rel=2e-3)


def test_multiplied_shot_noise() -> None:
    """0.9 A/W, 1 µW, M = 10, F = 3: 9.3015 pA/√Hz."""
    density = multiplied_shot_noise(primary_current=0.9e-6, surface_current=0.0, gain=10.0, excess_noise=3.0)
    assert density == printed("9.30148e-12")


def test_noise_of_a_follower_with_10_kilohm_in_its_feedback() -> None:
    """5 nV/√Hz above 10 kHz, 2 pA/√Hz above 1 kHz, at 10 kHz: 25.608 nV/√Hz; 1 Ω of the source left out."""
    density = hypot(
        5e-9 * sqrt(1 + 10e3 / 10e3),
        2e-12 * sqrt(1 + 1e3 / 10e3) * 10e3,
        thermal_voltage_noise(resistance=10e3, temperature=300.15),
    )
    assert density == near(2.5608123e-8, rel=1e-4)


def test_rise_of_one_pole() -> None:
    """A light-emitting diode of 2 ns lifetime: 4.39445 ns."""
    assert rise_time(bandwidth=corner_frequency(resistance=1.0, capacitance=2e-9)) == printed("4.39445e-9")
    assert 2e-9 * log(9.0) == printed("4.39445e-9")
