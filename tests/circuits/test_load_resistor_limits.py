"""Load resistor: which form it takes, what bounds R1 and the light, faults, blocks around it, what is refused."""

from __future__ import annotations

from shutil import which

import numpy as np
import pytest

from opto_ckt.circuits import load
from opto_ckt.errors import InfeasibleError, InputError
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.simulators import ENGINES as SIMULATORS
from opto_ckt.result import Result
from opto_ckt.topology import Resistor
from opto_ckt.units import write
from tests.circuits.blocks.test_decision import COMPARATOR
from tests.circuits.sized import model, read, sized
from tests.circuits.test_load_resistor import FAST, GAIN, HIGH, IDEAL, SINGLE
from tests.near import near

ENGINES = [engine for engine in SIMULATORS if engine == "neospice" or which("ngspice")]
BY_NOISE = (*FAST[:3], ("front_end ", ""), ("peaking ", ""))


def value(result: Result, ref: str) -> float:
    found = next(part.value for part in result.parts if part.ref == ref)
    assert found is not None
    return found


def said(result: Result, start: str) -> str:
    return next(caution for caution in result.cautions if caution.startswith(start))


@pytest.mark.parametrize(
    ("bound", "form", "why"),
    [
        ("2 pW/√Hz", "high impedance", "above the 1.60 pA/√Hz allowed"),
        ("9 pW/√Hz", "low impedance", "within the 7.20 pA/√Hz allowed"),
    ],
)
def test_the_noise_asked_for_chooses_the_form(bound: str, form: str, why: str) -> None:
    """0.8 A/W at least; by hand: 8 MHz on 9.2 + 1.8 + 0.3 pF take 1.76 kΩ. At 60 °C that makes 3.23 pA/√Hz, e_n of
    7.5 nV/√Hz over it 4.26, over the capacitance at 1 MHz 0.53, shot noise of 1 µA 0.57: 5.40 pA/√Hz together.
    """
    result = sized(
        "load-resistor",
        *BY_NOISE,
        ("bandwidth ", f'bandwidth = {{ min = "8 MHz" }}\nnep_density = {{ max = "{bound}" }}'),
    )
    assert ("C5" in {part.ref for part in result.parts}) == (form == "high impedance")
    reason = said(result, form)
    assert "makes up to 5.40 pA/√Hz" in reason
    assert why in reason
    if form == "high impedance":
        assert result.verdict == "met"


def test_an_avalanche_detector_does_not_choose_by_the_noise_of_the_load() -> None:
    points = '[ { bias = "5 V", gain = 1 }, { bias = "40 V", gain = 10 } ]'
    apd = ("reverse_voltage_max", f'reverse_voltage_max = "60 V"\ngain_points = {points}\nionisation_ratio = 0.4')
    bound = ("bandwidth ", 'bandwidth = { min = "8 MHz" }\nnep_density = { max = "0.1 pW/√Hz" }')
    topology = load("load-resistor").topology(read("load-resistor", ("front_end ", ""), apd, bound).request)
    assert "C5" not in {element.ref for element in topology}


def test_the_sentence_on_the_other_form_comes_true() -> None:
    """R1 and noise that the low form promises of the high one, against the high form sized for itself."""
    promise = said(sized("load-resistor", *FAST), 'target.front_end = "high_impedance"')
    high = sized("load-resistor", *HIGH)
    largest = float(promise.split("up to ")[1].split(" kΩ")[0]) * 1e3
    quieter = float(promise.split(" to ")[-1].split(" pA")[0]) * 1e-12
    assert value(high, "R1") < largest < 1.3 * value(high, "R1")  # the overshoot of a corner takes its share
    assert quieter < high.figure("input_noise_density").nominal < 1.2 * quieter  # R4, R5 and the smaller R1


