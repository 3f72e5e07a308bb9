"""Receivers that cannot be: what binds is said with the figure that would have to change, and no traceback."""

from __future__ import annotations

import json
import re
from collections.abc import Sequence
from pathlib import Path

import pytest

from tests.cli.process import ROOT, run

APD = ("part  .*HB-PIN-55.*", 'part = "HB-APD-80"')


def design(name: str, *changes: tuple[str, str]) -> str:
    """A worked design with whole lines exchanged: beginning of a line, its new text; ("", text to append)."""
    text = Path(ROOT / "designs" / f"{name}.toml").read_text()
    text = text.replace('"parts.toml"', json.dumps(str(ROOT / "designs" / "parts.toml")))
    for pattern, line in changes:
        if not pattern:
            text += f"\n{line}\n"
            continue
        text, count = re.subn(rf"(?m)^{pattern}.*$", lambda _, line=line: line, text, count=1)
        assert count == 1, pattern
    return text


def sized(name: str, *changes: tuple[str, str]) -> tuple[int, str]:
    ended = run("size", "-", stdin=design(name, *changes))
    told = ended.stdout.decode() + ended.stderr.decode()
    assert "Traceback" not in told
    assert "fault of this program" not in told
    assert "Warning" not in told
    return ended.returncode, told


REFUSED: Sequence[tuple[str, tuple[tuple[str, str], ...], tuple[str, ...]]] = [
    (
        "tia",
        (APD, ("reverse_bias", 'gain = "40"')),
        ("detector.gain:", "may reach 56.8 V", "breakdown at -20 °C is 50.5 V", "a gain of at most 9.06"),
    ),
    (
        "tia",
        (APD, ("reverse_bias", 'gain = "2000"')),
        ("detector.gain:", "breakdown at -20 °C is 50.5 V", "a gain of at most 9.06"),
    ),
    (
        "tia",
        (APD, ("reverse_bias", 'reverse_bias = "52 V"')),
        ("detector.reverse_bias: 52.0 V may reach 54.6 V", "breakdown at -20 °C", "a bias of at most 48.0 V"),
    ),
    ("tia", (("reverse_bias", 'reverse_bias = "40 V"'),), ("40.0 V is above reverse_voltage_max 20.0 V",)),
    (
        "tia",
        (("reverse_bias", 'reverse_bias = "19.5 V"'),),
        ("19.5 V may reach 20.5 V", "reverse_voltage_max is 20.0 V", "at most 19.0 V"),
    ),
    (
        "load-resistor",
        (("reverse_bias", 'reverse_bias = "19.5 V"'),),
        ("19.5 V may reach 20.5 V", "at most 19.0 V"),
    ),
    (
        "tia",
        (("power ", 'power = { typ = "2 µW", max = "50 mW" }'),),
        ("signal.power:", "up to 88.8 mA in the detector", "photocurrent_max is 2.00 mA", "at most 1.13 mW"),
    ),
    (
        "tia",
        (APD, ("reverse_bias", 'gain = "9"')),
        ("signal.power:", "6.05 mA in the detector at -20 °C, at a gain of 74.8", "at most 7.74 µW"),
    ),
    ("tia", (("wavelength", 'wavelength = "1900 nm"'),), ("signal.wavelength:", "1900 nm is beyond", "1653 nm")),
    ("tia-fixed", (("wavelength", 'wavelength = "2 µm"'),), ("signal.wavelength:", "beyond the cut-off")),
    (
        "tia",
        (("bandwidth ", 'bandwidth = { min = "8 MHz", max = "6 MHz" }'),),
        ("require.bandwidth.min:", "min '8 MHz' is above max '6 MHz'"),
    ),
]


@pytest.mark.parametrize(("name", "changes", "told"), REFUSED, ids=range(len(REFUSED)))
def test_what_a_part_does_not_stand_ends_in_3(
    name: str, changes: tuple[tuple[str, str], ...], told: tuple[str, ...]
) -> None:
    code, text = sized(name, *changes)
    assert code == 3
    for part in told:
        assert part in text


