"""What is read off simulated curves, against closed forms."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import given
from hypothesis import strategies as st

from opto_ckt.outputs.readings import falls_to, integrated, phase_margin_of, rise_time_of


@given(st.floats(1e4, 1e7))
def test_corner_of_one_pole(corner: float) -> None:
    frequency = np.geomspace(1e2, 1e9, 351)
    magnitude = 1 / np.sqrt(1 + (frequency / corner) ** 2)
    assert falls_to(frequency, magnitude, 0.5**0.5) == pytest.approx(corner, rel=3e-4)


@given(st.floats(1e5, 1e6), st.floats(1e5, 1e8))
def test_margin_of_an_integrator_with_a_second_pole(crossover: float, pole: float) -> None:
    frequency = np.geomspace(1e3, 1e9, 601)
    loop = crossover / (1j * frequency) / (1 + 1j * frequency / pole)
    at = crossover * np.sqrt((np.sqrt(1 + 4 * (crossover / pole) ** 2) - 1) / (2 * (crossover / pole) ** 2))
    found, margin = phase_margin_of(frequency, loop)
    assert found == pytest.approx(at, rel=1e-3)
    assert margin == pytest.approx(90 - np.degrees(np.arctan(at / pole)), abs=0.03)


def test_a_curve_that_never_falls_gives_nan() -> None:
    frequency = np.geomspace(1, 10, 5)
    assert np.isnan(falls_to(frequency, np.ones(5), 0.7))
    assert np.isnan(phase_margin_of(frequency, np.full(5, 0.1 + 0j))[0])


@given(st.floats(-1.4, 1.4))
def test_a_power_law_is_integrated_exactly(slope: float) -> None:
    frequency = np.geomspace(1e2, 1e6, 41)
    expected = np.sqrt(np.log(1e3)) if abs(slope + 0.5) < 1e-12 else None
    power = 2 * slope + 1
    closed = np.sqrt((2e5**power - 2e2**power) / power) if expected is None and abs(power) > 1e-6 else None
    if closed is not None:
        assert integrated(frequency, frequency**slope, 2e2, 2e5) == pytest.approx(closed, rel=1e-6)


def test_rise_time_of_an_exponential() -> None:
    time = np.linspace(0, 30, 20001)
    assert rise_time_of(time, 3 + 2 * (1 - np.exp(-time))) == pytest.approx(np.log(9), rel=1e-6)
