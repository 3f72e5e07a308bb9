"""Detectors in several receivers: avalanche gain and its noise, no bias at all, poles, capacitance; two roads each."""

from __future__ import annotations

from functools import cache
from math import erfc

import numpy as np
import pytest
from scipy.optimize import brentq

from opto_ckt.analyses import noise, response
from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuits.receivers.detector import bias_reach
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE, ROOM_TEMPERATURE
from opto_ckt.derivation import Derivation
from opto_ckt.design.model import Model
from opto_ckt.design.sizing import settled
from opto_ckt.errors import InfeasibleError
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.parts.avalanche import bias_for_gain, breakdown, gain_at
from tests.circuits.sized import model, sized
from tests.near import near
from tests.outputs.test_simulators import ENGINES

RECEIVERS = ("tia", "load-resistor", "tia-fixed")
HOT = ROOM_TEMPERATURE + 35.0
AVALANCHE = """\
reverse_voltage_max = "200 V"
gain_points = [ { bias = "60 V", gain = "2" }, { bias = "120 V", gain = "10" }, { bias = "150 V", gain = "60" } ]
breakdown_voltage = { min = "155 V", typ = "160 V" }
breakdown_temperature = "0.4 V/K"
multiplied_dark_current = { typ = "50 pA", max = "200 pA" }
surface_dark_current = { typ = "2 nA", max = "6 nA" }
gain_bandwidth_product = "60 GHz"
excess
"""
MCINTYRE, POWER_LAW = "ionisation_ratio = 0.3", "excess_noise_exponent = 0.5"
SUPPLY = '[bias]\nsupply = "180 V"\ntolerance = "0.2 %"'

Changes = tuple[tuple[str, str], ...]


def avalanche(name: str, gain: str = '"10"', excess: str = MCINTYRE) -> Changes:
    """The starter of a receiver with an avalanche diode in it, light and blocks of the fixed amplifier left out."""
    diode = ("reverse_voltage_max", AVALANCHE.replace("excess", excess) + f"gain = {gain}")
    light = ("power  ", 'power = { typ = "0.1 µW", max = "1 µW" }')
    if name == "tia-fixed":
        return (diode, ("reverse_bias", ""), light, *PLAIN_FIXED)
    return (diode, ("reverse_bias", ""), light, ("", SUPPLY))


PLAIN_FIXED: Changes = (
    ("bias_filter", ""), ("post_filter", ""), ("coupling", 'coupling = "dc"'),
    ("ripple ", ""), ("ripple_frequency", ""),
    (r"supply +=  *\"3", 'supply = "180 V"'), (r"tolerance +=", 'tolerance = "0.2 %"'),
)  # fmt: skip


@cache
def lit(name: str, changes: Changes) -> tuple[Model, dict[str, float]]:
    """A model and its values of all limits at nominal, with the exact values of its fitted parts."""
    found = model(name, *changes)
    exact = {part.ref: part.exact for part in found.proposal(Derivation())}
    return found, found.nominal() | exact


def evaluated(name: str, changes: Changes, **others: float) -> tuple[dict[str, float], Evaluation]:
    found, values = lit(name, changes)
    biased = found.biased(values | {key.replace("__", "."): value for key, value in others.items()})
    return {key: float(np.asarray(value).reshape(-1)[0]) for key, value in biased.items()}, found.evaluation(biased)


def by_miller(bias: float, temperature: float) -> float:
    """Gain by 1/(1 - (V/V_0)^n) through the two listed points around the bias, shifted with the temperature."""
    points = [(60.0, 2.0), (120.0, 10.0), (150.0, 60.0)]
    bias = bias - 0.4 * (temperature - ROOM_TEMPERATURE)
    (v_1, m_1), (v_2, m_2) = points[:2] if bias < 120 else points[1:]

    def apart(exponent: float) -> float:
        scale = v_1 / (1 - 1 / m_1) ** (1 / exponent)
        return 1 / (1 - (v_2 / scale) ** exponent) - m_2

    exponent = brentq(apart, 1e-2, 2 * np.log(m_1 / (m_1 - 1)) / np.log(v_2 / v_1) * 0.49999)
    return 1 / (1 - (bias / (v_1 / (1 - 1 / m_1) ** (1 / exponent))) ** exponent)


