"""Noise densities against one another and against their integrals."""

from __future__ import annotations

import numpy as np
import pytest
from scipy.integrate import quad
from scipy.optimize import brentq, minimize_scalar
from scipy.special import erfc, ndtri
from scipy.stats import poisson

from opto_ckt.formulas.avalanche import (
    excess_noise_factor,
    excess_noise_power_law,
    multiplied_shot_noise,
    optimum_gain,
    optimum_gain_in_noise,
    optimum_gain_into_load,
)
from opto_ckt.formulas.decision import (
    error_ratio,
    extinction_penalty,
    modulation_amplitude,
    noise_at_bit_rate,
    personick_integrals,
    photons_for_error_ratio,
    quality_for_error_ratio,
    sensitivity,
)
from opto_ckt.formulas.noise import (
    capacitance_current_noise,
    excess_noise,
    input_noise,
    shot_noise,
    thermal_current_noise,
    thermal_voltage_noise,
)
from opto_ckt.formulas.noise_figures import (
    capacitance_noise_crossover,
    noise_with_amplifier,
    shot_equals_thermal_voltage,
    thermal_penalty,
)
from opto_ckt.formulas.noise_generator import (
    resistance_for_current_noise,
    resistance_for_shot_noise,
    resistance_for_voltage_noise,
)
from opto_ckt.formulas.output_noise import flicker_and_white
from opto_ckt.formulas.rules_of_thumb import band_limited_input_noise
from tests.near import near


def test_input_noise_is_the_sum_of_its_sources():
    sources = [
        shot_noise(current=1e-6),
        thermal_current_noise(resistance=100e3, temperature=300.0),
        thermal_current_noise(resistance=1e9, temperature=300.0),
        1e-15,
        7e-9 * (1 / 100e3 + 1 / 1e9) * 1.5**0.5,
        capacitance_current_noise(voltage_noise=7e-9, capacitance=24e-12, frequency=2e3) * 1.5**0.5,
    ]
    total = input_noise(
        current=1e-6,
        feedback_resistance=100e3,
        shunt_resistance=1e9,
        temperature=300.0,
        current_noise=1e-15,
        voltage_noise=7e-9,
        voltage_noise_corner=1e3,
        capacitance=24e-12,
        frequency=2e3,
    )
    assert total == near(np.sqrt(np.sum(np.square(sources))), rel=1e-12)


def test_popular_rule_is_the_mean_over_the_band():
    values = {"current_noise": 1e-15, "voltage_noise": 7e-9, "feedback_resistance": 100e3, "temperature": 300.0}

    def density(f):
        return input_noise(
            current=0.0, shunt_resistance=np.inf, voltage_noise_corner=0.0, capacitance=24e-12, frequency=f, **values
        )

    mean = quad(lambda f: (density(f) / 1e-12) ** 2, 1.0, 1e6)[0] / 1e6
    rule = band_limited_input_noise(input_capacitance=24e-12, band=1e6, **values)
    assert rule == near(1e-12 * mean**0.5, rel=1e-5)


def test_flicker_integral():
    power = quad(lambda f: 20.0**2 * (1 + 200 / f), 0.1, 1e3, limit=200)[0]
    rms = flicker_and_white(density=20e-9, corner=200.0, low=0.1, high=1e3)
    assert rms == near(1e-9 * power**0.5, rel=1e-8)


def test_excess_noise_integrates_to_its_index_over_a_decade():
    power = quad(lambda f: (1e6 * excess_noise(index=20.0, voltage=2.0, frequency=f)) ** 2, 10.0, 100.0)[0]
    assert power**0.5 == near(2.0 * 10.0)  # 20 dB above 1 µV a volt, 2 V


def test_crossings():
    equal = shot_equals_thermal_voltage(temperature=300.0)
    assert shot_noise(current=equal / 1e5) == near(thermal_current_noise(resistance=1e5, temperature=300.0))
    assert thermal_penalty(drop=equal, temperature=300.0) == near(10 * np.log10(2))
    values = {"voltage_noise": 5e-9, "capacitance": 20e-12}
    f = capacitance_noise_crossover(resistance=1e5, temperature=300.0, **values)
    assert capacitance_current_noise(frequency=f, **values) == near(
        thermal_current_noise(resistance=1e5, temperature=300.0)
    )


def test_generators_make_the_noise_they_stand_for():
    r = resistance_for_voltage_noise(voltage_noise=3e-9, temperature=300.0)
    assert thermal_voltage_noise(resistance=r, temperature=300.0) == near(3e-9)
    r = resistance_for_current_noise(current_noise=2e-12, temperature=300.0)
    assert thermal_current_noise(resistance=r, temperature=300.0) == near(2e-12)
    r = resistance_for_shot_noise(current=1e-6, temperature=300.0)
    assert thermal_current_noise(resistance=r, temperature=300.0) == near(shot_noise(current=1e-6))


