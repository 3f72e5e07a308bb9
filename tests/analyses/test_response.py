from __future__ import annotations

from math import factorial, log, pi, sqrt

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st
from scipy.optimize import brentq, minimize_scalar
from scipy.signal import TransferFunction, step

from opto_ckt.analyses import response
from opto_ckt.analyses.network import Expansion, Network, Primitive
from opto_ckt.analyses.network.modes import modes_of, poles_of
from tests.analyses.networks import RECEIVER, lane, loop_of_poles, low_pass, named, receiver, resonator, scattered


def second_order(quality, frequency=1e6):
    """Series resonator with the wanted Q and natural frequency."""
    inductance = 1e-6
    capacitance = 1 / ((2 * pi * frequency) ** 2 * inductance)
    resistance = np.sqrt(inductance / capacitance) / quality
    values = {"R": resistance, "L": inductance, "C": capacitance, "corner": 0.0}
    return Network(resonator()).evaluate(values)


def coupled():
    """High-pass of R1 C1, an ideal copy, then low-pass of R2 C2."""
    return Expansion(
        (
            Primitive("R", "load", ("in", "0"), lambda v: 1.0),
            Primitive("E", "source", ("drive", "0", "in", "0"), lambda v: -5.0),
            Primitive("C", "C1", ("drive", "high"), named("C1")),
            Primitive("R", "R1", ("high", "0"), named("R1")),
            Primitive("E", "copy", ("between", "0", "high", "0"), lambda v: 1.0),
            Primitive("R", "R2", ("between", "out"), named("R2")),
            Primitive("C", "C2", ("out", "0"), named("C2")),
        ),
        (),
        ("0", "in"),
        lambda v: 1.0,
        ("out", "0"),
    )


def test_first_order_closed_forms():
    evaluation = Network(low_pass()).evaluate({"R": np.array([1e3, 50.0, 1e9]), "C": np.array([1e-9, 1e-12, 10e-9])})
    time = np.array([1e-6, 50e-12, 10.0])
    assert response.bandwidth(evaluation) == pytest.approx(1 / (2 * pi * time), rel=1e-12)
    assert response.rise_time(evaluation) == pytest.approx(log(9) * time, rel=1e-10)
    assert response.overshoot(evaluation).tolist() == [0, 0, 0]
    assert response.peaking(evaluation).tolist() == [0, 0, 0]
    assert response.poles(evaluation)[0] == pytest.approx(-1 / time, rel=1e-12)
    assert response.quality_factor(evaluation).tolist() == [0.5, 0.5, 0.5]
    assert response.step_response(evaluation, time) == pytest.approx(1 - np.exp(-1.0) * np.ones(3), rel=1e-12)


def test_second_order_closed_forms():
    quality = np.array([0.3, 0.5, 0.55, 0.72, 0.8165, 1.0, 3.0, 30.0])
    evaluation = second_order(quality)
    b = 1 - 1 / (2 * quality**2)
    assert response.bandwidth(evaluation) == pytest.approx(1e6 * np.sqrt(b + np.sqrt(b**2 + 1)), rel=1e-10)
    with np.errstate(invalid="ignore", divide="ignore"):
        peak = np.where(quality > 1 / sqrt(2), 20 * np.log10(quality**2 / np.sqrt(quality**2 - 0.25)), 0.0)
        zeta = 1 / (2 * quality)
        excess = np.where(zeta < 1, np.exp(-pi * zeta / np.sqrt(1 - zeta**2)), 0.0)
    height, place = response.peak(evaluation)
    assert height == pytest.approx(peak, abs=1e-6)
    peaked = peak > 0
    assert place[peaked] == pytest.approx(1e6 * np.sqrt(b[peaked]), rel=1e-5)
    assert np.isnan(place[~peaked]).all()
    assert response.overshoot(evaluation) == pytest.approx(excess, abs=1e-8)
    assert response.quality_factor(evaluation) == pytest.approx(np.maximum(quality, 0.5), rel=1e-7)


