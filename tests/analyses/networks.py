"""Networks that the tests of the engine share, and their values."""

from __future__ import annotations

from math import pi
from typing import Any

import numpy as np

from opto_ckt.analyses.network import Expansion, NoiseGenerator, Primitive, Value

BOLTZMANN = 1.38064852e-23  # of ngspice-39, so that its noise can be compared closely [J/K]
TEMPERATURE = 300.15  # ngspice's default [K]
FOUR_K_T = 4 * BOLTZMANN * TEMPERATURE


def named(name: str) -> Value:
    return lambda values: values[name]


def thermal(name: str, nodes: tuple[str, str], corner: Value | None = None) -> NoiseGenerator:
    return NoiseGenerator(f"{name} thermal", nodes, lambda values: FOUR_K_T / values[name], corner)


def receiver() -> Expansion:
    """Photodiode with its resistances, two-pole op amp with output resistance, feedback, post filter: order 6."""
    return Expansion(
        primitives=(
            Primitive("R", "shunt", ("diode", "0"), named("shunt")),
            Primitive("C", "junction", ("diode", "0"), named("junction")),
            Primitive("R", "series", ("diode", "sum"), named("series")),
            Primitive("C", "input", ("sum", "0"), named("input")),
            Primitive("R", "R1", ("sum", "amp"), named("R1")),
            Primitive("C", "C1", ("sum", "amp"), named("C1")),
            Primitive("R", "noise", ("plus", "0"), named("noise")),
            Primitive("G", "stage1", ("first", "0", "sum", "plus"), lambda v: 1e-3),
            Primitive("R", "gain", ("first", "0"), lambda v: v["gain"] * 1e3),
            Primitive("C", "dominant", ("first", "0"), lambda v: 1e-3 / (2 * pi * v["gain_bandwidth"])),
            Primitive("G", "stage2", ("0", "second", "first", "0"), lambda v: 1e-3),
            Primitive("R", "unity", ("second", "0"), lambda v: 1e3),
            Primitive("C", "pole", ("second", "0"), lambda v: 1e-3 / (2 * pi * v["second_pole"])),
            Primitive("E", "buffer", ("ideal", "0", "second", "0"), lambda v: 1.0),
            Primitive("R", "output", ("ideal", "amp"), named("output")),
            Primitive("R", "R2", ("amp", "out"), named("R2")),
            Primitive("C", "C2", ("out", "0"), named("C2")),
        ),
        generators=(
            NoiseGenerator("signal shot", ("0", "diode"), lambda v: 2 * 1.602176634e-19 * v["photocurrent"]),
            thermal("shunt", ("diode", "0")),
            thermal("series", ("diode", "sum")),
            thermal("R1", ("sum", "amp")),
            thermal("noise", ("plus", "0"), named("corner")),
            thermal("R2", ("amp", "out")),
        ),
        input=("0", "diode"),
        gain=lambda v: 1.0,
        output=("out", "0"),
        loop="stage1",
    )


RECEIVER: dict[str, float] = {
    "shunt": 1e9,
    "junction": 20e-12,
    "series": 50.0,
    "input": 6e-12,
    "R1": 100e3,
    "C1": 1e-12,
    "noise": 1.5e3,
    "gain": 1e5,
    "gain_bandwidth": 65e6,
    "second_pole": 150e6,
    "output": 50.0,
    "R2": 1e3,
    "C2": 33e-12,
    "photocurrent": 100e-9,
    "corner": 1e3,
}


def single_pole_receiver(second_pole: bool = False) -> Expansion:
    """Feedback around an op amp of infinite gain at DC, one pole or two: the network of the closed forms."""
    stage = [
        Primitive("G", "stage1", ("first", "0", "sum", "0"), lambda v: 1.0),
        Primitive("C", "dominant", ("first", "0"), lambda v: 1 / (2 * pi * v["gain_bandwidth"])),
    ]
    last = "first"
    if second_pole:
        last = "second"
        stage += [
            Primitive("G", "stage2", ("0", "second", "first", "0"), lambda v: 1.0),
            Primitive("R", "unity", ("second", "0"), lambda v: 1.0),
            Primitive("C", "pole", ("second", "0"), lambda v: 1 / (2 * pi * v["second_pole"])),
        ]
    return Expansion(
        primitives=(
            Primitive("C", "input", ("sum", "0"), named("input")),
            Primitive("R", "R1", ("sum", "amp"), named("R1")),
            Primitive("C", "C1", ("sum", "amp"), named("C1")),
            *stage,
            Primitive("E", "buffer", ("amp", "0", last, "0"), lambda v: 1.0),
        ),
        generators=(
            NoiseGenerator("R1 thermal", ("sum", "amp"), lambda v: 4 * 1.380649e-23 * v["temperature"] / v["R1"]),
            NoiseGenerator("U1 voltage", ("first", "0"), lambda v: v["voltage_noise"] ** 2),
        ),
        input=("0", "sum"),
        gain=lambda v: 1.0,
        output=("amp", "0"),
        loop="stage1",
    )


