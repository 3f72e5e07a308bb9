"""Limits of a receiver, tolerances of its parts, and the search for the least favourable corner."""

from __future__ import annotations

from itertools import product

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opto_ckt.analyses import stability
from opto_ckt.analyses.corners import extremes, limits_of, tolerances_of
from opto_ckt.analyses.network import Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.constants import ZERO_CELSIUS
from opto_ckt.limits import Limit, Limits, Tolerance, least_favourable, one_at_a_time, values_at, varying
from opto_ckt.parts.record import FROM_FILE
from opto_ckt.request import ReceiverRequest
from opto_ckt.topology import (
    GROUND,
    SHORT,
    Capacitor,
    OpAmp,
    Photodiode,
    Resistor,
    Supply,
    Terminal,
    Topology,
)

RECEIVER = Topology(
    elements=(
        Photodiode("D1", anode=GROUND, cathode="sum", table="detector"),
        Resistor("R1", "sum", "out"),
        Capacitor("C1", "sum", "out"),
        OpAmp("U1", plus=GROUND, minus="sum", out="out", table="amplifier"),
        Capacitor("C8", "positive", GROUND, stock="bypass"),
        Supply("VP", "positive", value="supply.positive"),
        Supply("VN", "negative", value="supply.negative"),
        Terminal("OUT", "out"),
    ),
    input="D1",
    output=("out", GROUND),
    loop="U1",
)


def request(**changes):
    design = {
        "circuit": "tia",
        "detector": {
            "material": "InGaAs",
            "responsivity": "0.9 A/W",
            "responsivity_wavelength": "1310 nm",
            "capacitance": {"typ": "1.5 pF", "max": "2 pF"},
            "capacitance_bias": "5 V",
            "dark_current": "1 nA",
            "reverse_voltage_max": "20 V",
            "reverse_bias": "5 V",
        },
        "amplifier": {
            "gain_bandwidth": "230 MHz",
            "open_loop_gain": "100 dB",
            "common_capacitance": "1.5 pF",
            "differential_capacitance": "0.5 pF",
            "voltage_noise": "6 nV/√Hz",
            "current_noise": "1.3 fA/√Hz",
            "offset_voltage": {"typ": "0.2 mV", "max": "1 mV"},
            "bias_current": "2 pA",
            "slew_rate": "290 V/µs",
            "swing_to_positive": "1.2 V",
            "swing_to_negative": "1.2 V",
            "output_current_max": "40 mA",
            "quiescent_current": "14 mA",
            "supply_min": "4.5 V",
            "supply_max": "12.6 V",
        },
        "signal": {
            "wavelength": "1310 nm",
            "power": {"typ": "2 µW", "max": "50 µW"},
            "ambient": "1 µA",
            "bit_rate": "10 Mbit/s",
        },
        "conditions": {
            "temperature": {"min": "-20 °C", "typ": "25 °C", "max": "60 °C"},
            "supply": {"positive": "5 V", "negative": "-5 V", "tolerance": "5 %"},
        },
        **changes,
    }
    return ReceiverRequest.model_validate(design, context=FROM_FILE)


def test_a_figure_that_the_sheet_limits_keeps_its_limits():
    limit = limits_of(RECEIVER, request())["D1.capacitance"]
    assert (limit.nominal, limit.low, limit.high) == pytest.approx((1.5e-12, 1.5e-12, 2e-12))
    assert not limit.assumed


def test_a_typical_figure_is_spread_as_assumed():
    limits = limits_of(RECEIVER, request())
    found = limits["U1.gain_bandwidth"]
    assert (found.low, found.nominal, found.high) == pytest.approx((161e6, 230e6, 299e6))
    assert found.assumed
    assert limits["U1.common_capacitance"].high == pytest.approx(1.8e-12)
    assert limits["U1.voltage_noise"].high == pytest.approx(7.5e-9)
    assert limits["U1.voltage_noise"].low == limits["U1.voltage_noise"].nominal


def test_the_engineer_overrides_what_is_assumed():
    changed = request(assumed={"gain_bandwidth": {"low": "50 %", "high": "10 %"}})
    found = limits_of(RECEIVER, changed)["U1.gain_bandwidth"]
    assert (found.low, found.high) == pytest.approx((115e6, 253e6))
    assert found.assumed