@pytest.mark.parametrize("seed", range(2))
def test_receiver_against_search_on_its_own_gain(seed):
    values = scattered(RECEIVER, 6, seed)
    evaluation = Network(receiver()).evaluate(values)
    bandwidth, peaking = response.bandwidth(evaluation), response.peaking(evaluation)
    frequencies = np.logspace(3, 10, 4001)
    for number in range(6):
        single = Network(receiver()).evaluate(lane(values, number))

        def below(logarithm, own=single):
            ratio = np.abs(response.transfer_at(own, np.exp(logarithm))) / np.abs(response.dc_gain(own))
            return float(20 * np.log10(ratio)[0])

        gain = np.abs(response.transfer_at(single, frequencies[:, None])[:, 0] / response.dc_gain(single))
        first = np.argmax(gain < sqrt(0.5))
        ends = np.log(frequencies[first - 1]), np.log(frequencies[first])
        edge = brentq(lambda x: below(x) + 10 * np.log10(2), *ends, xtol=1e-14)
        assert bandwidth[number] == pytest.approx(np.exp(edge), rel=1e-9)
        top = np.argmax(gain)
        if gain[top] > 1 + 1e-6:
            bounds = np.log(frequencies[top - 1]), np.log(frequencies[top + 1])
            highest = minimize_scalar(lambda x: -below(x), bounds=bounds, method="bounded", options={"xatol": 1e-7})
            assert peaking[number] == pytest.approx(-highest.fun, abs=1e-7)
        else:
            assert peaking[number] < 1e-5


@pytest.mark.parametrize("seed", range(2))
def test_step_of_receiver_against_scipy(seed):
    evaluation = Network(receiver()).evaluate(scattered(RECEIVER, 4, seed))
    bandwidth = response.bandwidth(evaluation)
    for number in range(4):
        time = np.linspace(0, 5 / bandwidth[number], 4001)
        system = TransferFunction(evaluation.numerator[::-1, number], evaluation.denominator[::-1, number])
        _, expected = step(system, T=time * evaluation.frequency_scale)
        final = response.dc_gain(evaluation)[number]
        found = response.step_response(evaluation, time[:, None])[:, number]
        assert found / final == pytest.approx(expected / final, abs=1e-6)
        relative = found / final
        rise = time[np.argmax(relative >= 0.9)] - time[np.argmax(relative >= 0.1)]
        assert response.rise_time(evaluation)[number] == pytest.approx(rise, abs=2 * time[1])
        assert response.overshoot(evaluation)[number] == pytest.approx(max(relative.max() - 1, 0), abs=1e-5)


@pytest.mark.parametrize("sections", [2, 3, 4, 6])
def test_step_with_repeated_poles(sections):
    evaluation = Network(low_pass(sections)).evaluate({"R": 1e3, "C": 1e-9})
    time = np.linspace(0, 20, 101)
    expected = 1 - np.exp(-time) * sum(time**k / factorial(k) for k in range(sections))
    found = response.step_response(evaluation, 1e-6 * time[:, None])[:, 0]
    assert found == pytest.approx(expected, abs=2e-8)
    assert response.overshoot(evaluation)[0] == pytest.approx(0, abs=1e-7)
    assert response.bandwidth(evaluation)[0] == pytest.approx(sqrt(2 ** (1 / sections) - 1) / (2 * pi * 1e-6), rel=1e-9)


@settings(deadline=None, max_examples=30)
@given(st.floats(0.51, 40), st.floats(3, 10))
def test_rise_time_and_overshoot_of_any_resonator(quality, decade):
    evaluation = second_order(quality, 10**decade)
    omega, zeta = 2 * pi * 10**decade, 1 / (2 * quality)
    damped = sqrt(1 - zeta**2)

    def rest(time, level):
        inner = np.cos(damped * time) + zeta / damped * np.sin(damped * time)
        return 1 - level - np.exp(-zeta * time) * inner

    first = pi / damped  # the first maximum
    rise = brentq(lambda t: rest(t, 0.9), 0, first) - brentq(lambda t: rest(t, 0.1), 0, first)
    assert response.rise_time(evaluation)[0] == pytest.approx(rise / omega, rel=1e-7)
    assert response.overshoot(evaluation)[0] == pytest.approx(np.exp(-pi * zeta / damped), abs=1e-7)


