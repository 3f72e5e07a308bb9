"""Printed figures of error ratios, extinction and sensitivity."""

from __future__ import annotations

from math import hypot, log10

import pytest

from opto_ckt.constants import LIGHT_SPEED, PLANCK
from opto_ckt.formulas.decision import (
    error_ratio,
    extinction_penalty,
    extinction_penalty_at_peak_power,
    modulation_amplitude,
    overload_power,
    personick_integrals,
    photons_for_error_ratio,
    quality_for_error_ratio,
    sensitivity,
)
from opto_ckt.formulas.noise import shot_noise, thermal_current_noise
from opto_ckt.formulas.noise_figures import signal_to_noise
from opto_ckt.formulas.output_noise import rms_in_band
from opto_ckt.formulas.photodiode import photon_energy
from tests.published.printed import printed


def dbm(power):
    return 10 * log10(power / 1e-3)


def test_maxim_signal_to_noise():
    """Maxim, MAX3657 (12.7 at 1e-10) and MAX3793 (14.1 at 1e-12) data sheets: peak to peak over rms, hence 2Q."""
    assert 2 * quality_for_error_ratio(error_ratio=1e-10) == printed("12.7")
    assert 2 * quality_for_error_ratio(error_ratio=1e-12) == printed("14.1")


def test_keiser_7_2():
    """G. Keiser, Optical Fiber Communications, Ex. 7.2 (p. 258): Q = 6 for 1e-9."""
    assert quality_for_error_ratio(error_ratio=1e-9) == printed("6.00")
    assert error_ratio(quality=6.0) == printed("1.0e-9")
    assert error_ratio(quality=6.0) == printed("9.866e-10")


@pytest.mark.parametrize(
    ("quality", "figure"), [(1, "0.1586553"), (2, "0.0227501"), (3, "0.0013499"), (4, "3.17e-5"), (7, "1.28e-12")]
)
def test_keiser_7_3(quality, figure):
    """Keiser, Ex. 7.3 (p. 259), and the exact first digits of the rest."""
    assert error_ratio(quality=quality) == printed(figure)


@pytest.mark.parametrize(
    ("ratio", "figure"), [(1e-3, "3.0902"), (1e-6, "4.7534"), (1e-9, "5.9978"), (1e-12, "7.0345"), (1e-15, "7.9413")]
)
def test_quality_table(ratio, figure):
    """Inverse of erfc(Q/√2)/2, as tabulated widely."""
    assert quality_for_error_ratio(error_ratio=ratio) == printed(figure)


def test_senior_12_2():
    """J. M. Senior, Optical Fiber Communications, Ex. 12.2: 12, 10.8 dB optical, 21.6 dB electrical."""
    twice = 2 * quality_for_error_ratio(error_ratio=1e-9)
    assert twice == printed("12.0")
    assert 10 * log10(twice) == printed("10.8")
    assert 20 * log10(twice) == printed("21.6")


def test_extinction():
    """G. P. Agrawal, 4.6, from memory: 4.8 dB at r = 2, and 1 dB at r = 8.33; identity as in MAX3657 table 1."""
    assert extinction_penalty(extinction_ratio=10.0) == printed("0.871502")
    assert extinction_penalty(extinction_ratio=1 / 0.12) == printed("1.0")
    assert extinction_penalty(extinction_ratio=2.0) == printed("4.8")
    assert modulation_amplitude(average_power=1e-3, extinction_ratio=6.6) == printed("1.474e-3")
    assert extinction_penalty(extinction_ratio=6.6) == printed("1.326")


@pytest.mark.parametrize(("decibels", "figure"), [(10, "0.8715"), (8.2, "1.3248"), (6, "2.2295")])
def test_extinction_in_decibels(decibels, figure):
    """R. Ramaswami et al., Optical Networks, 5.3: the ratio comes from decibels, 8.2 dB is 6.6."""
    assert extinction_penalty(extinction_ratio=10 ** (decibels / 10)) == printed(figure)


def test_extinction_at_peak_power():
    """Ramaswami, p. 294."""
    assert extinction_penalty_at_peak_power(extinction_ratio=10.0) == printed("0.4576")


def test_overload():
    """Maxim, MAX3657 data sheet p. 9: 0 dBm at 1 A/W; the 2 mA from memory."""
    assert dbm(overload_power(overload_current=2e-3, responsivity=1.0)) == printed("0.0")