def test_what_the_message_allows_is_taken() -> None:
    """The gain, the bias and the light that the messages name end the refusal, a little more does not."""
    for gain, code in (("9.05", {0, 1}), ("9.2", {3})):
        dim = ("power ", 'power = { typ = "0.1 µW", max = "1 µW" }')
        assert sized("tia", APD, ("reverse_bias", f'gain = "{gain}"'), dim)[0] in code
    for bias, code in (("19 V", {0, 1}), ("19.1 V", {3})):
        assert sized("tia", ("reverse_bias", f'reverse_bias = "{bias}"'))[0] in code
    for power, code in (("1.12 mW", {1}), ("1.14 mW", {3})):
        assert sized("tia", ("power ", f'power = {{ typ = "2 µW", max = "{power}" }}'))[0] in code


def test_bounds_that_contradict_end_in_1_and_say_what_each_would_cost() -> None:
    bounds = 'output_swing = { max = "1 V" }\ntransimpedance = { min = "50 kV/A" }'
    code, text = sized("tia", ("output_swing", bounds))
    assert code == 1
    assert "1 of 6 requirements missed" in text
    assert re.search(r"would do: R1 ≥ 51\.\d kΩ but takes bandwidth to .* for ≥ 8\.00 MHz", text)
    assert re.search(r"output_swing to 5\.\d+ V for ≤ 1\.00 V", text)
    assert "swing binds: 1.00 V / " in text


def test_a_bound_out_of_reach_costs_no_other_and_what_is_in_reach_is_told() -> None:
    code, text = sized("tia", ("nep_density", 'nep_density = { max = "0.1 pW/√Hz" }'))
    assert code == 1
    assert "1 of 5 requirements missed" in text
    assert re.search(r"would do: to ask for ≤ 1\.\d+ pW/√Hz; no figure of U1 or D1 or R1 alone", text)


def test_light_beyond_a_resistor_that_is_insisted_on_names_the_corner_and_the_light() -> None:
    bright = ("power ", 'power = { typ = "2 µW", max = "0.5 mW" }')
    code, text = sized("tia", bright, ("output_swing", ""), ("", '[fixed]\nR1 = "19.1 kΩ"'))
    assert code == 1
    assert re.search(r"overload +≥ 500 µW +127 µW +9\d\.\d µW +missed", text)
    assert "signal power max ≤ 9" in text
    assert "positive supply 4.75 V" in text


def test_light_that_ends_at_the_coldest_corner_of_an_avalanche_gain() -> None:
    """The gain is largest in the cold: with R1 insisted on the bound on the light is missed there."""
    dim = ("power ", 'power = { typ = "0.1 µW", max = "3 µW" }')
    code, text = sized("tia", APD, ("reverse_bias", 'gain = "9"'), dim, ("", '[fixed]\nR1 = "47 kΩ"'))
    assert code == 1
    line = text[text.index("\n  overload  ") :]
    assert "missed" in line.splitlines()[1]
    assert "-20 °C" in line[:600]


def test_more_light_than_the_op_amp_gives_current_ends_in_4() -> None:
    weak = 'part = "HB-OA-400"\noutput_current_max = "0.5 mA"'
    bright = ("power ", 'power = { typ = "2 µW", max = "1 mW" }')
    code, text = sized("tia", ("part = .HB-OA-400.", weak), bright)
    assert code == 4
    assert re.search(r"the light takes 1\.\d+ mA through R1, whatever its value; U1 gives 350 µA", text)
    assert "signal.power.max ≤ " in text


def test_a_tee_where_a_real_resistor_exists_is_said() -> None:
    code, text = sized("tia-tee", ("power ", 'power = { typ = "2 µW", max = "50 µW" }'))
    assert code == 1
    assert re.search(r"a real resistor of \d+ kΩ exists \(up to 10\.0 MΩ are usual\) and is quieter: circuit tia", text)


def test_a_bootstrap_slower_than_the_signal_ends_in_4() -> None:
    code, text = sized("tia-bootstrap", ("bandwidth ", 'bandwidth = { min = "300 MHz" }'))
    assert code == 4
    assert "the bootstrap is slower than the signal" in text
    assert "bandwidth ≤ 5.86 MHz" in text


def test_no_light_at_all_is_sized() -> None:
    code, _ = sized("tia", ("power ", 'power = { typ = "0 W", max = "0 W" }'))
    assert code == 0