def test_a_figure_that_the_sheet_does_not_give_has_the_value_that_stands_for_it():
    limits = limits_of(RECEIVER, request())
    assert limits["U1.second_pole"] == Limit(1e15, 1e15, 1e15)
    assert limits["D1.series_resistance"] == Limit(SHORT, SHORT, SHORT)
    assert not limits["U1.output_resistance"].varies


def test_every_figure_of_the_model_that_is_no_current_or_light_has_a_limit():
    limits = limits_of(RECEIVER, request())
    computed = {f"D1.{light}_{kind}" for light in ("signal", "ambient", "dark") for kind in ("current", "shot")}
    for element in RECEIVER:
        assert {element.value_name(figure) for figure in element.figures} - computed <= set(limits)


def test_surroundings_span_temperature_and_supplies():
    limits = limits_of(RECEIVER, request())
    ambient = limits["temperature"]
    kelvins = [celsius + ZERO_CELSIUS for celsius in (25, -20, 60)]
    assert [ambient.nominal, ambient.low, ambient.high] == pytest.approx(kelvins)
    assert limits["supply.positive"] == Limit(5.0, 4.75, 5.25)
    assert limits["supply.negative"] == Limit(-5.0, -5.25, -4.75)


def test_a_single_supply_has_a_negative_rail_that_does_not_vary():
    limits = limits_of(RECEIVER, request(conditions={"supply": {"positive": "5 V"}}))
    assert limits["supply.negative"] == Limit(0.0, 0.0, 0.0)


def test_light_spans_dark_to_most():
    limits = limits_of(RECEIVER, request())
    assert limits["signal.power"] == Limit(2e-6, 0.0, 50e-6)
    assert limits["signal.ambient"] == Limit(1e-6, 0.0, 1e-6)


def test_light_starts_at_the_least_that_is_stated():
    signal = {"wavelength": "1310 nm", "power": {"min": "1 µW", "typ": "2 µW"}, "bit_rate": "10 Mbit/s"}
    limits = limits_of(RECEIVER, request(signal=signal))
    assert limits["signal.power"] == Limit(2e-6, 1e-6, 2e-6)
    assert not limits["signal.ambient"].varies


def test_tolerances_add_temperature_to_what_is_stated():
    """Farthest from 25 °C is -20 °C, by 45 K; 1 % and 100 ppm/K are 1.45 % together."""
    found = tolerances_of(RECEIVER.fitted, request())
    assert set(found) == {"R1", "C1", "C8"}
    assert found["R1"].at("high", 10e3) == pytest.approx(10e3 * 1.0145)
    assert found["R1"].at("low", 10e3) == pytest.approx(10e3 * 0.9855)


def test_small_class_1_capacitor_has_farads_and_30_ppm_a_kelvin():
    found = tolerances_of(RECEIVER.fitted, request())["C1"]
    assert found.at("high", 1e-12) == pytest.approx(1.1e-12 + 45 * 30e-18)
    assert found.at("low", 100e-12) == pytest.approx(100e-12 * (0.95 - 45 * 30e-6))
    assert not found.assumed


def test_class_2_capacitor_changes_as_its_code_allows_and_ages():
    """X7R: 10 % makers' tolerance, ±15 % over temperature, 4 % a decade of hours at most and for two decades."""
    found = tolerances_of(RECEIVER.fitted, request())["C8"]
    assert found.at("low", 100e-9) == pytest.approx(100e-9 * (1 - 0.10 - 0.15 - 0.08))
    assert found.at("high", 100e-9) == pytest.approx(100e-9 * 1.25)


def test_beyond_its_own_temperatures_a_dielectric_is_assumed():
    hot = {"temperature": {"min": "0 °C", "max": "95 °C"}, "supply": {"positive": "5 V"}}
    stock = {"bypass": {"dielectric": "X5R"}}
    found = tolerances_of(RECEIVER.fitted, request(conditions=hot, preferred=stock))
    assert found["C8"].assumed
    assert not found["C1"].assumed


