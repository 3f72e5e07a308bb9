"""The power-controlled laser driver: operating point by hand, heat, network by other roads, its two sides."""

from __future__ import annotations

from pathlib import Path
from typing import Any

import numpy as np
import pytest

from opto_ckt.analyses import noise, response, stability
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.symbolic import lcapy_transfer
from opto_ckt.circuits import CIRCUITS, load
from opto_ckt.circuits.drivers.laser import lasing
from opto_ckt.circuits.drivers.laser_power.figures import loop_gain, runaway
from opto_ckt.constants import ZERO_CELSIUS
from opto_ckt.design.model import Model
from opto_ckt.design.reading import read_request
from opto_ckt.design.sizing import size
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.simulators import run
from opto_ckt.outputs.spice import deck_of
from opto_ckt.outputs.wiring import drawing_faults
from tests.analyses.direct import Direct, return_ratio
from tests.circuits.lp import BIPOLAR, CHOSEN, COMPUTED, HIGH
from tests.circuits.sized import model, sized
from tests.near import near
from tests.published.printed import printed

DESIGN = Path(__file__).parents[2] / "designs" / "laser-power.toml"
SIDES = pytest.mark.parametrize("changes", [(), HIGH, BIPOLAR], ids=["low", "high", "bipolar"])
LOOSE = {"R7": 10.0, "R2": 10e3, "R3": 1e3, "R1": 3.0}  #: a clamp and a fail-safe resistor that are out of the way


def biased(found: Model, **changes: Any) -> dict[str, Any]:
    return found.biased(found.nominal() | CHOSEN | changes)


def test_the_monitor_s_current_through_the_set_resistor_is_the_reference() -> None:
    values = biased(model("laser-power"))
    current = 0.3 * float(values["D1.power"]) + 5e-9
    assert values["D1.monitor_current"] == near(current, rel=1e-9)
    total = CHOSEN["R14"] + float(values["RV1.setting"])
    assert current * total == near(float(values["node.ref"]), rel=1e-4)  # 1/A of the integrator apart
    assert values["D1.optical_power"] == near(0.4e-3, rel=1e-4)


@pytest.mark.parametrize("responsivity", [0.15, 0.2, 0.45, 0.6])
@pytest.mark.parametrize("offset", [-1e-3, 1e-3])
def test_trimming_takes_away_the_spread_of_the_monitor_and_what_stands_still(
    responsivity: float, offset: float
) -> None:
    found = model("laser-power")
    values = biased(
        found,
        **{"D1.monitor_responsivity": responsivity, "U3.offset_voltage": offset, "U2.voltage": 1.2525, "R14": 5.05e3},
    )
    assert values["D1.optical_power"] == near(0.4e-3, rel=1e-4)


def test_a_monitor_beyond_the_trimmer_s_reach_is_not_trimmed() -> None:
    """At the whole track the power is what the track leaves; at none of it what the fixed resistor leaves."""
    found = model("laser-power")
    faint = biased(found, **{"D1.monitor_responsivity": 0.1})
    assert faint["D1.optical_power"] == near(1.25 / (0.1 * 27.11e3), rel=2e-3)
    strong = biased(found, **{"D1.monitor_responsivity": 1.0})
    assert strong["D1.optical_power"] == near(1.25 / (1.0 * 5.11e3), rel=2e-3)
    assert faint["D1.optical_power"] > 0.4e-3 > strong["D1.optical_power"]


def test_what_moves_with_temperature_is_not_trimmed_away() -> None:
    """0.5 dB of tracking error at the ends of its range; reference, resistors and dark current on top."""
    found = model("laser-power")
    cold, warm = 253.15, 60 + ZERO_CELSIUS
    moved = biased(found, temperature=cold, **{"D1.tracking_error": 0.5})
    assert moved["D1.optical_power"] / 0.4e-3 == near(10**0.05, rel=1e-3)
    drifted = biased(found, **{"U2.drift": 0.002, "set.drift": 0.0045})
    assert drifted["D1.optical_power"] / 0.4e-3 == near(1.002 / 1.0045, rel=1e-4)
    leaking = biased(found, temperature=warm, **{"D1.monitor_dark_current": 50e-9})
    extra = 50e-9 * (2**3.5 - 1)
    assert (0.4e-3 - leaking["D1.optical_power"]) * 0.3 == near(extra, rel=2e-2)


def test_heat_at_constant_power() -> None:
    """Derived for this project by fixed-point iteration: 5 mW held at 85 °C take 54.37 mA, 91.44 °C inside."""
    found = model("laser-power", *COMPUTED, ("power  ", 'power = "5 mW"'))
    changes = {"temperature": 85 + ZERO_CELSIUS, "trim.temperature": 85 + ZERO_CELSIUS, "U3.open_loop_gain": 1e9}
    values = biased(found, **LOOSE, **changes, **{"R14": 500.0, "RV1": 1e3, "D1.monitor_dark_current": 0.0})
    assert float(values["D1.junction_temperature"]) - ZERO_CELSIUS == printed("91.44")
    assert float(values["D1.current"]) == printed("0.05437")
    assert float(values["D1.power"]) == near(5e-3, rel=1e-6)


