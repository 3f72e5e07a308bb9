"""The small-signal model of an element: primitives and noise generators, and what its signal injects."""

from __future__ import annotations

from collections.abc import Mapping
from functools import singledispatch
from typing import Any

from opto_ckt.analyses.network.primitives import Kind, NoiseGenerator, Primitive, Value
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.topology import Element

Parts = tuple[tuple[Primitive, ...], tuple[NoiseGenerator, ...]]


@singledispatch
def model_of(element: Element) -> Parts:
    """Primitives and noise generators of one element."""
    raise TypeError(f"no small-signal model for {type(element).__name__}")


@singledispatch
def signal_of(element: Element) -> tuple[tuple[str, str], Value]:
    """Nodes and gain of the current that a unit of the circuit's input injects."""
    raise TypeError(f"{type(element).__name__} is no input")


def one(values: Mapping[str, Any]) -> float:
    """The value 1."""
    return 1.0


def named(name: str) -> Value:
    """The value of that name."""
    return lambda values: values[name]


def own(kind: Kind, element: Element, figure: str, nodes: tuple[str, ...]) -> Primitive:
    """A primitive whose value is a figure of its element."""
    name = element.value_name(figure)
    return Primitive(kind, name, nodes, named(name))


def thermal(label: str, nodes: tuple[str, str], resistance: Value) -> NoiseGenerator:
    """Thermal noise of a resistance, at the ambient temperature."""
    temperature = named("temperature")
    name = label if " " in label else f"{label} thermal"
    return NoiseGenerator(name, nodes, lambda v: 4 * BOLTZMANN * temperature(v) / resistance(v), None)


def shot(label: str, nodes: tuple[str, str], current: Value) -> NoiseGenerator:
    """Shot noise of a current."""
    return NoiseGenerator(label, nodes, lambda v: 2 * ELEMENTARY_CHARGE * current(v), None)
