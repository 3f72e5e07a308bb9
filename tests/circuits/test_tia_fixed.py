"""A bought amplifier: its sheet comes out of the network, what surrounds it is sized, what it does not stand."""

from __future__ import annotations

from shutil import which

import numpy as np
import pytest
from scipy import integrate

from opto_ckt.analyses import noise
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.response import transfer_at
from opto_ckt.analyses.symbolic import lcapy_transfer
from opto_ckt.errors import InputError
from opto_ckt.formulas import fixed_tia
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.simulators import ENGINES as SIMULATORS
from opto_ckt.outputs.spice import decks
from opto_ckt.outputs.wiring import drawing_faults
from tests.circuits.sized import model, sized

ENGINES = [engine for engine in SIMULATORS if engine == "neospice" or which("ngspice")]
PLAIN = (
    ("bias_filter ", ""), ("post_filter ", ""), ("resistance ", ""), ("coupling ", ""), ("series_resistance ", ""),
    ("transit_frequency ", ""),
)  # fmt: skip
BLOCKED = ("output_resistance ", 'output_resistance = "60 Ω"\nlow_cutoff = "30 kHz"')


def test_gain_and_bandwidth_are_those_of_the_sheet() -> None:
    found = model("tia-fixed", *PLAIN)
    figures = found.evaluate(found.nominal() | {"C8": 1e-7})
    assert figures["transimpedance"][0] == pytest.approx(9e3, rel=1e-6)
    assert figures["bandwidth"][0] == pytest.approx(150e6, rel=2e-3)
    assert figures["peaking"][0] == pytest.approx(0.0, abs=1e-3)


def test_low_cutoff_is_that_of_the_sheet() -> None:
    found = model("tia-fixed", *PLAIN, BLOCKED)
    figures = found.evaluate(found.nominal() | {"C8": 1e-7})
    assert figures["low_cutoff"][0] == pytest.approx(30e3, rel=2e-3)
    assert figures["transimpedance"][0] == pytest.approx(9e3, rel=1e-3)


def test_noise_over_its_own_band_is_the_rms_of_the_sheet() -> None:
    """18 nA rms at the input: the network's own generator integrated and referred back."""
    found = model("tia-fixed", *PLAIN)
    biased = found.biased(found.nominal() | {"C8": 1e-7})
    rms = noise.rms_by_generator(found.evaluation(biased))["U1 input"][0]
    assert rms / 9e3 == pytest.approx(18e-9, rel=3e-3)
    shape, _ = integrate.quad(lambda x: 1 / (1 + x**4), 0, np.inf)
    assert fixed_tia.density_from_rms(noise=18e-9, bandwidth=150e6) == pytest.approx(18e-9 / (shape * 150e6) ** 0.5)


