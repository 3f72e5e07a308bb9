"""Two transistors with shunt feedback: operating point, noise, sizing at corners, refusals, simulators."""

from __future__ import annotations

from shutil import which

import numpy as np
import pytest
from scipy.optimize import brentq, minimize_scalar

from opto_ckt.analyses import noise
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.response import transfer_at
from opto_ckt.analyses.symbolic import lcapy_transfer
from opto_ckt.circuits.receivers.tia_discrete.operation import junction, resting, top
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.errors import InfeasibleError, InputError
from opto_ckt.formulas import shunt_pair
from opto_ckt.outputs.crosscheck import crosscheck
from opto_ckt.outputs.simulators import ENGINES as SIMULATORS
from opto_ckt.outputs.wiring import drawing_faults
from tests.circuits.sized import model, sized

ENGINES = [engine for engine in SIMULATORS if engine == "neospice" or which("ngspice")]
ANODE = (("output  ", 'output = "anode"'),)
RAILS = (("supply  ", 'supply = { positive = "3.3 V", negative = "-3.3 V", tolerance = "5 %" }'),)
AVALANCHE = (
    ("responsivity  ", 'responsivity = "0.9 A/W"\nresponsivity_gain = "1"\nionisation_ratio = 0.45\n'
     'multiplied_dark_current = "2 nA"\nbreakdown_voltage = "30 V"\nbreakdown_temperature = "20 mV/K"\n'
     'gain_points = [ { bias = "10 V", gain = "3" }, { bias = "20 V", gain = "6" }, { bias = "25 V", gain = "12" } ]\n'
     'gain = "5"'),
    ("reverse_voltage_max", 'reverse_voltage_max = "30 V"'),
    ("reverse_bias ", ""),
    ("sensitivity", ""),
    ("overload ", ""),
    ("power   ", 'power = { typ = "1 µW", max = "10 µW" }'),
)  # fmt: skip
DC = (("coupling ", 'coupling = "dc"'),)
KINDS = {"cathode": (), "anode": ANODE, "dc": DC, "two rails": RAILS, "two rails, anode": (*RAILS, *ANODE)}
kinds = pytest.mark.parametrize("changes", KINDS.values(), ids=KINDS.keys())
CHOSEN = {"R1": 6.04e3, "C1": 2e-14, "R2": 28.7e3, "R3": 432.0, "C8": 1e-7, "C9": 1e-7, "C40": 15e-9, "R40": 1e4}


@kinds
def test_network_agrees_with_lcapy_at_random_values(changes: tuple[tuple[str, str], ...]) -> None:
    found = model("tia-discrete", *changes)
    random = np.random.default_rng(7)
    biased = found.biased(found.nominal() | CHOSEN)
    values = {
        name: float(np.asarray(biased[name])) * float(random.uniform(0.7, 1.4)) for name in sorted(found.network.inputs)
    }
    frequencies = np.geomspace(1e4, 1e9, 7)
    ours = transfer_at(found.network.evaluate(values), frequencies[:, None])[:, 0]
    np.testing.assert_allclose(lcapy_transfer(expand(found.topology), values, frequencies), ours, rtol=1e-6)


@kinds
def test_all_kinds_meet_what_is_asked_and_are_drawn(changes: tuple[tuple[str, str], ...]) -> None:
    result = sized("tia-discrete", *changes)
    assert result.verdict == "met"
    assert drawing_faults(result.topology) == []


@pytest.mark.parametrize("engine", ENGINES)
@kinds
def test_prediction_and_simulation_agree(changes: tuple[tuple[str, str], ...], engine: str) -> None:
    assert [row for row in crosscheck(sized("tia-discrete", *changes), engine) if not row.ok] == []


@pytest.mark.parametrize("engine", ENGINES)
def test_prediction_and_simulation_agree_for_an_avalanche_detector(engine: str) -> None:
    assert [row for row in crosscheck(sized("tia-discrete", *AVALANCHE), engine) if not row.ok] == []


@pytest.mark.parametrize("drawn", [0.0, 5e-6, 80e-6, -5e-6])
def test_currents_add_up_at_every_node(drawn: float) -> None:
    """Kirchhoff's law at output, collector and base, solved by bisection over the base current."""
    found = model("tia-discrete")
    values = found.biased(found.nominal() | CHOSEN)
    first, second = float(junction(values, "Q1")), float(junction(values, "Q2"))
    gain, follower = float(values["Q1.current_gain"]), float(values["Q2.current_gain"])

    def excess(base: float) -> float:
        through = base + drawn + first / float(values["RB"])
        amp = first + through * CHOSEN["R1"]
        emitter = amp / CHOSEN["R3"] + through
        down = (float(values["supply.positive"]) - amp - second) / CHOSEN["R2"]
        return down - gain * base - emitter / (follower + 1)

    base = brentq(excess, 1e-12, 1e-3, xtol=1e-18)
    point = resting(values, found.request, drawn)
    assert float(point["collector"]) == pytest.approx(gain * base, rel=1e-9)
    assert float(point["amp"]) == pytest.approx(first + (base + drawn + first / float(values["RB"])) * CHOSEN["R1"])


def test_with_q1_off_the_output_rests_where_r2_and_the_follower_leave_it() -> None:
    found = model("tia-discrete")
    values = found.biased(found.nominal() | CHOSEN)
    base = (5 - 0.76 - float(top(values, found.request))) / 28.7e3
    assert float(top(values, found.request)) == pytest.approx(base * 121 * 432.0, rel=1e-9)


