"""Closed forms of the transimpedance stage against the complex node equations that they were derived from."""

from __future__ import annotations

import numpy as np
import pytest
from hypothesis import assume, given
from hypothesis import strategies as st
from scipy.integrate import quad
from scipy.optimize import brentq

from opto_ckt.constants import BOLTZMANN
from opto_ckt.formulas.feedback_network import tapped_capacitance, tee_capacitance, tee_resistance
from opto_ckt.formulas.loop import (
    alignment_crossover_ratio,
    alignment_margin,
    crossover,
    noise_gain,
    noise_gain_plateau,
    phase_margin,
)
from opto_ckt.formulas.output_noise import current_output, thermal_output, voltage_output
from opto_ckt.formulas.second_order import (
    bandwidth,
    bandwidth_ratio,
    noise_bandwidth,
    overshoot,
    peaking,
    quality_for_overshoot,
    quality_for_peaking,
    square_noise_bandwidth,
)
from opto_ckt.formulas.transimpedance import (
    dc_transimpedance,
    feedback_capacitance,
    feedback_capacitance_for_bandwidth,
    natural_frequency,
    natural_frequency_at_finite_gain,
    quality_factor,
    quality_factor_at_finite_gain,
)
from opto_ckt.formulas.transimpedance_limits import (
    largest_feedback_capacitance,
    largest_feedback_resistance,
    largest_input_capacitance,
    required_gain_bandwidth,
    required_gain_bandwidth_at_capacitance,
)
from tests.near import near

resistances = st.floats(2, 9).map(lambda exponent: 10**exponent)
capacitances = st.floats(-12.5, -9).map(lambda exponent: 10**exponent)
products = st.floats(5, 10).map(lambda exponent: 10**exponent)
qualities = st.floats(0.3, 3)


def response(frequency, *, r_f, c_i, c_f, gbw, r_sh=np.inf, gain=np.inf):
    """Output voltage for a unit of input current, by Kirchhoff's law at the summing node."""
    s = 2j * np.pi * np.asarray(frequency)
    y_f, y_i = 1 / r_f + s * c_f, 1 / r_sh + s * c_i
    return -1 / (y_f + (y_f + y_i) * (1 / gain + s / (2 * np.pi * gbw)))


def two_poles(frequency, f_0, q, dc):
    x = np.asarray(frequency) / f_0
    return dc / (1 + 1j * x / q - x**2)


def parts(r_f, c_i, gbw):
    return {"feedback_resistance": r_f, "input_capacitance": c_i, "gain_bandwidth": gbw}


@given(resistances, capacitances, capacitances, products, resistances, st.floats(10, 1e7))
def test_closed_loop_is_the_node_equation(r_f, c_i, c_f, gbw, r_sh, gain):
    known = parts(r_f, c_i, gbw) | {"feedback_capacitance": c_f}
    f_0 = natural_frequency(**known)
    at = f_0 * np.array([0.01, 0.5, 1.0, 3.0])
    np.testing.assert_allclose(
        two_poles(at, f_0, quality_factor(**known), -r_f), response(at, r_f=r_f, c_i=c_i, c_f=c_f, gbw=gbw), rtol=1e-9
    )
    leaky = known | {"shunt_resistance": r_sh, "open_loop_gain": gain}
    f_0, q = natural_frequency_at_finite_gain(**leaky), quality_factor_at_finite_gain(**leaky)
    dc = dc_transimpedance(feedback_resistance=r_f, shunt_resistance=r_sh, open_loop_gain=gain)
    at = f_0 * np.array([0.01, 0.5, 1.0, 3.0])
    np.testing.assert_allclose(
        two_poles(at, f_0, q, -dc),
        response(at, r_f=r_f, c_i=c_i, c_f=c_f, gbw=gbw, r_sh=r_sh, gain=gain),
        rtol=1e-9,
    )


@given(resistances, capacitances, products, qualities)
def test_feedback_capacitance_gives_the_wanted_quality(r_f, c_i, gbw, quality):
    assume(2 * np.pi * gbw * r_f * c_i > 1.01 * quality**2)
    c_f = feedback_capacitance(**parts(r_f, c_i, gbw), quality=quality)
    assert c_f > 0
    assert quality_factor(**parts(r_f, c_i, gbw), feedback_capacitance=c_f) == near(quality, rel=1e-9)


