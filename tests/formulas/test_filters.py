"""Filter polynomials against scipy, ladders and sections against their own transfer functions."""

from __future__ import annotations

import numpy as np
import pytest
from scipy import integrate, signal

from opto_ckt.formulas import filters
from opto_ckt.formulas.coupling import corner_for_droop, droop_penalty
from opto_ckt.formulas.front_end import droop

ORDERS = range(1, 6)


@pytest.mark.parametrize("order", ORDERS)
def test_polynomials_are_those_of_scipy(order: int) -> None:
    _, bessel = signal.bessel(order, 1.0, analog=True, norm="mag")
    _, butterworth = signal.butter(order, 1.0, analog=True)
    assert filters.bessel(order) == pytest.approx(bessel[::-1] / bessel[-1], rel=1e-9)
    assert filters.butterworth(order) == pytest.approx(butterworth[::-1] / butterworth[-1], rel=1e-9)


@pytest.mark.parametrize("order", ORDERS)
@pytest.mark.parametrize("family", [filters.bessel, filters.butterworth])
def test_a_ladder_has_the_response_of_its_polynomial(family, order: int) -> None:
    """The ladder multiplied out as a chain from its open end back to the source."""
    denominator = family(order)
    elements = filters.ladder(denominator)
    s = 1j * np.geomspace(0.05, 20, 40)
    voltage, current = np.ones_like(s), np.zeros_like(s)
    for index, value in enumerate(reversed(elements)):
        if index % 2 == 0:
            current = current + s * value * voltage
        else:
            voltage = voltage + s * value * current
    assert 1 / (voltage + current) == pytest.approx(1 / np.polyval(denominator[::-1], s), rel=1e-9)


@pytest.mark.parametrize("order", [2, 4])
@pytest.mark.parametrize("family", [filters.bessel, filters.butterworth])
def test_sections_in_a_row_have_the_response_of_the_polynomial(family, order: int) -> None:
    denominator = family(order)
    s = 1j * np.geomspace(0.05, 20, 40)
    product = np.prod([1 + s / (f * q) + (s / f) ** 2 for f, q in filters.sections(denominator)], axis=0)
    assert product == pytest.approx(np.polyval(denominator[::-1], s), rel=1e-9)


def test_noise_bandwidth_of_the_fourth_order_bessel() -> None:
    """1.046 times its half-power frequency, as the reference of eye measurements has."""
    denominator = filters.bessel(4)
    total, _ = integrate.quad(lambda w: 1 / abs(np.polyval(denominator[::-1], 1j * w)) ** 2, 0, np.inf)
    assert total == pytest.approx(1.046, abs=5e-4)


def test_sallen_key_section_has_its_frequency_and_quality() -> None:
    """H = 1/(1 + 2 s C_g R + s² R² C_f C_g) of the section with equal resistors and an ideal follower."""
    resistance, frequency, quality = 1e3, 5e6, 0.8055
    parts = {"resistance": resistance, "frequency": frequency, "quality": quality}
    across = filters.sallen_key_feedback_capacitance(**parts)
    ground = filters.sallen_key_ground_capacitance(**parts)
    natural = 1 / (resistance * (across * ground) ** 0.5)
    assert natural == pytest.approx(2 * np.pi * frequency, rel=1e-12)
    assert 1 / (2 * ground * resistance * natural) == pytest.approx(quality, rel=1e-12)


def test_scaling() -> None:
    assert filters.scaled_inductance(normalised=4 / 3, resistance=200.0, frequency=7.5e6) == pytest.approx(
        5.659e-6, rel=1e-3
    )
    assert filters.scaled_capacitance(normalised=1.5, resistance=200.0, frequency=7.5e6) == pytest.approx(
        159.15e-12, rel=1e-4
    )


def test_corner_and_penalty_belong_to_the_droop() -> None:
    corner = corner_for_droop(droop=0.05, duration=7.2e-6)
    assert droop(corner=corner, duration=7.2e-6) == pytest.approx(0.05, rel=1e-12)
    assert droop_penalty(droop=0.05) == pytest.approx(-10 * np.log10(0.95), rel=1e-12)