def test_quietest_current_is_the_least_of_the_two_shot_noises() -> None:
    """∫ of base shot and of collector shot behind (2πfC/g_m)², minimised by search instead of by the closed form."""
    capacitance, band, gain, temperature = 0.9e-12, 110e6, 120.0, 298.15
    thermal = BOLTZMANN * temperature / ELEMENTARY_CHARGE

    def total(logarithm: float) -> float:
        current = float(np.exp(logarithm))
        rises = (2 * np.pi * capacitance * thermal / current) ** 2 * band**3 / 3
        return 2 * ELEMENTARY_CHARGE * current * (band / gain + rises)

    least = minimize_scalar(total, bounds=(np.log(1e-6), np.log(1e-1)), method="bounded", options={"xatol": 1e-10})
    ours = shunt_pair.quietest_current(
        capacitance=capacitance, bandwidth=band, current_gain=gain, temperature=temperature
    )
    assert ours == pytest.approx(float(np.exp(least.x)), rel=1e-5)


def test_noise_at_low_frequency_is_that_of_the_closed_forms() -> None:
    """Base current and R1 through R1; collector current as the base voltage that it takes, over r_π and 1."""
    found = model("tia-discrete", ("resistance ", ""), ("coupling ", ""))
    values = found.biased(found.nominal() | CHOSEN)
    evaluation = found.evaluation(values)
    density = {name: each[0] for name, each in noise.density_by_generator(evaluation, 1e3).items()}
    through = float(found.circuit.figures(values, evaluation, found.request)["transimpedance"][0])
    base, collector = (2 * ELEMENTARY_CHARGE * float(values[f"Q1.{name}_current"]) for name in ("control", "drain"))
    turned = 1 / float(values["Q1.transconductance"]) + through / float(values["Q1.current_gain"])
    assert density["Q1 control"] == pytest.approx(base * through**2, rel=0.01)
    assert density["Q1 channel"] == pytest.approx(collector * turned**2, rel=0.03)
    thermal = 4 * BOLTZMANN * 298.15 / CHOSEN["R1"]
    assert density["R1 thermal"] == pytest.approx(thermal * through**2, rel=0.03)


def test_transimpedance_is_r1_less_what_the_finite_gain_leaves() -> None:
    """R1 A/(1 + A) with R1 over r_π beside it: two transistors, two stages of division."""
    found = model("tia-discrete", ("resistance ", ""), ("coupling ", ""))
    values = found.biased(found.nominal() | CHOSEN)
    figure = float(found.circuit.figures(values, found.evaluation(values), found.request)["transimpedance"][0])
    first, second = (float(values[f"{ref}.transconductance"]) for ref in ("Q1", "Q2"))
    gain = float(values["Q2.current_gain"])
    loaded = 1 / (1 / CHOSEN["R2"] + 1 / (gain / second + (gain + 1) / (1 / CHOSEN["R3"] + 1 / CHOSEN["R1"])))
    ahead = first * loaded * (1 - 1 / (second * 402.0))  # 402 Ω: R3 beside R1
    input_conductance = first / float(values["Q1.current_gain"])
    closed = CHOSEN["R1"] * ahead / (1 + ahead + CHOSEN["R1"] * input_conductance)
    assert figure == pytest.approx(closed, rel=2e-3)


def test_feedback_follows_what_binds() -> None:
    assert "most light binds" in _reason("R1")
    assert "bandwidth binds" in _reason("R1", ("power   ", 'power = "1 µW"'), ("overload ", ""))


def _reason(ref: str, *changes: tuple[str, str]) -> str:
    part = next(part for part in sized("tia-discrete", *changes).parts if part.ref == ref)
    return part.formula


def test_a_shorted_detector_is_said_to_need_a_resistor_unless_there_is_one() -> None:
    bare = {fault.case: fault for fault in sized("tia-discrete").faults}
    assert not bare["detector short"].ok
    assert "put a resistor" in bare["detector short"].result
    filtered = sized("tia-discrete", ("", '[blocks]\nbias_filter = { droop = "0.2 V", corner = "100 kHz" }'))
    assert all(fault.ok for fault in filtered.faults)


@pytest.mark.parametrize(
    ("changes", "told"),
    [
        ((("kind  ", 'kind = "pnp"'),), "both transistors are npn"),
        ((("supply  ", 'supply = { positive = "9 V", tolerance = "5 %" }'),), "above voltage_max 8.00 V"),
        ((("supply  ", 'supply = { positive = "1.5 V", tolerance = "5 %" }'),), "two base-emitter voltages"),
        ((("board_capacitance", 'board_capacitance = "0.15 pF"\ninput_level = "1 V"'),), "sets the level of the input"),
    ],
)
def test_what_does_not_go_is_refused(changes: tuple[tuple[str, str], ...], told: str) -> None:
    with pytest.raises(InputError) as refused:
        sized("tia-discrete", *changes)
    assert told in str(refused.value)


def test_well_below_what_is_said_to_be_in_reach_all_is_met() -> None:
    with pytest.raises(InfeasibleError) as refused:
        sized("tia-discrete", ("bandwidth ", 'bandwidth = { min = "6 GHz" }'), ("sensitivity", ""))
    reached = float(next(way for way in refused.value.remedies if way.startswith("bandwidth")).split()[3])
    near = f'bandwidth = {{ min = "{0.3 * reached:.2f} GHz" }}'
    result = sized("tia-discrete", ("bandwidth ", near), ("sensitivity", ""))
    assert result.verdict == "met"


def test_more_light_than_the_levels_stand_is_missed_and_said() -> None:
    result = sized("tia-discrete", ("power   ", 'power = { typ = "5 µW", max = "3 mW" }'), ("overload ", ""))
    assert result.verdict == "missed"
