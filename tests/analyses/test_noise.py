from __future__ import annotations

from itertools import pairwise
from math import log, pi, sqrt

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.integrate import quad

from opto_ckt.analyses import noise, response
from opto_ckt.analyses.network import Network
from opto_ckt.analyses.network.quadrature import GAUSS, KRONROD, NODES
from tests.analyses.direct import Direct
from tests.analyses.networks import (
    BOLTZMANN,
    FOUR_K_T,
    RECEIVER,
    TEMPERATURE,
    ladder,
    lane,
    loop_of_poles,
    low_pass,
    receiver,
    resonator,
    scattered,
)


def integrated(evaluation, low, high):
    """Fine quadrature of the density in ln f, piece by piece."""
    edges = np.linspace(log(low), log(high), 400)

    def integrand(u):
        frequency = np.exp(u)
        return float(noise.output_density(evaluation, frequency)[0]) * frequency

    pieces = pairwise(edges)
    return sum(quad(integrand, a, b, epsabs=0, epsrel=1e-9, limit=20)[0] for a, b in pieces)


def test_capacitor_noise():
    """kT/C whatever the resistor."""
    evaluation = Network(low_pass()).evaluate({"R": np.array([50.0, 1e9]), "C": 1e-12})
    assert noise.output_rms(evaluation) == pytest.approx(sqrt(BOLTZMANN * TEMPERATURE / 1e-12), rel=1e-12)


@settings(deadline=None, max_examples=30)
@given(st.integers(1, 6), st.integers(0, 10**6))
def test_last_capacitor_of_any_ladder_in_equilibrium(sections, seed):
    """A passive network at one temperature shows kT/C at a capacitor, by equipartition, whatever else it holds."""
    generator = np.random.default_rng(seed)
    values = {f"R{n}": 10 ** generator.uniform(2, 7) for n in range(sections)} | {"load": 1e5}
    values |= {f"C{n}": 10 ** generator.uniform(-13, -8) for n in range(sections + 1)}
    evaluation = Network(ladder(sections)).evaluate(values)
    last = values[f"C{sections}"]
    assert noise.output_rms(evaluation)[0] == pytest.approx(sqrt(BOLTZMANN * TEMPERATURE / last), rel=1e-8)


@pytest.mark.parametrize("seed", range(2))
def test_density_agrees_with_plain_nodal_analysis(seed):
    values = scattered(RECEIVER, 3, seed)
    evaluation = Network(receiver()).evaluate(values)
    frequencies = np.array([10.0, 1e4, 1e6, 2e7, 1e9])
    density = noise.output_density(evaluation, frequencies[:, None])
    apart = noise.density_by_generator(evaluation, frequencies[:, None])
    assert sum(apart.values()) == pytest.approx(density, rel=1e-12)
    for number in range(3):
        for point, frequency in enumerate(frequencies):
            expected = Direct(receiver(), lane(values, number), frequency).density()
            assert density[point, number] == pytest.approx(expected, rel=1e-9)


@pytest.mark.parametrize("seed", range(2))
def test_closed_form_and_bands_against_fine_quadrature(seed):
    values = scattered(RECEIVER, 2, seed)
    evaluation = Network(receiver()).evaluate(values)
    for number in range(2):
        single = Network(receiver()).evaluate(lane(values, number))
        below = 10 * float(
            noise.output_density(Network(receiver()).evaluate(lane(values, number) | {"corner": 0.0}), 1e-3)[0]
        )
        full = integrated(single, 10.0, 1e12) + below
        assert noise.output_rms(evaluation)[number] == pytest.approx(sqrt(full), rel=1e-6)
        for band in ((1e3, 1e7), (1e6, 3e6), (0.1, 1e9), (5e7, 5.1e7)):
            expected = sqrt(integrated(single, *band))
            assert noise.output_rms(evaluation, band)[number] == pytest.approx(expected, rel=1e-6), band


@pytest.mark.parametrize(("spread", "lanes"), [(1.3, 1000), (4.0, 500), (10.0, 300)])
def test_widest_band_is_the_closed_form(spread, lanes):
    """Two roads to white noise, on designs up to very sharp ones: panels against Hurwitz's moments."""
    values = scattered(RECEIVER | {"corner": 0.0}, lanes, 5, spread)
    evaluation = Network(receiver()).evaluate(values)
    stable = evaluation.stable
    assert stable.sum() > 0.9 * lanes
    banded = noise.output_rms(evaluation, (1e-6, 9e12))
    assert banded[stable] == pytest.approx(noise.output_rms(evaluation)[stable], rel=5e-6)


