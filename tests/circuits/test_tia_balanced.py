"""Two detectors subtracted, as currents or as outputs: rejection, noise, levels, twins."""

from __future__ import annotations

from dataclasses import replace
from shutil import which

import numpy as np
import pytest

from opto_ckt.analyses import noise
from opto_ckt.analyses.network import Network
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.response import rival_at, transfer_at
from opto_ckt.analyses.symbolic import lcapy_transfer
from opto_ckt.errors import InfeasibleError, InputError
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.simulators import ENGINES as SIMULATORS
from opto_ckt.outputs.wiring import drawing_faults
from tests.circuits.sized import model, sized

ENGINES = [engine for engine in SIMULATORS if engine == "neospice" or which("ngspice")]
OUTPUTS = (("balance ", 'balance = "outputs"'),)
ANODE = (("output  ", 'output = "anode"'),)
PARTS = {"R1": 20e3, "C1": 0.8e-12, "R4": 20e3, "C4": 0.8e-12, "C8": 1e-7, "C9": 1e-7}
FORMS = pytest.mark.parametrize("changes", [(), OUTPUTS], ids=["currents", "outputs"])


@FORMS
def test_every_form_meets_its_requirements(changes: tuple[tuple[str, str], ...]) -> None:
    result = sized("tia-balanced", *changes)
    assert result.verdict == "met", [row for row in result.requirements if not row.met]
    assert drawing_faults(result.topology) == []


@FORMS
def test_network_agrees_with_lcapy_at_random_values(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("tia-balanced", *changes)
    random = np.random.default_rng(12)
    biased = found.biased(found.nominal() | PARTS)
    values = {
        name: float(np.asarray(biased[name])) * float(random.uniform(0.6, 1.6)) for name in sorted(found.network.inputs)
    }
    frequencies = np.geomspace(1e3, 1e9, 7)
    ours = transfer_at(found.network.evaluate(values), frequencies[:, None])[:, 0]
    np.testing.assert_allclose(lcapy_transfer(expand(found.topology), values, frequencies), ours, rtol=1e-6)


@FORMS
def test_the_rival_is_the_transfer_of_a_network_with_the_other_input(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("tia-balanced", *changes)
    biased = found.biased(found.nominal() | PARTS | {"D2.responsivity": 0.7})
    other = Network(expand(replace(found.topology, input="D2", rival="")))
    frequencies = np.geomspace(1e3, 1e8, 5)[:, None]
    expected = transfer_at(other.evaluate(biased), frequencies)
    np.testing.assert_allclose(rival_at(found.evaluation(biased), frequencies), expected, rtol=1e-9)


SINGLE = (
    ("supply  ", 'supply = { positive = "5 V", tolerance = "5 %" }\ninput_level = "1.5 V"'),
    ("reverse_bias ", 'reverse_bias = "1.5 V"'),
)


def test_the_second_beam_alone_must_not_reach_the_other_limit() -> None:
    """0.2 V below a level of 1.5 V, 2.25 V above it: the lesser room decides where the currents are subtracted."""
    found = model("tia-balanced", *SINGLE)
    chosen = PARTS | {"R2": 7e3, "R3": 3e3, "C2": 1e-6}
    levels = {"U1.offset": 0.0, "U1.bias_current": 0.0, "D1.dark_current": 0.0, "D2.dark_current": 0.0}
    figures = found.evaluate(found.nominal() | chosen | levels | {"signal.ambient": 0.0})
    factor = 2 * 10**0.9 / (10**0.9 + 1)
    overload, overshoot = (float(figures[name][0]) for name in ("overload", "overshoot"))
    leaks = 0.3e-3  # of the node, through R1
    assert overload * 0.9 * factor * 20e3 * (1 + overshoot) == pytest.approx(0.2 - leaks, rel=1e-3)
    with pytest.raises(InfeasibleError, match="in the middle of the supply"):
        sized("tia-balanced", *SINGLE)
    middle = tuple((pattern, line.replace("1.5 V", "2.5 V")) for pattern, line in SINGLE)
    assert sized("tia-balanced", *middle, ("output_swing ", "")).verdict == "met"


def test_rejection_of_currents_is_that_of_the_responsivities() -> None:
    """One diode 2 % below the other: 1/0.02 is 33.98 dB."""
    found = model("tia-balanced")
    values = found.nominal() | PARTS | {"D1.responsivity": 0.9, "D2.responsivity": 0.9 * 0.98}
    assert found.evaluate(values)["common_mode_rejection"][0] == pytest.approx(33.979, abs=1e-2)


def test_rejection_of_outputs_is_that_of_the_resistors() -> None:
    """One resistor 1 % below the other: 1/0.01 is 40 dB."""
    found = model("tia-balanced", *OUTPUTS)
    figures = found.evaluate(found.nominal() | PARTS | {"R4": 0.99 * 20e3})
    assert figures["common_mode_rejection"][0] == pytest.approx(40.0, abs=0.05)


def test_capacitors_apart_spoil_the_rejection_of_outputs_at_high_frequencies_only() -> None:
    found = model("tia-balanced", *OUTPUTS)
    figures = found.evaluate(found.nominal() | PARTS | {"C4": 1.2e-12})
    assert figures["common_mode_rejection"][0] > 100
    assert figures["rejection_at_bandwidth"][0] < 20


def test_noise_of_two_amplifiers_is_that_of_one_times_the_root_of_two() -> None:
    found, alone = model("tia-balanced", *OUTPUTS), model("tia")
    both = noise.density_by_generator(found.evaluation(found.biased(found.nominal() | PARTS)), 1e5)
    parts = {name: PARTS[name] for name in ("R1", "C1", "C8", "C9")}
    one = noise.density_by_generator(alone.evaluation(alone.biased(alone.nominal() | parts)), 1e5)
    for first, second in (("U1 voltage", "U2 voltage"), ("R1 thermal", "R4 thermal"), ("D1 dark shot", "D2 dark shot")):
        assert both[first][0] + both[second][0] == pytest.approx(2 * one[first][0], rel=1e-6)


def test_two_diodes_in_one_node_have_twice_the_shot_noise_and_the_capacitance() -> None:
    result = sized("tia-balanced")
    assert result.input_capacitance["D2 at its bias"] == result.input_capacitance["D1 at its bias"]
    shares = {row.generator: row.share for row in result.noise}
    assert shares["D2 signal shot"] == pytest.approx(shares["D1 signal shot"], rel=1e-6)


@pytest.mark.parametrize("changes", [(), ANODE], ids=["cathode", "anode"])
def test_equal_light_leaves_the_output_at_rest(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("tia-balanced", *changes)
    values = found.biased(found.nominal() | PARTS | {"U1.offset_voltage": 0.0})
    assert abs(values["node.amp"]) < 1e-6


def test_what_is_there_twice_has_one_value() -> None:
    value = {part.ref: part.value for part in sized("tia-balanced", *OUTPUTS).parts}
    assert value["R1"] == value["R4"]
    assert value["C1"] == value["C4"]


@pytest.mark.parametrize("engine", ENGINES)
@pytest.mark.parametrize("changes", [(), ANODE, OUTPUTS], ids=["currents", "anode", "outputs"])
def test_decks_agree(changes: tuple[tuple[str, str], ...], engine: str) -> None:
    assert [row for row in crosscheck(sized("tia-balanced", *changes), engine) if not row.ok] == []


def test_two_diodes_without_bias_in_one_node_are_refused() -> None:
    with pytest.raises(InputError, match="need a bias each way"):
        sized("tia-balanced", ("reverse_bias", 'reverse_bias = "0 V"'))
