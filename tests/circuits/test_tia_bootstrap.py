"""The bootstrapped receiver: bias of the follower, what it leaves of the capacitance, noise, refusals, simulators."""

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
from opto_ckt.circuits.receivers.tia_bootstrap import follower
from opto_ckt.circuits.receivers.tia_bootstrap.remarks import bought
from opto_ckt.constants import BOLTZMANN
from opto_ckt.design.model import Model
from opto_ckt.design.reading import ReadDesign, read_text
from opto_ckt.design.sizing import size
from opto_ckt.errors import InfeasibleError, InputError
from opto_ckt.formulas import junction_fet
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.schematic import schematic
from opto_ckt.outputs.simulators import ENGINES, run
from opto_ckt.outputs.spice import deck_of
from opto_ckt.outputs.wiring import drawing_faults
from opto_ckt.units import write
from tests.circuits.sized import model, sized
from tests.near import near

here = [engine for engine in ENGINES if engine == "neospice" or which("ngspice")]
ANODE = (("output  ", 'output = "anode"'),)
P_CHANNEL = (("kind ", 'kind = "pjf"'),)
SINGLE = (
    ("supply  ", 'supply = { positive = "10 V", tolerance = "5 %" }\ninput_level = "3.5 V"'),
    ("reverse_bias", 'reverse_bias = "3.5 V"'),
    ("capacitance_bias", 'capacitance_bias = "3.5 V"'),
    ("bandwidth ", 'bandwidth = { min = "1 MHz" }'),
)
AVALANCHE = (
    ("reverse_bias", 'gain_points = [{ bias = "10 V", gain = "1" }, { bias = "100 V", gain = "20" },'
     ' { bias = "120 V", gain = "60" }]\ngain = "15"\n'
     'breakdown_voltage = "140 V"\nbreakdown_temperature = "0.1 V/K"\nionisation_ratio = "0.02"'),
    ("reverse_voltage_max", 'reverse_voltage_max = "150 V"'),
    ("power ", 'power = { typ = "0.1 µW", max = "0.5 µW" }'),
    ("ambient ", 'ambient = "10 nA"'),
)  # fmt: skip
KINDS = {"cathode": (), "anode": ANODE, "pjf": P_CHANNEL, "pjf, anode": (*P_CHANNEL, *ANODE), "single": SINGLE}
kinds = pytest.mark.parametrize("changes", KINDS.values(), ids=KINDS.keys())
CHOSEN = {"R1": 1.3e5, "C1": 5e-13, "R4": 800.0, "R5": 4.3e3, "C4": 1.5e-6, "C8": 1e-7, "C9": 1e-7}
LEVEL = {"R2": 6.5e4, "R3": 3.5e4, "C2": 1e-6}
SILENT = 1e-40


