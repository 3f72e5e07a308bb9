"""Detectors in several receivers: without bias, poles of transit and series resistance, capacitance; two roads each."""

from __future__ import annotations

import numpy as np
import pytest

from opto_ckt.analyses import noise, response
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE, ROOM_TEMPERATURE
from opto_ckt.outputs.crosscheck import crosscheck
from tests.circuits.lit import BARE, RECEIVERS, Changes, evaluated, lit
from tests.circuits.sized import sized
from tests.near import near
from tests.outputs.test_simulators import ENGINES

HOT = ROOM_TEMPERATURE + 35.0
UNBIASED: Changes = (("reverse_bias", 'reverse_bias = "0 V"'),)
SHUNTED = ("series_resistance", 'series_resistance = "15 Ω"\nshunt_resistance = "50 MΩ"')


def unbiased(name: str) -> Changes:
    return (*UNBIASED, SHUNTED, *BARE) if name == "tia-fixed" else UNBIASED


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


def detector_in_front(values: dict[str, float], frequency: np.ndarray, following: np.ndarray) -> np.ndarray:
    """Share of the light's current, by dividers, that reaches what follows, given its impedance. [1]"""
    s = 2j * np.pi * frequency
    junction = 1 / (s * values["D1.capacitance"] + 1 / values["D1.shunt_resistance"])
    share = junction / (junction + values["D1.series_resistance"] + following)
    return share / (1 + 1j * frequency / values["D1.transit_frequency"])


SLOW: Changes = (("series_resistance", 'series_resistance = "2 kΩ"\ntransit_frequency = "6 MHz"'),)
SLOW_FIXED: Changes = (
    ("series_resistance", 'series_resistance = "2 kΩ"'), ("transit_frequency", 'transit_frequency = "40 MHz"'),
    *BARE, ('resistance = "1 k', ""),
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
