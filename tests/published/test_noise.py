"""Printed figures of noise."""

from __future__ import annotations

from math import hypot, log10, pi, sqrt

import pytest

from opto_ckt.constants import BOLTZMANN
from opto_ckt.formulas.load_resistor import load_for_bandwidth
from opto_ckt.formulas.loop import noise_gain
from opto_ckt.formulas.noise import excess_noise, shot_noise, thermal_current_noise, thermal_voltage_noise
from opto_ckt.formulas.noise_figures import (
    noise_equivalent_power,
    noise_with_amplifier,
    shot_equals_thermal_voltage,
    signal_to_noise,
    thermal_penalty,
)
from opto_ckt.formulas.noise_generator import (
    diode_pair_noise,
    flicker_coefficient,
    resistance_for_current_noise,
    resistance_for_shot_noise,
    resistance_for_voltage_noise,
)
from opto_ckt.formulas.output_noise import flicker_and_white, rms_in_band, thermal_output, voltage_output
from opto_ckt.formulas.photodiode import responsivity
from opto_ckt.formulas.rules_of_thumb import band_limited_input_noise
from opto_ckt.formulas.second_order import bandwidth_ratio, noise_bandwidth, square_noise_bandwidth
from opto_ckt.formulas.transimpedance import natural_frequency, quality_factor
from opto_ckt.formulas.transit import corner_frequency
from tests.near import near
from tests.published.printed import printed


def test_senior_9_3_and_9_4():
    """J. M. Senior, Optical Fiber Communications, Ex. 9.3 (p. 512) and 9.4 (p. 514), 293 K."""
    current = responsivity(quantum_efficiency=0.6, wavelength=0.9e-6) * 200e-9
    assert current == printed("8.71e-8")
    assert rms_in_band(density=shot_noise(current=current + 3e-9), bandwidth=5e6) == printed("3.80e-10")
    thermal = rms_in_band(density=thermal_current_noise(resistance=4e3, temperature=293.0), bandwidth=5e6)
    assert thermal == printed("4.50e-9")
    noise = noise_with_amplifier(shot=sqrt(1.44e-19), thermal=sqrt(2.02e-17), noise_figure=3.0)
    assert signal_to_noise(signal=8.71e-8, noise=noise) == printed("22.73")


def test_khare_8_7():
    """R. P. Khare, Fiber Optics and Optoelectronics, Ex. 8.7 (p. 215).

    Shot 1.712 nA is 0.2 % off and the ratio 321 0.6 %; the transcription says that the book's own ratio is wrong and
    321 the mended one.
    """
    current = responsivity(quantum_efficiency=0.7, wavelength=1.3e-6) * 500e-9
    shot = rms_in_band(density=shot_noise(current=current), bandwidth=25e6)
    dark = rms_in_band(density=shot_noise(current=5e-9), bandwidth=25e6)
    thermal = rms_in_band(density=thermal_current_noise(resistance=1e3, temperature=300.0), bandwidth=25e6)
    assert shot == near(1.712e-9, rel=0.002)
    assert shot == printed("1.7146e-9")
    assert dark == printed("2.00e-10")
    assert thermal == printed("2.035e-8")
    ratio = current**2 / (shot**2 + dark**2 + thermal**2)
    assert ratio == near(321, rel=0.006)
    assert ratio == printed("322.829")


def test_mynbaev_11_3_1():
    """D. K. Mynbaev & L. L. Scheiner, Fiber-Optic Communications Technology, Ex. 11.3.1 and 11.3.2.

    30.2 nA is carried into the ratio, which is therefore printed 10.96; exact 10.978.
    """
    density = hypot(shot_noise(current=103e-9), thermal_current_noise(resistance=50e3, temperature=300.0))
    noise = rms_in_band(density=density, bandwidth=2.5e9)
    assert noise == printed("3.02e-8")
    assert (1e-7 / noise) ** 2 == printed("10.9781")
    carried = (1e-7 / 3.02e-8) ** 2
    assert carried == printed("10.96")


