"""The cascode receiver: bias of the transistor, pole at its emitter, noise, balance, refusals, simulators."""

from __future__ import annotations

from dataclasses import replace
from shutil import which

import numpy as np
import pytest
from scipy.optimize import brentq

from opto_ckt.analyses import noise
from opto_ckt.analyses.network import Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.response import transfer_at
from opto_ckt.analyses.symbolic import lcapy_transfer
from opto_ckt.circuits import CIRCUITS, load
from opto_ckt.circuits.receivers.feedback.comparison import capacitor_without
from opto_ckt.circuits.receivers.tia_cascode import transistor
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.design.model import Model
from opto_ckt.design.reading import ReadDesign, read_text
from opto_ckt.errors import InfeasibleError, InputError
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.schematic import schematic
from opto_ckt.outputs.simulators import ENGINES, run
from opto_ckt.outputs.spice import deck_of
from opto_ckt.outputs.wiring import drawing_faults
from opto_ckt.result import Result, Scene
from opto_ckt.units import write
from tests.circuits.sized import model, sized
from tests.near import near

here = [engine for engine in ENGINES if engine == "neospice" or which("ngspice")]
ANODE = (("output  ", 'output = "anode"'), ("kind ", 'kind = "pnp"'))
SINGLE = (("supply  ", 'supply = { positive = "10 V", tolerance = "5 %" }\ninput_level = "5 V"'),)
OWN_BIAS = (("reverse_bias", 'reverse_bias = "7 V"'),)
KINDS = {"npn": (), "pnp": ANODE, "single": SINGLE, "single, pnp": (*ANODE, *SINGLE), "own bias": OWN_BIAS}
kinds = pytest.mark.parametrize("changes", KINDS.values(), ids=KINDS.keys())
CHOSEN = {"R1": 9.3e4, "C1": 3e-13, "R4": 64.9e3, "R5": 73.2e3, "C8": 1e-7, "C9": 1e-7}
LEVEL = {"R2": 7e3, "R3": 7e3, "C2": 2.2e-5}
SILENT = 1e-40
STILL = {"U1.gain_bandwidth": 1e15, "U1.open_loop_gain": 1e9}
BARE = (("second_pole ", ""), ("output_resistance", ""), ("series_resistance", ""), ("base_resistance", ""))


def still(**values: float) -> tuple[Model, dict[str, float | np.ndarray]]:
    """An op amp that holds the summing node, a detector and a base without resistance: the transistor is left."""
    found = model("tia-cascode", *BARE)
    return found, found.biased(found.nominal() | CHOSEN | STILL | {"R1": 100.0, "C1": 1e-15} | values)


