"""Servo against steady light: corner, range, noise, levels, both ends of the diode."""

from __future__ import annotations

from shutil import which

import numpy as np
import pytest

from opto_ckt.analyses import noise
from opto_ckt.analyses.response import transfer_at
from opto_ckt.constants import BOLTZMANN
from opto_ckt.errors import InputError
from opto_ckt.formulas import front_end
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.simulators import ENGINES as SIMULATORS
from opto_ckt.outputs.wiring import drawing_faults
from tests.circuits.sized import model, sized

ENGINES = [engine for engine in SIMULATORS if engine == "neospice" or which("ngspice")]
SERVO = (("", '[blocks]\nservo = { droop = "2 %" }'),)
ANODE = (("output  ", 'output = "anode"'),)
PARTS = {
    "R1": 20e3, "C1": 0.8e-12, "C8": 1e-7, "C9": 1e-7,
    "R30": 60e3, "R31": 1e5, "R32": 1e5, "C31": 2.2e-9, "C32": 2.2e-9, "C38": 1e-7, "C39": 1e-7,
}  # fmt: skip


def test_relations() -> None:
    constant = front_end.servo_time_constant(feedback_resistance=20e3, injection_resistance=60e3, corner=240.0)
    corner = front_end.servo_corner(feedback_resistance=20e3, injection_resistance=60e3, time_constant=constant)
    assert corner == pytest.approx(240.0)
    assert front_end.injection_resistance(headroom=3.3, current=55e-6) == pytest.approx(60e3)


def test_corner_is_that_of_the_closed_form() -> None:
    found = model("tia", *SERVO)
    figures = found.evaluate(found.nominal() | PARTS)
    expected = front_end.servo_corner(feedback_resistance=20e3, injection_resistance=60e3, time_constant=2.2e-4)
    assert figures["low_cutoff"][0] == pytest.approx(expected, rel=5e-3)


def test_its_resistor_adds_its_thermal_noise_current() -> None:
    found = model("tia", *SERVO)
    biased = found.biased(found.nominal() | PARTS)
    evaluation = found.evaluation(biased)
    gain = abs(transfer_at(evaluation, 1e5)[0]) / biased["D1.responsivity"]
    density = noise.density_by_generator(evaluation, 1e5)["R30 thermal"][0] / gain**2
    assert density == pytest.approx(4 * BOLTZMANN * biased["temperature"] / 60e3, rel=1e-3)


@pytest.mark.parametrize("changes", [(), ANODE], ids=["cathode", "anode"])
def test_output_is_held_and_the_light_goes_through_the_injection(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("tia", *SERVO, *changes)
    values = found.biased(found.nominal() | PARTS | {"U30.offset_voltage": 0.0, "U1.offset_voltage": 0.0})
    light = (
        values["D1.responsivity"] * values["signal.power"] + values["D1.ambient_current"] + values["D1.dark_current"]
    )
    sign = 1 if not changes else -1
    assert abs(values["node.amp"]) < 1e-4
    assert (values["node.injected"] - values["node.sum"]) / 60e3 == pytest.approx(sign * light, rel=2e-3)


def test_overload_leaves_ambient_light_out_until_the_range_ends() -> None:
    found = model("tia", *SERVO)
    values = found.nominal() | PARTS
    lanes = {name: np.broadcast_to(value, 3) for name, value in values.items()}
    overload = found.evaluate({**lanes, "signal.ambient": np.array([0.0, 1e-6, 40e-6])})["overload"]
    reach = found.biased(values)["servo.range"]
    responsivity = found.biased(values)["D1.responsivity"]
    assert (overload[0] - overload[1]) * responsivity <= 1.001e-6
    assert overload[2] == pytest.approx(
        (reach - 40e-6 - found.biased(values)["D1.dark_current"]) / responsivity, rel=1e-6
    )


@pytest.mark.parametrize("engine", ENGINES)
@pytest.mark.parametrize("changes", [(), ANODE], ids=["cathode", "anode"])
def test_decks_agree(changes: tuple[tuple[str, str], ...], engine: str) -> None:
    rows = crosscheck(sized("tia", *SERVO, *changes), engine)
    assert any(row.quantity == "level of injected" for row in rows)
    assert [row for row in rows if not row.ok] == []


@pytest.mark.parametrize("circuit", ["tia", "tia-tee"])
def test_the_drawing_joins_what_the_topology_joins(circuit: str) -> None:
    changes = SERVO if circuit == "tia" else (("", '[blocks]\nservo = { low_cutoff = "10 Hz" }'),)
    assert drawing_faults(sized(circuit, *changes).topology) == []


def test_a_single_supply_has_its_servo_around_the_level() -> None:
    single = (
        ("supply ", 'supply = { positive = "5 V", tolerance = "5 %" }\ninput_level = "1.5 V"'),
        ("reverse_bias", 'reverse_bias = "1.5 V"'),
        ("capacitance_bias", 'capacitance_bias = "1.5 V"'),
        ("output_swing", 'output_swing = { max = "1.5 V" }'),
    )
    result = sized("tia", *SERVO, *single)
    assert result.scenes[0].values["node.amp"] == pytest.approx(1.5, abs=2e-2)


def test_a_band_from_dc_is_refused() -> None:
    with pytest.raises(InputError, match="begins at dc"):
        sized("tia", ("bit_rate", 'band = { max = "5 MHz" }'), ("extinction_ratio", ""), ("", "[blocks]\nservo = {}"))