def test_a_zero_that_misses_its_pole_shows_as_its_ratio() -> None:
    """The doublet: C5 20 % too large lifts high frequencies by 1.58 dB, 20 % too small lets them droop by 1.94 dB."""
    found = model("load-resistor", *HIGH)
    bare = {"U1.differential_capacitance": 1e-20, "U1.common_capacitance": 1e-20, "C8": 1e-7, "C9": 1e-7}
    bare |= {"D1.shunt_resistance": 1e15, "RB": 1e15, "U1.open_loop_gain": 1e9}
    base = found.nominal() | IDEAL | bare | {"R1": 2e5, "R4": 1e5, "R5": 100.0, "C5": 1e-12}
    pole = 2e5 * (float(found.biased(base)["D1.capacitance"]) + base["CB"])
    for miss in (1.2, 0.8):
        shaping = miss * pole / (1e5 + 100.0)
        figures = found.evaluate(base | {"C5": shaping})
        frequency = np.geomspace(1e3, 1e9, 20001)
        s = 2j * np.pi * frequency
        shape = np.abs((1 + s * (1e5 + 100.0) * shaping) / (1 + s * 100.0 * shaping) / (1 + s * pole))
        assert figures["peaking"][0] == pytest.approx(max(20 * np.log10(shape.max()), 0.0), abs=2e-3)
    assert 20 * np.log10(1.2) == pytest.approx(1.58, abs=0.005)
    assert figures["peaking"][0] == 0


def test_the_zero_lies_between_the_poles_that_capacitance_and_bias_make() -> None:
    """Of a diode of 7.2 pF to 11 pF: it lifts for the one and droops for the other, and the band is kept at both."""
    result = sized("load-resistor", *FAST[:2], ("front_end ", 'front_end = "high_impedance"'), ("peaking ", ""))
    low, nominal, high = (
        20 * np.log10((value(result, "R4") + value(result, "R5")) * value(result, "C5") / value(result, "R1") / across)
        for across in (7.2e-12 + 1.2e-12 + 0.24e-12, 9e-12 + 1.5e-12 + 0.3e-12, 11e-12 + 1.8e-12 + 0.36e-12)
    )
    assert low > nominal > 0 > high
    bandwidth = next(row for row in result.requirements if row.requirement.figure == "bandwidth")
    assert bandwidth.met, bandwidth


def test_corners_hold_the_doublet_that_the_sheet_allows() -> None:
    """With a diode of 9 pF to 11 pF the mismatch alone asks for more than peaking and bandwidth leave together."""
    result = sized("load-resistor", *FAST[:2], ("front_end ", 'front_end = "high_impedance"'))
    rows = {row.requirement.figure: row for row in result.requirements}
    missed = [row for row in (rows["peaking"], rows["bandwidth"]) if not row.met]
    assert missed
    assert all(row.remedies for row in missed)
    worst = float(said(result, "the current integrates").split("… ")[1].split(" dB")[0])
    assert rows["peaking"].worst == pytest.approx(worst, abs=0.6)  # the pole of the equaliser takes a little off


@pytest.mark.parametrize(("form", "least"), [((), "0.3 MHz"), (HIGH, "0.8 MHz")], ids=["low", "high"])
def test_r1_holds_the_one_level_of_most_light(form: tuple[tuple[str, str], ...], least: str) -> None:
    """2 V asked for: largest responsivity, ambient, tolerance, and the overshoot that the equaliser leaves."""
    slow = (("bit_rate", 'bit_rate = "1 Mbit/s"'), ("bandwidth ", f'bandwidth = {{ min = "{least}" }}'))
    result = sized("load-resistor", *form, *slow)
    assert 1.8 < result.figure("output_swing").high <= 2.0


def room_of(result: Result) -> str:
    return said(result, "more light ends").split("at the ")[1].split(",")[0]