def test_error_ratio_and_quality_against_scipy():
    quality = np.linspace(-2, 35, 1001)
    np.testing.assert_allclose(error_ratio(quality=quality), erfc(quality / np.sqrt(2)) / 2, rtol=1e-11)
    ratio = 10.0 ** -np.linspace(0.01, 300, 1001)
    np.testing.assert_allclose(quality_for_error_ratio(error_ratio=ratio), -ndtri(ratio), rtol=1e-10)
    assert isinstance(float(quality_for_error_ratio(error_ratio=1e-9)), float)


@pytest.mark.parametrize(("rolloff", "duty"), [(1.0, 1.0), (0.5, 1.0), (0.3, 0.5), (0.0, 1.0)])
def test_personick_against_quadrature(rolloff, duty):
    def shaping(y):
        low, high = (1 - rolloff) / 2, (1 + rolloff) / 2
        cosine = 1.0 if y <= low else (1 + np.cos(np.pi * (y - low) / (high - low))) / 2
        return (cosine / np.sinc(duty * y)) ** 2

    edges = {"points": [(1 - rolloff) / 2]} if 0 < rolloff < 1 else {}
    top = (1 + rolloff) / 2
    second = quad(shaping, 0, top, **edges)[0]
    third = quad(lambda y: y**2 * shaping(y), 0, top, **edges)[0]
    assert personick_integrals(rolloff=rolloff, duty=duty) == near((second, third), rel=1e-9)


def test_sensitivity_gives_the_wanted_quality_back():
    """Q = (I_1 - I_0)/(σ_1 + σ_0) with signal-dependent shot noise."""
    figures = {"responsivity": 0.9, "bandwidth": 1.8e9, "gain": 10.0, "excess_noise": 5.5}
    power = sensitivity(quality=7.034, thermal_noise=3e-7, extinction_ratio=8.0, **figures)
    low = 2 * power / 9
    currents = np.array([low, 8 * low]) * 0.9 * 10.0
    primary = currents / 10.0
    shot = np.array(
        [multiplied_shot_noise(primary_current=i, surface_current=0.0, gain=10.0, excess_noise=5.5) for i in primary]
    )
    sigma = np.sqrt(3e-7**2 + shot**2 * 1.8e9)
    assert (currents[1] - currents[0]) / sigma.sum() == near(7.034, rel=1e-9)


def test_optimum_gain_needs_the_least_power():
    known = {"quality": 7.0, "bandwidth": 1.8e9, "thermal_noise": 3e-7}
    best = optimum_gain(ionisation_ratio=0.5, **known)

    def power(gain):
        factor = excess_noise_factor(gain=gain, ionisation_ratio=0.5)
        return sensitivity(responsivity=0.9, extinction_ratio=1e15, gain=gain, excess_noise=factor, **known)

    assert power(best) < min(power(0.99 * best), power(1.01 * best))


def test_optimum_gain_into_a_load_has_the_best_ratio():
    best = optimum_gain_into_load(temperature=300.0, noise_factor=2.0, load_resistance=1e3, current=1e-7, exponent=0.3)

    def noise(gain):
        factor = excess_noise_power_law(gain=gain, exponent=0.3)
        shot = multiplied_shot_noise(primary_current=1e-7, surface_current=0.0, gain=gain, excess_noise=factor)
        thermal = thermal_current_noise(resistance=1e3, temperature=300.0)
        return (shot**2 + 2.0 * thermal**2) / gain**2

    assert noise(best) < min(noise(0.99 * best), noise(1.01 * best))


def test_optimum_gain_in_noise_is_that_into_a_load_and_the_minimum():
    known = {"current": np.array([1e-9, 1e-7]), "exponent": np.array([0.3, 1.0])}
    thermal = thermal_current_noise(resistance=1e3, temperature=300.0)
    best = optimum_gain_in_noise(current_noise=2**0.5 * thermal, **known)
    into_load = optimum_gain_into_load(temperature=300.0, noise_factor=2.0, load_resistance=1e3, **known)
    np.testing.assert_allclose(best, into_load, rtol=1e-12)
    for current, exponent, gain in zip(known["current"], known["exponent"], best, strict=True):
        found = minimize_scalar(
            lambda m, i=current, x=exponent: 2 * 1.602176634e-19 * i * m**x + 2 * thermal**2 / m**2,
            bounds=(1, 1000), method="bounded", options={"xatol": 1e-6},
        )  # fmt: skip
        assert gain == near(found.x, rel=1e-4)


