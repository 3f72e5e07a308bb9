"""Eye opening against closed forms of one pole and against the worst of all patterns, played through the network."""

from __future__ import annotations

from itertools import product

import numpy as np
import pytest

from opto_ckt.analyses import response
from opto_ckt.analyses.eye import FAINT, opening
from opto_ckt.analyses.network import Network
from opto_ckt.analyses.network.primitives import Expansion, Primitive


def _ladder(*sections: tuple[str, str]) -> Network:
    """Series resistors and shunt capacitors, driven by a current into the first capacitor's node."""
    primitives, node = [], "n0"
    for index, (resistor, capacitor) in enumerate(sections):
        if index:
            following = f"n{index}"
            primitives.append(Primitive("R", resistor, (node, following), lambda v, name=resistor: v[name]))
            node = following
        else:
            primitives.append(Primitive("R", resistor, (node, "0"), lambda v, name=resistor: v[name]))
        primitives.append(Primitive("C", capacitor, (node, "0"), lambda v, name=capacitor: v[name]))
    return Network(Expansion(tuple(primitives), (), ("0", "n0"), lambda v: 1.0, (node, "0")))


@pytest.mark.parametrize("share", [0.1, 0.35, 1.0])
def test_one_pole_leaves_what_its_step_has_reached_twice_less_one(share):
    """A one after zeros reaches 1 - e^(-T/RC) by its end; ones before a zero have left as much: 1 - 2 e^(-T/RC)."""
    bit = 1e-9 / share
    evaluation = _ladder(("R1", "C1")).evaluate({"R1": 1e3, "C1": 1e-12})
    assert opening(evaluation, bit)[0] == pytest.approx(1 - 2 * np.exp(-bit / 1e-9), abs=1e-4)


@pytest.mark.parametrize(("share", "penalty"), [(0.5, 0.39257), (0.7, 0.10816), (1.0, 0.016251)])
def test_penalty_of_one_pole(share: float, penalty: float) -> None:
    """-10 log(1 - 2 exp(-2π f_3/B)), computed here; the peak of a lone bit as in an ngspice run."""
    evaluation = _ladder(("R1", "C1")).evaluate({"R1": 1e3, "C1": 1e-12})
    bit = share * 2 * np.pi * 1e-9
    assert -10 * np.log10(opening(evaluation, bit)[0]) == pytest.approx(penalty, rel=1e-3)


def test_no_pattern_of_ten_bits_closes_the_eye_further():
    """Every pattern of ten bits through the exact step response; the worst lies at the opening, never below it."""
    evaluation = _ladder(("R1", "C1"), ("R2", "C2"), ("R3", "C3")).evaluate(
        {"R1": 1e3, "C1": 1e-12, "R2": 2e3, "C2": 0.3e-12, "R3": 500.0, "C3": 0.8e-12}
    )
    bit = 8e-9
    gain = response.dc_gain(evaluation)[0]
    instants = bit * (np.arange(32) + 1.0) / 32
    bits = np.array(list(product((0, 1), repeat=10)))
    widest = -np.inf
    for delay in range(3):
        for instant in instants:
            ages = instant + bit * np.arange(12)
            step = response.step_response(evaluation, ages[:, None])[:, 0] / gain
            pulse = np.diff(step, prepend=0.0)[:10]
            level = bits @ pulse
            ones, zeros = level[bits[:, delay] == 1], level[bits[:, delay] == 0]
            widest = max(widest, ones.min() - zeros.max())
    found = float(opening(evaluation, bit)[0])
    assert 0 < found < 1
    assert found == pytest.approx(widest, abs=2e-3)
    assert found <= widest + FAINT


def test_a_shut_eye_is_negative():
    evaluation = _ladder(("R1", "C1")).evaluate({"R1": 1e3, "C1": 1e-12})
    assert opening(evaluation, 0.3e-9)[0] < 0


def test_a_coupling_capacitor_costs_what_a_run_sags() -> None:
    """High-pass behind one pole far above the bit rate: of a full eye each of the run's other bits takes its share."""
    primitives = (
        Primitive("R", "R1", ("n0", "0"), lambda v: v["R1"]),
        Primitive("C", "C1", ("n0", "n1"), lambda v: v["C1"]),
        Primitive("R", "R2", ("n1", "0"), lambda v: v["R2"]),
        Primitive("C", "C2", ("n1", "0"), lambda v: v["C2"]),
    )
    network = Network(Expansion(primitives, (), ("0", "n0"), lambda v: -1.0, ("n1", "0")))
    evaluation = network.evaluate({"R1": 1.0, "C1": 1e-6, "R2": 1e3, "C2": 1e-12})
    bit, run = 1e-7, 20
    reference = np.abs(response.transfer_at(evaluation, 1e6))
    sag = -np.expm1(-bit / 1.001e-3)
    found = float(opening(evaluation, bit, run, reference)[0])
    assert found == pytest.approx(1 - run * sag, abs=2e-4)