@pytest.mark.parametrize(
    ("changes", "ends_at", "room"),
    [
        ((), "output of U1", 5 - 1.3),
        (
            (("swing_to_negative", 'swing_to_negative = "1.3 V"\ncommon_mode_to_negative = "3 V"'),),
            "common mode of U1",
            2.0,
        ),
        ((("reverse_bias", 'reverse_bias = "1 V"'), ("output_swing", "")), "bias of D1", 1.0),
    ],
    ids=["output", "common mode", "bias"],
)
def test_overload_is_where_the_node_of_the_load_comes_to_its_end(
    changes: tuple[tuple[str, str], ...], ends_at: str, room: float
) -> None:
    """Nominal, by hand: (room - dark and offset)/R1 less ambient, over the responsivity and the level of a one."""
    result = sized("load-resistor", *changes)
    ratio, scene = 10**0.9, result.scenes[0].values
    dark = value(result, "R1") * (scene["D1.dark_current"] + 3e-12) + 0.3e-3
    current = (room - dark) / value(result, "R1") / (1 + result.figure("overshoot").nominal) - 1e-6
    assert room_of(result) == ends_at
    assert result.figure("overload").nominal == pytest.approx(current / 0.9 * (ratio + 1) / (2 * ratio), rel=1e-6)


def test_a_single_supply_has_its_level_behind_a_follower() -> None:
    """Light moves the node of R1, not the level: DC sees R1 alone."""
    result = sized("load-resistor", *SINGLE)
    assert {"U2", "R2", "R3", "C2", "C7"} <= {part.ref for part in result.parts}
    assert result.figure("transimpedance").nominal == near(value(result, "R1"), rel=1e-3)
    assert result.figure("dark_output").nominal == pytest.approx(1.5, rel=0.02)  # two resistors of E96
    assert "U2" in {row.ref for row in result.heat}
    assert result.figure("dc_offset").high > sized("load-resistor").figure("dc_offset").high  # the follower's offset


def test_a_second_amplifier_makes_the_level() -> None:
    slow = ("", '[second_amplifier]\ngain_bandwidth = "10 MHz"\nopen_loop_gain = "90 dB"\ncommon_capacitance = "4 pF"\n'
            'differential_capacitance = "2 pF"\nvoltage_noise = "9 nV/√Hz"\ncurrent_noise = "2 fA/√Hz"\n'
            'offset_voltage = "0.2 mV"\nbias_current = "1 pA"\nslew_rate = "5 V/µs"\nswing_to_positive = "50 mV"\n'
            'swing_to_negative = "50 mV"\noutput_current_max = "25 mA"\nquiescent_current = "1 mA"\n'
            'supply_min = "2.7 V"\nsupply_max = "5.5 V"')  # fmt: skip
    assert sized("load-resistor", *SINGLE, slow).scenes[0].values["U2.gain_bandwidth"] == 10e6
    ringing = (slow[0], slow[1] + '\nminimum_stable_gain = "10"')
    with pytest.raises(InputError, match="follower is stable from a gain of 10"):
        sized("load-resistor", *SINGLE, ringing)


def test_a_level_that_the_amplifier_cannot_work_at_is_said() -> None:
    low = (("supply ", 'supply = { positive = "5 V", tolerance = "5 %" }\ninput_level = "0.5 V"'), *SINGLE[1:])
    assert any("cannot work at its dark level" in caution for caution in sized("load-resistor", *low).cautions)
    assert not any("cannot work" in caution for caution in sized("load-resistor", *SINGLE).cautions)


def test_gain_comes_where_a_transimpedance_or_a_swing_asks_for_it() -> None:
    by_swing = (
        ("output_swing ", 'output_swing = { min = "0.1 V" }'),
        ("power ", 'power = { min = "10 µW", typ = "20 µW", max = "50 µW" }'),
        ("gain_bandwidth ", 'gain_bandwidth = "400 MHz"'),
    )
    for changes in (GAIN, by_swing):
        result = sized("load-resistor", *changes)
        assert result.verdict == "met", [row for row in result.requirements if not row.met]
        gain = 1 + value(result, "R4") / value(result, "R5")
        assert result.figure("transimpedance").nominal == near(gain * value(result, "R1"), rel=2e-3)
    plain = sized("load-resistor", ("output_swing ", 'transimpedance = { min = "500 Ω" }'))
    assert plain.verdict == "met"
    assert "R4" not in {part.ref for part in plain.parts}