def test_excess_noise_at_its_ends():
    """F is 2 - 1/M without the slower carrier, M with both alike, 1 without gain; arrays as numbers."""
    gain = np.array([1.0, 2.0, 10.0, 300.0])
    np.testing.assert_allclose(excess_noise_factor(gain=gain, ionisation_ratio=0.0), 2 - 1 / gain, rtol=1e-14)
    np.testing.assert_allclose(excess_noise_factor(gain=gain, ionisation_ratio=1.0), gain, rtol=1e-14)
    np.testing.assert_allclose(excess_noise_factor(gain=1.0, ionisation_ratio=np.linspace(0, 1, 5)), 1.0, rtol=1e-14)
    np.testing.assert_allclose(excess_noise_power_law(gain=gain, exponent=np.array([0.0, 1, 1, 0])), [1, 2, 10, 1])


def test_excess_noise_by_counting_carriers():
    """One carrier that ionises alone: the number of its descendants is geometric, F = <n²>/<n>² = 2 - 1/M."""
    for gain in (1.5, 8.0, 40.0):
        n = np.arange(1, 20_000)
        chance = (1 - 1 / gain) ** (n - 1) / gain
        mean, square = chance @ n, chance @ n**2
        assert mean == near(gain)
        assert square / mean**2 == near(excess_noise_factor(gain=gain, ionisation_ratio=0.0))


def test_photons_of_the_quantum_limit_by_the_poisson_law():
    for ratio in (1e-3, 1e-9, 1e-15):
        photons = photons_for_error_ratio(error_ratio=ratio)
        assert poisson.pmf(0, photons) / 2 == near(ratio, rel=1e-9)


def test_noise_at_a_bit_rate_is_the_integral_of_its_density():
    """A rectangular pulse shaped into a raised cosine: its filter over white noise and noise that rises."""
    bit_rate, capacitance, voltage_noise = 10e6, 12e-12, 4e-9
    second, third = personick_integrals(rolloff=1.0, duty=1.0)

    def density(y):
        shaping = ((1 + np.cos(np.pi * y)) / 2 / np.sinc(y)) ** 2
        rising = 2 * np.pi * capacitance * voltage_noise * y * bit_rate
        return (1e24 * (1e-12) ** 2 + 1e24 * rising**2) * shaping * bit_rate

    found = noise_at_bit_rate(
        white_noise=1e-12, voltage_noise=voltage_noise, capacitance=capacitance, bit_rate=bit_rate,
        second_integral=second, third_integral=third,
    )  # fmt: skip
    assert found == near(1e-12 * quad(density, 0, 1)[0] ** 0.5, rel=1e-9)


def test_noise_figure_raises_thermal_noise_alone():
    ten = noise_with_amplifier(shot=3e-9, thermal=np.array([0.0, 4e-9]), noise_figure=np.array([10.0, 0.0]))
    np.testing.assert_allclose(ten, [3e-9, 5e-9], rtol=1e-12)


def test_extinction_penalty_is_what_amplitude_is_missing():
    ratio = np.array([1.01, 2.0, 8.33, 1e3])
    share = modulation_amplitude(average_power=1.0, extinction_ratio=ratio) / 2
    np.testing.assert_allclose(extinction_penalty(extinction_ratio=ratio), -10 * np.log10(share), rtol=1e-10)


@pytest.mark.parametrize("ratio", [1.2, 3.0, 30.0, 1e4])
@pytest.mark.parametrize("thermal", [1e-9, 3e-7])
def test_sensitivity_against_a_search_for_the_power(ratio, thermal):
    """Root of Q(P) = Q wanted, levels and noise put together anew for every trial."""
    figures = {"responsivity": 0.8, "bandwidth": 0.7e9, "gain": 12.0, "excess_noise": 3.1}

    def missing(logarithm):
        zero = 2 * np.exp(logarithm) / (ratio + 1)
        levels = figures["responsivity"] * figures["gain"] * zero * np.array([1, ratio])
        shot = 2 * 1.602176634e-19 * levels * figures["gain"] * figures["excess_noise"] * figures["bandwidth"]
        return (levels[1] - levels[0]) / np.sqrt(thermal**2 + shot).sum() - 6.0

    found = np.exp(brentq(missing, np.log(1e-12), np.log(1.0), xtol=1e-14))
    power = sensitivity(quality=6.0, thermal_noise=thermal, extinction_ratio=ratio, **figures)
    assert power == near(found, rel=1e-9)