TWO_POLES = {
    "D1.responsivity": 1.0, "D1.series_resistance": SHORT, "D1.shunt_resistance": 1e15, "D1.transit_frequency": 1e15,
    "D1.signal_shot": 0.0, "D1.ambient_shot": 0.0, "D1.dark_shot": 0.0, "temperature": 298.15,
    "U1.second_pole": 0.8e9, "U1.open_loop_gain": 1e5, "U1.common_capacitance": 1e-18, "U1.output_resistance": SHORT,
    "U1.differential_capacitance": 1e-18, "U1.voltage_noise": 1e-9, "U1.voltage_noise_corner": 1e-9,
    "U1.current_noise": 1e-15, "U1.current_noise_corner": 1e-9,
}  # fmt: skip
"""With 4 GHz, 12 kΩ, 0.6 pF and 3 pF: the margin falls as the op amp gets faster. Derived, not printed anywhere."""


def phase_margins(second_pole):
    network = Network(expand(RECEIVER.without(frozenset({"C8"}))))

    def evaluate(values):
        return {"phase_margin": stability.phase_margin(network.evaluate({**values, "U1.second_pole": second_pole}))}

    fixed: Limits = {name: Limit(value, value, value) for name, value in TWO_POLES.items()}
    limits: Limits = {
        **fixed,
        "U1.gain_bandwidth": Limit(4e9, 2.4e9, 5.6e9),
        "D1.capacitance": Limit(3e-12, 2.4e-12, 3.6e-12),
        "C1": Tolerance(-0.05, 0.05),
        "R1": Tolerance(-0.01, 0.01),
    }
    return evaluate, limits


def test_with_a_second_pole_the_fast_op_amp_is_worst():
    evaluate, limits = phase_margins(0.8e9)
    speed_only: Limits = {n: x for n, x in limits.items() if n == "U1.gain_bandwidth" or not x.varies}
    chosen = {"R1": 12e3, "C1": 0.6e-12, "D1.capacitance": 3e-12}
    found = extremes(evaluate, speed_only, chosen, ["phase_margin"])["phase_margin"]
    assert found.at_low == {"U1.gain_bandwidth": "high"}
    assert found.at_high == {"U1.gain_bandwidth": "low"}
    assert (found.low, found.high) == pytest.approx((47, 63), abs=0.5)


@pytest.mark.parametrize(("second_pole", "speed"), [(0.8e9, "high"), (1e15, "low")])
def test_search_finds_the_worst_of_all_corners_for_one_pole_and_for_two(second_pole, speed):
    evaluate, limits = phase_margins(second_pole)
    chosen = {"R1": 12e3, "C1": 0.6e-12}
    found = extremes(evaluate, limits, chosen, ["phase_margin"])["phase_margin"]
    corners = [
        dict(zip(varying(limits), levels, strict=True)) for levels in product(("low", "nominal", "high"), repeat=4)
    ]
    every = evaluate(values_at(limits, corners, chosen))["phase_margin"]
    assert found.low == pytest.approx(every.min(), abs=1e-6)
    assert found.high == pytest.approx(every.max(), abs=1e-6)
    assert found.at_low["U1.gain_bandwidth"] == speed


def brute(evaluate, limits):
    corners = [
        dict(zip(varying(limits), levels, strict=True))
        for levels in product(("low", "nominal", "high"), repeat=len(varying(limits)))
    ]
    return evaluate(values_at(limits, corners, {}))


@settings(max_examples=60, deadline=None)
@given(st.lists(st.floats(-1, 1), min_size=5, max_size=5), st.lists(st.floats(-0.2, 0.2), min_size=10, max_size=10))
def test_search_finds_the_extremes_where_interactions_are_milder_than_effects(slopes, bends):
    limits: Limits = {name: Limit(0.0, -1.0, 1.0) for name in "abcde"}
    slopes = [np.copysign(1 + abs(slope), slope) for slope in slopes]

    def evaluate(v):
        x = [np.asarray(v[name]) for name in "abcde"]
        pairs = [x[i] * x[j] for i in range(5) for j in range(i)]
        linear = sum(s * one for s, one in zip(slopes, x, strict=True))
        return {"figure": linear + sum(b * pair for b, pair in zip(bends, pairs, strict=True))}

    found = extremes(evaluate, limits, {}, ["figure"])["figure"]
    every = brute(evaluate, limits)["figure"]
    assert found.low == pytest.approx(every.min())
    assert found.high == pytest.approx(every.max())