def test_quantum_limit_exercise():
    """Exercise on a silicon p-i-n diode.

    The print is off: 2.01 µA for 2.097 µA, hence 3.59 nA for 3.67 nA; its ratio, 55 dB, is right.
    """
    current = responsivity(quantum_efficiency=0.65, wavelength=0.8e-6) * 5e-6
    noise = rms_in_band(density=shot_noise(current=current), bandwidth=20e6)
    assert current == printed("2.09704e-6")
    assert noise == printed("3.66597e-9")
    assert current != printed("2.01e-6")
    assert rms_in_band(density=shot_noise(current=2.01e-6), bandwidth=20e6) == printed("3.59e-9")
    assert signal_to_noise(signal=current, noise=noise) == printed("55")


def test_wilson_hawkes_9_1():
    """J. Wilson & J. F. B. Hawkes, Optoelectronics, Ex. 9.1 (p. 449).

    Printed ratios 238.5 and 1471.1 are 0.5 % above the exact ones; 318.5 Ω is what π = 3.14 gives, 0.06 % off.
    """
    current = responsivity(quantum_efficiency=0.6, wavelength=1.3e-6) * 10e-6
    assert current == printed("6.3e-6")
    best = load_for_bandwidth(capacitance=1e-12, bandwidth=500e6)
    assert corner_frequency(resistance=best, capacitance=1e-12) == near(500e6, rel=1e-12)
    assert best == printed("318.31")
    assert best == near(318.5, rel=0.002)
    for load, as_printed, exact in ((50.0, 238.5, "237.441"), (best, 1471.1, "1464.07")):
        density = hypot(shot_noise(current=current + 3e-9), thermal_current_noise(resistance=load, temperature=300.0))
        ratio = (current / rms_in_band(density=density, bandwidth=500e6)) ** 2
        assert ratio == near(as_printed, rel=0.006)
        assert ratio == printed(exact)


def test_franco_7_5():
    """S. Franco, Design with Operational Amplifiers, Ex. 7.5 (p. 323)."""
    for current, figure in ((1e-6, "64.9"), (1e-9, "34.9")):
        noise = rms_in_band(density=shot_noise(current=current), bandwidth=1e6)
        assert signal_to_noise(signal=current, noise=noise) == printed(figure)


@pytest.mark.parametrize(
    ("low", "high", "figure"), [(0.1, 100, "0.770e-6"), (20, 20e3, "2.92e-6"), (0.1, 1e6, "20.0e-6")]
)
def test_franco_7_1(low, high, figure):
    """Franco, Ex. 7.1 (p. 317)."""
    assert flicker_and_white(density=20e-9, corner=200.0, low=low, high=high) == printed(figure)


def test_opa928_teraohm():
    """Texas Instruments, OPA928 data sheet (2023), noise section.

    The equivalent resistance is printed 3.34 TΩ; the printed 0.07 fA has one digit, hence 2 %.
    """
    assert thermal_current_noise(resistance=1e12, temperature=300.0) == printed("1.287e-16")
    equal = resistance_for_current_noise(current_noise=7e-17, temperature=300.0)
    assert equal == near(3.34e12, rel=0.02)
    assert equal == printed("3.38118e12")


def test_johnson_table_3_1():
    """M. Johnson, Photodetection and Measurement (2003), table 3.1.

    Printed 5.5e7 and 5.5e4 are cut off, 1754 and, a microampere, 1,754,000 are 0.7 % low: within 2 %, exact values
    beside them.
    """
    for current, as_printed, exact in (
        (1e-3, 5.5e7, "5.58637e7"),
        (1e-6, 1.754e6, "1.76657e6"),
        (1e-9, 5.5e4, "5.58637e4"),
        (1e-12, 1754, "1766.57"),
    ):
        ratio = current / shot_noise(current=current)
        assert ratio == near(as_printed, rel=0.02)
        assert ratio == printed(exact)