@pytest.mark.parametrize("quality", [0.2, 5.0, 50.0, 1000.0])
def test_sharp_resonance_in_a_band(quality):
    """Band integral of a resonator against partial fractions: logarithms at its two poles."""
    resistance = sqrt(1e-6 / 1e-9) / quality
    values = {"R": resistance, "L": 1e-6, "C": 1e-9, "corner": 0.0}
    evaluation = Network(resonator()).evaluate(values)
    total = sqrt(BOLTZMANN * TEMPERATURE / 1e-9)
    assert noise.output_rms(evaluation)[0] == pytest.approx(total, rel=1e-10)
    assert noise.output_rms(evaluation, (1e-2, 1e12))[0] == pytest.approx(total, rel=1e-6)
    first, second = response.poles(evaluation)[:, 0]
    natural = first * second
    residues = [natural**2 / (2 * p * (p**2 - q**2)) for p, q in ((first, second), (second, first))]

    def integral(low, high):
        ends = 2j * pi * np.array([high, low])
        pieces = [
            residue * (np.log(ends - pole) - np.log(-ends - pole))
            for residue, pole in zip(residues, (first, second), strict=True)
        ]
        above, below = sum(pieces)
        return (above - below) / 1j

    for band in ((1e6, 5e6), (5.04e6, 1e8), (1.0, 5.02e6)):
        expected = sqrt(FOUR_K_T * resistance * integral(*band).real / (2 * pi))
        assert noise.output_rms(evaluation, band)[0] == pytest.approx(expected, rel=1e-6), band


@pytest.mark.parametrize(("corner", "low"), [(1e3, 10.0), (1e6, 1.0), (1e8, 1e3)])
def test_flicker_of_one_pole(corner, low):
    """∫ fc/f / (1 + (f/f0)²) df from f1 is fc/2 ln(1 + (f0/f1)²)."""
    expansion = resonator()
    values = {"R": 1e3, "L": 1e-15, "C": 1e-9, "corner": corner}
    evaluation = Network(expansion).evaluate(values)
    pole = 1 / (2 * pi * 1e-6)
    white = BOLTZMANN * TEMPERATURE / 1e-9
    flicker = FOUR_K_T * 1e3 * corner / 2 * log(1 + (pole / low) ** 2)
    assert noise.output_rms(evaluation, flicker_from=low)[0] == pytest.approx(sqrt(white + flicker), rel=1e-6)
    band = noise.output_rms(evaluation, (low, 1e8))[0]
    within = (
        FOUR_K_T
        * 1e3
        * (
            pole * (np.arctan(1e8 / pole) - np.arctan(low / pole))
            + corner / 2 * log((1 + (pole / low) ** 2) / (1 + (pole / 1e8) ** 2))
        )
    )
    assert band == pytest.approx(sqrt(within), rel=1e-6)


def test_shares_add_up():
    evaluation = Network(receiver()).evaluate(scattered(RECEIVER, 50, 5))
    stable = evaluation.stable
    for band in (None, (1e3, 1e7)):
        total = noise.output_rms(evaluation, band)
        shares = noise.rms_by_generator(evaluation, band)
        assert list(shares) == [generator.label for generator in receiver().generators]
        assert sum(share**2 for share in shares.values())[stable] == pytest.approx(total[stable] ** 2, rel=1e-6)


def test_referred_to_the_input():
    evaluation = Network(receiver()).evaluate(RECEIVER)
    gain = np.abs(response.transfer_at(evaluation, 1e5)) ** 2
    assert noise.input_density(evaluation, 1e5) == pytest.approx(noise.output_density(evaluation, 1e5) / gain)
    lit = receiver()
    optical = Network(type(lit)(lit.primitives, lit.generators, lit.input, lambda v: 0.6, lit.output, lit.loop))
    seen = optical.evaluate(RECEIVER)
    assert noise.input_density(seen, 1e5) == pytest.approx(noise.input_density(evaluation, 1e5), rel=1e-12)
    assert noise.signal_density(seen, 1e5) == pytest.approx(noise.input_density(seen, 1e5) / 0.36, rel=1e-12)


def test_unstable_lanes_have_no_noise():
    values = scattered(RECEIVER, 200, 3, spread=20)
    evaluation = Network(receiver()).evaluate(values)
    for found in (noise.output_rms(evaluation), noise.output_rms(evaluation, (1e3, 1e7))):
        assert np.isnan(found[~evaluation.stable]).all()
        assert np.isfinite(found[evaluation.stable]).all()


def test_white_noise_without_a_limit_is_infinite():
    values = RECEIVER | {"C2": np.array([0.0, 33e-12])}
    found = noise.output_rms(Network(receiver()).evaluate(values))
    assert found[0] == np.inf
    assert np.isfinite(found[1])
    banded = noise.output_rms(Network(receiver()).evaluate(values), (1e3, 1e7))
    assert np.isfinite(banded).all()


def test_network_without_generators_is_quiet():
    evaluation = Network(loop_of_poles(2)).evaluate({"gain": 2.0})
    assert noise.output_rms(evaluation).tolist() == [0.0]
    assert noise.rms_by_generator(evaluation) == {}
    assert noise.output_density(evaluation, 1.0).tolist() == [0.0]


@pytest.mark.parametrize("band", [(0.0, 1e3), (1e3, 1e3), (1e4, 1e3), (-1.0, 1e3)])
def test_empty_bands_are_refused(band):
    with pytest.raises(ValueError, match="a noise band runs upwards"):
        noise.output_rms(Network(receiver()).evaluate(RECEIVER), band)


def test_rules_integrate_polynomials_exactly():
    for power in range(23):
        expected = 2 / (power + 1) if power % 2 == 0 else 0.0
        assert KRONROD @ NODES**power == pytest.approx(expected, abs=1e-14)
        if power < 14:
            assert GAUSS @ NODES**power == pytest.approx(expected, abs=1e-14)