def test_sensitivity_with_shot_noise():
    """University exercise: 4.69 µW, -23.3 dBm; bandwidth and responsivity inferred from its own numbers."""
    power = sensitivity(
        quality=6.0,
        responsivity=1.0,
        thermal_noise=7.794e-7,
        bandwidth=1.875e9,
        extinction_ratio=1e12,
        gain=1.0,
        excess_noise=1.0,
    )
    assert power == printed("4.69e-6")
    assert dbm(power) == printed("-23.3")


def test_sensitivity_with_finite_extinction():
    """Derived here; reduces to G. P. Agrawal, 3rd ed., eq. 4.5.17. His -32.2 dBm (100 nA, Q = 6) is from memory."""
    figures = {"responsivity": 0.9, "thermal_noise": 3e-7, "bandwidth": 1.8e9}
    finite = sensitivity(**figures, quality=7.034, extinction_ratio=8.0, gain=10.0, excess_noise=5.5)
    assert dbm(finite) == printed("-33.3826")
    plain = sensitivity(
        quality=5.99781,
        responsivity=1.0,
        thermal_noise=1e-7,
        bandwidth=1e-6,
        extinction_ratio=1e12,
        gain=1.0,
        excess_noise=1.0,
    )
    assert dbm(plain) == printed("-32.2")


def test_sensitivity_of_a_pin_receiver():
    """Agrawal, eq. 4.5.17 with dark zeros; -26.2696 dBm is this project's own figure."""
    power = sensitivity(
        quality=7.0345,
        responsivity=0.9,
        thermal_noise=3e-7,
        bandwidth=1.8e9,
        extinction_ratio=1e15,
        gain=1.0,
        excess_noise=1.0,
    )
    assert dbm(power) == printed("-26.2696")


def test_personick():
    """S. D. Personick 1973, from memory: I_2 = 0.562, 0.3 % below the integral 0.5638; I_3 = 0.0868."""
    second, third = personick_integrals(rolloff=1.0, duty=1.0)
    assert second == printed("0.563827")
    assert third == printed("0.0868")
    second, third = personick_integrals(rolloff=1.0, duty=0.5)
    assert second == printed("0.4026")
    assert third == printed("0.0361")


def test_quantum_limit():
    """J. C. Palais, Fiber Optic Communications, 11.6: 10 photons a bit on average at 1e-9.

    J. M. Senior, Ex. 9.1, counts errors of marks alone, -ln B = 20.7 photons a mark; with as many spaces, which are
    never mistaken, it is -ln 2B = 20.03.
    """
    photons = photons_for_error_ratio(error_ratio=1e-9)
    assert photons == printed("20.03")
    assert photons / 2 == printed("10.0")
    as_printed = photons_for_error_ratio(error_ratio=1e-9 / 2)
    assert as_printed == printed("20.7")
    energy = photon_energy(wavelength=LIGHT_SPEED / 2.998e14)
    assert as_printed * energy * 10e6 / 2 == printed("2.06e-11")
    assert dbm(as_printed * energy * 10e6 / 2) == printed("-76.9")


def test_palais_11_6():
    """Palais, Ex. 11.6: ten photons of 820 nm in a microsecond; printed with h = 6.63e-34 and c = 3e8, 0.13 % high."""
    power = 10 * photon_energy(wavelength=0.82e-6) / 1e-6
    assert power == printed("2.42249e-12")
    assert power * (6.63e-34 / PLANCK) * (3e8 / LIGHT_SPEED) == printed("2.4256e-12")


def test_palais_11_1():
    """Palais, Ex. 11.1: 10 mW less 44 dB, 0.5 A/W, 50 Ω at 300 K over 10 MHz; 10.77 dB is 10.776 cut off."""
    power = 10e-3 * 10**-4.4
    assert power == printed("3.98e-7")
    current = 0.5 * power
    assert current == printed("1.99e-7")
    noise = hypot(shot_noise(current=current), thermal_current_noise(resistance=50.0, temperature=300.0))
    ratio = signal_to_noise(signal=current, noise=rms_in_band(density=noise, bandwidth=10e6))
    assert ratio == pytest.approx(10.77, abs=0.01)
    assert ratio == printed("10.7756")
