"""Printed figures of LED and laser drivers."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.optimize import brentq

from opto_ckt.formulas.driver import base_resistance, sensed_current, series_current, series_resistance
from opto_ckt.formulas.driver_loop import (
    compensation_resistance,
    crossover,
    crossover_estimate,
    gate_pole,
    loop_gain,
    phase_margin,
)
from opto_ckt.formulas.reference import soft_start_time
from opto_ckt.formulas.switching import (
    gate_network_resistance,
    generous_speed_up,
    lean_speed_up,
    peaked_share,
    peaking_capacitance,
    recovery_frequency,
    settled_frequency,
)
from tests.near import near
from tests.published.printed import printed

LOOP = {
    "gain_bandwidth": 10e6,
    "output_resistance": 100.0,
    "gate_source": 450e-12,
    "gate_drain": 50e-12,
    "transconductance": 0.5,
    "sense_resistance": 10.0,
}


@pytest.mark.parametrize(
    ("voltage", "current", "figure"), [(1.5, 15e-3, "233"), (1.62, 48e-3, "70.4"), (1.55, 30e-3, "115")]
)
def test_hfbr_1402_series_resistor(voltage, current, figure):
    """Hewlett-Packard, HFBR-1402C data sheet p. 11: forward voltage follows the current."""
    r = series_resistance(supply=5.0, switch_drop=0.0, forward_voltage=voltage, current=current)
    assert r == printed(figure)


def test_sedha_13_7():
    """R. S. Sedha, A Textbook of Applied Electronics, Ex. 13.7 (p. 270): lowest forward voltage counts."""
    for voltage, figure in ((1.8, "387.5"), (2.0, "375.0")):
        r = series_resistance(supply=8.0, switch_drop=0.0, forward_voltage=voltage, current=16e-3)
        assert r == printed(figure)


def test_malvino_5_13():
    """A. Malvino & D. Bates, Electronic Principles, Ex. 5-13 (p. 168): 14.9 mA."""
    assert series_current(supply=9.0, switch_drop=0.0, forward_voltage=2.0, resistance=470.0) == printed("14.89e-3")


def test_floyd_4_9():
    """T. L. Floyd, Electronic Devices, Ex. 4.9 (p. 132): 86 kΩ."""
    r = base_resistance(drive=5.0, base_emitter_voltage=0.7, collector_current=10e-3, forced_gain=200.0)
    assert r == printed("86.0e3")


def test_coughlin_driscoll_5_5():
    """R. F. Coughlin & F. F. Driscoll, Operational Amplifiers, Ex. 5.5 (p. 124): 1 V over 1 kΩ."""
    assert sensed_current(reference=1.0, sense_resistance=1e3, offset_voltage=0.0) == printed("1.000e-3")


@pytest.mark.parametrize(("capacitance", "figure"), [(100e-9, "20"), (1e-9, "2000"), (100e-12, "20000")])
def test_inner_loop_resistance(capacitance, figure):
    """Question-and-answer page on an op amp with MOSFET current source: 20 Ω.

    Its further figures are off: 10 kΩ for 100 pF and 1 kΩ for 1 nF, half of what its own formula gives.
    """
    r = compensation_resistance(
        load_capacitance=10e-9,
        output_resistance=100.0,
        gate_resistance=100.0,
        compensation_capacitance=capacitance,
    )
    assert r == printed(figure)


def test_follower_loop():
    """Derived here; ngspice 39 closes the loop at 11.274 MHz: crossover 7.195 MHz, margin 61.21°."""
    assert crossover(**LOOP) == printed("7.195e6")
    assert abs(loop_gain(frequency=crossover(**LOOP), **LOOP)) == near(1.0, rel=1e-12)
    assert phase_margin(**LOOP) == printed("61.2126")

    def fallen(frequency):
        gain = loop_gain(frequency=frequency, **LOOP)
        return abs(gain / (1 + gain)) - 0.5**0.5

    assert brentq(fallen, 5e6, 50e6, xtol=1e-3) == printed("11.274e6")


def test_follower_loop_by_one_pole():
    """The same loop with the gate as its only pole: 7.24 MHz, 60.4°."""
    figures = {name: LOOP[name] for name in ("transconductance", "sense_resistance")}
    pole = gate_pole(**{name: value for name, value in LOOP.items() if name != "gain_bandwidth"})
    estimate = crossover_estimate(gain_bandwidth=10e6, gate_pole=pole, **figures)
    assert estimate == printed("7.24e6")
    assert 90 - np.degrees(np.arctan(estimate / pole)) == printed("60.4")


def test_soft_start_rule():
    """Common practice: 95 % after three time constants; exactly 2.9957."""
    assert soft_start_time(resistance=1.0, capacitance=1.0, fraction=0.95) == printed("3.0")
    assert soft_start_time(resistance=1.0, capacitance=1.0, fraction=0.95) == printed("2.9957")


def test_bell_speed_up_capacitors():
    """D. A. Bell: Solid State Pulse Circuits, Ex. 4.4 (p. 120), and Electronic Devices and Circuits, Ex. 8.8 (p. 326).

    Two rules for one part, ten times apart.
    """
    generous = generous_speed_up(turn_on=70e-9, source_resistance=600.0)
    assert generous == printed("1.167e-9")
    assert recovery_frequency(base_resistance=5.6e3, capacitance=generous) == printed("33.3e3")
    lean = lean_speed_up(turn_on=100e-9, source_resistance=600.0)
    assert lean == near(166e-12, rel=0.006)  # printed cut, not rounded
    settled = settled_frequency(source_resistance=600.0, base_resistance=4.7e3, capacitance=160e-12)
    assert settled == near(235850.0, rel=1e-5)


def test_kolimbiris_6_5():
    """H. Kolimbiris, Fiber Optics Communications, Ex. 6.5 (p. 150): 120 mA from 5 V."""
    whole = gate_network_resistance(supply=5.0, forward_voltage=2.0, current=120e-3)
    assert whole == printed("67.67")
    first = (whole - 32) / 3.2
    assert first == printed("11.15")
    half = (first + 10) / 2
    assert half == printed("10.57")
    assert half - 10 == printed("0.57")
    assert 2e-9 / half == printed("189.2e-12")


def test_peaking_by_a_sweep():
    """Derived: 15 Ω and 30 Ω with 5 ns: 166.7 pF, 95.5 MHz, three times the bandwidth and the first current."""
    bypassed = peaked_share(resistance=45.0, gain=3.0)
    assert bypassed == near(30.0)
    capacitance = peaking_capacitance(lifetime=5e-9, bypassed=bypassed)
    assert capacitance == printed("166.7e-12")

    def response(frequency):
        s = 2j * np.pi * frequency
        admittance = 1 / (15.0 + 30.0 / (1 + s * 30.0 * capacitance))
        return abs(45.0 * admittance / (1 + 5e-9 * s))

    assert brentq(lambda f: response(f) - 0.5**0.5, 1e6, 1e9) == near(95.493e6, rel=1e-5)
