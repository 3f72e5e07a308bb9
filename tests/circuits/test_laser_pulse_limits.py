"""The pulse driver: faults by hand, what is missed, said and refused, and that what would do does."""

from __future__ import annotations

import re

import numpy as np
import pytest

from opto_ckt.errors import InfeasibleError, InputError
from tests.circuits.pulses import BARE, NAME, Changes
from tests.circuits.sized import model, sized
from tests.near import near


def test_faults_by_hand() -> None:
    found = model(NAME)
    chosen = {part.ref: part.value for part in sized(NAME).parts if part.value}
    nominal = found.nominal() | chosen

    def reached(case: str) -> dict[str, float]:
        (fault,) = [fault for fault in found.circuit.faults(found.request) if fault.case == case]
        overrides = {name: float(np.max(value)) for name, value in fault.overrides.items()}
        return {name: float(np.max(value)) for name, value in found.biased(nominal | overrides).items()}

    usual = {name: float(np.max(value)) for name, value in found.biased(nominal).items()}
    stuck = reached("switch stuck on")
    series = chosen["R1"] + (0.16 + chosen["R3"] + 0.02 + 0.04)  # R2 beside: 0.2 % of the current
    assert stuck["D1.steady_current"] == near((75.0 - 5.0) / series, rel=5e-3)
    assert stuck["R1.power"] == near(75.0**2 / chosen["R1"], rel=0.01)
    assert stuck["D1.optical_power"] == 0.0
    assert reached("trigger stuck high")["D1.steady_current"] == near(stuck["D1.steady_current"], rel=1e-9)
    for case in (
        "switch open",
        "supply before control, trigger open",
        "load open",
        "storage capacitor short",
        "charging resistor open",
    ):
        assert reached(case)["D1.current"] < 1e-3
        assert reached(case)["D1.optical_power"] == 0.0
    short = reached("load short")
    assert short["Q1.current"] > 1.1 * usual["Q1.current"]
    assert short["D1.peak_power"] == 0.0
    wild = reached("repetition too fast")
    assert wild["Q1.current"] < 1e-3
    assert wild["R1.power"] == near(70.0**2 / chosen["R1"], rel=0.02)  # all that comes through R1 is drawn
    missing = reached("clamp diode missing")
    assert missing["D1.reverse_voltage"] == near(usual["recoil.voltage"], rel=1e-12)
    assert usual["D1.reverse_voltage"] == near(usual["D2.forward_voltage"], rel=1e-12)
    direct = reached("charging resistor short")
    assert direct["D1.steady_current"] == near(70.0 / (0.16 + chosen["R3"] + 0.02 + 0.04), rel=2e-3)


def test_every_case_is_told_with_its_figures() -> None:
    said = {fault.case: fault for fault in sized(NAME).faults}
    assert {case for case, fault in said.items() if not fault.ok} == {
        "repetition too fast", "charging resistor short", "damping resistor short", "clamp diode missing",
        "25 K above the hottest asked for",
    }  # fmt: skip
    assert "limited by R1" in said["switch stuck on"].result
    assert re.search(r"R1 takes \d+ mW", said["switch stuck on"].result)
    assert "reverse_voltage_max" in said["clamp diode missing"].result
    assert "duty" in said["repetition too fast"].result
    assert "no current through the laser" in said["load short"].result


def test_without_a_clamp_the_laser_s_reverse_voltage_is_missed() -> None:
    result = sized(NAME, *BARE)
    assert result.verdict == "missed"
    (row,) = [row for row in result.requirements if not row.met]
    assert row.requirement.figure == "reverse_voltage"
    assert any("no diode across the laser" in said for said in result.cautions)
    assert "clamp diode missing" not in {fault.case for fault in result.faults}


def test_people_are_warned_of_light_voltage_and_charge() -> None:
    said = " ".join(sized(NAME).cautions)
    for words in ("invisible", "high voltage, do not touch", "wait, measure, then touch", "competent person"):
        assert words in said