@pytest.mark.parametrize("changes", [(), (BLOCKED,), PLAIN], ids=["filtered", "blocked", "plain"])
def test_network_agrees_with_lcapy_at_random_values(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("tia-fixed", *changes)
    random = np.random.default_rng(5)
    parts = {"C8": 1e-7, "R10": 1e3, "C10": 2e-9, "R20": 50.0, "C20": 3e-12, "L20": 22e-9, "C21": 10e-12}
    biased = found.biased(found.nominal() | parts | {"C40": 15e-9, "R40": 1e4})
    values = {
        name: float(np.asarray(biased[name])) * float(random.uniform(0.7, 1.4)) for name in sorted(found.network.inputs)
    }
    frequencies = np.geomspace(1e5, 1e9, 6)
    ours = transfer_at(found.network.evaluate(values), frequencies[:, None])[:, 0]
    np.testing.assert_allclose(lcapy_transfer(expand(found.topology), values, frequencies), ours, rtol=1e-6)


def test_overload_is_the_swing_where_dc_does_not_pass() -> None:
    found = model("tia-fixed", BLOCKED)
    factor = fixed_tia.peak_to_peak_factor(extinction_ratio=10**0.9)
    assert factor == pytest.approx(2 * (10**0.9 - 1) / (10**0.9 + 1))
    parts = {"C8": 1e-7, "R10": 1e3, "C10": 2e-9, "R20": 50.0, "C20": 3e-12, "L20": 22e-9, "C21": 10e-12}
    overload = found.evaluate(found.nominal() | parts | {"C40": 15e-9, "R40": 1e4})["overload"][0]
    assert overload == pytest.approx(1.3e-3 / (0.9 * factor), rel=1e-6)


@pytest.mark.parametrize("engine", ENGINES)
@pytest.mark.parametrize("changes", [(), (BLOCKED,), PLAIN], ids=["filtered", "blocked", "plain"])
def test_decks_agree_and_there_is_no_loop(changes: tuple[tuple[str, str], ...], engine: str) -> None:
    relaxed = (("sensitivity ", ""), ("eye_opening ", "")) if changes == PLAIN else ()
    result = sized("tia-fixed", *changes, *relaxed)
    assert not any(name.endswith(".loop.cir") for name in decks(result))
    assert [row for row in crosscheck(result, engine) if not row.ok] == []


FILTERS = {
    "none": "",
    "rc": 'post_filter = { order = 1, cutoff = "105 MHz" }',
    "ladder": 'post_filter = { order = 3, cutoff = "105 MHz", response = "flat" }',
}


@pytest.mark.parametrize("engine", ENGINES)
@pytest.mark.parametrize("line", FILTERS.values(), ids=FILTERS.keys())
def test_load_at_dc_pulls_the_output_down_through_a_passive_filter(line: str, engine: str) -> None:
    result = sized("tia-fixed", ("coupling ", 'coupling = "dc"'), ("post_filter ", line))
    rows = [row for row in crosscheck(result, engine) if row.quantity == "level of amp"]
    assert len(rows) == len(result.scenes)
    assert [row for row in rows if not row.ok] == []


RESTING = ("board_capacitance ", 'board_capacitance = "0.1 pF"\ninput_level = "0.8 V"')


@pytest.mark.parametrize("changes", [(), (("reverse_bias ", 'reverse_bias = "2.5 V"'),)], ids=["3.3 V", "2.5 V"])
def test_input_that_rests_by_itself_asks_for_no_level_of_the_board(changes: tuple[tuple[str, str], ...]) -> None:
    """Detector and coupling go to nodes that something drives, not to a level that nothing makes."""
    topology = sized("tia-fixed", RESTING, *changes).topology
    assert "level" not in {node for element in topology for node in element.nodes.values()}
    assert topology["R40"].nodes["b"] == "0"


def test_detector_without_bias_has_a_supply_at_the_resting_input() -> None:
    plain = (r"\[bias\]", ""), ("supply           = \"3.3 V\"", ""), ("tolerance ", ""), ("ripple  ", "")
    changes = *plain, ("ripple_frequency", ""), ("bias_filter ", ""), ("reverse_bias ", 'reverse_bias = "0 V"')
    found = model("tia-fixed", RESTING, *changes)
    assert found.topology["D1"].nodes["cathode"] == found.topology["VB"].nodes["node"] == "bias"
    assert found.nominal()["supply.bias"] == pytest.approx(0.8)


@pytest.mark.parametrize("output", ["anode", "cathode"])
def test_the_drawing_joins_what_the_topology_joins(output: str) -> None:
    changes = (("output ", f'output = "{output}"'),)
    assert drawing_faults(sized("tia-fixed", *changes).topology) == []


def test_filter_in_front_of_the_bandwidth_is_that_of_both() -> None:
    row = next(row for row in sized("tia-fixed").roundings if row.figure == "bandwidth")
    assert row.exact == pytest.approx(105e6, rel=0.02)  # the coupling behind it is sized after the filter


@pytest.mark.parametrize(
    ("changes", "told"),
    [
        ((("capacitance  ", 'capacitance = "3 pF"'),), "the figures of fixed_tia hold up to 1.00 pF"),
        (((r"supply\s+= {", 'supply = { positive = "5 V" }'),), "above supply_max"),
        ((("reverse_bias", 'reverse_bias = "25 V"'),), "reverse_voltage_max"),
        ((("post_filter ", 'gain_stage = { gain = "3" }'),), "needs an op amp"),
        ((("post_filter ", 'post_filter = { order = 2, cutoff = "105 MHz" }'),), "needs an op amp"),
    ],
)
def test_what_does_not_go_is_refused(changes: tuple[tuple[str, str], ...], told: str) -> None:
    with pytest.raises(InputError) as refused:
        sized("tia-fixed", *changes)
    assert told in str(refused.value)
