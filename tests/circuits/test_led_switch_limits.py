"""The switched LED at its limits: what switch and logic output bear, storage that a capacitor leaves, refusals."""

from __future__ import annotations

import numpy as np
import pytest

from opto_ckt.errors import InfeasibleError, InputError
from tests.circuits.sized import sized
from tests.circuits.test_led_switch import MOSFET, NAME, figure, value
from tests.near import near

SPEED_UP = ("# speed_up", "speed_up = true")
CURRENT_MAX = 'current_max           = "0.5'


def fixed(line: str) -> tuple[tuple[str, str], ...]:
    return ((r"# \[fixed\]", "[fixed]"), ("# R1 = ", line))


@pytest.mark.parametrize(
    ("changes", "message"),
    [
        (((CURRENT_MAX, 'current_max = "30 mA"'),), r"40\.0 mA flows through the switch, current_max"),
        ((("supply  ", 'supply = { positive = "60 V", tolerance = "5 %" }'),), r"63\.0 V lies across the open switch"),
        (
            (*MOSFET[:-1], ("storage_time ", 'gate_charge = "0.8 nC"\ngate_voltage_max = "5 V"')),
            r"5\.30 V drives it, gate_voltage_max of the transistor is 5\.00 V",
        ),
        ((("# pre_bias", 'pre_bias = "60 mA"'),), r"60\.0 mA while off is no less than the 40\.0 mA while lit"),
    ],
    ids=["current", "supply", "gate", "pre-bias"],
)
def test_what_the_sheets_forbid_is_refused(changes: tuple[tuple[str, str], ...], message: str) -> None:
    with pytest.raises(InputError, match=message):
        sized(NAME, *changes)


def test_the_current_stays_within_what_the_switch_bears_at_every_corner() -> None:
    """42 mA of the transistor and none of the design's own: a larger R1, not a corner beyond it."""
    result = sized(NAME, (CURRENT_MAX, 'current_max = "42 mA"'), ("current   = ", 'current = "40 mA"'))
    assert figure(result, "current")[2] <= 42e-3


def test_swept_current_flows_through_the_switch_too() -> None:
    """Resistor and LED together: at every corner found they stay within the transistor's sheet."""
    result = sized(
        NAME,
        (CURRENT_MAX, 'current_max = "60 mA"'),
        ("current   = ", 'current = "40 mA"'),
        ("# sweep_out", 'sweep_out = "10 mA"'),
    )
    for scene in result.scenes:
        assert scene.values["Q1.current"] <= 60e-3


def test_a_large_sweep_out_leaves_the_led_its_current() -> None:
    """Half as much again past the LED: R1 carries both, by hand (5 V - 0.15 V - V)/(60 mA)."""
    result = sized(NAME, ("# sweep_out", 'sweep_out = "20 mA"'))
    v = result.scenes[0].values
    by_hand = (5 - 0.15 - v["D1.forward_voltage"]) / 60e-3
    assert value(result, "R1") == near(by_hand, rel=0.05)
    assert v["D1.current"] == near(40e-3, rel=0.05)


def test_a_base_that_overloads_the_logic_output_is_infeasible() -> None:
    """By hand: 5.3 V less 0.58 V of a base at 60 °C; 50 mA ask for 94.4 Ω, 12 Ω of them the output's, 1.35 % spread."""
    with pytest.raises(InfeasibleError, match=r"draws 7\.\d\d mA out of the logic output, its current_max is 2\.00 mA"):
        sized(NAME, ("current_max       = ", 'current_max = "2 mA"'))
    with pytest.raises(InfeasibleError, match=r"fixed\.R2 of at least 83\.5 Ω"):
        sized(NAME, *fixed('R2 = "10 Ω"'))


def test_a_small_speed_up_capacitor_takes_only_its_own_charge() -> None:
    """By hand: the base holds I_B τ, the capacitor takes C ΔV of it, the rest leaves as without."""
    v = sized(NAME, SPEED_UP, *fixed('C1 = "100 pF"')).scenes[0].values
    base = (v["U1.high"] - v["node.control"]) / (v["R2"] + v["U1.source_resistance"]) - v["node.control"] / v["R3"]
    constant = v["Q1.storage_time"] / np.log(2 / (1 + 10 / v["Q1.current_gain"]))
    rest = (base * constant - 100e-12 * (v["node.gate"] - v["U1.low"])) / constant
    removal = v["node.control"] / v["R3"] + v["node.control"] / (v["R2"] + v["U1.sink_resistance"])
    edge = v["Q1.current"] / v["Q1.current_gain"]
    assert rest > edge
    assert v["storage"] == near(constant * np.log((rest + removal) / (edge + removal)), rel=1e-9)


def test_the_capacitor_that_is_sized_leaves_no_storage_at_any_corner() -> None:
    result = sized(NAME, SPEED_UP, ("bandwidth ", 'turn_off_time = { max = "50 ns" }'))
    assert figure(result, "turn_off_time")[2] == near(np.log(9) * 6e-9, rel=1e-3)


def test_a_capacitor_too_small_is_told() -> None:
    cautions = sized(NAME, SPEED_UP, *fixed('C1 = "100 pF"')).cautions
    assert any("of storage" in caution for caution in cautions)


@pytest.mark.parametrize("gain", ["10", "8"])
def test_storage_of_a_transistor_of_little_gain_is_positive_and_finite(gain: str) -> None:
    result = sized(NAME, ("current_gain ", f'current_gain = {{ min = "{gain}", typ = "{gain}", max = "{gain}" }}'))
    low, _, high = figure(result, "turn_off_time")
    assert 0 < low < high < 10e-6


def test_the_charging_of_the_junction_is_told_where_it_is_much_of_a_bit() -> None:
    """At most 90 pF · 1.6 V / 32 mA = 4.5 ns, 22 % of a bit of 20 ns; a pre-bias takes most of it away."""
    quick = ("bit_rate  ", 'bit_rate  = "50 Mbit/s"')
    assert any("before any light comes" in caution for caution in sized(NAME, *MOSFET, quick).cautions)
    assert not any("before any light comes" in caution for caution in sized(NAME, *MOSFET).cautions)
    biased = sized(NAME, *MOSFET, quick, ("# pre_bias", 'pre_bias = "0.5 mA"')).cautions
    assert not any("before any light comes" in caution for caution in biased)


@pytest.mark.parametrize("name", [NAME, "led-resistor"])
def test_figures_that_the_sheet_leaves_open_are_told(name: str) -> None:
    told = sized(name, ("forward_voltage_temperature ", ""), ("power_temperature ", "")).cautions
    assert any("no forward_voltage_temperature and no power_temperature" in caution for caution in told)
    assert not any("taken as the same at every temperature" in caution for caution in sized(name).cautions)
