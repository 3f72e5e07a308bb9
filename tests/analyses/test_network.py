from __future__ import annotations

from fractions import Fraction

import numpy as np
import pytest
from hypothesis import given, settings
from hypothesis import strategies as st

from opto_ckt.analyses import noise, response, stability
from opto_ckt.analyses.network import Expansion, Network, NoiseGenerator, Primitive
from tests.analyses.direct import Direct, return_ratio
from tests.analyses.networks import (
    RECEIVER,
    ladder,
    lane,
    loop_of_poles,
    low_pass,
    named,
    receiver,
    resonator,
    scattered,
    single_pole_receiver,
)

FREQUENCIES = np.array([1.0, 1e3, 3e5, 2e6, 1.7e7, 4e8, 1e10])


@pytest.mark.parametrize("seed", range(3))
def test_receiver_agrees_with_plain_nodal_analysis(seed):
    values = scattered(RECEIVER, 5, seed, spread=3)
    evaluation = Network(receiver()).evaluate(values)
    transfer = response.transfer_at(evaluation, FREQUENCIES[:, None])
    ratio = stability.return_ratio_at(evaluation, FREQUENCIES[:, None])
    for number in range(5):
        own = lane(values, number)
        for point, frequency in enumerate(FREQUENCIES):
            assert transfer[point, number] == pytest.approx(Direct(receiver(), own, frequency).transfer(), rel=1e-9)
            assert ratio[point, number] == pytest.approx(return_ratio(receiver(), own, frequency), rel=1e-9)


def test_every_noise_transfer_agrees_with_plain_nodal_analysis():
    evaluation = Network(receiver()).evaluate(RECEIVER)
    for generator, white in zip(receiver().generators, evaluation.generators.white, strict=True):
        density = generator.density(RECEIVER)
        for frequency in FREQUENCIES:
            x = (2 * np.pi * frequency / evaluation.frequency_scale) ** 2
            above, below = (np.polyval(power[::-1, 0], x) for power in (white, evaluation.denominator_power))
            expected = density * abs(Direct(receiver(), RECEIVER, frequency).output(generator.nodes)) ** 2
            assert above / below == pytest.approx(expected, rel=1e-9), generator.label


def test_inductor_ammeter_and_voltage_gain():
    values = {"R": 3.0, "L": 1e-6, "C": 1e-9, "corner": 0.0}
    evaluation = Network(resonator()).evaluate(values)
    s = 2j * np.pi * 5e6
    expected = 1 / (1 + s * 3.0 * 1e-9 + s**2 * 1e-15)
    assert response.transfer_at(evaluation, 5e6)[0] == pytest.approx(expected, rel=1e-12)
    assert evaluation.order == 2


def test_loop_can_be_opened_at_a_voltage_gain():
    expansion = single_pole_receiver()
    values = {
        "input": 23e-12,
        "R1": 1e5,
        "C1": 0.5e-12,
        "gain_bandwidth": 230e6,
        "temperature": 300.0,
        "voltage_noise": 0.0,
    }
    at_buffer = Expansion(expansion.primitives, (), expansion.input, expansion.gain, expansion.output, "buffer")
    for frequency in (1e4, 1e6, 1e8):
        expected = return_ratio(at_buffer, values, frequency)
        ratio = stability.return_ratio_at(Network(at_buffer).evaluate(values), frequency)[0]
        assert ratio == pytest.approx(expected, rel=1e-12)
        same = stability.return_ratio_at(Network(expansion).evaluate(values), frequency)[0]
        assert ratio == pytest.approx(same, rel=1e-12)


def test_output_and_input_between_two_nodes_with_gain():
    expansion = receiver()
    floating = Expansion(
        expansion.primitives, (), ("diode", "sum"), lambda v: 0.6 * v["R1"], ("amp", "diode"), expansion.loop
    )
    evaluation = Network(floating).evaluate(RECEIVER)
    for frequency in FREQUENCIES:
        expected = Direct(floating, RECEIVER, frequency).transfer()
        assert response.transfer_at(evaluation, frequency)[0] == pytest.approx(expected, rel=1e-9)


@settings(deadline=None, max_examples=40)
@given(st.integers(1, 7), st.integers(0, 10**6))
def test_passive_ladder_is_stable_with_known_gain(sections, seed):
    generator = np.random.default_rng(seed)
    values = {f"R{n}": 10 ** generator.uniform(1, 9) for n in range(sections)}
    values |= {f"C{n}": 10 ** generator.uniform(-14, -6) for n in range(sections + 1)}
    values["load"] = 10 ** generator.uniform(1, 9)
    evaluation = Network(ladder(sections)).evaluate(values)
    assert evaluation.stable.all()
    assert evaluation.order == sections + 1
    assert response.dc_gain(evaluation)[0] == pytest.approx(values["load"], rel=1e-12)
    assert (response.poles(evaluation).real < 0).all()
    assert 0 < response.bandwidth(evaluation)[0] < np.inf


