"""The transimpedance receiver: closed forms and lcapy against its network, sizing by hand, what it refuses."""

from __future__ import annotations

import numpy as np
import pytest

from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.response import transfer_at
from opto_ckt.analyses.symbolic import lcapy_transfer
from opto_ckt.constants import ZERO_CELSIUS
from opto_ckt.errors import InfeasibleError, InputError
from opto_ckt.formulas import noise, second_order, transimpedance
from opto_ckt.limits import values_at
from tests.circuits.sized import model, read, sized
from tests.near import near

ONE_POLE = (("second_pole", ""), ("output_resistance", ""), ("series_resistance", ""))
SINGLE_SUPPLY = (
    ("supply ", 'supply = { positive = "5 V", tolerance = "5 %" }\ninput_level = "1.5 V"'),
    ("reverse_bias", 'reverse_bias = "1.5 V"'),
    ("capacitance_bias", 'capacitance_bias = "1.5 V"'),
    ("output_swing", 'output_swing = { max = "1.5 V" }'),
)


def test_network_of_one_pole_agrees_with_the_closed_forms() -> None:
    """Exact second-order forms for a one-pole op amp of finite gain with a shunt at its input."""
    found = model("tia", *ONE_POLE)
    values = found.nominal() | {"R1": 22.1e3, "C1": 0.75e-12}
    biased = found.biased(values)
    figures = found.evaluate(values)
    shunt = 1 / (1 / float(biased["D1.shunt_resistance"]) + 1 / values["RB"])
    parts = {
        "feedback_resistance": values["R1"],
        "feedback_capacitance": values["C1"] + values["CS"],
        "gain_bandwidth": values["U1.gain_bandwidth"],
        "shunt_resistance": shunt,
        "open_loop_gain": values["U1.open_loop_gain"],
        "input_capacitance": float(biased["D1.capacitance"])
        + values["U1.common_capacitance"]
        + values["U1.differential_capacitance"]
        + values["CB"],
    }
    natural = transimpedance.natural_frequency_at_finite_gain(**parts)
    quality = transimpedance.quality_factor_at_finite_gain(**parts)
    assert figures["quality_factor"][0] == near(quality, rel=1e-5)
    assert figures["bandwidth"][0] == near(second_order.bandwidth(natural_frequency=natural, quality=quality), rel=1e-5)