@settings(max_examples=60, deadline=None)
@given(st.lists(st.floats(-1, 1), min_size=14, max_size=14))
def test_extremes_lie_where_their_corners_say_and_beat_single_and_composed_moves(weights):
    """Interactions as strong as effects: four rounds may end short of the worst corner, never short of these."""
    limits: Limits = {name: Limit(0.5, -1.0, 1.0) for name in "abcd"}

    def evaluate(v):
        x = [np.asarray(v[name]) for name in "abcd"]
        terms = [*x, *(x[i] * x[j] for i in range(4) for j in range(i + 1))]
        return {"figure": sum(w * term for w, term in zip(weights, terms, strict=True))}

    found = extremes(evaluate, limits, {}, ["figure"])["figure"]
    for value, at in ((found.low, found.at_low), (found.high, found.at_high)):
        assert evaluate(values_at(limits, [at], {}))["figure"][0] == pytest.approx(value)
    alone = one_at_a_time(limits)
    singles = evaluate(values_at(limits, alone, {}))["figure"]
    composed = [least_favourable(limits, singles, alone, smallest=smallest) for smallest in (True, False)]
    seen = [*singles, *evaluate(values_at(limits, composed, {}))["figure"]]
    assert found.low <= min(seen) + 1e-8
    assert found.high >= max(seen) - 1e-8


def test_a_worst_value_between_the_ends_is_found():
    limits: Limits = {"a": Limit(0.0, -1.0, 1.0), "b": Limit(0.0, -1.0, 1.0)}
    found = extremes(lambda v: {"figure": v["a"] ** 2 + v["b"]}, limits, {}, ["figure"])["figure"]
    assert (found.low, found.at_low) == (-1.0, {"b": "low"})
    assert found.high == 2.0
    assert set(found.at_high) == {"a", "b"}


def test_a_limit_that_has_to_go_back_to_nominal_goes_back():
    """Alone, either end of `a` raises the figure; beside the worst `b` and `c`, nominal is where it is highest."""

    def evaluate(v):
        a, b, c = (np.asarray(v[name]) for name in "abc")
        return {"figure": 3 * b + 3 * c + 0.05 * a - 0.2 * a**2 + (a**2) * (1 - b)}

    limits: Limits = {"a": Limit(0.0, -1.0, 1.0), "b": Limit(0.0, 0.0, 1.0), "c": Limit(0.0, 0.0, 1.0)}
    found = extremes(evaluate, limits, {}, ["figure"])["figure"]
    assert (found.high, found.at_high) == (6.0, {"b": "high", "c": "high"})


def test_a_limit_that_matters_only_at_the_corner_is_found_there():
    """While `b` and `c` are alike, `d` to `f` make no difference."""

    def evaluate(v):
        return {"figure": (v["b"] - v["c"]) * (4 - v["d"] + 2 * v["e"] - v["f"])}

    limits: Limits = {name: Limit(0.5, -1.0, 1.0) for name in "abcdef"}
    found = extremes(evaluate, limits, {}, ["figure"])["figure"]
    assert (found.low, found.at_low) == (-16.0, {"b": "low", "c": "high", "d": "low", "e": "high", "f": "low"})


def test_a_figure_flat_around_nominal_is_found_on_the_corners_of_others():
    """Overshoot is none until damping has gone far enough down, which no limit alone achieves."""

    def evaluate(v):
        damping = v["a"] + v["b"] + v["c"]
        return {"damping": damping, "overshoot": np.maximum(-1.5 - damping, 0.0)}

    limits: Limits = {name: Limit(0.0, -1.0, 1.0) for name in "abcd"}
    found = extremes(evaluate, limits, {}, ["damping", "overshoot"])["overshoot"]
    assert (found.low, found.high) == (0.0, 1.5)
    assert found.at_high == {"a": "low", "b": "low", "c": "low"}
    assert found.at_low == {}


