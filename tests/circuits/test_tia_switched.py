"""Switched gain: every range in its own window, contacts in their positions, light that ends with the range."""

from __future__ import annotations

from dataclasses import replace
from shutil import which

import numpy as np
import pytest

from opto_ckt.analyses import noise
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.response import transfer_at
from opto_ckt.analyses.symbolic import lcapy_transfer
from opto_ckt.constants import BOLTZMANN
from opto_ckt.errors import InfeasibleError, InputError
from opto_ckt.formulas.feedback_network import branch_resistance
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.schematic import schematic
from opto_ckt.outputs.simulators import ENGINES as SIMULATORS
from opto_ckt.outputs.simulators import run
from opto_ckt.outputs.spice import deck_of, output_node
from opto_ckt.outputs.wiring import drawing_faults
from opto_ckt.outputs.wording import describe
from opto_ckt.topology import OPEN
from tests.circuits.sized import model, sized

ENGINES = [engine for engine in SIMULATORS if engine == "neospice" or which("ngspice")]
SLOW = (
    ("gain_ranges ", 'gain_ranges = [ { power = "1 µW" }, { power = "15 µW" }, { power = "300 µW" } ]'),
    ("bit_rate ", 'bit_rate = "200 kbit/s"'),
    ("bandwidth ", 'bandwidth = { min = "150 kHz" }'),
    ("noise_frequency", 'noise_frequency = "10 kHz"'),
    ("noise_band", 'noise_band = { min = "1 kHz", max = "200 kHz" }'),
    ("power   ", 'power = { typ = "0.2 µW", max = "300 µW" }'),
)
ANODE = (("output  ", 'output = "anode"'),)
SINGLE = (
    ("supply  ", 'supply = { positive = "5 V", tolerance = "5 %" }\ninput_level = "2.5 V"'),
    ("reverse_bias ", 'reverse_bias = "2.5 V"'),
)
KINDS = {"two": (), "three": SLOW, "three, anode, single": (*SLOW, *ANODE, *SINGLE)}
kinds = pytest.mark.parametrize("changes", KINDS.values(), ids=KINDS.keys())
PARTS = {
    "R1": 19.1e3, "C1": 0.82e-12, "R4": 3.83e3, "C4": 1.3e-12, "C8": 1e-7, "C9": 1e-7,
    "R5": 300.0, "C5": 2e-12, "R2": 7e3, "R3": 7e3, "C2": 1e-6,
}  # fmt: skip


@kinds
@pytest.mark.parametrize("closed", ["", "S1", "S2"])
def test_network_agrees_with_lcapy_in_every_range(changes: tuple[tuple[str, str], ...], closed: str) -> None:
    found = model("tia-switched", *changes)
    random = np.random.default_rng(3)
    states = {name: float(name.startswith(closed or "-")) for name in found.nominal() if name.endswith(".closed")}
    biased = found.biased(found.nominal() | PARTS | states)
    values = {
        name: float(np.asarray(biased[name])) * float(random.uniform(0.6, 1.6)) for name in sorted(found.network.inputs)
    }
    frequencies = np.geomspace(1e3, 1e9, 7)
    ours = transfer_at(found.network.evaluate(values), frequencies[:, None])[:, 0]
    np.testing.assert_allclose(lcapy_transfer(expand(found.topology), values, frequencies), ours, rtol=1e-6)


@kinds
def test_every_range_meets_what_is_asked_and_is_drawn(changes: tuple[tuple[str, str], ...]) -> None:
    result = sized("tia-switched", *changes)
    assert result.verdict == "met"
    assert drawing_faults(result.topology) == []
    for branch in ("S1", "S2") if changes else ("S1",):
        assert f">{branch}<" in schematic(result)


@pytest.mark.parametrize("engine", ENGINES)
@kinds
def test_prediction_and_simulation_agree_in_every_range(changes: tuple[tuple[str, str], ...], engine: str) -> None:
    """A scene for each range: the requirements' worst corners take care of two, swing of the brightest."""
    result = sized("tia-switched", *changes)
    assert [row for row in crosscheck(result, engine) if not row.ok] == []


@pytest.mark.parametrize("engine", ENGINES)
@pytest.mark.parametrize("closed", [0.0, 1.0])
def test_simulators_agree_with_the_contact_open_and_closed(closed: float, engine: str) -> None:

    result = sized("tia-switched")
    found = model("tia-switched")
    values = {name: float(np.asarray(value)) for name, value in found.biased(
        found.nominal() | PARTS | {"S1.closed": closed}).items()}  # fmt: skip
    scene = replace(result.scenes[0], values=values)
    plot = run(deck_of(result, scene, "ac"), engine)["ac"]
    expected = np.abs(transfer_at(found.evaluation(values), plot["frequency"][:, None])[:, 0])
    simulated = np.abs(plot[f"v({output_node(result.topology)})"])
    np.testing.assert_allclose(simulated, expected, rtol=1e-4)


def test_contacts_in_their_positions() -> None:
    found = model("tia-switched")
    lanes = {name: np.broadcast_to(value, 2) for name, value in (found.nominal() | PARTS).items()}
    values = found.biased({**lanes, "S1.closed": np.array([0.0, 1.0]), "signal.power": np.array([3e-4, 3e-4])})
    np.testing.assert_allclose(values["signal.power"], [20e-6, 300e-6])
    np.testing.assert_allclose(values["feedback_resistance"], [19.1e3, 1 / (1 / 19.1e3 + 1 / 3835.0)])
    np.testing.assert_allclose(values["S1.resistance"], [OPEN, 5.0])
    figures = found.evaluate({**lanes, "S1.closed": np.array([0.0, 1.0])})
    np.testing.assert_allclose(figures["transimpedance"], values["feedback_resistance"], rtol=2e-3)