@pytest.mark.parametrize("name", RECEIVERS)
@pytest.mark.parametrize("temperature", [253.15, ROOM_TEMPERATURE, 333.15])
def test_gain_over_temperature_at_the_bias_of_the_receiver(name: str, temperature: float) -> None:
    changes = avalanche(name)
    found, values = lit(name, changes)
    biased, _ = evaluated(name, changes, temperature=temperature)
    bias = biased["detector.reverse_bias"]
    assert biased["D1.gain"] == near(by_miller(bias, temperature), rel=1e-4)
    assert found.request.detector.resting_bias == near(120.0, rel=1e-6)
    assert bias <= 120.0 * (1 + 1e-9)
    assert biased["D1.responsivity"] == near(values["D1.responsivity"] * biased["D1.gain"])


def test_bias_for_a_gain_follows_the_temperature_and_ends_at_breakdown() -> None:
    detector = model("tia", *avalanche("tia")).request.detector
    for temperature in (253.15, HOT):
        for gain in (2.0, 7.0, 40.0):
            bias = bias_for_gain(detector, gain, temperature)
            assert gain_at(detector, bias, temperature) == near(gain, rel=1e-9)
            assert bias - bias_for_gain(detector, gain) == pytest.approx(0.4 * (temperature - ROOM_TEMPERATURE))
        end = breakdown(detector, temperature)
        assert end <= 155.0 + 0.4 * (temperature - ROOM_TEMPERATURE) + 1e-9
        assert np.isfinite(gain_at(detector, 0.99 * end, temperature))
    told = sized("tia", *avalanche("tia")).cautions
    assert any("avalanche gain 10 at 120 V" in text and "the same gain takes" in text for text in told)


@pytest.mark.parametrize("name", RECEIVERS)
@pytest.mark.parametrize("excess", [MCINTYRE, POWER_LAW])
def test_noise_of_light_and_of_both_dark_currents_at_the_output(name: str, excess: str) -> None:
    """2q M² F times light and bulk dark current, 2q times the leakage along the surface, through the gain in place."""
    changes = avalanche(name, excess=excess)
    biased, evaluation = evaluated(name, changes, temperature=HOT, signal__ambient=3e-9)
    gain, temperature_ratio = biased["D1.gain"], 2.0 ** (35.0 / 10.0)
    factor = 0.3 * gain + 0.7 * (2 - 1 / gain) if excess == MCINTYRE else gain**0.5
    power = biased["signal.power"]
    primary = {
        "signal": biased["D1.responsivity"] / gain * power,
        "ambient": 3e-9,
        "dark": 50e-12 * temperature_ratio,
    }
    surface = 2e-9 * temperature_ratio
    frequency = 1e6
    density = noise.density_by_generator(evaluation, frequency)
    passed = abs(response.transfer_at(evaluation, frequency)[0]) / biased["D1.responsivity"]
    passed *= np.hypot(1, frequency / biased["D1.transit_frequency"])  # shot noise does not wait for the light's pole
    for kind, current in primary.items():
        shot = 2 * ELEMENTARY_CHARGE * current * gain**2 * factor
        shot += 2 * ELEMENTARY_CHARGE * surface if kind == "dark" else 0.0
        assert density[f"D1 {kind} shot"][0] == near(shot * passed**2, rel=1e-9)
    assert biased["D1.dark_current"] == near(surface + primary["dark"] * gain)


def test_all_of_an_undivided_dark_current_counts_as_multiplied() -> None:
    changes = avalanche("tia")
    whole = tuple(
        (pattern, "\n".join(line for line in text.splitlines() if "_dark_current" not in line))
        for pattern, text in changes
    )
    at = ("dark_current  ", 'dark_current = { typ = "5 nA", max = "9 nA" }\ndark_current_bias = "60 V"')
    biased, _ = evaluated("tia", (*whole, at))
    assert biased["D1.dark_current"] == near(5e-9 / 2 * biased["D1.gain"])


@pytest.mark.parametrize(
    ("name", "excess"), [("tia", MCINTYRE), ("tia", POWER_LAW), ("load-resistor", MCINTYRE), ("tia-fixed", MCINTYRE)]
)
def test_best_gain_against_a_scan_of_the_real_sensitivity(name: str, excess: str) -> None:
    """Finite extinction, dark current and a gain-bandwidth product; every trial sized anew, 48 gains, as allowed."""
    asked = model(name, *avalanche(name, '"optimum"', excess))
    best = settled(asked)
    gains = np.geomspace(1.3, 80.0, 48)
    found = [_sensitivity(asked, gain) for gain in gains]
    chosen = best.request.detector.wanted_gain
    assert isinstance(chosen, float)
    assert _sensitivity(asked, chosen) <= min(found) * 1.005
    finite = [power for power in found if np.isfinite(power)]
    assert len(finite) > 20
    assert max(finite) > 1.2 * min(finite)


