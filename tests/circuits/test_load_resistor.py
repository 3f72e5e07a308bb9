"""Load resistor: closed forms of its two front ends, noise, polarity, range, what is refused."""

from __future__ import annotations

import numpy as np
import pytest

from opto_ckt.analyses import noise
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.response import transfer_at
from opto_ckt.analyses.symbolic import lcapy_transfer
from opto_ckt.errors import InfeasibleError, InputError
from opto_ckt.formulas import load_resistor
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.wiring import drawing_faults
from tests.circuits.sized import model, read, sized

FAST = (
    ("gain_bandwidth ", 'gain_bandwidth = "900 MHz"'),
    ("second_pole ", 'second_pole = "1.5 GHz"'),
    ("capacitance  ", 'capacitance = { min = "8.8 pF", typ = "9 pF", max = "9.2 pF" }'),
    ("peaking ", 'peaking = { max = "2 dB" }'),
)
HIGH = (*FAST, ("front_end ", 'front_end = "high_impedance"'))
GAIN = (("output_swing ", 'transimpedance = { min = "10 kΩ" }'), ("gain_bandwidth ", 'gain_bandwidth = "900 MHz"'))
IDEAL = {"U1.gain_bandwidth": 1e14, "U1.second_pole": 1e15, "U1.output_resistance": 1e-3, "D1.series_resistance": 1e-3}
FORMS = pytest.mark.parametrize("changes", [(), HIGH, GAIN], ids=["low", "high", "gain"])


@FORMS
def test_every_form_meets_its_requirements(changes: tuple[tuple[str, str], ...]) -> None:
    result = sized("load-resistor", *changes)
    assert result.verdict == "met", [row for row in result.requirements if not row.met]
    assert drawing_faults(result.topology) == []


