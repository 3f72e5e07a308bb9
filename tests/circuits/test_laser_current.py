"""The constant-current laser driver: its operating point by hand, its network by other roads, its two sides."""

from __future__ import annotations

from typing import Any

import numpy as np
import pytest

from opto_ckt.analyses import noise, response, stability
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.symbolic import lcapy_transfer
from opto_ckt.circuits.drivers.laser import asked_current, settle
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE, ZERO_CELSIUS
from opto_ckt.design.model import Model
from opto_ckt.formulas.driver import sensed_current
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.wiring import drawing_faults
from tests.analyses.direct import Direct, return_ratio
from tests.circuits.lc import BIPOLAR, CHOSEN, HIGH, POINTS, SURFACE
from tests.circuits.sized import model, sized
from tests.near import near
from tests.published.printed import printed

SIDES = pytest.mark.parametrize("changes", [(), HIGH, BIPOLAR], ids=["low", "high", "bipolar"])
THM_11 = (
    ("threshold_current", 'threshold_current = "10 mA"'),
    ("characteristic_temperature", 'characteristic_temperature = "60 K"'),
    ("slope_efficiency", 'slope_efficiency = "0.3 W/A"'),
    ("slope_temperature", 'slope_temperature = "180 K"'),
    ("turn_on_voltage", 'turn_on_voltage = "0.95 V"'),
    ("series_resistance", 'series_resistance = "6 Ω"'),
    ("junction_to_case", 'junction_to_case = "100 K/W"'),
    ("power_max {18}=", 'power_max = "40 mW"'),
    ("current  ", 'power = "5 mW"'),
    ("sink_resistance", 'temperature_of = "case"'),
)


def biased(found: Model, **changes: Any) -> dict[str, Any]:
    return found.biased(found.nominal() | CHOSEN | changes)


def test_current_is_set_voltage_over_sense_resistance() -> None:
    found = model("laser-current")
    values = biased(found, **{"U1.open_loop_gain": 1e12, "U1.offset_voltage": 1e-3})
    by_hand = sensed_current(reference=float(values["node.set"]), sense_resistance=CHOSEN["R1"], offset_voltage=1e-3)
    assert values["D1.current"] == near(by_hand, rel=1e-9)
    assert values["node.set"] == near(1.25 * 2.26 / (10.2 + 2.26), rel=2e-4)  # the reference's own 0.4 Ω


def test_a_bipolar_transistor_keeps_its_base_current_from_the_laser() -> None:
    found = model("laser-current", *BIPOLAR)
    values = biased(found)
    gain = values["Q1.current_gain"]
    assert values["D1.current"] * CHOSEN["R1"] == near(values["node.sense"] * gain / (gain + 1), rel=1e-12)
    thermal = BOLTZMANN * values["temperature"] / ELEMENTARY_CHARGE
    assert values["Q1.transconductance"] == near(values["D1.current"] / thermal, rel=1e-12)


def test_compliance_by_hand() -> None:
    """5 V less filter, laser, R7, sense voltage, and what the transistor needs at full drive."""
    found = model("laser-current")
    values = biased(found)
    current = float(values["D1.current"])
    rail = 5.0 - (0.3 * 0.59 / 0.89) * float(values["supply.current"])
    across = rail - (0.92 + 5.0 * current) - current * CHOSEN["R7"] - current * CHOSEN["R1"]
    assert values["node.drain"] - values["node.sense"] == near(across, rel=1e-9)
    over = rail - 0.03 - current * CHOSEN["R1"] - 1.1
    beta = 0.35**2 / (2 * 0.2)
    needed = max(over - np.sqrt(over**2 - 2 * current / beta), current * 1.2 * (4.5 - 1.1) / over)
    assert values["compliance_margin"] == near(across - needed, rel=1e-4)