def _sensitivity(asked: Model, gain: float) -> float:
    detector = asked.request.detector.model_copy(update={"wanted_gain": float(gain)})
    tried = asked.asked(asked.request.model_copy(update={"detector": detector}))
    if tried.circuit.refused(tried.request):
        return np.inf
    try:
        fitted = tried.proposal(Derivation())
    except InfeasibleError:
        return np.inf
    value = float(tried.bench().evaluate({part.ref: np.array([part.exact]) for part in fitted})["sensitivity"][0])
    return value if np.isfinite(value) else np.inf


@pytest.mark.parametrize("name", RECEIVERS)
def test_sensitivity_against_a_search_for_the_power_that_gives_q(name: str) -> None:
    """Levels and noise of ones and zeros put together from the generators; the root of Q(P) = Q wanted."""
    found, values = lit(name, avalanche(name))
    changes = avalanche(name)
    biased, evaluation = evaluated(name, changes)
    figures = found.evaluate({key: np.array([value]) for key, value in values.items()})
    request = found.request
    band = (1.0, 100 * request.signal.bit_rate * 0.7)
    required = request.require.get("bandwidth")
    band = (1.0, 100 * required.min) if required is not None and required.min else band
    rms = noise.rms_by_generator(evaluation, band)
    steady = sum(float(value[0]) ** 2 for label, value in rms.items() if not label.endswith("signal shot"))
    per_watt = float(rms["D1 signal shot"][0]) ** 2 / biased["signal.power"]
    gain = float(figures["transimpedance"][0]) * biased["D1.responsivity"] * float(figures["eye_opening"][0])
    ratio = request.signal.extinction_ratio
    wanted = brentq(lambda q: 0.5 * erfc(q / 2**0.5) - request.signal.bit_error_ratio, 1, 12)

    def apart(logarithm: float) -> float:
        zero = 2 * np.exp(logarithm) / (1 + ratio)
        one = ratio * zero
        return gain * (one - zero) / (np.sqrt(steady + per_watt * one) + np.sqrt(steady + per_watt * zero)) - wanted

    power = np.exp(brentq(apart, np.log(1e-11), np.log(1e-3)))
    assert float(figures["sensitivity"][0]) == near(power, rel=2e-3)


@pytest.mark.parametrize("name", ["tia", "load-resistor"])
def test_most_gain_of_bias_and_cold_still_fits_the_swing(name: str) -> None:
    """A bias tolerance raises the gain most in the cold: R1 is sized for that, the bound on the swing holds."""
    result = sized(name, *avalanche(name))
    rows = {row.requirement.figure: row for row in result.requirements}
    assert rows["output_swing"].met
    assert "overload" not in rows
    request = model(name, *avalanche(name)).request
    reach = bias_reach(request, 1)
    assert reach == near(120.0 * 1.002)
    most = by_miller(reach, request.conditions.temperature.low)
    assert most > 2 * 10.0
    light = most * 1.0 * 1e-6 * 2 * 10**0.9 / (10**0.9 + 1) + most * 1e-6
    value = {part.ref: part.value for part in result.parts}
    assert value["R1"] is not None
    assert light * value["R1"] < 2.0


UNBIASED: Changes = (("reverse_bias", 'reverse_bias = "0 V"'),)
SHUNTED = ("series_resistance", 'series_resistance = "15 Ω"\nshunt_resistance = "50 MΩ"')


def unbiased(name: str) -> Changes:
    return (*UNBIASED, SHUNTED, *PLAIN_FIXED[:3]) if name == "tia-fixed" else UNBIASED


@pytest.mark.parametrize("name", RECEIVERS)
def test_without_bias_there_is_no_dark_current_and_the_shunt_makes_the_noise(name: str) -> None:
    changes = unbiased(name)
    for temperature in (ROOM_TEMPERATURE, HOT):
        biased, evaluation = evaluated(name, changes, temperature=temperature)
        stated = 50e6 if name == "tia-fixed" else 100e6
        shunt = stated * 2.0 ** (-(temperature - ROOM_TEMPERATURE) / 10.0)
        assert biased["detector.reverse_bias"] == pytest.approx(0.0, abs=0.3)
        assert biased["D1.shunt_resistance"] == near(shunt)
        if name != "load-resistor":  # the drop across the load forward-biases the diode by that much
            assert biased["D1.dark_current"] == 0.0
        at = 2e5
        passed = abs(response.transfer_at(evaluation, at)[0]) / biased["D1.responsivity"]
        passed *= np.hypot(1, at / biased["D1.transit_frequency"])
        thermal = 4 * BOLTZMANN * temperature / shunt
        density = noise.density_by_generator(evaluation, at)
        assert density["D1 shunt"][0] == near(thermal * passed**2, rel=1e-9)


