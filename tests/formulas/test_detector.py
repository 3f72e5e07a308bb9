"""Speed of detectors and the remaining light-to-current relations."""

from __future__ import annotations

import numpy as np
import pytest

from opto_ckt.formulas.laser import differential_efficiency, monitor_current
from opto_ckt.formulas.noise import shot_noise
from opto_ckt.formulas.output_noise import current_output, shot_output
from opto_ckt.formulas.photodiode import photon_energy, responsivity
from opto_ckt.formulas.reference import filter_capacitance
from opto_ckt.formulas.rules_of_thumb import comfortable_gain_bandwidth, intercept_frequency
from opto_ckt.formulas.transimpedance import feedback_resistance
from opto_ckt.formulas.transit import (
    cautious_transit_frequency,
    combined_bandwidth,
    corner_frequency,
    diffusion_time,
    rise_time,
    transit_frequency,
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