def low_pass(sections: int = 1) -> Expansion:
    """Equal RC sections with ideal buffers between them: one pole, repeated."""
    primitives = [
        Primitive("R", "load", ("in", "0"), lambda v: 1.0),
        Primitive("E", "buffer0", ("buffered0", "0", "in", "0"), lambda v: 1.0),
    ]
    for section in range(sections):
        here, there = f"filtered{section}", f"buffered{section + 1}"
        primitives += [
            Primitive("R", f"R{section}", (f"buffered{section}", here), named("R")),
            Primitive("C", f"C{section}", (here, "0"), named("C")),
            Primitive("E", f"buffer{section + 1}", (there, "0", here, "0"), lambda v: 1.0),
        ]
    return Expansion(
        tuple(primitives), (thermal("R", ("buffered0", "filtered0")),), ("0", "in"), lambda v: 1.0, (there, "0")
    )


def resonator() -> Expansion:
    """Series R and L into a C: H = 1 / (1 + s R C + s² L C), driven through an ideal copy of the input."""
    return Expansion(
        (
            Primitive("R", "load", ("in", "0"), lambda v: 1.0),
            Primitive("E", "source", ("drive", "0", "in", "0"), lambda v: 1.0),
            Primitive("R", "R", ("drive", "middle"), named("R")),
            Primitive("L", "L", ("middle", "metered"), named("L")),
            Primitive("V", "meter", ("metered", "out"), lambda v: 0.0),
            Primitive("C", "C", ("out", "0"), named("C")),
        ),
        (thermal("R", ("drive", "middle"), named("corner")),),
        ("0", "in"),
        lambda v: 1.0,
        ("out", "0"),
    )


def loop_of_poles(poles: int, zeros: int = 0) -> Expansion:
    """An inverting amplifier with equal poles closed on itself: T = gain (1 + s/zero)^zeros / (1 + s)^poles."""
    primitives = [
        Primitive("G", "amplifier", ("stage1", "0", "sum", "0"), named("gain")),
        Primitive("R", "R1", ("stage1", "0"), lambda v: 1.0),
        Primitive("C", "C1", ("stage1", "0"), lambda v: 1.0),
    ]
    for stage in range(2, poles + 1):
        primitives += [
            Primitive("G", f"G{stage}", ("0", f"stage{stage}", f"stage{stage - 1}", "0"), lambda v: 1.0),
            Primitive("R", f"R{stage}", (f"stage{stage}", "0"), lambda v: 1.0),
            Primitive("C", f"C{stage}", (f"stage{stage}", "0"), lambda v: 1.0),
        ]
    last = f"stage{poles}"
    for stage in range(zeros):  # a voltage across R + sL driven by a copy of the voltage before as a current
        primitives += [
            Primitive("G", f"copy{stage}", ("0", f"lead{stage}", last, "0"), lambda v: 1.0),
            Primitive("R", f"lead R{stage}", (f"lead{stage}", f"half{stage}"), lambda v: 1.0),
            Primitive("L", f"lead L{stage}", (f"half{stage}", "0"), lambda v: 1 / v["zero"]),
        ]
        last = f"lead{stage}"
    primitives += [
        Primitive("E", "output", ("out", "0", last, "0"), lambda v: 1.0),
        Primitive("R", "return", ("out", "sum"), lambda v: 1.0),
    ]
    return Expansion(tuple(primitives), (), ("0", "sum"), lambda v: 1.0, ("out", "0"), "amplifier")


def ladder(sections: int) -> Expansion:
    """RC ladder with a resistor to ground at its end; passive, with thermal noise of every resistor."""
    primitives: list[Primitive] = []
    generators: list[NoiseGenerator] = []
    for section in range(sections):
        ends = (f"n{section}", f"n{section + 1}")
        primitives.append(Primitive("C", f"C{section}", (ends[0], "0"), named(f"C{section}")))
        primitives.append(Primitive("R", f"R{section}", ends, named(f"R{section}")))
        generators.append(thermal(f"R{section}", ends))
    last = f"n{sections}"
    primitives.append(Primitive("C", "last", (last, "0"), named(f"C{sections}")))
    primitives.append(Primitive("R", "load", (last, "0"), named("load")))
    generators.append(thermal("load", (last, "0")))
    return Expansion(tuple(primitives), tuple(generators), ("0", "n0"), lambda v: 1.0, (last, "0"))


def scattered(values: dict[str, float], lanes: int, seed: int, spread: float = 2.0) -> dict[str, Any]:
    """Values each multiplied by a random factor between 1/spread and spread, lane by lane."""
    generator = np.random.default_rng(seed)
    return {name: value * spread ** generator.uniform(-1, 1, lanes) for name, value in values.items()}


def lane(values: dict[str, Any], number: int) -> dict[str, float]:
    return {name: float(value if np.ndim(value) == 0 else value[number]) for name, value in values.items()}