def test_offset_of_an_unbiased_detector_grows_as_its_shunt_falls() -> None:
    """(1 + R_f/R_sh) V_os + R_f I_b at the hottest, by hand."""
    leaky = (*UNBIASED, ("shunt_resistance", 'shunt_resistance = "100 kΩ"'))
    found, values = lit("tia", leaky)
    figures = found.evaluate({key: np.array([value]) for key, value in (values | {"temperature": HOT}).items()})
    shunt = 1 / (2.0**3.5 / 100e3 + 1 / values["RB"])
    offset = (1 + values["R1"] / shunt) * values["U1.offset_voltage"]
    bias = values["U1.bias_current"] * 2.0**3.5
    assert float(figures["dc_offset"][0]) == near(offset + values["R1"] * bias, rel=1e-9)


def test_a_junction_without_a_stated_shunt_is_its_own() -> None:
    """kT/(q I_d): the noise of two saturation currents, 2q · 2I; with bias nothing of it is left."""
    silent = ("shunt_resistance", "")
    for temperature in (ROOM_TEMPERATURE, HOT):
        current = 0.5e-9 * 2.0 ** ((temperature - ROOM_TEMPERATURE) / 10.0)
        biased, evaluation = evaluated("tia", (*UNBIASED, silent), temperature=temperature)
        passed = abs(response.transfer_at(evaluation, 1e4)[0]) / biased["D1.responsivity"]
        density = noise.density_by_generator(evaluation, 1e4)["D1 shunt"][0]
        assert density == near(4 * ELEMENTARY_CHARGE * current * passed**2, rel=1e-6)
        biased, _ = evaluated("tia", (silent,), temperature=temperature)
        assert biased["D1.shunt_resistance"] > 1e13


@pytest.mark.parametrize("engine", ENGINES)
@pytest.mark.parametrize("name", ["tia", "load-resistor"])
def test_decks_of_an_unbiased_detector_agree(name: str, engine: str) -> None:
    rows = crosscheck(sized(name, *UNBIASED, ("shunt_resistance", "")), engine)
    assert [row for row in rows if not row.ok] == []


@pytest.mark.parametrize("engine", ENGINES)
@pytest.mark.parametrize("name", ["tia", "load-resistor"])
def test_decks_of_an_avalanche_detector_agree(name: str, engine: str) -> None:
    rows = crosscheck(sized(name, *avalanche(name)), engine)
    assert [row for row in rows if not row.ok] == []


def detector_in_front(values: dict[str, float], frequency: np.ndarray, following: np.ndarray) -> np.ndarray:
    """Share of the light's current, by dividers, that reaches what follows, given its impedance. [1]"""
    s = 2j * np.pi * frequency
    junction = 1 / (s * values["D1.capacitance"] + 1 / values["D1.shunt_resistance"])
    share = junction / (junction + values["D1.series_resistance"] + following)
    return share / (1 + 1j * frequency / values["D1.transit_frequency"])


SLOW: Changes = (("series_resistance", 'series_resistance = "2 kΩ"\ntransit_frequency = "6 MHz"'),)
SLOW_FIXED: Changes = (
    ("series_resistance", 'series_resistance = "2 kΩ"'), ("transit_frequency", 'transit_frequency = "40 MHz"'),
    *PLAIN_FIXED[:3], ('resistance = "1 k', ""),
)  # fmt: skip
FREQUENCIES = np.array([1e3, 1e6, 5e6, 2e7, 1e8])


def test_poles_of_the_detector_before_a_transimpedance_stage() -> None:
    """The amplifier by Kirchhoff's law at its two nodes, driven through what the detector lets pass."""
    v, evaluation = evaluated("tia", SLOW)
    s = 2j * np.pi * FREQUENCIES
    feedback = 1 / v["R1"] + s * (v["C1"] + v["CS"])
    input_load = s * (v["U1.common_capacitance"] + v["U1.differential_capacitance"] + v["CB"]) + 1 / v["RB"]
    gain = 1 / (1 / v["U1.open_loop_gain"] + 1j * FREQUENCIES / v["U1.gain_bandwidth"])
    gain = gain / (1 + 1j * FREQUENCIES / v["U1.second_pole"])
    output = 1 / v["U1.output_resistance"]
    # sum: v_s (Y_in + Y_f) - v_o Y_f = i;  amp: v_o (G_o + Y_f) + v_s (A G_o - Y_f) = 0
    ratio = -(gain * output - feedback) / (output + feedback)
    node = 1 / (input_load + feedback - feedback * ratio)
    by_hand = v["D1.responsivity"] * detector_in_front(v, FREQUENCIES, node) * node * ratio
    found = response.transfer_at(evaluation, FREQUENCIES[:, None])[:, 0]
    np.testing.assert_allclose(np.abs(found), np.abs(by_hand), rtol=1e-9)


