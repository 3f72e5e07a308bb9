"""Tee in the feedback: equal to one part at the output, dearer in noise and offset, left empty where strays do."""

from __future__ import annotations

import numpy as np
import pytest

from opto_ckt.analyses import noise
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.response import transfer_at
from opto_ckt.analyses.symbolic import lcapy_transfer
from opto_ckt.constants import BOLTZMANN
from opto_ckt.errors import InputError
from opto_ckt.formulas.feedback_network import tee_capacitance, tee_resistance
from tests.circuits.sized import model, read, sized

CAPACITIVE = (("tee ", 'tee = "capacitive"'),)
BOTH = (("tee ", 'tee = "both"'),)
RESISTORS = {"R1": 10e6, "R4": 5e3, "R5": 1.25e3}
FITTED = {**RESISTORS, "C1": 2.2e-12, "C4": 2.2e-12, "C5": 82e-12, "C8": 1e-7, "C9": 1e-7}
FORMS = pytest.mark.parametrize("changes", [(), CAPACITIVE, BOTH], ids=["resistive", "capacitive", "both"])


@FORMS
def test_every_form_of_the_starter_meets_its_requirements(changes: tuple[tuple[str, str], ...]) -> None:
    result = sized("tia-tee", *changes)
    assert result.verdict == "met", [row for row in result.requirements if not row.met]


@FORMS
def test_network_agrees_with_lcapy_at_random_values(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("tia-tee", *changes)
    random = np.random.default_rng(31)
    biased = found.biased(found.nominal() | FITTED)
    values = {
        name: float(np.asarray(biased[name])) * float(random.uniform(0.6, 1.6)) for name in sorted(found.network.inputs)
    }
    frequencies = np.geomspace(10, 1e6, 7)
    ours = transfer_at(found.network.evaluate(values), frequencies[:, None])[:, 0]
    np.testing.assert_allclose(lcapy_transfer(expand(found.topology), values, frequencies), ours, rtol=1e-6)


def test_resistive_tee_answers_like_the_resistor_that_it_is_equal_to() -> None:
    """S. Franco, Design with Operational Amplifiers, Ex. 7.13: R_1 + R_2 + R_1 R_2/R_3."""
    figures = model("tia-tee").evaluate(model("tia-tee").nominal() | FITTED)
    equal = tee_resistance(first=10e6, second=5e3, shunt=1.25e3)
    assert equal == pytest.approx(50.005e6)
    assert figures["transimpedance"][0] == pytest.approx(equal, rel=3e-3)


def test_thermal_noise_current_is_that_of_the_resistor_at_the_summing_node() -> None:
    found = model("tia-tee")
    biased = found.biased(found.nominal() | FITTED)
    evaluation = found.evaluation(biased)
    gain = abs(transfer_at(evaluation, 100.0)[0]) / biased["D1.responsivity"]
    density = noise.density_by_generator(evaluation, 100.0)["R1 thermal"][0] / gain**2
    assert density == pytest.approx(4 * BOLTZMANN * biased["temperature"] / 10e6, rel=1e-3)


def test_offset_is_multiplied_by_the_ratio_of_the_tee() -> None:
    found = model("tia-tee")
    values = found.nominal() | FITTED | {"U1.bias_current": 0.0, "D1.dark_current": 0.0, "U1.offset_voltage": 1e-3}
    offset = found.evaluate(values)["dc_offset"][0]
    shunt = 1 / (1 / float(found.biased(values)["D1.shunt_resistance"]) + 1 / values["RB"])
    assert offset == pytest.approx(1e-3 * (1 + 4 + 50.005e6 / shunt), rel=1e-6)


def test_level_with_the_tee_balances_the_currents_of_the_summing_node() -> None:
    """The nodes of the tee solved by hand: current through R1, voltage of the joint, current through R4."""
    found = model("tia-tee")
    values = found.biased(found.nominal() | FITTED)
    light = (
        values["D1.responsivity"] * values["signal.power"] + values["D1.ambient_current"] + values["D1.dark_current"]
    )
    summed = values["node.sum"]
    current = light + values["U1.bias_current"] + summed * (1 / values["RB"] + 1 / values["D1.shunt_resistance"])
    joint = summed + current * values["R1"]
    assert values["node.amp"] == pytest.approx(joint + values["R4"] * (current + joint / values["R5"]), rel=1e-9)


def test_capacitive_tee_is_fitted_where_one_capacitor_would_be_less_than_its_pads() -> None:
    result = sized("tia-tee", *CAPACITIVE)
    value = {part.ref: part.value for part in result.parts}
    assert min(value["C1"], value["C4"]) > 1e-12
    assert tee_capacitance(first=value["C1"], second=value["C4"], shunt=value["C5"]) < 0.1e-12


def test_what_the_tee_costs_is_said() -> None:
    assert any("times that of a real resistor" in caution for caution in sized("tia-tee").cautions)


def test_a_tee_where_a_real_resistor_exists_is_said() -> None:
    brighter = (("power ", 'power = { typ = "20 nW", max = "2 µW" }'), ("ambient ", 'ambient = "10 nA"'))
    cautions = sized("tia-tee", *brighter).cautions
    assert any("a real resistor of" in caution and "circuit tia" in caution for caution in cautions)


def test_a_level_above_ground_is_refused() -> None:
    single = ("supply ", 'supply = { positive = "5 V" }\ninput_level = "1 V"')
    with pytest.raises(InputError, match="the tee returns to ground"):
        sized("tia-tee", single)


def test_the_design_of_a_tia_is_read_by_changing_one_line() -> None:
    assert read("tia", ("circuit ", 'circuit = "tia-tee"')).request.circuit == "tia-tee"
