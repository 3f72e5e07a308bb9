"""The switched LED: its drive by hand, its peaking by a sweep, its charge, its faults, what is refused."""

from __future__ import annotations

import re

import numpy as np
import pytest

from opto_ckt.analyses.network import Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.response import bandwidth
from opto_ckt.circuits import load
from opto_ckt.design.comparison import alternatives
from opto_ckt.errors import InfeasibleError, InputError
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.wiring import drawing_faults
from opto_ckt.result import Result
from tests.circuits.sized import model, read, sized
from tests.near import near

NAME = "led-switch"
MOSFET = (
    ("kind ", 'kind = "nmos"'),
    ("current_gain ", 'threshold_voltage = { min = "0.8 V", typ = "1.1 V", max = "1.5 V" }'),
    ("base_emitter_voltage ", 'transconductance = "0.3 A/V"\ntransconductance_current = "0.2 A"'),
    ("saturation_voltage ", 'on_resistance = { typ = "1.2 Ω", max = "2 Ω" }\non_resistance_gate = "4.5 V"'),
    ("transition_frequency ", 'input_capacitance = "45 pF"'),
    ("collector_capacitance ", 'reverse_capacitance = "6 pF"'),
    ("storage_time ", 'gate_charge = "0.8 nC"\ngate_voltage_max = "12 V"'),
)
PEAKED = (("bandwidth ", 'bandwidth = { min = "40 MHz" }'),)
HASTENED = (
    ("# pre_bias", 'pre_bias = "0.5 mA"'),
    ("# sweep_out", 'sweep_out = "5 mA"'),
    ("# speed_up", "speed_up = true"),
)
VARIANTS = pytest.mark.parametrize(
    "changes",
    [(), MOSFET, (*MOSFET, *PEAKED), HASTENED, (*PEAKED, *HASTENED)],
    ids=["bipolar", "mosfet", "peaked", "hastened", "all"],
)


def value(result: Result, ref: str) -> float:
    found = next(part.value for part in result.parts if part.ref == ref)
    assert found is not None
    return found


def figure(result: Result, name: str) -> tuple[float, float, float]:
    found = next(figure for figure in result.figures if figure.name == name)
    return found.low, found.nominal, found.high


@VARIANTS
def test_voltages_add_up_in_every_scene(changes: tuple[tuple[str, str], ...]) -> None:
    """From the rail down: resistors, LED, switch; the resistors carry what LED and sweep-out take together."""
    for scene in sized(NAME, *changes).scenes:
        v = scene.values
        taken = v["loop.current"] * (v["R1"] + v.get("R4", 0.0)) + v["D1.forward_voltage"] + v["node.drain"]
        assert taken == near(v["supply.positive"], rel=1e-9)
        swept = v["D1.forward_voltage"] / v["R5"] if "R5" in v else 0.0
        assert v["loop.current"] == near(v["D1.current"] + swept, rel=1e-9)
        assert v["node.drain"] == near(v["Q1.drop"] + v["loop.current"] * v["Q1.on_resistance"], rel=1e-6)


@VARIANTS
def test_decks_agree_at_nominal_and_two_corners(changes: tuple[tuple[str, str], ...]) -> None:
    rows = crosscheck(sized(NAME, *changes), "ngspice")
    assert len({row.scene for row in rows}) == 3
    assert not [row for row in rows if not row.ok]


@VARIANTS
def test_the_drawing_joins_what_the_topology_joins(changes: tuple[tuple[str, str], ...]) -> None:
    assert drawing_faults(model(NAME, *changes).topology) == []


def test_the_base_is_driven_for_a_forced_gain_of_ten_at_the_least_drive() -> None:
    """By hand: 55 mA over 10, a tenth more for the bleed, from 4.7 V less 0.85 V, 35 Ω of them the output's."""
    result = sized(NAME)
    step = result.derivation.of("R2")
    assert step is not None
    assert step.result == near((4.7 - 0.85) / (1.1 * 5.5e-3), rel=1e-9)
    assert value(result, "R2") <= step.result - 35.0
    assert figure(result, "overdrive")[0] > 80 / 10 * 0.9


def test_a_gate_below_that_of_the_sheet_is_not_driven_well() -> None:
    low = (("high ", 'high = { min = "3.1 V", typ = "3.3 V", max = "3.5 V" }'),)
    result = sized(NAME, *MOSFET, *low)
    missed = {row.requirement.figure for row in result.requirements if not row.met}
    assert "overdrive" in missed