@pytest.mark.parametrize(
    "changes", [(), (("output  ", 'output = "anode"'),), SINGLE_SUPPLY], ids=["cathode", "anode", "single"]
)
def test_network_agrees_with_lcapy_at_random_values(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("tia", *changes)
    random = np.random.default_rng(20)
    chosen = {"R1": 2e4, "C1": 7e-13, "C8": 1e-7, "C9": 1e-7, "R2": 2e4, "R3": 1e4, "C2": 1e-6}
    biased = found.biased(found.nominal() | chosen)
    needed = sorted(found.network.inputs)
    values = {name: float(np.asarray(biased[name])) * float(random.uniform(0.5, 2)) for name in needed}
    frequencies = np.geomspace(1e3, 1e9, 7)
    ours = transfer_at(found.network.evaluate(values), frequencies[:, None])[:, 0]
    np.testing.assert_allclose(lcapy_transfer(expand(found.topology), values, frequencies), ours, rtol=1e-6)


def test_input_noise_agrees_with_the_closed_form() -> None:
    found = model("tia", *ONE_POLE)
    values = found.nominal() | {"R1": 22.1e3, "C1": 0.75e-12}
    biased = found.biased(values)
    total = float(biased["D1.capacitance"]) + sum(
        values[name] for name in ("U1.common_capacitance", "U1.differential_capacitance", "CB", "CS", "C1")
    )
    expected = noise.input_noise(
        current=float(biased["D1.dark_current"] + biased["D1.ambient_current"]),
        feedback_resistance=values["R1"],
        shunt_resistance=1 / (1 / float(biased["D1.shunt_resistance"]) + 1 / values["RB"]),
        temperature=values["temperature"],
        current_noise=values["U1.current_noise"],
        voltage_noise=values["U1.voltage_noise"],
        voltage_noise_corner=values["U1.voltage_noise_corner"],
        capacitance=total,
        frequency=1e6,
    )
    assert found.evaluate(values)["input_noise_density"][0] == near(expected, rel=2e-4)  # loop gain at 1 MHz is finite


def test_every_requirement_of_the_starter_is_met_at_its_worst_corner() -> None:
    result = sized("tia")
    assert result.verdict == "met"
    for row in result.requirements:
        assert row.met, row


def test_r1_holds_the_one_level_of_most_light_at_the_hottest_corner() -> None:
    """P1 = 2 P r/(r + 1), the largest responsivity, ambient light, tolerance and the overshoot left by C1."""
    result = sized("tia")
    ratio = 10**0.9
    photocurrent = 1.0 * 50e-6 * 2 * ratio / (ratio + 1) + 1e-6
    r1 = next(part.value for part in result.parts if part.ref == "R1")
    assert r1 is not None
    swing = result.figure("output_swing").high
    assert swing <= 2.0
    plain = r1 * (1.01 + 100e-6 * 45) * photocurrent
    assert plain < swing < plain * (1 + result.figure("overshoot").high + 1e-6)


def test_a_fixed_resistor_is_kept_and_the_capacitor_sized_around_it() -> None:
    result = sized("tia", ("", '[fixed]\nR1 = "15 kΩ"'))
    values = {part.ref: part.value for part in result.parts}
    assert values["R1"] == 15e3
    assert values["C1"] is not None
    assert values["C1"] > 0.8e-12


def test_light_at_the_anode_turns_the_output_round() -> None:
    result = sized("tia", ("output  ", 'output = "anode"'))
    assert result.verdict == "met"
    assert "output falls with light" in result.cautions


def test_a_single_supply_gets_a_level_and_can_reach_dark() -> None:
    result = sized("tia", *SINGLE_SUPPLY)
    refs = {part.ref for part in result.parts}
    assert {"R2", "R3", "C2"} <= refs
    assert "C9" not in refs
    assert result.figure("dark_output").nominal == near(1.5, rel=0.02)
    assert not any("cannot reach its dark level" in caution for caution in result.cautions)


def test_a_level_too_low_for_the_dark_is_said() -> None:
    changes = (
        ("supply ", 'supply = { positive = "5 V", negative = "0 V" }\ninput_level = "0.2 V"'),
        ("reverse_bias", 'reverse_bias = "0.2 V"'),
    )
    assert any("cannot reach its dark level" in caution for caution in sized("tia", *changes).cautions)


def test_no_headroom_is_refused_with_the_way_out() -> None:
    changes = (("supply ", 'supply = { positive = "5 V" }\ninput_level = "4.5 V"'),)
    with pytest.raises(InfeasibleError, match="no headroom") as refused:
        sized("tia", *changes)
    assert any("input_level lower" in remedy for remedy in refused.value.remedies)


def decompensated(gain: float, *changes: tuple[str, str]):
    sheet = f'junction_max = "150 °C"\nminimum_stable_gain = "{gain}"'
    faster = (("gain_bandwidth ", 'gain_bandwidth = "1.6 GHz"'), ("second_pole ", 'second_pole = "900 MHz"'))
    return sized("tia", ("junction_max", sheet), *faster, *changes)


def test_a_decompensated_amplifier_keeps_its_noise_gain_at_every_corner() -> None:
    """Texas Instruments, OPA657 SBOS197E p. 12: 1 + C_in/C_f no less than the minimum stable gain."""
    result = decompensated(40)
    assert result.verdict == "met", [row for row in result.requirements if not row.met]
    assert result.figure("noise_gain").low >= 40
    value = {part.ref: part.value for part in result.parts}
    capacitance = sum(result.input_capacitance.values()) + value["C3"]
    stray = result.scenes[0].values["CS"]
    assert result.figure("noise_gain").nominal == pytest.approx(1 + capacitance / (value["C1"] + stray), rel=1e-6)


def test_capacitance_to_ground_is_added_only_where_the_window_needs_it() -> None:
    parts = {part.ref: part for part in decompensated(7).parts}
    assert not parts["C3"].fitted
    assert {part.ref for part in sized("tia").parts}.isdisjoint({"C3"})


def test_added_capacitance_costs_bandwidth() -> None:
    assert decompensated(40).figure("bandwidth").nominal < 0.8 * decompensated(7).figure("bandwidth").nominal


def test_a_decompensated_amplifier_that_no_capacitance_helps_is_refused() -> None:
    with pytest.raises(InfeasibleError, match="noise gain") as refused:
        decompensated(3000)
    assert refused.value.remedies


def test_a_missed_bandwidth_names_figures_that_would_do() -> None:
    result = sized("tia", ("bandwidth ", 'bandwidth = { min = "13 MHz" }'), ("", '[fixed]\nR1 = "22 kΩ"'))
    row = next(row for row in result.requirements if row.requirement.figure == "bandwidth")
    assert not row.met
    assert any(remedy.startswith("U1 gain bandwidth ≥") for remedy in row.remedies)
    assert any(remedy.startswith("R1 ≤") for remedy in row.remedies)


def test_a_remedy_really_does() -> None:
    """The gain bandwidth that the answer names, put into the design, meets the bound at exact values."""
    changes = (("bandwidth ", 'bandwidth = { min = "13 MHz" }'), ("", '[fixed]\nR1 = "22 kΩ"'))
    row = next(row for row in sized("tia", *changes).requirements if row.requirement.figure == "bandwidth")
    remedy = next(text for text in row.remedies if text.startswith("U1 gain bandwidth"))
    faster = (("gain_bandwidth ", f'gain_bandwidth = "{remedy.split("≥ ")[1].split(" but ")[0]}"'),)
    again = sized("tia", *faster, *changes)
    found = next(row for row in again.requirements if row.requirement.figure == "bandwidth")
    assert found.worst > 0.93 * 13e6  # preferred values take the rest


def test_an_analog_front_end_is_sized_by_its_band() -> None:
    result = sized(
        "tia",
        ("bit_rate", 'band = { min = "1 kHz", max = "5 MHz" }'),
        ("bandwidth ", ""),
        ("peaking", ""),
        ("output_swing", ""),
    )
    assert result.verdict == "none"
    assert result.figure("bandwidth").low > 5e6


def test_swing_is_limited_by_the_rail_where_nothing_is_asked() -> None:
    result = sized(
        "tia",
        ("output_swing", ""),
        ("bandwidth ", 'bandwidth = { min = "1 MHz" }'),
        ("power ", 'power = { typ = "2 µW", max = "100 µW" }'),
    )
    assert result.figure("overload").low >= 100e-6
    assert result.figure("output_swing").high < 5 * 0.95 - 1.3


def test_dark_current_doubles_where_the_sheet_says() -> None:
    found = model("tia")
    hot = found.biased({**found.nominal(), "R1": 1e4, "C1": 1e-12, "temperature": ZERO_CELSIUS + 45})
    cold = found.biased({**found.nominal(), "R1": 1e4, "C1": 1e-12, "temperature": ZERO_CELSIUS + 25})
    assert float(hot["D1.dark_current"]) == near(4 * float(cold["D1.dark_current"]))
    assert float(hot["D1.shunt_resistance"]) == near(float(cold["D1.shunt_resistance"]) / 4)


def test_corners_of_a_result_are_reproduced_by_the_model() -> None:
    """Each worst value, evaluated again at the corner that is named for it."""
    result, again = sized("tia"), model("tia")
    from opto_ckt.design.sizing import choose_values

    chosen = choose_values(again)
    for row in result.requirements:
        figures = again.evaluate(values_at(chosen.limits, [row.at], chosen.choice.values))
        assert float(figures[row.requirement.figure][0]) == near(row.worst, rel=1e-9)


def test_unknown_figures_and_parts_are_refused_together() -> None:
    with pytest.raises(InputError) as refused:
        sized("tia", ("bandwidth ", 'harmonic_2 = { max = "-40 dB" }'), ("", '[fixed]\nR77 = "1 kΩ"'))
    text = str(refused.value)
    assert "tia has no harmonic_2" in text
    assert "tia has no R77" in text


def test_reading_twice_gives_the_same_result() -> None:
    assert read("tia").digest == read("tia").digest
    assert sized("tia").figures == sized("tia", ("title", 'title = "My receiver"')).figures


def test_a_wider_search_sends_the_choice_back() -> None:
    """Peaking that is zero at nominal and at every single limit, and is not at the corner of several together."""
    changes = (
        ("bit_rate", 'bit_rate = "155 Mbit/s"'),
        ("bandwidth ", 'bandwidth = { min = "110 MHz" }'),
        ("capacitance  ", 'capacitance = "0.8 pF"'),
        ("noise_band", 'noise_band = { min = "1 kHz", max = "110 MHz" }'),
        ("gain_bandwidth", 'gain_bandwidth = "4 GHz"'),
        ("second_pole", 'second_pole = "3 GHz"'),
        ("power ", 'power = { typ = "2 µW", max = "500 µW" }'),
        ("slew_rate", 'slew_rate = "2000 V/µs"'),
    )
    assert sized("tia", *changes).verdict == "met"
