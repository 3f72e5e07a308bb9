"""Servo with a transistor: range to the far rail, one direction, corner that follows the light, refusals."""

from __future__ import annotations

from shutil import which

import numpy as np
import pytest

from opto_ckt.analyses import noise
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.response import transfer_at
from opto_ckt.analyses.symbolic import lcapy_transfer
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.errors import InputError
from opto_ckt.formulas import front_end
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.simulators import ENGINES as SIMULATORS
from opto_ckt.outputs.wiring import drawing_faults
from tests.circuits.sized import model, sized

ENGINES = [engine for engine in SIMULATORS if engine == "neospice" or which("ngspice")]
TABLES = """
[transistor]
kind                  = "{kind}"
current_gain          = {{ min = "150", typ = "300", max = "500" }}
base_emitter_voltage  = {{ min = "0.58 V", typ = "0.65 V", max = "0.72 V" }}
saturation_voltage    = "0.2 V"
transition_frequency  = "200 MHz"
collector_capacitance = "3 pF"
base_resistance       = "50 Ω"
current_max           = "100 mA"
voltage_max           = "45 V"
power_max             = "0.25 W"
power_max_at          = "ambient"
junction_to_ambient   = "500 K/W"
junction_max          = "150 °C"

[second_amplifier]
gain_bandwidth           = "5 MHz"
open_loop_gain           = "100 dB"
common_capacitance       = "4 pF"
differential_capacitance = "2 pF"
voltage_noise            = "15 nV/√Hz"
current_noise            = "2 fA/√Hz"
output_resistance        = "100 Ω"
offset_voltage           = {{ typ = "0.2 mV", max = "1 mV" }}
bias_current             = {{ typ = "1 pA", max = "20 pA" }}
slew_rate                = "5 V/µs"
swing_to_positive        = "{swing}"
swing_to_negative        = "{swing}"
output_current_max       = "20 mA"
quiescent_current        = "1 mA"
supply_min               = "2.5 V"
supply_max               = "12 V"

[blocks]
servo = {{ droop = "2 %", injection = "transistor" }}
"""


def asked(kind: str, swing: str = "0.05 V") -> tuple[tuple[str, str], ...]:
    """The tables, for a kind of transistor."""
    return (("", TABLES.format(kind=kind, swing=swing)),)


CATHODE = asked("pnp")
ANODE = (*asked("npn"), ("output  ", 'output = "anode"'))
SINGLE = (
    *CATHODE,
    ("supply ", 'supply = { positive = "5 V", tolerance = "5 %" }\ninput_level = "1.5 V"'),
    ("reverse_bias", 'reverse_bias = "1.5 V"'),
    ("capacitance_bias", 'capacitance_bias = "1.5 V"'),
    ("output_swing", 'output_swing = { max = "1.5 V" }'),
)
KINDS = {"cathode": CATHODE, "anode": ANODE}
kinds = pytest.mark.parametrize("changes", KINDS.values(), ids=KINDS.keys())
PARTS = {
    "R1": 20e3, "C1": 0.8e-12, "C8": 1e-7, "C9": 1e-7,
    "R30": 68e3, "R31": 1e5, "C32": 2.2e-9, "C38": 1e-7,
}  # fmt: skip


