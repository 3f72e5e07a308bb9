"""Speed of detectors and the remaining light-to-current relations."""

from __future__ import annotations

import numpy as np
import pytest

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.diode import current_at_voltage
from opto_ckt.formulas.laser import differential_efficiency, monitor_current
from opto_ckt.formulas.leakage import dark_current, diffusion_doubling, generation_doubling, unbiased_shunt
from opto_ckt.formulas.noise import shot_noise
from opto_ckt.formulas.output_noise import current_output, shot_output
from opto_ckt.formulas.photodiode import (
    junction_capacitance,
    photon_energy,
    responsivity,
    surface_reflection,
    zero_bias_capacitance,
)
from opto_ckt.formulas.reference import filter_capacitance
from opto_ckt.formulas.rules_of_thumb import comfortable_gain_bandwidth, intercept_frequency
from opto_ckt.formulas.transimpedance import feedback_resistance
from opto_ckt.formulas.transit import (
    absorbed_share,
    cautious_transit_frequency,
    combined_bandwidth,
    corner_frequency,
    diffusion_time,
    rise_time,
    transit_frequency,
    transit_time,
)
from tests.near import near


def test_transit_is_the_half_power_point_of_a_rectangular_pulse():
    f = transit_frequency(velocity=1e5, width=20e-6)
    assert np.sinc(f * 20e-6 / 1e5) ** 2 == near(0.5, rel=1e-12)
    assert f / cautious_transit_frequency(velocity=1e5, width=20e-6) == pytest.approx(2.78, abs=0.005)


def test_speeds():
    assert combined_bandwidth(first=3e6, second=4e6) == near(2.4e6)
    tau = 1 / (2 * np.pi * 1e6)
    assert rise_time(bandwidth=1e6) == near(tau * (np.log(1 / 0.1) - np.log(1 / 0.9)))
    assert diffusion_time(depth=10e-6, diffusivity=1e-3) == near(50e-9)
    c = filter_capacitance(resistance=1e3, corner=1e6)
    assert corner_frequency(resistance=1e3, capacitance=c) == near(1e6)


def test_electrons_and_photons_balance():
    """An electron for each photon one way, a photon for each electron the other way."""
    r = responsivity(quantum_efficiency=1.0, wavelength=1.31e-6)
    assert differential_efficiency(slope=1 / r, wavelength=1.31e-6) == near(1)
    assert photon_energy(wavelength=1.31e-6) * r == near(1.602176634e-19)
    assert monitor_current(power=5e-3, monitor_responsivity=0.1) == near(0.5e-3)


def test_shot_noise_passes_as_current_noise_does():
    stage = {"feedback_resistance": 100e3, "natural_frequency": 4e6, "quality": 0.7}
    direct = current_output(current_noise=shot_noise(current=1e-6), **stage)
    assert shot_output(current=1e-6, **stage) == near(direct, rel=1e-12)


def test_comfortable_product_is_twice_the_least():
    parts = {"feedback_resistance": 100e3, "input_capacitance": 20e-12}
    product = comfortable_gain_bandwidth(bandwidth=2e6, **parts)
    assert intercept_frequency(gain_bandwidth=product / 2, **parts) == near(2e6)


def test_swing_over_current():
    assert feedback_resistance(swing=2.0, current=20e-6) == near(100e3)


def test_absorbed_share_by_steps_through_the_layer():
    left = 1.0
    for _ in range(100_000):
        left -= left * 1e5 * 5e-6 / 100_000
    assert absorbed_share(absorption=1e5, width=5e-6) == near(1 - left, rel=1e-5)
    np.testing.assert_allclose(absorbed_share(absorption=1e5, width=np.array([0.0, 1.0])), [0.0, 1.0])


def test_reflection_of_a_surface_from_either_side():
    """None where the index does not change, the same from within, all of a mirror."""
    np.testing.assert_allclose(
        surface_reflection(index=np.array([1.5, 1.0, 3.5]), outside_index=np.array([1.5, 3.5, 1.0])),
        [0.0, (2.5 / 4.5) ** 2, (2.5 / 4.5) ** 2],
    )
    assert surface_reflection(index=1e9, outside_index=1.0) == near(1.0)


def test_unbiased_shunt_is_the_slope_of_the_junction_law():
    law = {"saturation_current": 2e-11, "emission": 1.3, "series_resistance": 1e-3, "temperature": 320.0}
    slope = (current_at_voltage(voltage=1e-5, **law) - current_at_voltage(voltage=-1e-5, **law)) / 2e-5
    shunt = unbiased_shunt(saturation_current=2e-11, emission=1.3, temperature=320.0)
    assert shunt == near(1 / slope)


def test_doublings_are_the_slope_of_the_exponential():
    gap = 1.12 * ELEMENTARY_CHARGE
    for doubling, share in ((generation_doubling, 0.5), (diffusion_doubling, 1.0)):
        for temperature in (250.0, 300.0, np.array([350.0])):
            step = 1e-3
            ratio = np.exp(share * gap / BOLTZMANN * (1 / temperature - 1 / (temperature + step)))
            found = doubling(band_gap=gap, temperature=temperature)
            by_law = dark_current(
                dark_current=1.0,
                temperature=temperature + step,
                reference_temperature=temperature,
                doubling=found,
            )
            np.testing.assert_allclose(by_law - 1, ratio - 1, rtol=1e-5)


def test_junction_law_there_and_back_and_at_zero():
    law = {"built_in_voltage": 0.55, "grading": np.array([0.0, 1 / 3, 0.5])}
    at_bias = junction_capacitance(zero_bias_capacitance=5e-12, reverse_bias=8.0, **law)
    np.testing.assert_allclose(zero_bias_capacitance(capacitance=at_bias, reverse_bias=8.0, **law), 5e-12, rtol=1e-14)
    assert junction_capacitance(
        zero_bias_capacitance=5e-12, reverse_bias=0.0, built_in_voltage=0.55, grading=0.5
    ) == near(5e-12)
    assert at_bias[0] == near(5e-12)


def test_transit_time_is_what_the_cautious_bandwidth_is_made_of():
    time = transit_time(velocity=8e4, width=30e-6)
    assert 2 * np.pi * time * cautious_transit_frequency(velocity=8e4, width=30e-6) == near(1.0)