def test_of_two_contacts_that_are_asked_for_the_brighter_closes() -> None:
    found = model("tia-switched", *SLOW)
    values = found.biased(found.nominal() | PARTS | {"S1.closed": 1.0, "S2.closed": 1.0})
    assert float(values["S2.resistance"]) == pytest.approx(5.0)
    assert float(values["S1.resistance"]) > 1e9
    assert float(values["range.light"]) == pytest.approx(300e-6)


def test_branch_is_what_is_wanted_beside_the_rest() -> None:
    branch = branch_resistance(total=3.39e3, first=19.8e3, contact=5.0)
    assert 1 / (1 / 19.8e3 + 1 / (branch + 5.0)) == pytest.approx(3.39e3, rel=1e-12)


def test_an_open_contact_lies_across_the_feedback() -> None:
    """Its capacitance behind C4 adds to C1; the bandwidth falls as that of R1 with the sum, Q below a half."""
    found = model("tia-switched", ("second_pole", ""), ("output_resistance", ""))
    lanes = {name: np.broadcast_to(value, 2) for name, value in (found.nominal() | PARTS).items()}
    open_ones = {"S1.closed": np.zeros(2), "S1.off_capacitance": np.array([1e-18, 0.5e-12]), "C4": np.full(2, 1e-9)}
    more = {**lanes, **open_ones, "C1": np.array([1.32e-12, 0.82e-12]), "S1.terminal_capacitance": np.full(2, 1e-18)}
    bandwidth = found.evaluate(more)["bandwidth"]
    assert bandwidth[0] == pytest.approx(bandwidth[1], rel=2e-3)


def test_noise_asked_for_is_that_of_the_faintest_range() -> None:
    found = model("tia-switched")
    lanes = {name: np.broadcast_to(value, 2) for name, value in (found.nominal() | PARTS).items()}
    figures = found.evaluate({**lanes, "S1.closed": np.array([0.0, 1.0]), "signal.power": np.zeros(2)})
    assert figures["nep_density"][0] == pytest.approx(figures["nep_density"][1], rel=1e-9)
    assert figures["output_noise"][1] < figures["output_noise"][0]


def test_noise_of_a_closed_branch_is_that_of_its_resistor() -> None:
    found = model("tia-switched")
    values = found.biased(found.nominal() | PARTS | {"S1.closed": 1.0})
    evaluation = found.evaluation(values)
    through = float(values["feedback_resistance"])
    density = noise.density_by_generator(evaluation, 1e4)
    expected = 4 * BOLTZMANN * 298.15 / PARTS["R4"] * through**2
    assert float(density["R4 thermal"][0]) == pytest.approx(expected, rel=5e-3)


def test_leakage_of_open_contacts_is_an_offset() -> None:
    found = model("tia-switched")
    lanes = {name: np.broadcast_to(value, 2) for name, value in (found.nominal() | PARTS).items()}
    offsets = found.evaluate({**lanes, "S1.closed": np.zeros(2), "S1.leakage": np.array([0.0, 1e-6])})["dc_offset"]
    assert float(offsets[1] - offsets[0]) == pytest.approx(1e-6 * 19.1e3, rel=1e-3)


def test_a_contact_that_sticks_is_a_fault_with_a_limit() -> None:
    faults = {fault.case: fault for fault in sized("tia-switched").faults}
    stuck = next(fault for case, fault in faults.items() if case.startswith("S1 stuck open"))
    assert stuck.ok
    assert "V" in stuck.result


def test_the_page_tells_each_range() -> None:
    told = [line for line in sized("tia-switched", *SLOW).cautions if line.startswith("range ")]
    assert [line.split(":")[0] for line in told] == [
        "range 1, all contacts open", "range 2, S1 closed", "range 3, S2 closed",
    ]  # fmt: skip
    assert "back below 700 nW" in told[1]
    assert describe({"S1.closed": "high", "S2.closed": "low"}) == "S1 closed, S2 open"


@pytest.mark.parametrize(
    ("changes", "told"),
    [
        ((("gain_ranges ", 'gain_ranges = [ { power = "300 µW" } ]'),), "2 points are needed at least"),
        ((("gain_ranges ", 'gain_ranges = [ { power = "20 µW" }, { power = "100 µW" } ]'),), "the two have to be one"),
        ((("gain_ranges ", 'gain_ranges = [ { power = "300 µW" }, { power = "300 µW" } ]'),), "one is enough"),
        ((("gain_ranges ", ""),), "gain_ranges"),
        ((("voltage_max         ", 'voltage_max = "3 V"'),), "voltage_max is 3.00 V"),
        ((("supply_max ", 'supply_max = "12.6 V"\nminimum_stable_gain = "10"'),), "one stable at 1"),
    ],
)
def test_what_does_not_go_is_refused(changes: tuple[tuple[str, str], ...], told: str) -> None:
    with pytest.raises(InputError) as refused:
        sized("tia-switched", *changes)
    assert told in str(refused.value)


def test_ranges_that_the_band_makes_equal_are_said() -> None:
    ranges = ("gain_ranges ", 'gain_ranges = [ { power = "5 µW" }, { power = "40 µW" }, { power = "300 µW" } ]')
    with pytest.raises(InfeasibleError, match="buys nothing"):
        sized("tia-switched", ranges)