@FORMS
def test_network_agrees_with_lcapy_at_random_values(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("load-resistor", *changes)
    random = np.random.default_rng(8)
    chosen = {"R1": 2e4, "R4": 4.5e3, "R5": 249.0, "C5": 50e-12, "C8": 1e-7, "C9": 1e-7}
    biased = found.biased(found.nominal() | chosen)
    values = {
        name: float(np.asarray(biased[name])) * float(random.uniform(0.6, 1.6)) for name in sorted(found.network.inputs)
    }
    frequencies = np.geomspace(1e3, 1e8, 7)
    ours = transfer_at(found.network.evaluate(values), frequencies[:, None])[:, 0]
    np.testing.assert_allclose(lcapy_transfer(expand(found.topology), values, frequencies), ours, rtol=1e-6)


def test_bandwidth_into_a_load_is_that_of_one_pole() -> None:
    """G. Keiser, Optical Fiber Communications, Ex. 6.7: f = 1/(2π R C)."""
    found = model("load-resistor")
    values = found.nominal() | IDEAL | {"R1": 1e4, "C8": 1e-7, "C9": 1e-7}
    biased = found.biased(values)
    capacitance = float(biased["D1.capacitance"]) + values["U1.common_capacitance"] + values["CB"]
    expected = 1 / (2 * np.pi * 1e4 * capacitance)
    assert found.evaluate(values)["bandwidth"][0] == pytest.approx(expected, rel=2e-3)
    assert load_resistor.load_for_bandwidth(capacitance=capacitance, bandwidth=expected) == pytest.approx(1e4)


def test_high_impedance_before_equalising() -> None:
    """J. M. Senior, Optical Fiber Communications, Ex. 9.8: 1.33e4 Hz of 4 MΩ and 3 pF (print: 1.33 x 10^4)."""
    assert load_resistor.load_for_bandwidth(capacitance=3e-12, bandwidth=1.3263e4) == pytest.approx(4e6, rel=1e-3)


def test_equaliser_puts_a_zero_on_the_pole_of_the_input() -> None:
    """With an ideal amplifier load and equaliser together have one pole, that of the equaliser."""
    found = model("load-resistor", *HIGH)
    load, lower, gain = 2e4, 249.0, 19.0
    no_loads = {"U1.differential_capacitance": 1e-18, "U1.common_capacitance": 1e-18}
    base = found.nominal() | IDEAL | no_loads | {"C8": 1e-7, "C9": 1e-7}
    biased = found.biased(base | {"R1": load, "R4": 1.0, "R5": 1.0, "C5": 1e-12})
    capacitance = float(biased["D1.capacitance"]) + base["CB"]
    shaping = load_resistor.equaliser_capacitance(
        load_resistance=load, input_capacitance=capacitance, shunt=lower, gain=gain
    )
    figures = found.evaluate(base | {"R1": load, "R4": (gain - 1) * lower, "R5": lower, "C5": shaping})
    assert figures["bandwidth"][0] == pytest.approx(1 / (2 * np.pi * lower * shaping), rel=5e-3)
    lift = load_resistor.equaliser_gain(
        load_resistance=load, input_capacitance=capacitance, corner=1 / (2 * np.pi * lower * shaping)
    )
    assert lift == pytest.approx(gain, rel=1e-9)


@FORMS
def test_input_noise_agrees_with_the_closed_form(changes: tuple[tuple[str, str], ...]) -> None:
    """The equaliser's own resistors apart, which the closed form leaves out."""
    found = model("load-resistor", *changes)
    chosen = {"R1": 2e4, "R4": 4.5e-3, "R5": 249e-6, "C5": 50e-6, "C8": 1e-7, "C9": 1e-7}
    values = found.nominal() | IDEAL | chosen | {"U1.differential_capacitance": 1e-20}
    biased = found.biased(values)
    evaluation = found.evaluation(biased)
    gain = abs(transfer_at(evaluation, 1e5)[0]) / biased["D1.responsivity"]
    density = noise.density_by_generator(evaluation, 1e5)
    total = sum(
        power[0] for name, power in density.items() if not name.startswith(("R4", "R5", "D1 signal", "D1 series"))
    )
    corner = values["U1.voltage_noise_corner"]
    expected = load_resistor.load_noise(
        load_resistance=1 / (1 / 2e4 + 1 / float(biased["D1.shunt_resistance"]) + 1 / values["RB"]),
        current=float(biased["D1.dark_current"] + biased["D1.ambient_current"]),
        temperature=values["temperature"],
        voltage_noise=values["U1.voltage_noise"] * (1 + corner / 1e5) ** 0.5,
        current_noise=values["U1.current_noise"],
        capacitance=float(biased["D1.capacitance"]) + values["U1.common_capacitance"] + values["CB"],
        frequency=1e5,
    )
    assert (total**0.5 / gain) == pytest.approx(expected, rel=5e-3)


@pytest.mark.parametrize(("output", "sign"), [("cathode", -1), ("anode", 1)])
def test_output_follows_the_node_of_the_load(output: str, sign: int) -> None:
    found = model("load-resistor", ("output  ", f'output = "{output}"'))
    values = found.biased(found.nominal() | {"R1": 1e4, "C8": 1e-7, "C9": 1e-7, "U1.offset_voltage": 0.0})
    light = (
        values["D1.responsivity"] * values["signal.power"] + values["D1.ambient_current"] + values["D1.dark_current"]
    )
    assert values["node.amp"] == pytest.approx(sign * light * 1e4, rel=2e-3)
    assert values["detector.reverse_bias"] == pytest.approx(5 - light * 1e4, rel=1e-6)


def test_overload_ends_at_the_common_mode_range() -> None:
    narrow = ("swing_to_positive", 'swing_to_positive = "1.3 V"\ncommon_mode_to_positive = "3 V"')
    rising = ("output  ", 'output = "anode"')
    wide, less = (sized("load-resistor", rising, *extra).figure("overload").nominal for extra in ((), (narrow,)))
    assert less < 0.6 * wide


@FORMS
def test_decks_agree(changes: tuple[tuple[str, str], ...]) -> None:
    assert [row for row in crosscheck(sized("load-resistor", *changes), "neospice") if not row.ok] == []


def test_a_bandwidth_that_no_load_reaches_is_refused_with_what_is() -> None:
    with pytest.raises(InfeasibleError, match="no load reaches") as refused:
        sized("load-resistor", ("bandwidth ", 'bandwidth = { min = "2 GHz" }'))
    assert any("require.bandwidth ≤" in remedy for remedy in refused.value.remedies)


def test_an_equaliser_with_nothing_to_do_is_refused() -> None:
    with pytest.raises(InfeasibleError, match="by itself"):
        sized("load-resistor", ("front_end ", 'front_end = "high_impedance"'), ("power ", 'power = { max = "50 mW" }'))


def test_gain_around_a_raised_level_is_refused() -> None:
    single = ("supply ", 'supply = { positive = "5 V" }\ninput_level = "2 V"')
    with pytest.raises(InputError, match="would lift it too"):
        sized("load-resistor", single, *GAIN)


def test_the_design_of_a_tia_is_read_by_changing_one_line() -> None:
    assert read("tia", ("circuit ", 'circuit = "load-resistor"')).request.circuit == "load-resistor"