@given(resistances, capacitances, products, st.floats(0.2, 1.0))
def test_largest_feedback_capacitance_that_keeps_a_bandwidth(r_f, c_i, gbw, share):
    f_3 = share * natural_frequency(**parts(r_f, c_i, gbw), feedback_capacitance=0.0)
    assume(2 * np.pi * gbw * r_f * c_i > 30)
    c_f = feedback_capacitance_for_bandwidth(**parts(r_f, c_i, gbw), bandwidth=f_3)
    assert c_f > 0

    def loss(capacitance):
        return abs(response(f_3, r_f=r_f, c_i=c_i, c_f=capacitance, gbw=gbw)) / r_f

    assert loss(c_f) == near(0.5**0.5, rel=1e-6)
    assert loss(1.01 * c_f) < 0.5**0.5


@given(resistances, capacitances, products, qualities, st.floats(1.01, 300))
def test_limits_agree_with_one_another(r_f, c_i, gbw, quality, u):
    """R_f, C_i and GBW solved for each other give the Q and the bandwidth back; u = 1 + ω_c R_f C_f."""
    f_3 = bandwidth_ratio(quality=quality) * gbw / (quality * u)
    wanted = {"bandwidth": f_3, "quality": quality}
    assume(quality**2 * u**2 > 1.1 * u)
    r_f = largest_feedback_resistance(input_capacitance=c_i, gain_bandwidth=gbw, **wanted)
    assert largest_input_capacitance(feedback_resistance=r_f, gain_bandwidth=gbw, **wanted) == near(c_i)
    c_f = feedback_capacitance(**parts(r_f, c_i, gbw), quality=quality)
    known = parts(r_f, c_i, gbw) | {"feedback_capacitance": c_f}
    assert quality_factor(**known) == near(quality, rel=1e-6)
    got = bandwidth(natural_frequency=natural_frequency(**known), quality=quality)
    assert got == near(f_3, rel=1e-6)
    assume(u > 1.1 / quality)  # else the smaller of the two solutions for GBW is this one
    needed = required_gain_bandwidth(feedback_resistance=r_f, input_capacitance=c_i, **wanted)
    assert needed == near(gbw, rel=1e-6)


@given(resistances, capacitances, st.floats(1e-3, 0.9), st.floats(0.02, 1.0))
def test_gain_bandwidth_for_a_fixed_capacitor(r_f, c_i, speed, share):
    c_f = share * c_i
    f_3 = speed / (2 * np.pi * r_f * c_f)
    gbw = required_gain_bandwidth_at_capacitance(
        feedback_resistance=r_f, input_capacitance=c_i, feedback_capacitance=c_f, bandwidth=f_3
    )
    loss = abs(response(f_3, r_f=r_f, c_i=c_i, c_f=c_f, gbw=np.array([gbw, 0.99 * gbw]))) / r_f
    assert loss[0] == near(0.5**0.5, rel=1e-9)
    assert loss[1] < 0.5**0.5


def test_data_sheet_forms_are_the_limits():
    """C_i ≫ C_f: GBW = 2π R_f C f² at Q = 1/√2."""
    gbw = required_gain_bandwidth(feedback_resistance=1e6, input_capacitance=1e-6, bandwidth=1e6, quality=0.5**0.5)
    assert gbw == near(2 * np.pi * 1e6 * 1e-6 * 1e12, rel=1e-5)


@given(capacitances, st.floats(1.5, 50))
def test_decompensated_plateau(c_i, gain):
    c_f = largest_feedback_capacitance(input_capacitance=c_i, minimum_stable_gain=gain)
    assert noise_gain_plateau(input_capacitance=c_i, feedback_capacitance=c_f) == near(gain)


@given(resistances, capacitances, capacitances, products)
def test_loop_is_one_at_crossover(r_f, c_i, c_f, gbw):
    known = parts(r_f, c_i, gbw) | {"feedback_capacitance": c_f}
    f = crossover(**known)
    s = 2j * np.pi * f
    loop = 2 * np.pi * gbw / s * (1 + s * r_f * c_f) / (1 + s * r_f * (c_i + c_f))
    assert abs(loop) == near(1, rel=1e-6)
    assert phase_margin(**known) == near(180 + np.degrees(np.angle(loop)), rel=1e-6)
    gain = noise_gain(frequency=f, feedback_resistance=r_f, input_capacitance=c_i, feedback_capacitance=c_f)
    assert gain == near(gbw / f, rel=1e-6)