@kinds
def test_network_agrees_with_lcapy_at_random_values(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("tia-cascode", *changes)
    random = np.random.default_rng(32)
    biased = found.biased(found.nominal() | CHOSEN | LEVEL)
    needed = sorted(found.network.inputs)
    values = {name: float(np.asarray(biased[name])) * float(random.uniform(0.5, 2)) for name in needed}
    frequencies = np.geomspace(1e2, 1e8, 7)
    ours = transfer_at(found.network.evaluate(values), frequencies[:, None])[:, 0]
    np.testing.assert_allclose(lcapy_transfer(expand(found.topology), values, frequencies), ours, rtol=1e-6)


@kinds
def test_all_kinds_are_sized_and_drawn(changes: tuple[tuple[str, str], ...]) -> None:
    result = sized("tia-cascode", *changes)
    assert result.verdict == "met", [row for row in result.requirements if not row.met]
    assert drawing_faults(result.topology) == []
    assert "Q1" in schematic(result)


@pytest.mark.parametrize("engine", here)
@pytest.mark.parametrize("changes", list(KINDS.values())[1:], ids=list(KINDS)[1:])
def test_prediction_and_simulation_agree(changes: tuple[tuple[str, str], ...], engine: str) -> None:
    """Levels, gain, noise, phase margin and step of both kinds of transistor; the first kind is checked elsewhere."""
    rows = crosscheck(sized("tia-cascode", *changes), engine)
    assert {"level of emitter", "level of sum", "level of amp"} <= {row.quantity for row in rows}
    assert [row for row in rows if not row.ok] == []


@pytest.mark.parametrize("changes", [(), SINGLE], ids=["both rails", "single"])
def test_the_emitter_rests_where_exponential_law_and_resistor_meet(changes: tuple[tuple[str, str], ...]) -> None:
    """Four decades of light, hot and cold, by bisection."""
    found = model("tia-cascode", *changes)
    light, heat = np.array([0.0, 1e-6, 1e-4, 1e-2]), np.array([253.0, 298.0, 333.0, 333.0])
    chosen = CHOSEN | (LEVEL if changes else {})
    biased = found.biased(found.nominal() | chosen | {"signal.power": light, "temperature": heat})
    base, source = (5.0, 3.5e3) if changes else (0.0, 0.0)
    rail = 0.0 if changes else -5.0
    stated = (base - rail - 0.62) / 64.9e3
    for lane, kelvin in enumerate(heat):
        lit = biased["D1.responsivity"] * light + biased["D1.ambient_current"] + biased["D1.dark_current"]
        through = float(np.broadcast_to(lit, 4)[lane])
        thermal = BOLTZMANN * kelvin / ELEMENTARY_CHARGE

        def excess(log: float, through: float = through, kelvin: float = kelvin, thermal: float = thermal) -> float:
            current = float(np.exp(log))
            volts = 0.62 - 2e-3 * (kelvin - 298.15) + thermal * np.log(current / stated)
            level = base - current / 331 * source
            return (current - through) * 64.9e3 + volts + rail - level

        current = float(np.exp(brentq(excess, -20.0, 0.0, xtol=1e-14)))
        assert np.broadcast_to(biased["Q1.emitter_current"], 4)[lane] == near(current, rel=1e-6)


def test_the_pole_at_the_emitter_is_the_closed_form() -> None:
    found, biased = still()
    pole = float(transistor.pole(biased))
    evaluation = found.evaluation(biased)
    at_rest, there = (abs(complex(transfer_at(evaluation, f)[0])) for f in (1e3, pole))
    assert there / at_rest == near(0.5**0.5, rel=3e-3)  # R4 beside kT/(qI) carries half a per cent


def test_the_base_current_makes_shot_noise_at_all_frequencies() -> None:
    """2 q I_C/β, of the current that both emitter and collector see; above the pole too."""
    found, biased = still(R4=1e9, **{"signal.power": 1e-4})
    for share in (1e-3, 0.1):
        density = _to_summing_node(found, biased, "Q1 control", share * float(transistor.pole(biased)))
        assert density == near(2 * ELEMENTARY_CHARGE * float(biased["Q1.control_current"]), rel=2e-2)


@pytest.mark.parametrize("share", [0.01, 0.3, 1.0, 3.0])
def test_the_collectors_shot_noise_comes_in_above_the_pole(share: float) -> None:
    """2 q I_C x²/(1 + x²), x = f over the pole; R4 adds (kT/(qI)/R4)² at low frequencies."""
    found, biased = still(R4=1e9, **{"signal.power": 1e-4})
    density = _to_summing_node(found, biased, "Q1 channel", share * float(transistor.pole(biased)))
    collector = 2 * ELEMENTARY_CHARGE * float(biased["Q1.drain_current"])
    gain = float(biased["Q1.current_gain"])
    below = 1 / (gain + 1) ** 2  # what the base takes of it
    assert density == near(collector * (share**2 + below) / (1 + share**2), rel=1e-2)


@pytest.mark.parametrize("ref", ["R4", "R5"])
def test_the_bias_resistors_make_noise_as_if_at_the_detector(ref: str) -> None:
    found, biased = still()
    density = _to_summing_node(found, biased, f"{ref} thermal", 1e3)
    expected = 4 * BOLTZMANN * float(biased["temperature"]) / float(biased[ref])
    assert density == near(expected, rel=2e-2)  # current gain and R4 beside kT/(qI)


def _to_summing_node(found: Model, biased: dict[str, float | np.ndarray], generator: str, frequency: float) -> float:
    """Density that one generator makes, as a current into the summing node. [A²/Hz]"""
    density = noise.density_by_generator(found.evaluation(biased), frequency)[generator]
    return float(density[0]) / 100.0**2


def test_less_base_resistance_less_noise() -> None:
    found = model("tia-cascode")
    both = found.evaluate(found.nominal() | CHOSEN | {"Q1.base_resistance": np.array([1.0, 1000.0])})
    assert both["output_noise"][0] < both["output_noise"][1]


DROWNING = {"Q1 channel": {"Q1.base_resistance": 1e-3}, "Q1 base": {"Q1.base_resistance": 2e3}}
"""Generator -> values that let it drown the others at the top of the band."""


@pytest.mark.parametrize("engine", here)
@pytest.mark.parametrize("generator", DROWNING)
def test_each_generator_of_the_transistor_by_itself(generator: str, engine: str) -> None:
    """At the top of the band, the operating point as it is."""
    result = sized("tia-cascode")
    quiet = {"U1.voltage_noise": SILENT, "U1.current_noise": SILENT, "D1.series_resistance": 1e-3}
    quiet |= {"D1.ambient_shot": 0.0, "D1.signal_shot": 0.0, "D1.dark_shot": 0.0}
    scene = replace(result.scenes[0], values={**result.scenes[0].values, **quiet, **DROWNING[generator]})
    _agree(result, scene, generator, engine)


@pytest.mark.parametrize("engine", here)
@pytest.mark.parametrize("generator", ["Q1 control", "R4 thermal", "R5 thermal"])
def test_what_passes_below_the_pole_by_itself(generator: str, engine: str) -> None:
    """With a current gain of 2 for the base current, with a small resistor beside large ones for theirs."""
    changes = {
        "Q1 control": (("current_gain", 'current_gain = { min = "1.9", typ = "2", max = "2.1" }'),),
        "R4 thermal": (("", '[fixed]\nR4 = "3 kΩ"\nR5 = "1000 kΩ"\nR1 = "1000 kΩ"'),),
        "R5 thermal": (("", '[fixed]\nR5 = "3 kΩ"\nR4 = "1000 kΩ"\nR1 = "1000 kΩ"'),),
    }
    found = model("tia-cascode", *changes[generator])
    fixed = {**CHOSEN, **found.request.fixed}
    biased = {name: float(np.asarray(value)) for name, value in found.biased(found.nominal() | fixed).items()}
    result = sized("tia-cascode")
    quiet = {"U1.voltage_noise": SILENT, "U1.current_noise": SILENT, "D1.series_resistance": 1e-3}
    quiet |= {"D1.ambient_shot": 0.0, "D1.signal_shot": 0.0, "D1.dark_shot": 0.0, "Q1.base_resistance": 1e-3}
    scene = replace(result.scenes[0], values={**biased, **quiet})
    _agree(result, scene, generator, engine, index=0)


def _agree(result: Result, scene: Scene, generator: str, engine: str, index: int = -1) -> None:
    plot = run(deck_of(result, scene, "noise"), engine)["noise"]
    evaluation = Network(expand(result.topology)).evaluate(scene.values)
    parts = noise.density_by_generator(evaluation, plot["frequency"][index])
    total = sum(float(power[0]) for power in parts.values())
    assert float(parts[generator][0]) > 0.4 * total
    assert float(plot["onoise"][index]) == pytest.approx(np.sqrt(total), rel=1e-3)


def test_what_the_bias_currents_leave_of_each_other_is_the_offset() -> None:
    """One rail up by a volt: its share of R5's current, through R1."""
    found = model("tia-cascode")
    values = found.nominal() | CHOSEN
    both = found.evaluate({**values, "supply.positive": np.array([5.0, 6.0])})
    assert both["dark_output"][0] - both["dark_output"][1] == near(1 / 73.2e3 * 9.3e4, rel=1e-3)


def test_offset_grows_with_the_supplies_tolerance_and_a_servo_takes_it() -> None:
    loose = sized("tia-cascode").figure("dc_offset").high
    change = ("supply  ", 'supply = { positive = "5 V", negative = "-5 V", tolerance = "1 %" }')
    tight = sized("tia-cascode", change).figure("dc_offset").high
    assert tight < 0.6 * loose
    served = sized("tia-cascode", ("", '[blocks.servo]\nlow_cutoff = "1 kHz"'))
    assert served.figure("dc_offset").high < 0.02
    assert any("the servo has to take that too" in caution for caution in served.cautions)


def test_a_bias_supply_of_its_own_lies_beyond_the_emitter() -> None:
    found = model("tia-cascode", *OWN_BIAS)
    biased = found.biased(found.nominal() | CHOSEN | {"signal.power": 0.0, "signal.ambient": 0.0})
    assert float(np.asarray(biased["detector.reverse_bias"])) == near(7.0, rel=1e-3)
    tied = model("tia-cascode")
    left = float(np.asarray(tied.biased(tied.nominal() | CHOSEN)["detector.reverse_bias"]))
    assert left == near(5 - 0.62, rel=5e-3)
    assert any("D1 is left with" in caution for caution in sized("tia-cascode").cautions)


def as_plain() -> ReadDesign:
    """The starter with another line ``circuit``."""
    text = load("tia-cascode").starter.replace('"tia-cascode"', '"tia"')
    return read_text(text, "design.toml", circuit_of=lambda name: load(name).request, circuits=CIRCUITS)


def test_the_page_says_what_the_transistor_buys() -> None:
    """Beside the plain receiver of the same R1, whose detector has the whole of the bias."""
    result = sized("tia-cascode")
    said = next(caution for caution in result.cautions if caution.startswith("Q1 keeps"))
    nominal = result.scenes[0].values
    plain = Model(load("tia"), as_plain().request)
    chosen = plain.nominal() | {"R1": nominal["R1"], "C1": capacitor_without(nominal)}
    figures = plain.evaluate(chosen | {"D1.capacitance": nominal["D1.capacitance"]})
    assert write(float(figures["bandwidth"][0]), "Hz") in said
    assert result.figure("input_noise_density").nominal < 0.7 * float(figures["input_noise_density"][0])


def test_an_analog_front_end_does_not_hide_a_ringing_loop_behind_the_emitter() -> None:
    changes = (("bit_rate", 'band = { min = "1 kHz", max = "1 MHz" }'), ("bandwidth ", ""), ("peaking ", ""))
    result = sized("tia-cascode", *changes)
    assert result.verdict == "met"
    assert result.figure("phase_margin").low >= 45


def test_coarse_series_leave_what_they_leave_and_say_so() -> None:
    result = sized("tia-cascode", ("", '[preferred]\nresistors = { series = "E24", tolerance = "5 %" }'))
    assert any("no E24 value lies in its window" in caution for caution in result.cautions)


def test_a_low_current_is_said() -> None:
    result = sized("tia-cascode", ("bandwidth ", 'bandwidth = { min = "200 kHz" }'))
    assert any("below 10.0 µA a transistor loses current gain" in caution for caution in result.cautions)


def test_a_transistor_slower_than_the_signal_is_refused_with_the_ways_out() -> None:
    with pytest.raises(InfeasibleError, match="Q1 is slower than the signal") as refused:
        sized("tia-cascode", ("transition_frequency", 'transition_frequency = "15 MHz"'))
    assert refused.value.remedies[0].startswith("transition frequency of Q1 ≥")
    assert refused.value.remedies[1].startswith("bandwidth ≤")


def test_a_rail_too_near_to_the_base_is_refused() -> None:
    change = ("supply  ", 'supply = { positive = "8 V" }\ninput_level = "0.5 V"')
    with pytest.raises(InfeasibleError, match="R4 has no voltage") as refused:
        sized("tia-cascode", change, ("reverse_bias", 'reverse_bias = "3 V"'))
    assert "input_level higher" in refused.value.remedies[0]


def test_more_current_than_the_transistor_stands_is_refused() -> None:
    with pytest.raises(InfeasibleError, match="the pole at the emitter asks for"):
        sized("tia-cascode", ("current_max", 'current_max = "20 µA"'))


@pytest.mark.parametrize(
    ("changes", "said"),
    [
        (ANODE[:1], "has to be pnp behind the anode"),
        (ANODE[1:], "has to be npn behind the cathode"),
        ((("reverse_bias", 'reverse_bias = "0 V"'),), "nearer to the far end"),
    ],
)
def test_what_does_not_go_together_is_refused(changes: tuple[tuple[str, str], ...], said: str) -> None:
    with pytest.raises(InputError, match=said):
        sized("tia-cascode", *changes)


def test_a_design_without_a_transistor_is_refused() -> None:
    text = load("tia-cascode").starter
    start, end = text.index("[transistor]"), text.index("[amplifier]")
    with pytest.raises(InputError, match="transistor"):
        read_text(text[:start] + text[end:], "design.toml", circuit_of=lambda n: load(n).request, circuits=CIRCUITS)


def test_too_high_a_saturation_voltage_is_a_missed_requirement() -> None:
    result = sized("tia-cascode", ("saturation_voltage", 'saturation_voltage = "0.6 V"'))
    assert "compliance_margin" in [row.requirement.figure for row in result.requirements if not row.met]


def test_a_shorted_detector_is_said_to_burn_the_base_unless_a_resistor_limits() -> None:
    bare = {fault.case: fault for fault in sized("tia-cascode").faults}
    assert not bare["detector short"].ok
    assert "put a resistor in D1's bias path" in bare["detector short"].result
    limited = sized("tia-cascode", ("", '[blocks.bias_filter]\ndroop = "0.1 V"\ncorner = "1 kHz"'))
    assert {fault.case: fault for fault in limited.faults}["detector short"].ok
    assert "bandwidth down to" in bare["R4 open"].result