def fault(result: Result, case: str) -> tuple[str, bool]:
    found = next(row for row in result.faults if row.case.startswith(case))
    return found.result, found.ok


def test_a_short_to_its_own_rail_harms_nothing_and_one_to_a_higher_bias_does() -> None:
    text, ok = fault(sized("load-resistor"), "detector short")
    assert ok
    assert "-4.21 V" in text  # the output's limit at the widest supply
    high = (("", '[bias]\nsupply = "12 V"'), ("reverse_bias", 'reverse_bias = "12 V"'))
    text, ok = fault(sized("load-resistor", *high), "detector short")
    assert not ok
    assert "limited by nothing but that supply" in text


def test_light_beyond_what_r1_carries_goes_into_the_input_only_where_the_bias_lies_beyond_the_rails() -> None:
    """50 µW · 1.0 A/W · 1.776 of a one + 1 µA + dark: 90 µA, ten times of it 889 µA, through an open R1."""
    high = (("", '[bias]\nsupply = "12 V"'), ("reverse_bias", 'reverse_bias = "12 V"'))
    text, ok = fault(sized("load-resistor", *high), "R1 open")
    assert ok
    current = float(text.split(" µA into")[0].split(", ")[-1])
    assert current == pytest.approx(50 * 2 * 10**0.9 / (10**0.9 + 1) + 1, rel=0.02)
    text, ok = fault(sized("load-resistor"), "R1 open")
    assert ok
    assert "into U1" not in text
    assert "takes all of D1's bias" in text


def test_too_much_light_uses_up_the_bias_and_the_diode_carries_the_rest() -> None:
    text, ok = fault(sized("load-resistor", *HIGH), "light 10 times")
    assert ok
    assert "takes all of D1's bias" in text
    limit = ("reverse_voltage_max", 'reverse_voltage_max = "20 V"\nphotocurrent_max = "0.5 mA"')
    text, ok = fault(sized("load-resistor", limit), "light 10 times")
    assert not ok
    assert "through D1, its sheet allows 500 µA" in text


def test_a_bias_from_a_rail_comes_with_it() -> None:
    cases = {row.case for row in sized("load-resistor").faults}
    assert "light before supplies" in cases
    assert not any("bias" in case for case in cases)


def test_a_threshold_lies_on_the_side_that_light_drives_to() -> None:
    """Light at the cathode pulls the node of R1 down, where it drives an inverting amplifier up."""
    decision = ("", f"{COMPARATOR}\n[blocks]\ndecision = {{}}")
    rails = {}
    for name in ("load-resistor", "tia"):
        upper = sized(name, decision).topology["R62"]
        assert isinstance(upper, Resistor)
        rails[name] = upper.a
    assert rails == {"load-resistor": "negative", "tia": "positive"}


@pytest.mark.parametrize("stage", ["", "gain_stage = { gain = 8 }\n"])
def test_a_decision_counts_the_levels_that_the_load_and_what_follows_it_give(stage: str) -> None:
    """Half the step of light at 2 µW and 9 dB, 0.9 A/W, through R1 and the gain behind it."""
    result = sized("load-resistor", ("", f"{COMPARATOR}\n[blocks]\n{stage}decision = {{}}"))
    gain = 1 + value(result, "R50") / value(result, "R51") if stage else 1.0
    ratio = 10**0.9
    distance = 0.9 * 2e-6 * (ratio - 1) / (ratio + 1) * value(result, "R1") * gain
    scene = result.scenes[0].values
    error = 2e-3 + 10 * scene["R60"] / (scene["R60"] + scene["R61"]) / 2
    text = said(result, "decision")
    if error > distance:
        assert f"of {write(distance, 'V')} from level" in text
    else:
        assert f"cost {write(-10 * np.log10(1 - error / distance), 'dB')} of light" in text