def test_a_supply_too_low_lets_the_stated_on_resistance_set_the_current() -> None:
    found = model("laser-current", ("threshold_voltage", 'threshold_voltage = "0.5 V"'))
    values = biased(found, **{"supply.positive": 2.8, "R7": 60.0, "Q1.transconductance": 10.0})
    current = float(values["D1.current"])
    assert current == values["hard_on_current"] < values["regulated_current"]
    over = 2.8 - 0.03 - current * CHOSEN["R1"] - 0.5
    resistance = 1.2 * (4.5 - 0.5) / over
    total = 60.0 + CHOSEN["R1"] + 5.0 + resistance + 0.3 * 0.59 / 0.89
    assert current == near((2.8 - 0.92) / total, rel=2e-3)  # the quiescent current's drop in the filter apart


@SIDES
def test_hard_on_current_solves_the_transistor_s_own_law(changes: tuple[tuple[str, str], ...]) -> None:
    """At hard on, voltages around the loop add up to the supply, and drive to what the op amp can give."""
    found = model("laser-current", *changes)
    for supply in (2.8, 3.5, 5.0):
        values = biased(found, **{"supply.positive": supply, "U1.stuck": 1.0})
        current = float(values["D1.current"])
        rail = float(values["node.rail"])
        across = abs(float(values["node.drain"] - values["node.sense"]))
        assert current > 0
        drop = float(values["D1.forward_voltage"]) + current * CHOSEN["R7"]
        sense = abs(float(values["node.sense"])) if changes != HIGH else rail - float(values["node.sense"])
        assert across + drop + sense == near(rail, rel=1e-9)
        if changes == BIPOLAR:
            assert across >= float(values["Q1.saturation_voltage"]) * (1 - 1e-9)
            continue
        control = rail - 0.03 - sense  # gate to source at the op amp's limit
        assert float(values["Q1.control_voltage"]) <= control * (1 + 1e-9)


def test_junction_and_heat_agree_with_plain_iteration() -> None:
    found = model("laser-current")
    random = np.random.default_rng(8)
    lanes = {
        "temperature": random.uniform(253, 333, 50),
        "D1.threshold_current": random.uniform(5e-3, 13e-3, 50),
        "D1.slope_efficiency": random.uniform(0.04, 0.08, 50),
    }
    values = biased(found, **lanes)
    data, resistance = found.request.source, 80.0 + 40.0
    current = values["D1.current"]
    junction = np.asarray(lanes["temperature"])
    for _ in range(200):
        light = data.slope_at(junction, lanes["D1.slope_efficiency"]) * (
            current - data.threshold_at(junction, lanes["D1.threshold_current"])
        )
        junction = lanes["temperature"] + resistance * (current * values["D1.forward_voltage"] - np.maximum(light, 0))
    np.testing.assert_allclose(values["D1.junction_temperature"], junction, rtol=1e-9)
    np.testing.assert_allclose(values["D1.optical_power"], np.maximum(light, 0), rtol=1e-6, atol=1e-12)


def test_5_milliwatts_at_25_degrees_sag_to_the_computed_figure_at_70() -> None:
    """Derived for this project by fixed-point iteration: 5 mW at 25 °C becomes 1.174 mW at 70 °C, constant current."""
    found = model("laser-current", *THM_11)
    current = asked_current(found.request)
    values = found.nominal() | {"temperature": 70 + ZERO_CELSIUS}
    assert float(settle(values, found.request, current).power) * 1e3 == printed("1.174")