def test_coupled_network_refers_to_midband():
    values = {"C1": 1e-6, "R1": 1e4, "R2": 1e3, "C2": 1e-11}
    evaluation = Network(coupled()).evaluate(values)
    low, high = 1 / (2 * pi * 1e-2), 1 / (2 * pi * 1e-8)
    midband = response.midband_gain(evaluation)
    assert midband == pytest.approx(5 / (1 + 1e-6), rel=1e-7)
    assert response.bandwidth(evaluation, reference=5.0)[0] == pytest.approx(high, rel=1e-6)
    assert response.low_cutoff(evaluation, reference=5.0)[0] == pytest.approx(low, rel=1e-6)
    assert response.rise_time(evaluation, reference=5.0)[0] == pytest.approx(log(9) * 1e-8, rel=1e-4)
    assert response.overshoot(evaluation, reference=5.0)[0] == pytest.approx(0, abs=1e-6)
    assert response.peaking(evaluation, reference=5.0)[0] == 0
    assert np.isnan(response.bandwidth(evaluation, reference=8.0)[0])
    assert response.low_cutoff(evaluation, reference=8.0)[0] == 0


def test_direct_coupled_network_has_no_low_cutoff():
    evaluation = Network(low_pass()).evaluate({"R": 1e3, "C": 1e-9})
    assert response.low_cutoff(evaluation, reference=1.0)[0] == 0


def test_unstable_network_has_no_figures():
    evaluation = Network(loop_of_poles(3)).evaluate({"gain": np.array([7.0, 9.0])})
    assert evaluation.stable.tolist() == [True, False]
    for figure in (
        response.bandwidth,
        response.peaking,
        response.rise_time,
        response.overshoot,
        response.quality_factor,
    ):
        found = figure(evaluation)
        assert np.isfinite(found[0]), figure.__name__
        assert np.isnan(found[1]), figure.__name__
    assert response.poles(evaluation)[:, 1].real.max() > 0


def test_transfer_takes_a_frequency_for_each_lane():
    evaluation = Network(low_pass()).evaluate({"R": np.array([1e3, 2e3]), "C": 1e-9})
    corner = 1 / (2 * pi * np.array([1e-6, 2e-6]))
    assert response.transfer_at(evaluation, corner) == pytest.approx(np.full(2, 1 / (1 + 1j)), rel=1e-12)
    assert response.transfer_at(evaluation, np.array([[1.0], [2.0], [3.0]])).shape == (3, 2)


def test_wild_designs_against_dense_scan():
    """Every value by up to a factor of e: the first fall through -3 dB and the peak, against 400 points a decade."""
    evaluation = Network(receiver()).evaluate(scattered(RECEIVER, 300, 7, spread=np.e))
    bandwidth, peaking = response.bandwidth(evaluation), response.peaking(evaluation)
    frequencies = np.logspace(4, 9, 2001)
    gain = np.abs(response.transfer_at(evaluation, frequencies[:, None]) / response.dc_gain(evaluation))
    first = np.argmax(gain < sqrt(0.5), axis=0)
    stable = evaluation.stable
    assert stable.sum() > 100
    assert (bandwidth[stable] <= frequencies[first[stable]]).all()
    assert (bandwidth[stable] >= frequencies[first[stable] - 1]).all()
    top = 20 * np.log10(np.maximum(gain.max(axis=0), 1))
    assert (np.abs(peaking - top)[stable] < 1e-3 * (1 + top[stable])).all()
    assert np.isnan(bandwidth[~stable]).all()


def test_settling_time_of_one_pole():
    """A pole of time constant τ is below a share x of its end value after τ ln(1/x)."""
    values = {"R": 1e3, "C": 1e-9}
    evaluation = Network(low_pass()).evaluate(values)
    (pole,) = response.poles(evaluation)[:, 0]
    assert response.settling_time(evaluation, 1e-3)[0] == pytest.approx(np.log(1e3) / -pole.real, rel=1e-9, abs=0)


@pytest.mark.parametrize("apart", [0.0, 1e-12, 1e-8, 1e-6, 1e-4])
def test_fast_poles_that_fall_together_beside_a_slow_one(apart):
    """A double pole far above a slow one: rise time of the slow one, nothing undefined."""
    slow, fast = -1.0, -1e8
    roots = np.array([slow, fast, fast * (1 + apart)])
    denominator = np.poly(roots)[::-1, None]
    modes = modes_of(denominator, denominator[:1], poles_of(denominator))
    time = np.linspace(0, 5, 21)
    assert modes.response(time[:, None])[:, 0] == pytest.approx(1 - np.exp(-time), abs=1e-7)
    assert np.isfinite(modes.residues).all()