@pytest.mark.parametrize(("resistance", "corner"), [(1e9, 10.0), (50.0, 10e9), (1e9, 10e9), (50.0, 10.0)])
def test_high_order_keeps_its_range(resistance, corner):
    sections = 13
    values = {f"R{n}": resistance for n in range(sections)} | {"load": resistance}
    values |= {f"C{n}": 1 / (2 * np.pi * corner * resistance) for n in range(sections + 1)}
    evaluation = Network(ladder(sections)).evaluate(values)
    assert evaluation.order == 14
    assert evaluation.stable.all()
    for frequency in (corner / 100, corner, corner * 10):
        expected = Direct(ladder(sections), values, frequency).transfer()
        assert response.transfer_at(evaluation, frequency)[0] == pytest.approx(expected, rel=1e-9)


def test_nothing_is_lost_to_rounding_beside_a_huge_resistance():
    """Values that float to 1 part in 1e16 of each other, against exact fractions."""
    values = {"R0": 1e-3, "R1": 1e16, "load": 7e14, "C0": 1e-12, "C1": 2e-12, "C2": 3e-12}
    evaluation = Network(ladder(2)).evaluate(values)
    exact = {name: Fraction(value) for name, value in values.items()}
    g0, g1, g2 = (1 / exact[name] for name in ("R0", "R1", "load"))
    c0, c1, c2 = (exact[f"C{n}"] for n in range(3))
    determinant = [
        g0 * g1 * g2,
        c0 * (g0 * g1 + g0 * g2 + g1 * g2) + c1 * g0 * (g1 + g2) + c2 * g0 * g1,
        c0 * c1 * (g1 + g2) + c0 * c2 * (g0 + g1) + c1 * c2 * g0,
        c0 * c1 * c2,
    ]
    scale = evaluation.frequency_scale
    for order in range(1, 4):
        found = evaluation.denominator[order, 0] / evaluation.denominator[0, 0] / scale**order
        assert found == pytest.approx(float(determinant[order] / determinant[0]), rel=1e-14)


def test_capacitor_loop_does_not_raise_the_order():
    around = [
        Primitive("C", f"C{n}", nodes, named("C")) for n, nodes in enumerate((("a", "b"), ("a", "0"), ("b", "0")))
    ]
    resistors = [Primitive("R", "Ra", ("a", "0"), named("R")), Primitive("R", "Rb", ("b", "0"), named("R"))]
    expansion = Expansion((*around, *resistors), (), ("0", "a"), lambda v: 1.0, ("b", "0"))
    assert Network(expansion).evaluate({"C": 1e-12, "R": 1e3}).order == 2


def test_leading_term_that_cancels_for_all_values_is_dropped():
    """A transconductance that copies the capacitor's resistor negatively: 1/R - 1/R leaves no order at all."""
    expansion = Expansion(
        (
            Primitive("C", "C", ("a", "b"), named("C")),
            Primitive("R", "R", ("b", "0"), named("R")),
            Primitive("G", "G", ("b", "0", "b", "0"), lambda v: -1 / v["R"]),
            Primitive("R", "load", ("a", "0"), named("R")),
            Primitive("R", "other", ("b", "0"), named("R2")),
        ),
        (),
        ("0", "a"),
        lambda v: 1.0,
        ("b", "0"),
    )
    evaluation = Network(expansion).evaluate({"C": 1e-9, "R": 3e3, "R2": 7e3})
    expected = Direct(expansion, {"C": 1e-9, "R": 3e3, "R2": 7e3}, 1e4).transfer()
    assert response.transfer_at(evaluation, 1e4)[0] == pytest.approx(expected, rel=1e-12)
    bare = Expansion(expansion.primitives[:-1], (), expansion.input, expansion.gain, expansion.output)
    assert Network(bare).evaluate({"C": 1e-9, "R": 3e3}).order == 1
    assert Network(bare).evaluate({"C": 1e-9, "R": 3e3}).denominator[0, 0] == 0


def test_lanes_of_different_order_stand_side_by_side():
    values = RECEIVER | {"C2": np.array([33e-12, 0.0, 33e-12]), "C1": np.array([1e-12, 1e-12, 0.0])}
    together = Network(receiver()).evaluate(values)
    for number in range(3):
        alone = Network(receiver()).evaluate(lane(values, number))
        for figure in (
            response.bandwidth,
            response.peaking,
            response.rise_time,
            response.overshoot,
            stability.phase_margin,
        ):
            assert figure(together)[number] == pytest.approx(figure(alone)[0], rel=1e-6), figure.__name__
        assert together.stable[number] == alone.stable[0]