def test_hobbs_2001():
    """P. C. D. Hobbs, Photodiode Front Ends: The REAL Story, Optics & Photonics News, April 2001.

    51 mV is cut off from 51.7 mV, hence 2 %; 100 pF and 2 µA are inferred.
    """
    assert shot_equals_thermal_voltage(temperature=300.0) == near(0.051, rel=0.02)
    assert shot_equals_thermal_voltage(temperature=300.0) == printed("0.051704")
    assert thermal_penalty(drop=0.2, temperature=300.0) == printed("1.0")
    assert corner_frequency(resistance=1e6, capacitance=100e-12) == printed("1.6e3")
    assert corner_frequency(resistance=100e3, capacitance=100e-12) == printed("16e3")


def test_position_sensitive_detector():
    """Noise notebook of a public position-sensitive detector design, with an older elementary charge: 4 in 1e9 off."""
    noise = rms_in_band(density=shot_noise(current=1.01e-6), bandwidth=10e3)
    assert noise == near(5.688933796e-11, rel=1e-8)


def test_opa656_popular_rule():
    """Texas Instruments, OPA656 data sheet SBOS196G (2008), p. 11; 4kT = 1.6e-20 J.

    2.8 pF of the amplifier are added from memory to the 25 pF: without them the rule gives 2.48 pA.
    """
    figures = {
        "voltage_noise": 7e-9,
        "current_noise": 1.3e-15,
        "feedback_resistance": 50e3,
        "band": 3.8e6,
        "temperature": 1.6e-20 / (4 * BOLTZMANN),
    }
    density = band_limited_input_noise(input_capacitance=27.8e-12, **figures)
    assert density == printed("2.7e-12")
    assert density == printed("2.74511e-12")
    assert band_limited_input_noise(input_capacitance=25e-12, **figures) == printed("2.48e-12")


def test_ad823a_table_8():
    """Analog Devices, AD823A data sheet Rev. B pp. 16-18, table 8.

    Printed 55.17 µV is 0.12 % below the rule that it comes from; exact for a single pole is 54.64 µV, whatever the
    input capacitance. The sum of 149.1 µV is right to its digits. Its voltage term, 138.5 µV, belongs to 9.95 nV/√Hz
    and not to the 14 nV/√Hz of the sheet's first page, with which it is 183 µV at the sheet's own 7.5 pF.
    """
    published_pole = 17e6 * 1.2e-12 / (1.2e-12 + 5e-12 + 1.3e-12 + 1.2e-12)
    by_rule = thermal_voltage_noise(resistance=50e3, temperature=300.0) * sqrt(pi / 2 * published_pole)
    assert by_rule == near(5.517e-5, rel=0.003)
    assert by_rule == printed("5.52373e-5")
    values = {
        "feedback_resistance": 50e3,
        "input_capacitance": 6.9e-12,
        "feedback_capacitance": 1.2e-12,
        "gain_bandwidth": 17e6,
    }
    exact = thermal_output(
        feedback_resistance=50e3,
        temperature=300.0,
        natural_frequency=natural_frequency(**values),
        quality=quality_factor(**values),
    )
    assert exact == printed("5.4642e-5")
    assert hypot(by_rule, 138.5e-6) == printed("1.491e-4")
    loaded = values | {"input_capacitance": 7.5e-12}
    stated = voltage_output(
        voltage_noise=14e-9,
        feedback_resistance=50e3,
        total_capacitance=8.7e-12,
        gain_bandwidth=17e6,
        natural_frequency=natural_frequency(**loaded),
        quality=quality_factor(**loaded),
    )
    assert stated == printed("183e-6")