def test_poles_of_the_detector_before_a_load_resistor() -> None:
    v, evaluation = evaluated("load-resistor", (*SLOW, ("bandwidth ", 'bandwidth = { min = "1 MHz" }')))
    s = 2j * np.pi * FREQUENCIES
    gain = 1 / (1 / v["U1.open_loop_gain"] + 1j * FREQUENCIES / v["U1.gain_bandwidth"])
    gain = gain / (1 + 1j * FREQUENCIES / v["U1.second_pole"])
    output = 1 / v["U1.output_resistance"]
    across, common = s * v["U1.differential_capacitance"], s * v["U1.common_capacitance"]
    ratio = (gain * output + across) / (output * (1 + gain) + across + common)
    node = 1 / (1 / v["R1"] + common + s * v["CB"] + 1 / v["RB"] + across * (1 - ratio))
    by_hand = v["D1.responsivity"] * detector_in_front(v, FREQUENCIES, node) * node * ratio
    found = response.transfer_at(evaluation, FREQUENCIES[:, None])[:, 0]
    np.testing.assert_allclose(np.abs(found), np.abs(by_hand), rtol=1e-9)


def test_poles_of_the_detector_before_a_bought_amplifier() -> None:
    v, evaluation = evaluated("tia-fixed", SLOW_FIXED)
    s = 2j * np.pi * FREQUENCIES
    node = 1 / (s * v["CB"] + 1 / v["U1.input_resistance"])
    flat = 1 / (1 + 1j * 2**0.5 * FREQUENCIES / v["U1.bandwidth"] - (FREQUENCIES / v["U1.bandwidth"]) ** 2)
    into = detector_in_front(v, FREQUENCIES, node) * node / v["U1.input_resistance"]
    by_hand = v["D1.responsivity"] * into * v["U1.transimpedance"] * flat
    found = response.transfer_at(evaluation, FREQUENCIES[:, None])[:, 0]
    np.testing.assert_allclose(np.abs(found), np.abs(by_hand), rtol=1e-6)


CURVE = """\
capacitance_points = [ { bias = "0 V", capacitance = "30 pF" }, { bias = "2 V", capacitance = "15 pF" },
  { bias = "10 V", capacitance = "8 pF" } ]"""


@pytest.mark.parametrize("name", RECEIVERS)
def test_capacitance_at_the_bias_that_is_left(name: str) -> None:
    """Junction law with C at 5 V; a filter's resistor or a load takes bias off, light by light."""
    filtered = '[blocks]\nbias_filter = { droop = "1 V" }'
    changes: Changes = () if name == "tia-fixed" else (("", filtered),)
    found, values = lit(name, changes)
    stated, at = (0.5e-12, 3.3) if name == "tia-fixed" else (9e-12, 5.0)
    before = np.inf
    for power in (0.0, 10e-6, 40e-6):
        v, _ = evaluated(name, changes, signal__power=power)
        current = v["D1.responsivity"] * power + v["D1.ambient_current"] + v["D1.dark_current"]
        load = values["R1"] if name == "load-resistor" else 0.0
        left = found.request.detector.resting_bias - current * (values["R10"] + load)
        assert v["detector.reverse_bias"] == near(left, rel=1e-6)
        assert left < before
        before = left
        assert v["D1.capacitance"] == near(stated * ((0.6 + at) / (0.6 + left)) ** 0.5, rel=1e-9)


@pytest.mark.parametrize(
    ("bias", "expected"), [("0 V", 30e-12), ("2 V", 15e-12), ("5 V", None), ("10 V", 8e-12), ("15 V", 8e-12)]
)
def test_capacitance_along_listed_points(bias: str, expected: float | None) -> None:
    """A straight line of log C over log(1 + V/0.6 V) between the points, none beyond them."""
    changes = (("capacitance  ", CURVE), ("capacitance_bias", ""), ("reverse_bias", f'reverse_bias = "{bias}"'))
    v, _ = evaluated("tia", changes)
    if expected is None:
        share = np.log((5.6 / 0.6) / (2.6 / 0.6)) / np.log((10.6 / 0.6) / (2.6 / 0.6))
        expected = 15e-12 * (8 / 15) ** share
    assert v["D1.capacitance"] == near(expected, rel=1e-9)