def test_roll_over_at_constant_current_is_runaway_at_constant_power() -> None:
    """Derived for this project: at 85 °C 27.84 mW is the most, near 268 mA and 150.9 °C, where the loop factor is 1."""
    found = model("laser-power", *COMPUTED, ("power  ", 'power = "5 mW"'))
    currents = np.linspace(0.2, 0.35, 3001)
    given = {name: np.asarray(value) for name, value in found.nominal().items()}
    given["temperature"] = np.asarray(85 + ZERO_CELSIUS)
    room = {f"{name}.room": given[name] for name in ("D1.threshold_current", "D1.slope_efficiency")}
    values = {**given, **room, **lasing(given, found.request, currents), "needed_current": currents}
    peak = int(np.argmax(values["D1.power"]))
    assert currents[peak] == printed("0.268")
    assert np.asarray(values["D1.power"])[peak] * 1e3 == printed("27.84")
    assert runaway(values, found.request)[peak] == pytest.approx(1.0, abs=1e-3)


@pytest.mark.parametrize("power", ["27.7 mW", "27.9 mW", "30 mW"])
def test_beyond_roll_over_the_loop_runs_to_its_clamp(power: str) -> None:
    found = model("laser-power", *COMPUTED, ("power  ", f'power = "{power}"'))
    room = {"temperature": 85 + ZERO_CELSIUS, "trim.temperature": 85 + ZERO_CELSIUS}
    fitted = {"R14": 50.0, "RV1": 200.0, "D1.monitor_dark_current": 0.0, "R7": 0.1, "R1": 0.5, "R2": 10e3, "R3": 1e3}
    values = biased(found, **room, **fitted)
    assert bool(np.isinf(values["needed_current"])) == (float(power.split()[0]) > 27.84)


def test_loop_of_kolimbiris_6_7_through_this_network() -> None:
    """H. Kolimbiris, Ex. 6.7: 80 kΩ, 40 pF, 0.4 A/W, 0.025 W/A, 497.4 Hz; everything else of this network ideal."""
    found = model("laser-power")
    values = biased(found) | {
        "D1.monitor_gain": 0.01, "R10": 80e3, "C4": 40e-12, "R14": 0.5, "RV1.setting": 0.5, "R1": 0.1, "R2": 9e3,
        "R3": 1e3, "R6": 1e9, "U3.open_loop_gain": 1e7, "U3.gain_bandwidth": 1e9,
        "U3.second_pole": 1e15, "U1.open_loop_gain": 1e7, "Q1.transconductance": 100.0,
    }  # fmt: skip
    assert loop_gain(values, found.request) == near(0.01)
    evaluation = found.network.evaluate(values)
    assert response.bandwidth(evaluation)[0] == printed("497.4")
    assert stability.crossover_frequency(evaluation)[0] == near(497.3592, rel=1e-4)
    assert stability.phase_margin(evaluation)[0] == pytest.approx(90, abs=0.1)


@SIDES
def test_small_signals_follow_the_operating_point(changes: tuple[tuple[str, str], ...]) -> None:
    """The gain by which the monitor answers the integrator, against two operating points close together.

    Heat, which takes its time, is held: the loop sees the laser at its junction's temperature.
    """
    found = model("laser-power", *changes)
    conditions = found.request.conditions.model_copy(update={"sink_resistance": 0.0})
    held = Model(found.circuit, found.request.model_copy(update={"conditions": conditions}))

    def at(drift: float) -> dict[str, Any]:
        return biased(held, **{"D1.junction_to_case": 1e-9, "U2.drift": drift, "R16": 1e15})

    def off_the_rail(values: dict[str, Any], node: str) -> float:
        return float(values[f"node.{node}"]) - (float(values["node.rail"]) if changes == HIGH else 0.0)

    low, high = at(-1e-4), at(1e-4)
    mon, output = (off_the_rail(high, node) - off_the_rail(low, node) for node in ("mon", "power"))
    assert mon / output == near(float(loop_gain(at(0.0), held.request)), rel=1e-4)


@SIDES
def test_network_agrees_with_other_roads_at_random_values(changes: tuple[tuple[str, str], ...]) -> None:
    """lcapy for the transfer, a plain nodal matrix for loop gain and noise."""
    found = model("laser-power", *changes)
    random = np.random.default_rng(21)
    values = {
        name: float(np.asarray(value)) * float(random.uniform(0.5, 2))
        for name, value in biased(found).items()
        if name in found.network.inputs
    }
    frequencies = np.geomspace(10, 1e7, 5)
    expansion, evaluation = expand(found.topology), found.network.evaluate(values)
    ours = response.transfer_at(evaluation, frequencies[:, None])[:, 0]
    np.testing.assert_allclose(lcapy_transfer(expansion, values, frequencies), ours, rtol=1e-6)
    for frequency in frequencies:
        ratio = stability.return_ratio_at(evaluation, frequency)[0]
        assert ratio == near(return_ratio(expansion, values, frequency), rel=1e-6)
        density = Direct(expansion, values, frequency).density()
        assert noise.output_density(evaluation, frequency)[0] == near(density, rel=1e-6)