@kinds
def test_network_agrees_with_lcapy_at_random_values(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("tia-bootstrap", *changes)
    random = np.random.default_rng(31)
    biased = found.biased(found.nominal() | CHOSEN | LEVEL)
    needed = sorted(found.network.inputs)
    values = {name: float(np.asarray(biased[name])) * float(random.uniform(0.5, 2)) for name in needed}
    frequencies = np.geomspace(1e2, 1e8, 7)
    ours = transfer_at(found.network.evaluate(values), frequencies[:, None])[:, 0]
    np.testing.assert_allclose(lcapy_transfer(expand(found.topology), values, frequencies), ours, rtol=1e-6)


@kinds
def test_all_kinds_are_sized_and_drawn(changes: tuple[tuple[str, str], ...]) -> None:
    result = sized("tia-bootstrap", *changes)
    assert result.verdict == "met", [row for row in result.requirements if not row.met]
    assert drawing_faults(result.topology) == []
    assert "J1" in schematic(result)


@pytest.mark.parametrize("engine", here)
@pytest.mark.parametrize("changes", list(KINDS.values())[1:], ids=list(KINDS)[1:])
def test_prediction_and_simulation_agree(changes: tuple[tuple[str, str], ...], engine: str) -> None:
    """Levels, gain, noise, phase margin and step of both channels, both ends; the first kind is checked elsewhere."""
    rows = crosscheck(sized("tia-bootstrap", *changes), engine)
    assert {"level of follow", "level of far", "level of amp"} <= {row.quantity for row in rows}
    assert [row for row in rows if not row.ok] == []


@pytest.mark.skipif(which("ngspice") is None, reason="neospice loses its way in steps of microvolts on 100 V")
def test_an_avalanche_detector_settles_behind_its_feed() -> None:
    """Its gain takes bias, its current takes bias away in R5."""
    rows = crosscheck(sized("tia-bootstrap", *AVALANCHE), "ngspice")
    assert [row for row in rows if not row.ok] == []


def test_the_follower_rests_where_square_law_and_resistor_meet() -> None:
    found = model("tia-bootstrap")
    values = found.nominal() | CHOSEN
    saturated = np.array([20e-3, 30e-3, 45e-3])
    biased = found.biased(values | {"J1.saturation_current": saturated, "J1.pinch_off_voltage": 1.2})
    for lane, current in enumerate(np.atleast_1d(biased["J1.drain_current"])):
        gate = float(np.atleast_1d(biased["node.sum"])[0])

        def excess(volts: float, most: float = float(saturated[lane]), gate: float = gate) -> float:
            return most * (1 - volts / 1.2) ** 2 - (gate + volts + 5) / 800

        volts = brentq(excess, 0.0, 1.2)
        assert current == near((gate + volts + 5) / 800, rel=1e-9)
        assert np.atleast_1d(biased["node.follow"])[lane] == near(gate + volts, rel=1e-9)


def test_transconductance_is_the_slope_of_the_square_law() -> None:
    sheet = {"saturation_current": 30e-3, "pinch_off_voltage": 1.8}
    current, step = 7e-3, 1e-6
    volts = [junction_fet.gate_reverse_voltage(**sheet, current=current + side * step) for side in (-1, 1)]
    slope = 2 * step / (volts[0] - volts[1])
    assert junction_fet.transconductance(**sheet, current=current) == near(slope, rel=1e-6)


def test_the_pole_in_the_way_of_the_photocurrent_is_the_closed_form() -> None:
    """An op amp that holds the summing node still: what is left is the follower."""
    found = model("tia-bootstrap", ("second_pole ", ""), ("output_resistance", ""), ("series_resistance", ""))
    still = {"U1.gain_bandwidth": 1e15, "U1.open_loop_gain": 1e9}
    biased = found.biased(found.nominal() | CHOSEN | {"R1": 100.0, "C1": 1e-15, "C4": 1.0} | still)
    pole = float(follower.own_bandwidth(biased))
    evaluation = found.evaluation(biased)
    at_rest, there = (abs(complex(transfer_at(evaluation, f)[0])) for f in (1e3, pole))
    assert there / at_rest == near(0.5**0.5, rel=1e-4)


def test_the_op_amps_noise_meets_the_capacitance_that_is_left() -> None:
    """Far below the follower's pole, far above the beginning of the bootstrap, loop gain large."""
    found = model("tia-bootstrap", ("second_pole ", ""), ("voltage_noise_corner", ""))
    biased = found.biased(found.nominal() | CHOSEN | {"U1.gain_bandwidth": 4e12, "C4": 1.0})
    frequency = 2e4
    density = noise.density_by_generator(found.evaluation(biased), frequency)["U1 voltage"]
    around = ("U1.common_capacitance", "U1.differential_capacitance", "CB")
    left = float(follower.left_capacitance(biased)) + sum(float(biased[name]) for name in around)
    feedback = 1 / float(biased["R1"]) + 2j * np.pi * frequency * (float(biased["C1"]) + float(biased["CS"]))
    gain = abs(1 + 2j * np.pi * frequency * left / feedback)
    assert float(density[0]) ** 0.5 == near(gain * float(biased["U1.voltage_noise"]), rel=2e-3)


def test_the_followers_noise_comes_through_the_detector() -> None:
    """e_n 2π f C_d as a current, of the gain A of the follower; e_n is that of the sheet."""
    found = model("tia-bootstrap")
    biased = found.biased(found.nominal() | CHOSEN)
    stated = 4 * BOLTZMANN * biased["temperature"] * biased["J1.channel_noise_factor"] / biased["J1.transconductance"]
    assert float(stated) ** 0.5 == near(0.9e-9)
    frequency = 2e4
    evaluation = found.evaluation(biased)
    density = noise.density_by_generator(evaluation, frequency)["J1 channel"] ** 0.5
    current = density / np.abs(transfer_at(evaluation, frequency)) * biased["D1.responsivity"]
    whole = biased["D1.capacitance"] + biased["J1.gate_source_capacitance"]
    gain = follower.gain(biased)
    assert float(current[0]) == near(float(0.9e-9 * gain * 2 * np.pi * frequency * whole), rel=1e-2)


def test_a_starved_follower_makes_more_noise_than_its_sheet() -> None:
    found = model("tia-bootstrap")
    biased = found.biased(found.nominal() | CHOSEN | {"R4": 50e3})
    assert float(biased["J1.channel_noise_factor"]) == near(2 / 3)
    result = sized("tia-bootstrap", ("", '[fixed]\nR4 = "4 kΩ"'))
    assert any("more than the 900 pV/√Hz of its sheet" in caution for caution in result.cautions)
    assert any("the bootstrap is slow" in caution for caution in result.cautions)


GENERATORS = {
    "J1 channel": {"J1.channel_noise_factor": 1e4},
    "J1 control": {"J1.channel_noise_factor": SILENT, "J1.control_current": 5e-6, "D1.capacitance": 1e-12},
    "R4 thermal": {"J1.channel_noise_factor": SILENT, "D1.capacitance": 1e-9},
    "R5 thermal": {"J1.channel_noise_factor": SILENT, "R5": 50.0},
}
"""Generator -> values that let it drown the others, none of which moves the operating point of J1."""


@pytest.mark.parametrize("engine", here)
@pytest.mark.parametrize("generator", GENERATORS)
def test_each_generator_of_noise_by_itself(generator: str, engine: str) -> None:
    result = sized("tia-bootstrap")
    quiet = {"U1.voltage_noise": SILENT, "U1.current_noise": SILENT, "D1.series_resistance": 1e-3}
    quiet |= {"D1.ambient_shot": 0.0, "D1.signal_shot": 0.0, "D1.dark_shot": 0.0}
    scene = replace(result.scenes[0], values={**result.scenes[0].values, **quiet, **GENERATORS[generator]})
    plot = run(deck_of(result, scene, "noise"), engine)["noise"]
    evaluation = Network(expand(result.topology)).evaluate(scene.values)
    parts = noise.density_by_generator(evaluation, plot["frequency"][-1])
    total = sum(float(power[0]) for power in parts.values())
    assert float(parts[generator][0]) > 0.5 * total
    assert float(plot["onoise"][-1]) == pytest.approx(np.sqrt(total), rel=1e-4)


def test_the_page_says_what_the_bootstrap_buys() -> None:
    """Without it: the plain receiver of the same R1, evaluated as one."""
    result = sized("tia-bootstrap")
    said = next(caution for caution in result.cautions if caution.startswith("the bootstrap leaves"))
    assert "at the summing node" in said
    assert "without it" in said
    nominal = result.scenes[0].values
    plain = Model(load("tia"), as_plain().request)
    figures = plain.evaluate(plain.nominal() | {"R1": nominal["R1"], "C1": capacitor_without(nominal)})
    with_it = result.figure("bandwidth").nominal
    assert with_it > 1.5 * float(figures["bandwidth"][0])
    assert result.figure("input_noise_density").nominal < 0.4 * float(figures["input_noise_density"][0])
    assert write(float(figures["bandwidth"][0]), "Hz") in said
    assert bought(nominal, model("tia-bootstrap").request) == said


def as_plain() -> ReadDesign:
    """The starter with another line ``circuit``."""
    text = load("tia-bootstrap").starter.replace('"tia-bootstrap"', '"tia"')
    return read_text(text, "design.toml", circuit_of=lambda name: load(name).request, circuits=CIRCUITS)


def test_the_same_file_serves_the_plain_receiver() -> None:
    """One design file, another line ``circuit``: the follower's table is of no use there and does no harm."""
    assert as_plain().request.follower is not None
    assert size(as_plain(), load("tia")).head.circuit == "tia"


def test_a_follower_slower_than_the_signal_is_refused_with_the_ways_out() -> None:
    with pytest.raises(InfeasibleError, match="bootstrap is slower than the signal") as refused:
        sized("tia-bootstrap", ("bandwidth ", 'bandwidth = { min = "8 MHz" }'))
    remedies = refused.value.remedies
    assert [remedy.split(" ≥ ")[0].split(" ≤ ")[0] for remedy in remedies] == [
        "transconductance of J1", "most capacitance of D1", "bandwidth",
    ]  # fmt: skip
    slower = remedies[-1].split("≤ ")[1]
    sized("tia-bootstrap", ("bandwidth ", f'bandwidth = {{ min = "{0.99 * float(slower.split()[0])} MHz" }}'))


def test_a_follower_starved_by_a_fixed_resistor_is_refused() -> None:
    with pytest.raises(InfeasibleError, match="with the R4 that is fixed"):
        sized("tia-bootstrap", ("", '[fixed]\nR4 = "30 kΩ"'))


def test_more_light_than_the_follower_carries_is_refused() -> None:
    with pytest.raises(InfeasibleError, match="largest photocurrent") as refused:
        sized("tia-bootstrap", ("power ", 'power = { typ = "1 mW", max = "8 mW" }'))
    assert refused.value.remedies[0].startswith("saturation_current of J1 ≥")


def test_a_level_at_the_rail_of_the_follower_is_refused() -> None:
    with pytest.raises(InfeasibleError, match="R4 has no voltage"):
        sized("tia-bootstrap", ("supply  ", 'supply = { positive = "5 V" }'))


def test_too_little_supply_for_the_follower_is_a_missed_requirement() -> None:
    """A pinch-off voltage beyond what lies between level and drain."""
    result = sized(
        "tia-bootstrap",
        ("pinch_off", 'pinch_off_voltage = "4.8 V"'),
        ("saturation_current", 'saturation_current = { min = "80 mA", typ = "90 mA", max = "100 mA" }'),
    )
    missed = [row.requirement.figure for row in result.requirements if not row.met]
    assert "compliance_margin" in missed


def test_a_design_without_a_follower_is_refused() -> None:
    text = load("tia-bootstrap").starter
    start, end = text.index("[follower]"), text.index("[amplifier]")
    with pytest.raises(InputError, match="follower"):
        read_text(text[:start] + text[end:], "design.toml", circuit_of=lambda n: load(n).request, circuits=CIRCUITS)


def test_the_gates_leakage_counts_and_its_absence_is_said() -> None:
    leaky = model("tia-bootstrap", ("gate_current ", 'gate_current = "100 nA"'))
    dry = model("tia-bootstrap", ("gate_current ", ""))
    levels = [float(np.asarray(each.biased(each.nominal() | CHOSEN)["node.amp"])) for each in (leaky, dry)]
    assert levels[1] - levels[0] == near(100e-9 * CHOSEN["R1"], rel=1e-3)
    assert any("states no gate_current" in text for text in sized("tia-bootstrap", ("gate_current ", "")).cautions)


def test_faults_of_the_bootstrap_are_computed() -> None:
    faults = {fault.case: fault for fault in sized("tia-bootstrap").faults}
    for case in ("R4 open", "C4 open", "R5 short"):
        assert "bandwidth down to" in faults[case].result
    assert "J1 drives D1 forward" in faults["C4 short"].result
    turned = {fault.case: fault for fault in sized("tia-bootstrap", *ANODE).faults}
    assert "of reverse bias" in turned["C4 short"].result