def test_peaking_widens_the_band_by_the_ratio_of_resistances() -> None:
    """All at nominal: the same network without the capacitor, and with it, (R_a + R_b)/R_a apart within a tenth."""
    result = sized(NAME, *MOSFET, *PEAKED, ("lifetime ", 'lifetime = "4 ns"'))
    scene = result.scenes[0]
    network = Network(expand(result.topology))
    plain = {**scene.values, "C2": 1e-18}
    gain = float(bandwidth(network.evaluate(scene.values))[0] / bandwidth(network.evaluate(plain))[0])
    own = (
        scene.values["Q1.on_resistance"] + scene.values["D1.series_resistance"] + scene.values["D1.junction_resistance"]
    )
    first = scene.values["R1"] + own
    assert gain == near((first + scene.values["R4"]) / first, rel=0.1)
    assert figure(result, "peak_current")[1] > 1.4 * figure(result, "current")[1]


def test_more_peaking_than_switch_and_led_leave_is_infeasible() -> None:
    with pytest.raises(InfeasibleError, match="leaves no R1"):
        sized(NAME, *MOSFET, ("bandwidth ", 'bandwidth = { min = "500 MHz" }'))


def test_peaking_beyond_the_pulse_limit_is_a_missed_bound() -> None:
    result = sized(NAME, *MOSFET, *PEAKED, ("pulse_current_max", 'pulse_current_max = "60 mA"'))
    assert "peak_current" in {row.requirement.figure for row in result.requirements if not row.met}


def test_storage_by_hand() -> None:
    """Charge control: the sheet's 120 ns, drawn out by bleed and output, 40 mA being switched."""
    v = sized(NAME).scenes[0].values
    base = (v["U1.high"] - v["node.control"]) / (v["R2"] + v["U1.source_resistance"]) - v["node.control"] / v["R3"]
    removal = v["node.control"] / v["R3"] + v["node.control"] / (v["R2"] + v["U1.sink_resistance"])
    edge = v["Q1.current"] / v["Q1.current_gain"]
    constant = v["Q1.storage_time"] / np.log(2 / (1 + 10 / v["Q1.current_gain"]))
    assert v["storage"] == near(constant * np.log((base + removal) / (edge + removal)), rel=1e-9)


def test_a_speed_up_capacitor_takes_the_storage_away() -> None:
    slow, quick = sized(NAME), sized(NAME, *HASTENED)
    assert figure(quick, "turn_off_time")[1] < figure(slow, "turn_off_time")[1] / 10
    assert any("C1 recovers up to" in caution for caution in quick.cautions)


def test_a_pre_bias_costs_contrast() -> None:
    result = sized(NAME, *HASTENED)
    low, nominal, high = figure(result, "extinction_ratio")
    assert low < nominal < high


def test_dark_without_a_pre_bias_meets_any_contrast() -> None:
    result = sized(NAME, ("bandwidth ", 'extinction_ratio = { min = "10" }'))
    assert figure(result, "extinction_ratio") == (np.inf, np.inf, np.inf)
    assert result.verdict == "met"


def test_faults_say_what_limits_the_current() -> None:
    faults = {fault.case: fault for fault in sized(NAME, *MOSFET, *PEAKED).faults}
    assert faults["supply before control"].result == "no current through the LED"
    assert faults["control input open"].result == "no current through the LED"
    assert faults["switch short"].ok
    assert not faults["series resistor short"].ok
    assert "LED current" in faults["peaking capacitor short"].result


@pytest.mark.parametrize("kind", ["pnp"])
def test_a_transistor_that_cannot_switch_to_ground_is_refused(kind: str) -> None:
    with pytest.raises(InputError, match="does not switch to ground"):
        read(NAME, ("kind ", f'kind = "{kind}"'))


def test_a_drive_below_the_base_voltage_is_infeasible() -> None:
    with pytest.raises(InfeasibleError, match="does not reach the transistor's"):
        sized(NAME, ("high ", 'high = { min = "0.6 V", typ = "2 V", max = "2.4 V" }'))


def test_the_same_request_is_told_for_the_other_drivers() -> None:
    """A file that has every table: each other driver of an LED with what it gives and risks, or why it does not go."""
    tables = re.search(r"\[amplifier\].*?(?=\[signal\])", load("led-linear").starter, re.DOTALL)
    assert tables is not None
    plain = read(NAME, ("", tables[0])).request
    other, linear = alternatives(plain, ("led-switch", "led-resistor", "led-linear"), load)
    assert other.circuit == "led-resistor"
    assert other.faults is not None
    assert "band and modulation_index" in linear.verdict
    analog = ("speed_up", 'modulation_index = "30 %"\nband = { min = "20 Hz", max = "50 kHz" }')
    full = read(NAME, ("", tables[0]), ("# " + analog[0], analog[1])).request
    assert alternatives(full, ("led-linear",), load)[0].figures["current"] > 0