def test_the_high_side_is_the_low_side_upside_down() -> None:
    low, high = model("laser-power"), model("laser-power", *HIGH)
    even = {
        "U1.open_loop_gain": 1e12, "U3.open_loop_gain": 1e12, "L1": 1e-15, "L1.resistance": 1e-9, "R8": 1e-9,
    }  # fmt: skip
    values = [biased(found, **even) for found in (low, high)]
    for name in ("D1.current", "compliance_margin", "hard_on_current", "clamp_current", "D1.optical_power"):
        assert float(values[0][name]) == near(float(values[1][name]), rel=1e-9)
    rail = float(values[1]["node.rail"])
    for name in ("ref", "level", "mon", "trim", "power", "set", "sense", "control", "drive", "drain", "laser"):
        assert float(values[0][f"node.{name}"]) == near(rail - float(values[1][f"node.{name}"]), rel=1e-7)
    figures = [found.evaluate(found.nominal() | CHOSEN | even) for found in (low, high)]
    for name in ("loop_bandwidth", "phase_margin", "rise_time", "inner_phase_margin", "startup_time"):
        assert float(figures[0][name][0]) == near(float(figures[1][name][0]), rel=1e-6)


def test_loop_and_start_by_closed_forms() -> None:
    """The network's crossover is the integrator's; the monitor's resistor is loaded by R10."""
    found = model("laser-power")
    values = biased(found)
    evaluation = found.network.evaluate(values)
    total = CHOSEN["R14"] + float(values["RV1.setting"])
    loaded = float(loop_gain(values, found.request)) / (1 + total / CHOSEN["R10"])
    by_hand = loaded / (2 * np.pi * CHOSEN["R10"] * CHOSEN["C4"])
    assert stability.crossover_frequency(evaluation)[0] == near(by_hand, rel=1e-3)


@SIDES
def test_decks_agree_in_ngspice_at_nominal_and_two_corners(changes: tuple[tuple[str, str], ...]) -> None:
    rows = crosscheck(sized("laser-power", *changes), "ngspice")
    assert {row.scene for row in rows} >= {"nominal"}
    assert len({row.scene for row in rows}) == 3
    assert [row for row in rows if not row.ok] == []


@pytest.mark.parametrize("engine", ["ngspice", "neospice"])
def test_decks_of_the_worked_design_agree(engine: str) -> None:
    read = read_request(str(DESIGN), circuit_of=lambda name: load(name).request, circuits=CIRCUITS)
    assert [row for row in crosscheck(size(read, load("laser-power")), engine) if not row.ok] == []


@pytest.mark.parametrize("capacitance", ["220 pF", "1 nF", "10 nF"])
def test_a_start_from_none_in_ngspice_takes_the_time_told(capacitance: str) -> None:
    """The whole large-signal circuit: the reference comes up at once, the laser is dark until the integrator is there.

    No dark current, and at first just the voltage that R6 leaves across the reference's own resistance: the op amps of
    the decks have no rails, and would wind down far below them before the start.
    """
    dark = ("monitor_dark_current", 'monitor_dark_current = { min = "0 A", typ = "0 A", max = "50 nA" }')
    result = sized("laser-power", dark, ("", f'[fixed]\nC4 = "{capacitance}"'))
    scene = result.scenes[0]
    told, end = scene.expected["startup_time"], scene.values["U2.voltage"]
    start = -1.0005 * scene.values["node.rail"] * scene.values["U2.output_resistance"] / scene.values["R6"]
    lines = {
        "vr e2": f"vr e2 e1 dc {start:.9g} pulse({start:.9g} {end:.9g} 0 1e-5 1e-5 10 20)",
        "vsig ": "vsig sig inv dc 0",
        ".tran": f".tran 1e-5 {5 * told:.6g} 0 1e-5",
    }
    deck = deck_of(result, scene, "step").replace("\n+ ", " ").splitlines()
    found = run("\n".join(lines.get(line[:5], line) for line in deck) + "\n", "ngspice")["tran"]
    mon = np.asarray(found["v(mon)"])
    assert mon[-1] == near(float(scene.values["node.mon"]), rel=1e-3)
    late = found["time"][int(np.argmax(mon >= 0.95 * scene.values["node.mon"]))]
    assert told == near(float(late), rel=2e-2)


@SIDES
def test_the_drawing_joins_what_the_topology_joins(changes: tuple[tuple[str, str], ...]) -> None:
    assert drawing_faults(model("laser-power", *changes).topology) == []