def test_of_a_figure_flat_around_nominal_the_weightiest_setting_at_its_corner_comes_first():
    def evaluate(v):
        damping = v["a"] + 3 * v["b"] + 2 * v["c"]
        return {"damping": damping, "overshoot": np.maximum(-3.2 - damping, 0.0) * (2 - v["d"])}

    limits: Limits = {name: Limit(0.0, -1.0, 1.0) for name in "abcde"}
    found = extremes(evaluate, limits, {}, ["overshoot", "damping"])["overshoot"]
    assert found.high == pytest.approx(8.4)
    assert list(found.at_high.items()) == [("b", "low"), ("c", "low"), ("a", "low"), ("d", "low")]


def test_an_undefined_figure_is_the_worst_in_both_directions():
    def evaluate(v):
        return {"bandwidth": np.where(v["a"] + v["b"] > 1.5, np.nan, 1.0 + v["a"]), "sum": v["a"] + v["b"]}

    limits: Limits = {"a": Limit(0.0, -1.0, 1.0), "b": Limit(0.0, -1.0, 1.0)}
    found = extremes(evaluate, limits, {}, ["bandwidth", "sum"])["bandwidth"]
    assert found.nominal == 1.0
    assert np.isnan([found.low, found.high]).all()
    assert found.at_low == found.at_high == {"a": "high", "b": "high"}


def test_a_figure_that_is_missing_is_undefined_at_nominal():
    limits: Limits = {"a": Limit(0.0, -1.0, 1.0)}
    found = extremes(lambda v: {}, limits, {}, ["bandwidth"])["bandwidth"]
    assert np.isnan([found.nominal, found.low, found.high]).all()
    assert found.at_low == found.at_high == {}


def test_nothing_that_varies_and_nothing_asked_for_are_no_trouble():
    fixed: Limits = {"a": Limit(2.0, 2.0, 2.0)}
    found = extremes(lambda v: {"figure": np.array([v["a"]])}, fixed, {}, ["figure"])["figure"]
    assert (found.nominal, found.low, found.high, found.at_low) == (2.0, 2.0, 2.0, {})
    assert extremes(lambda v: {}, fixed, {}, []) == {}


def test_settings_that_make_no_difference_are_left_out_and_the_weightiest_comes_first():
    limits: Limits = {name: Limit(0.0, -1.0, 1.0) for name in ("small", "idle", "large")}
    found = extremes(lambda v: {"figure": v["small"] - 5 * v["large"]}, limits, {}, ["figure"])["figure"]
    assert list(found.at_low.items()) == [("large", "high"), ("small", "low")]


def test_few_calls_serve_many_figures():
    names = [f"x{i}" for i in range(25)]
    limits: Limits = {name: Limit(1.0, 0.8, 1.2) for name in names}
    powers = np.random.default_rng(7).normal(size=(20, 25))
    sizes = []

    def evaluate(v):
        x = np.log([v[name] for name in names])
        sizes.append(x.shape[1])
        return {f"f{i}": np.exp(row @ x) for i, row in enumerate(powers)}

    found = extremes(evaluate, limits, {}, [f"f{i}" for i in range(20)])
    assert len(sizes) <= 4
    assert sum(sizes) <= 51 + 40 + 40 * 25
    for i, row in enumerate(powers):
        highest = np.exp(np.maximum(row * np.log(1.2), row * np.log(0.8)).sum())
        assert found[f"f{i}"].high == pytest.approx(highest)


def test_same_input_same_result_whatever_the_blocks(monkeypatch):
    evaluate, limits = phase_margins(0.8e9)
    chosen = {"R1": 12e3, "C1": 0.6e-12}
    first = extremes(evaluate, limits, chosen, ["phase_margin"])
    monkeypatch.setattr("opto_ckt.limits.BLOCK", 5)
    again = extremes(evaluate, limits, chosen, ["phase_margin"])["phase_margin"]
    assert (again.at_low, again.at_high) == (first["phase_margin"].at_low, first["phase_margin"].at_high)
    assert again.low == pytest.approx(first["phase_margin"].low, rel=1e-9)