@pytest.mark.parametrize(
    "changes", [(("supply  ", 'supply = { positive = "40 V", tolerance = "3 %" }'),),
                (("series_resistance", 'series_resistance = "2 Ω"'),)]
)  # fmt: skip
def test_what_would_do_does(changes: Changes) -> None:
    """A pulse out of reach is refused with figures for supply, width and current, and each of them sizes."""
    with pytest.raises(InfeasibleError) as refused:
        sized(NAME, *changes)
    remedies = {text.split(" ≥ ")[0].split(" ≤ ")[0]: text for text in refused.value.remedies}
    for key, line in (
        ("conditions.supply.positive", ("supply  ", 'supply = {{ positive = "{}", tolerance = "3 %" }}')),
        ("signal.pulse_width", ("pulse_width  ", 'pulse_width = "{}"')),
        ("signal.current", ("current  ", 'current = "{}"')),
    ):
        figure_text = re.split(" [≥≤] ", remedies[key])[1]
        number, unit = figure_text.split(" ")
        nudged = float(number) * (1.01 if "≥" in remedies[key] else 0.99)
        pattern, text = line
        others = tuple(change for change in changes if change[0] != pattern)
        assert sized(NAME, *others, (pattern, text.format(f"{nudged:.4g} {unit}")), ("peak_current  ", ""),
                     ("peak_power  ", "")).parts  # fmt: skip


@pytest.mark.parametrize(
    ("change", "words"),
    [
        (("voltage_max   ", 'voltage_max = "60 V"'), "voltage_max of the transistor"),
        (("gate_voltage_max", 'gate_voltage_max = "5 V"'), "gate_voltage_max"),
        (("high  ", 'high = "2 V"'), "the transistor turns on from"),
        (("discharge_time    ", 'discharge_time = "1 ms"'), "it would take the supply"),
        (("", '[fixed]\nC1 = "1 nF"'), "C1, fixed at 1.00 nF"),
        (("pulse_current_max        = ", 'pulse_current_max = "20 A"'), "more than the transistor stands"),
    ],
)
def test_what_the_parts_do_not_allow_is_refused(change: tuple[str, str], words: str) -> None:
    with pytest.raises(InfeasibleError, match=re.escape(words)):
        sized(NAME, change)


@pytest.mark.parametrize(
    ("change", "words"),
    [
        (("current  ", 'current = "50 A"'), "above pulse_current_max 40.0 A"),
        (("pulse_width  ", 'pulse_width = "200 ns"'), "above pulse_width_max 100 ns"),
        (("repetition_rate", 'repetition_rate = "200 kHz"'), "duty_max"),
        (("supply  ", 'supply = { positive = "5 V", tolerance = "3 %" }'), "does not pass the forward voltage"),
        (("kind  ", 'kind = "pmos"'), "nmos"),
        (("pulse_width  ", 'pulse_widht = "12 ns"'), "pulse_width"),
    ],
)
def test_what_the_file_must_not_ask_is_told_with_its_line(change: tuple[str, str], words: str) -> None:
    with pytest.raises(InputError) as refused:
        sized(NAME, change)
    assert any(words in str(problem) for problem in refused.value.problems)


def test_a_gate_too_slow_for_the_pulse_is_told() -> None:
    slow = ("gate_charge", 'gate_charge = "20 nC"')
    assert any("lower and wider than told" in said for said in sized(NAME, slow).cautions)
    assert not any("lower and wider than told" in said for said in sized(NAME).cautions)


def test_eye_safety_speaks_of_the_average_and_says_that_pulses_have_limits_of_their_own() -> None:
    result = sized(NAME)
    (said,) = [text for text in result.cautions if text.startswith("eye safety")]
    assert f"{1e3 * result.figure('optical_power').high:.2f} mW may reach an eye" in said
    assert any("a train of them have limits of their own" in text for text in result.cautions)
