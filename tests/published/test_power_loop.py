"""Printed figures of power control by a monitor diode, and of the modulation that rides on it."""

from __future__ import annotations

from math import log10

from opto_ckt.formulas.laser_modulation import extinction_ratio, modulation_for_extinction, run_duration
from opto_ckt.formulas.power_loop import (
    crossover_of,
    power_loop_bandwidth,
)
from tests.published.printed import printed


def test_kolimbiris_6_7():
    """H. Kolimbiris, Fiber Optics Communications, Ex. 6.7 (p. 157): 80 kΩ, 40 pF, 0.4 A/W and 0.025 W/A.

    The answer in print is a misprint; 320 µs and 497.4 Hz follow from the figures given.
    """
    f = power_loop_bandwidth(monitor_responsivity=0.4, slope=0.025, transfer=1.0, resistance=80e3, capacitance=40e-12)
    assert f == printed("497.3592")
    assert crossover_of(time_constant=320e-6) == printed("497.4")


def test_max3869_power_control():
    """Maxim, MAX3869 data sheet p. 10: a time constant of 16 µs is called 10 kHz; unrounded it is 9.947 kHz."""
    assert crossover_of(time_constant=16e-6) / 1e3 == printed("9.947184")
    assert crossover_of(time_constant=16e-6) / 1e4 == printed("1.0")


def test_max3761_run_of_equal_bits():
    """Maxim, MAX3761/MAX3762 data sheet p. 8: 72 bits at 622.08 Mbit/s."""
    assert run_duration(run_length=72, bit_rate=622.08e6) * 1e9 == printed("116")


def test_extinction_ratio_over_temperature():
    """Derived here: 8.2 dB set at 25 °C falls to 5.41 dB where the slope has gone from 0.20 to 0.15 W/A at 1 mW."""
    current = modulation_for_extinction(power=1e-3, extinction_ratio=10**0.82, mark_density=0.5, slope=0.2)
    assert current * 1e3 == printed("7.371")
    hot = extinction_ratio(power=1e-3, modulation_current=current, mark_density=0.5, slope=0.15)
    assert 10 * log10(hot) == printed("5.406281")


def test_extinction_ratio_of_max3668():
    """Maxim, MAX3668 and MAX3869 data sheets: a ratio of 6.6, not of 8.2, is 8.2 dB."""
    current = modulation_for_extinction(power=1e-3, extinction_ratio=6.6, mark_density=0.5, slope=0.2)
    ratio = extinction_ratio(power=1e-3, modulation_current=current, mark_density=0.5, slope=0.2)
    assert 10 * log10(ratio) == printed("8.2")