@pytest.mark.parametrize("changes", [POINTS, SURFACE], ids=["listed points", "surface emitter"])
def test_lasers_of_other_laws_settle_on_their_own_curves(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("laser-current", *changes)
    values = biased(found)
    data, current = found.request.source, float(values["D1.current"])
    junction = float(values["D1.junction_temperature"])
    assert values["D1.forward_voltage"] == near(float(data.forward_voltage_at(current)), rel=1e-6)
    assert values["D1.threshold_current"] == near(float(data.threshold_at(junction)), rel=1e-12)
    assert values["D1.optical_power"] > 0


def test_loop_of_drv_14_through_this_network() -> None:
    """Derived for this project and agreed with ngspice-39: 7.195 MHz, 61.2°, 11.27 MHz of a bare follower loop."""
    found = model("laser-current")
    nothing = 1e-21
    values = biased(found) | {
        "U1.gain_bandwidth": 10e6, "U1.second_pole": 1e15, "U1.open_loop_gain": 1e9, "U1.output_resistance": 100.0,
        "U1.common_capacitance": nothing, "U1.differential_capacitance": nothing,
        "Q1.transconductance": 0.5, "Q1.output_conductance": 0.0, "Q1.control_source_capacitance": 450e-12,
        "Q1.control_drain_capacitance": 50e-12, "R1": 10.0, "R4": 1e-3, "R5": 1e-6, "R7": 1e-6, "C1": nothing,
        "D1.series_resistance": 1e-6, "R8": 1e-6,
    }  # fmt: skip
    evaluation = found.network.evaluate(values)
    assert stability.crossover_frequency(evaluation)[0] / 1e6 == printed("7.195")
    assert stability.phase_margin(evaluation)[0] == printed("61.2")
    assert response.bandwidth(evaluation)[0] / 1e6 == printed("11.27")


@SIDES
def test_network_agrees_with_other_roads_at_random_values(changes: tuple[tuple[str, str], ...]) -> None:
    """lcapy for the transfer, a plain nodal matrix for loop gain and noise."""
    found = model("laser-current", *changes)
    random = np.random.default_rng(20)
    values = {
        name: float(np.asarray(value)) * float(random.uniform(0.5, 2))
        for name, value in biased(found).items()
        if name in found.network.inputs
    }
    frequencies = np.geomspace(10, 1e8, 5)
    expansion, evaluation = expand(found.topology), found.network.evaluate(values)
    ours = response.transfer_at(evaluation, frequencies[:, None])[:, 0]
    np.testing.assert_allclose(lcapy_transfer(expansion, values, frequencies), ours, rtol=1e-6)
    for frequency in frequencies:
        ratio = stability.return_ratio_at(evaluation, frequency)[0]
        assert ratio == near(return_ratio(expansion, values, frequency), rel=1e-6)
        density = Direct(expansion, values, frequency).density()
        assert noise.output_density(evaluation, frequency)[0] == near(density, rel=1e-6)


def test_the_high_side_is_the_low_side_upside_down() -> None:
    low, high = model("laser-current"), model("laser-current", *HIGH)
    even = {"U1.open_loop_gain": 1e12, "L1": 1e-15, "L1.resistance": 1e-9, "R8": 1e-9}
    values = [biased(found, **even) for found in (low, high)]
    for name in ("D1.current", "compliance_margin", "hard_on_current", "Q1.transconductance", "D1.optical_power"):
        assert float(values[0][name]) == near(float(values[1][name]), rel=1e-9)
    rail = float(values[1]["node.rail"])
    for name in ("ref", "set", "sense", "control", "drive", "drain", "laser"):
        assert float(values[0][f"node.{name}"]) == near(rail - float(values[1][f"node.{name}"]), rel=1e-9)
    figures = [found.evaluate(found.nominal() | CHOSEN | even) for found in (low, high)]
    for name in ("loop_bandwidth", "phase_margin", "rise_time"):
        assert float(figures[0][name][0]) == near(float(figures[1][name][0]), rel=1e-6)


@SIDES
def test_decks_agree_in_ngspice_at_nominal_and_two_corners(changes: tuple[tuple[str, str], ...]) -> None:
    rows = crosscheck(sized("laser-current", *changes), "ngspice")
    assert {row.scene for row in rows} >= {"nominal"}
    assert len(rows) > 60
    assert [row for row in rows if not row.ok] == []


def test_decks_agree_in_neospice() -> None:
    assert [row for row in crosscheck(sized("laser-current", *HIGH), "neospice") if not row.ok] == []


@SIDES
def test_the_drawing_joins_what_the_topology_joins(changes: tuple[tuple[str, str], ...]) -> None:
    assert drawing_faults(model("laser-current", *changes).topology) == []