def test_johnson_table_3_7_is_3_db_low_at_the_corner():
    """M. Johnson, Photodetection and Measurement, table 3.7 (p. 63).

    Corners 1000 Hz and 10 Hz are rounded by him. The four spot densities, 0.63, 0.05, 0.5 and 0.9 µV/√Hz, are off:
    R and Z_c in parallel at the corner are R/√2 in quadrature, not the R/2 that gives his figures within their digits
    (0.05 µV/√Hz, from 0.055, cut off).
    """
    thermal = thermal_current_noise(resistance=1e8, temperature=300.0)
    for source, figure in ((thermal, 0.63e-6), (1.1e-15, 0.05e-6), (shot_noise(current=1e-9), 0.9e-6)):
        assert 1e8 / 2 * source == near(figure, rel=0.1)
        assert 1e8 / hypot(1, 2 * pi * 1e3 * 1e8 * 1.6e-12) * source > 1.3 * figure
    assert corner_frequency(resistance=1e8, capacitance=1.6e-12) == printed("994.718")
    assert corner_frequency(resistance=1e8, capacitance=161.6e-12) == printed("9.8487")
    impedance = 1e8 / hypot(1, 2 * pi * 1e3 * 1e8 * 1.6e-12)
    assert impedance * thermal_current_noise(resistance=1e8, temperature=300.0) == printed("9.07746e-7")
    assert impedance * 1.1e-15 == printed("7.75755e-8")
    assert impedance * shot_noise(current=1e-9) == printed("1.26242e-6")
    gain = noise_gain(frequency=1e3, feedback_resistance=1e8, input_capacitance=160e-12, feedback_capacitance=1.6e-12)
    assert 1e-8 * gain == printed("7.16101e-7")
    assert printed("0.5e-6") == 1e-8 * 160e-12 / 1.6e-12 / 2


def test_ad546_power_limit():
    """Analog Devices, AD546 data sheet Rev. A p. 12 and AD549 p. 15."""
    assert corner_frequency(resistance=1e9, capacitance=10e-12) == printed("16")
    assert noise_equivalent_power(current_noise=2.6e-14, responsivity=0.5) == printed("5.2e-14")


@pytest.mark.parametrize(
    ("quality", "white", "rising"),
    [(0.5, "1.22", "2.07"), (3**-0.5, "1.15", "1.78"), (0.5**0.5, "1.11", "1.49")],
)
def test_saeckinger_noise_bandwidths(quality, white, rising):
    """E. Säckinger, Analysis and Design of Transimpedance Amplifiers (2018), appendix H, figures from memory."""
    ratio = bandwidth_ratio(quality=quality)
    assert noise_bandwidth(natural_frequency=1.0, quality=quality) / ratio == printed(white)
    assert square_noise_bandwidth(natural_frequency=1.0, quality=quality) / ratio == printed(rising)


def test_constants_at_300_k():
    """Exact SI constants: kT/q, 4kTR of 50 Ω and 1 kΩ, 2qI of 1 µA."""
    assert shot_equals_thermal_voltage(temperature=300.0) / 2 == printed("0.025852")
    assert thermal_voltage_noise(resistance=50.0, temperature=300.0) == printed("9.102e-10")
    assert thermal_voltage_noise(resistance=1e3, temperature=300.0) == printed("4.0704e-9")
    assert shot_noise(current=1e-6) == printed("5.6607e-13")
    assert 10 * log10(50e-6 / 1e-3) == printed("-13.0103")


def test_generators_for_simulators():
    """Run in ngspice 39 at 300.15 K: 5 nV/√Hz, the shot noise of 1 µA, a 10 kHz corner, a pair of diodes at 10 µA."""
    assert resistance_for_voltage_noise(voltage_noise=5e-9, temperature=300.15) == printed("1508.2")
    assert resistance_for_shot_noise(current=1e-6, temperature=300.15) == printed("51729.9")
    assert flicker_coefficient(corner=1e4) == printed("3.204353e-15")
    assert diode_pair_noise(current=1e-5, temperature=300.15) == printed("6.5478e-9")


def test_excess_noise_of_thick_film():
    """IEC 60115-1 limit 46 dB for 100 kΩ to 1 MΩ as in Yageo's RC0603 data sheet; 60 mV at 1 Hz."""
    assert excess_noise(index=46.0, voltage=0.06, frequency=1.0) == printed("7.8894e-6")