@kinds
def test_network_agrees_with_lcapy_at_random_values(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("tia", *changes)
    random = np.random.default_rng(8)
    biased = found.biased(found.nominal() | PARTS)
    values = {
        name: float(np.asarray(biased[name])) * float(random.uniform(0.6, 1.6)) for name in sorted(found.network.inputs)
    }
    frequencies = np.geomspace(1e1, 1e8, 7)
    ours = transfer_at(found.network.evaluate(values), frequencies[:, None])[:, 0]
    np.testing.assert_allclose(lcapy_transfer(expand(found.topology), values, frequencies), ours, rtol=1e-6)


@kinds
def test_all_kinds_are_met_and_drawn(changes: tuple[tuple[str, str], ...]) -> None:
    result = sized("tia", *changes)
    assert result.verdict == "met"
    assert drawing_faults(result.topology) == []


@pytest.mark.parametrize("engine", ENGINES)
@kinds
def test_prediction_and_simulation_agree_with_q30_on_and_off(changes: tuple[tuple[str, str], ...], engine: str) -> None:
    result = sized("tia", *changes)
    assert [row for row in crosscheck(result, engine) if not row.ok] == []
    currents = [float(scene.values["Q30.drain_current"]) for scene in result.scenes]
    assert max(currents) > 1e-6


@pytest.mark.parametrize(("changes", "sign"), [(CATHODE, 1), (ANODE, -1)], ids=["cathode", "anode"])
def test_the_light_goes_through_the_transistor(changes: tuple[tuple[str, str], ...], sign: int) -> None:
    """Ohm's law down R30 from the rail, then the base-emitter voltage, then what is left for the base."""
    found = model("tia", *changes)
    values = found.biased(found.nominal() | PARTS)
    light = float(values["D1.responsivity"] * values["signal.power"] + values["D1.ambient_current"])
    current = float(values["Q30.drain_current"])
    assert current == pytest.approx(light, rel=5e-2)
    emitter = current * 301 / 300
    down = sign * (5.0 * sign - float(values["node.injected"])) - emitter * PARTS["R30"]
    thermal = BOLTZMANN * 298.15 / ELEMENTARY_CHARGE
    room = 5.0 - 0.05 - 0.65
    assert down == pytest.approx(0.65 + thermal * np.log(emitter / (room / PARTS["R30"])), abs=1e-6)


def test_the_corner_follows_the_light() -> None:
    found = model("tia", *CATHODE)
    lanes = {name: np.broadcast_to(value, 2) for name, value in (found.nominal() | PARTS).items()}
    lit = {**lanes, "signal.power": np.array([1e-7, 4e-5]), "signal.ambient": np.array([0.0, 0.0])}
    cutoff = found.evaluate(lit)["low_cutoff"]
    biased = found.biased(lit)
    expected = front_end.servo_corner(
        feedback_resistance=20e3,
        injection_resistance=PARTS["R30"] + 1 / biased["Q30.transconductance"],
        time_constant=PARTS["R31"] * PARTS["C32"],
    )
    np.testing.assert_allclose(cutoff, expected, rtol=1e-2)
    assert cutoff[0] < 0.3 * cutoff[1]


def test_without_light_nothing_holds_the_output() -> None:
    found = model("tia", *CATHODE)
    dark = {"signal.power": 0.0, "signal.ambient": 0.0, "U1.offset_voltage": -2e-3, "U30.offset_voltage": 0.0}
    values = found.biased(found.nominal() | PARTS | dark)
    assert float(values["Q30.drain_current"]) <= 1e-12
    assert float(values["node.amp"]) == pytest.approx(-2e-3, rel=0.05)
    assert float(values["servo.offset"]) == pytest.approx(float(values["node.amp"]), rel=0.05)


def test_the_range_ends_where_u30_comes_to_ground() -> None:
    found = model("tia", *CATHODE)
    values = found.biased(found.nominal() | PARTS)
    assert float(values["servo.range"]) == pytest.approx((5.0 - 0.05 - 0.65) / PARTS["R30"] * 300 / 301, rel=1e-9)


def test_its_noise_is_that_of_the_degenerated_transistor() -> None:
    """Thermal noise of R30 divided between R30 and the emitter; collector shot noise, the part that R30 leaves."""
    found = model("tia", *CATHODE)
    biased = found.biased(found.nominal() | PARTS)
    evaluation = found.evaluation(biased)
    gain = float(np.abs(transfer_at(evaluation, 1e4)[0]) / biased["D1.responsivity"])
    density = noise.density_by_generator(evaluation, 1e4)
    emitter = 1 / float(biased["Q30.transconductance"])
    thermal = 4 * BOLTZMANN * 298.15 / PARTS["R30"] * (PARTS["R30"] / (PARTS["R30"] + emitter)) ** 2
    assert float(density["R30 thermal"][0]) / gain**2 == pytest.approx(thermal, rel=2e-2)
    shot = 2 * ELEMENTARY_CHARGE * float(biased["Q30.drain_current"]) * (emitter / (PARTS["R30"] + emitter)) ** 2
    assert float(density["Q30 channel"][0]) / gain**2 == pytest.approx(shot, rel=5e-2)


@pytest.mark.parametrize(
    ("changes", "told"),
    [
        ((("", '[blocks]\nservo = { injection = "transistor" }'),), "needs a table [transistor], pnp"),
        (asked("npn"), "'npn' cannot take away the light of a detector by its cathode; pnp does"),
        (asked("pnp", "1.3 V"), "swing_to_positive ≤"),
        (SINGLE, "an input at 0 V is needed"),
    ],
)
def test_what_does_not_go_is_refused(changes: tuple[tuple[str, str], ...], told: str) -> None:
    with pytest.raises(InputError) as refused:
        sized("tia", *changes)
    assert told in str(refused.value)