def test_alignment_is_the_limit_of_the_loop():
    known = parts(1e6, 1e-6, 1e9)
    known |= {"feedback_capacitance": feedback_capacitance(**known, quality=0.8)}
    assert phase_margin(**known) == pytest.approx(alignment_margin(quality=0.8), abs=0.01)
    ratio = crossover(**known) / natural_frequency(**known)
    assert ratio == near(alignment_crossover_ratio(quality=0.8), rel=1e-4)


@pytest.mark.parametrize("quality", [0.4, 0.5**0.5, 1.0, 2.5])
def test_second_order_integrals_and_edges(quality):
    def magnitude(x):
        return abs(two_poles(x, 1.0, quality, 1.0))

    assert magnitude(bandwidth_ratio(quality=quality)) == near(0.5**0.5, rel=1e-12)
    white = quad(lambda x: magnitude(x) ** 2, 0, np.inf, epsrel=1e-10)[0]
    rising = quad(lambda x: 3 * x**2 * magnitude(x) ** 2, 0, np.inf, epsrel=1e-10)[0]
    assert noise_bandwidth(natural_frequency=1.0, quality=quality) == near(white, rel=1e-6)
    assert square_noise_bandwidth(natural_frequency=1.0, quality=quality) ** 3 == near(rising, rel=1e-6)


@given(st.floats(0.75, 20))
def test_peaking_and_overshoot_invert(quality):
    grid = np.linspace(0.01, 1.2, 20001)
    highest = 20 * np.log10(np.max(abs(two_poles(grid, 1.0, quality, 1.0))))
    assert peaking(quality=quality) == pytest.approx(highest, abs=1e-3)
    assert quality_for_peaking(peaking=peaking(quality=quality)) == near(quality, rel=1e-6)
    assert quality_for_overshoot(overshoot=overshoot(quality=quality)) == near(quality, rel=1e-9)


def test_output_noise_against_quadrature():
    r_f, c_i, c_f, gbw = 100e3, 23.3e-12, 0.568e-12, 230e6
    known = parts(r_f, c_i, gbw) | {"feedback_capacitance": c_f}
    shape = {"natural_frequency": natural_frequency(**known), "quality": quality_factor(**known)}

    def integral(density):
        def inner(logarithm):
            f = np.exp(logarithm)
            return f * density(f) ** 2

        return quad(inner, np.log(1e-2), np.log(1e14), limit=500, epsabs=0, epsrel=1e-9)[0] ** 0.5

    def transimpedance(f):
        return abs(response(f, r_f=r_f, c_i=c_i, c_f=c_f, gbw=gbw))

    johnson = (4 * BOLTZMANN * 300.0 / r_f) ** 0.5
    assert thermal_output(feedback_resistance=r_f, temperature=300.0, **shape) == near(
        integral(lambda f: johnson * transimpedance(f)), rel=1e-6
    )
    assert current_output(current_noise=1e-12, feedback_resistance=r_f, **shape) == near(
        integral(lambda f: 1e-12 * transimpedance(f)), rel=1e-6
    )
    exact = voltage_output(
        voltage_noise=7e-9, feedback_resistance=r_f, total_capacitance=c_i + c_f, gain_bandwidth=gbw, **shape
    )
    assert exact == near(
        integral(lambda f: 7e-9 * transimpedance(f) * abs(1 / r_f + 2j * np.pi * f * (c_i + c_f))), rel=1e-6
    )


def test_tees_against_node_equations():
    """The short-circuit transfer admittance of a tee."""
    first, second, shunt = 1e6, 10e3, 1e3
    joint = (1 / second) / (1 / first + 1 / second + 1 / shunt)
    assert tee_resistance(first=first, second=second, shunt=shunt) == near(first / joint)
    first, second, shunt = 1e-12, 2e-12, 30e-12
    joint = second / (first + second + shunt)
    assert tee_capacitance(first=first, second=second, shunt=shunt) == near(first * joint)
    assert tapped_capacitance(wanted=0.2e-12, upper=9e3, lower=1e3) == near(2e-12)


def test_bandwidth_equals_the_root_of_the_response():
    known = {"r_f": 1e3, "c_i": 49e-12, "c_f": 8e-12, "gbw": 130e6}
    root = brentq(lambda f: abs(response(f, **known)) / 1e3 - 0.5**0.5, 1e6, 1e9, xtol=1e-3)
    named = parts(1e3, 49e-12, 130e6) | {"feedback_capacitance": 8e-12}
    got = bandwidth(natural_frequency=natural_frequency(**named), quality=quality_factor(**named))
    assert got == near(root, rel=1e-10)