def test_floats_are_broadcast_and_blocks_make_no_difference():
    network = Network(receiver())
    lanes = 5000
    feedback = np.linspace(0.5e-12, 2e-12, lanes)
    evaluation = network.evaluate(RECEIVER | {"C1": feedback})
    assert evaluation.lanes == lanes
    wide = response.bandwidth(evaluation)
    for number in (0, 2047, 2048, 4999):
        alone = network.evaluate(RECEIVER | {"C1": float(feedback[number])})
        assert wide[number] == pytest.approx(response.bandwidth(alone)[0], rel=1e-10)


def test_inputs_name_what_is_needed_and_missing_ones_are_told():
    network = Network(receiver())
    assert network.inputs == set(RECEIVER)
    with pytest.raises(KeyError, match="values are missing: C1, R1"):
        network.evaluate({name: value for name, value in RECEIVER.items() if name not in ("R1", "C1")})
    assert network.evaluate(RECEIVER | {"other": "anything"}).lanes == 1


def test_lanes_must_match():
    network = Network(low_pass())
    with pytest.raises(ValueError, match=r"[23] lanes, where other values have [23]"):
        network.evaluate({"R": np.ones(2), "C": np.ones(3)})
    with pytest.raises(ValueError, match="2 axes"):
        network.evaluate({"R": np.ones((2, 2)), "C": 1.0})


def test_dead_values_make_dead_lanes_only():
    values = {"R": np.array([1e3, 0.0, np.nan, 1e3]), "C": 1e-9}
    bandwidth = response.bandwidth(Network(low_pass()).evaluate(values))
    expected = 1 / (2 * np.pi * 1e-6)
    assert bandwidth[[0, 3]] == pytest.approx(expected, rel=1e-12)
    assert not np.isfinite(bandwidth[[1, 2]]).any()


def _small(*primitives: Primitive, loop: str | None = None, output: tuple[str, str] = ("a", "0")) -> Expansion:
    return Expansion(primitives, (), ("0", "a"), lambda v: 1.0, output, loop)


R = Primitive("R", "R", ("a", "0"), named("R"))


@pytest.mark.parametrize(
    ("expansion", "message"),
    [
        (_small(R, Primitive("C", "R", ("a", "0"), named("C"))), "share the name 'R'"),
        (_small(R, loop="U1"), "opened at 'U1', which is no primitive"),
        (_small(R, loop="R"), "opened at a G or E primitive; R is of kind R"),
        (_small(R, output=("b", "0")), "no primitive is connected to node 'b'"),
        (_small(R, Primitive("R", "R2", ("b", "c"), named("R"))), "no solution"),
        (_small(R, Primitive("G", "G", ("b", "0", "a", "0"), named("R"))), "nothing determines"),
    ],
)
def test_networks_without_an_answer_are_refused(expansion, message):
    with pytest.raises(ValueError, match=message):
        Network(expansion).evaluate({"R": 1.0, "C": 1.0})


def test_primitives_are_checked_at_the_door():
    with pytest.raises(ValueError, match="G has 4 nodes, got 2"):
        Primitive("G", "G1", ("a", "0"), named("g"))
    with pytest.raises(ValueError, match="kind 'I' is not one of R, C, L, G, E, V"):
        Primitive("I", "I1", ("a", "0"), named("i"))  # type: ignore[arg-type]  # what is refused


def test_network_of_order_zero():
    evaluation = Network(_small(R)).evaluate({"R": 50.0})
    assert evaluation.order == 0
    assert evaluation.stable.all()
    assert response.dc_gain(evaluation)[0] == 50
    assert response.bandwidth(evaluation)[0] == np.inf
    assert response.rise_time(evaluation)[0] == 0
    assert response.overshoot(evaluation)[0] == 0
    assert response.poles(evaluation).shape == (0, 1)
    assert response.peaking(evaluation)[0] == 0


def test_generators_at_one_place_share_a_transfer():
    expansion = Expansion(
        (R,),
        (NoiseGenerator("a", ("a", "0"), lambda v: 2.0), NoiseGenerator("b", ("a", "0"), lambda v: 3.0)),
        ("0", "a"),
        lambda v: 1.0,
        ("a", "0"),
    )
    evaluation = Network(expansion).evaluate({"R": 10.0})
    assert noise.output_density(evaluation, 1.0)[0] == pytest.approx(500)
    apart = noise.density_by_generator(evaluation, 1.0)
    assert apart["a"][0] == pytest.approx(200)
    assert apart["b"][0] == pytest.approx(300)


def test_loop_of_poles_is_what_it_says():
    expansion = loop_of_poles(3, zeros=2)
    evaluation = Network(expansion).evaluate({"gain": 7.0, "zero": 20.0})
    s = 2j * np.pi * 0.3
    expected = 7 * (1 + s / 20) ** 2 / (1 + s) ** 3
    assert stability.return_ratio_at(evaluation, 0.3)[0] == pytest.approx(expected, rel=1e-12)