@pytest.mark.parametrize("engine", ENGINES)
def test_a_gain_stage_behind_takes_the_place_of_the_amplifiers_own_gain(engine: str) -> None:
    stage = (("output_swing ", 'transimpedance = { min = "5 kΩ" }'), ("", "[blocks]\ngain_stage = {}"))
    result = sized("load-resistor", *stage)
    assert "R4" not in {part.ref for part in result.parts}
    assert result.verdict == "met", [row for row in result.requirements if not row.met]
    assert [row for row in crosscheck(result, engine) if not row.ok] == []


def test_a_bandwidth_that_no_load_reaches_is_refused_with_what_is() -> None:
    with pytest.raises(InfeasibleError, match="no load reaches") as refused:
        sized("load-resistor", ("bandwidth ", 'bandwidth = { min = "2 GHz" }'))
    assert any("require.bandwidth ≤" in remedy for remedy in refused.value.remedies)


def test_an_equaliser_with_nothing_to_do_is_refused() -> None:
    with pytest.raises(InfeasibleError, match="by itself"):
        sized("load-resistor", ("front_end ", 'front_end = "high_impedance"'), ("power ", 'power = { max = "50 mW" }'))


def test_an_amplifier_too_slow_to_lift_is_refused_and_the_one_named_goes() -> None:
    slow = (("gain_bandwidth ", 'gain_bandwidth = "20 MHz"'), ("front_end ", 'front_end = "high_impedance"'))
    with pytest.raises(InfeasibleError, match="nothing to lift with") as refused:
        sized("load-resistor", *slow)
    named = next(way for way in refused.value.remedies if way.startswith("gain bandwidth")).split("≥ ")[1]
    sized("load-resistor", slow[1], ("gain_bandwidth ", f'gain_bandwidth = "{named}"'))


def test_a_transimpedance_that_the_output_cannot_follow_is_refused_and_the_one_named_goes() -> None:
    fast = ("gain_bandwidth ", 'gain_bandwidth = "3 GHz"')
    with pytest.raises(InfeasibleError, match="the output of U1 has") as refused:
        sized("load-resistor", fast, ("output_swing ", 'transimpedance = { min = "50 kΩ" }'))
    named = next(way for way in refused.value.remedies if way.startswith("require.transimpedance.min")).split("≤ ")[1]
    largest = float(named.split(" ")[0]) / 1.05 * 0.99
    sized("load-resistor", fast, ("output_swing ", f'transimpedance = {{ min = "{largest:.3f} kΩ" }}'))


def test_a_decompensated_amplifier_needs_the_gain_that_it_is_stable_at() -> None:
    """As a buffer it is refused; the transimpedance named leaves it that gain."""
    least = ("junction_max", 'junction_max = "150 °C"\nminimum_stable_gain = "5"')
    with pytest.raises(InfeasibleError, match="stable from a gain of 5; here it has 1") as refused:
        sized("load-resistor", least)
    assert any(way.startswith("require.transimpedance.min ≥") for way in refused.value.remedies)
    assert 1 + (lambda r: value(r, "R4") / value(r, "R5"))(sized("load-resistor", least, *GAIN)) > 5
    assert sized("load-resistor", ("junction_max", 'junction_max = "150 °C"\nminimum_stable_gain = "10"'), *HIGH)


def test_no_headroom_is_refused_with_the_way_out() -> None:
    narrow = ("swing_to_negative", 'swing_to_negative = "1.3 V"\ncommon_mode_to_negative = "5.5 V"')
    with pytest.raises(InfeasibleError, match=r"no headroom: .* common mode of U1") as refused:
        sized("load-resistor", narrow)
    assert any("supply wider by" in way for way in refused.value.remedies)
