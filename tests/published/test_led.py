"""Printed figures of light-emitting diodes."""

from __future__ import annotations

import numpy as np
import pytest

from opto_ckt.formulas.led import (
    carrier_lifetime,
    electrical_bandwidth,
    internal_power,
    modulated_power,
    optical_bandwidth,
    optical_index,
    planar_efficiency,
    planar_extraction,
    saturation_current,
    second_harmonic,
)
from opto_ckt.formulas.recombination import driven_recombination_rate, recombination_rate
from opto_ckt.formulas.transit import bandwidth_of_rise_time
from tests.near import near
from tests.published.printed import printed


def test_senior_7_1():
    """J. M. Senior, Optical Fiber Communications, Ex. 7.1 (p. 401): lifetime and internal power at 0.87 µm."""
    lifetime = carrier_lifetime(radiative=60e-9, nonradiative=100e-9)
    assert lifetime == printed("37.5e-9")
    power = internal_power(lifetime=lifetime, radiative=60e-9, wavelength=0.87e-6, current=40e-3)
    assert power == printed("35.6e-3")


def test_keiser_4_5():
    """G. Keiser, Optical Fiber Communications, Ex. 4.5 (p. 149): lifetime, efficiency and power at 1310 nm."""
    lifetime = carrier_lifetime(radiative=30e-9, nonradiative=100e-9)
    assert lifetime == printed("23.1e-9")
    assert lifetime / 30e-9 == printed("0.77")
    assert internal_power(lifetime=lifetime, radiative=30e-9, wavelength=1.31e-6, current=40e-3) == printed("29.1e-3")


def test_light_that_leaves_a_planar_chip():
    """Senior, Ex. 7.2 (p. 402): 1.3 %, and half of it of the electrical power; Keiser, Ex. 4.6 (p. 151): 1.41 %."""
    share = planar_extraction(transmission=0.68, index=3.6, outside=1.0)
    assert share == printed("0.013")
    assert 0.5 * share == printed("0.0066")
    assert planar_efficiency(index=3.5) == printed("0.0141")


def test_pearsall_129():
    """T. P. Pearsall, Photonics Essentials, p. 129: 3.4 mW at 1.35 µm and 50 mA, efficiencies of 10 % and 74 %."""
    inside = internal_power(lifetime=0.74, radiative=1.0, wavelength=1.35e-6, current=50e-3)
    assert 0.1 * inside == printed("3.4e-3")


def test_senior_7_7():
    """Senior, Ex. 7.7(c); S. B. Gupta & A. Goel, Ex. 6.6 (55 MHz): the light has halved.

    Both books go on to an electrical bandwidth of 39.0 MHz, √2 below: the factor of a Gaussian response. The one pole
    that they use says 31.83 MHz.
    """
    assert optical_bandwidth(lifetime=5e-9) == printed("55.1e6")
    assert electrical_bandwidth(lifetime=5e-9) == printed("31.83e6")
    assert electrical_bandwidth(lifetime=5e-9) != printed("39.0e6")


def test_gupta_goel_6_7():
    """Gupta & Goel, Ex. 6.7 (p. 115): the print's 19.49 MHz is not that of its own pole, which is 15.92 MHz."""
    assert optical_bandwidth(lifetime=10e-9) == printed("27.57e6")
    assert electrical_bandwidth(lifetime=10e-9) == printed("15.92e6")


@pytest.mark.parametrize(("frequency", "figure"), [(10e6, "169.3e-6"), (50e6, "60.7e-6")])
def test_gupta_goel_6_8_and_6_9(frequency, figure):
    """Gupta & Goel, Ex. 6.8 and 6.9 (p. 116): 200 µW, 10 ns."""
    assert modulated_power(power=200e-6, frequency=frequency, lifetime=10e-9) == printed(figure)


def test_pearsall_6_6():
    """Pearsall, Ex. 6.6 (pp. 134-135): 9e8 a second; its 286 MHz is 1/(πτ), the third convention in print."""
    rate = recombination_rate(coefficient=8e-17, doping=5e24, nonradiative=2e-9)
    assert rate == printed("9.00e8")
    assert rate / np.pi == printed("286e6")


def test_speed_grows_as_the_root_of_a_large_drive():
    """Pearsall, ch. 6, its 3 included: a balance of J/(3 q d) and B n² solved for n gives 1/τ = B n."""
    rate = driven_recombination_rate(coefficient=8e-17, current_density=np.array([1e7, 4e7]), thickness=0.5e-6)
    carriers = rate / 8e-17
    assert 8e-17 * carriers**2 * 3 * 1.602176634e-19 * 0.5e-6 == near(np.array([1e7, 4e7]), rel=1e-12)
    assert rate[1] / rate[0] == near(2.0, rel=1e-12)


def test_kolimbiris_3_3():
    """H. Kolimbiris, Fiber Optics Communications, Ex. 3.3 (p. 68): 35 MHz for 10 ns, electrical."""
    assert bandwidth_of_rise_time(rise_time=10e-9) == printed("35e6")


def test_harmonics_of_a_rolling_off_light():
    """Computed: closed form beside a Fourier transform of P = η I/(1 + I/0.5 A) at 50 mA ± 20 mA: 0.01818, 0.000331."""
    saturation = saturation_current(current=30e-3, power=30e-3 / 1.06, larger_current=70e-3, larger_power=70e-3 / 1.14)
    assert saturation == near(0.5)
    second = second_harmonic(amplitude=20e-3, bias_current=50e-3, saturation_current=saturation)
    phase = 2 * np.pi * np.arange(4096) / 4096
    current = 50e-3 + 20e-3 * np.cos(phase)
    lines = np.abs(np.fft.rfft(current / (1 + current / 0.5)))
    assert second == near(0.01818182, rel=3e-3)  # of the series cut after its first terms
    assert second == near(lines[2] / lines[1], rel=1e-9)
    assert second**2 == near(lines[3] / lines[1], rel=1e-6)
    index = optical_index(amplitude=20e-3, bias_current=50e-3, saturation_current=saturation)
    assert index == near(2 * lines[1] / lines[0], rel=1e-9)
