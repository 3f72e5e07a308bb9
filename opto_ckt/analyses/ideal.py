"""A network without what hand calculation leaves out: strays, leakage, second poles, output resistance."""

from __future__ import annotations

from collections import defaultdict
from collections.abc import Iterable, Mapping
from dataclasses import dataclass, replace

from opto_ckt.analyses.network.primitives import Expansion, Primitive
from opto_ckt.topology import GROUND, Capacitor, Resistor, Topology

EXTREME = 1e30  #: stands for infinity, its inverse for zero, where every other value is one
GONE = 1e15  #: a primitive beyond this, or below its inverse, is an open or a short
SHORTS_AT: Mapping[str, bool] = {"R": False, "L": False, "C": True}
"""Primitives that can be left out: whether one of infinite value joins its nodes; one of no value does the opposite."""


@dataclass(frozen=True)
class Ideal:
    """A network with some values at their limits."""

    expansion: Expansion
    none: tuple[str, ...]  #: names of the values that were taken as zero
    unbounded: tuple[str, ...]  #: and of those as infinite


def left_out(topology: Topology) -> tuple[tuple[str, ...], tuple[str, ...]]:
    """Names of values that a first calculation takes as zero, and as infinite.

    What no data sheet must give is taken as the element says it is when absent; what no assembler fits is not there.
    """
    figures = {element.value_name(name): value for element in topology for name, value in element.absent.items()}
    none = [name for name, value in figures.items() if abs(value) < 1]
    unbounded = [name for name, value in figures.items() if abs(value) > GONE / 10]
    none += [element.ref for element in topology if isinstance(element, Capacitor) and not element.fitted]
    unbounded += [element.ref for element in topology if isinstance(element, Resistor) and not element.fitted]
    return tuple(none), tuple(unbounded)


def idealised(expansion: Expansion, none: Iterable[str], unbounded: Iterable[str]) -> Ideal:
    """Leave out each primitive that a value at its limit opens, join the nodes of each that it shorts."""
    limits = {**dict.fromkeys(none, 1 / EXTREME), **dict.fromkeys(unbounded, EXTREME)}
    values: defaultdict[str, float] = defaultdict(lambda: 1.0, limits)
    kept: list[Primitive] = []
    joined: dict[str, str] = {}
    for primitive in expansion.primitives:
        size = float(primitive.value(values)) if primitive.kind in SHORTS_AT else 1.0
        if 1 / GONE < size < GONE:
            kept.append(primitive)
        elif (size > GONE) == SHORTS_AT[primitive.kind]:
            first, second = (_joined(node, joined) for node in primitive.nodes[:2])
            if first != second:
                other, stays = (second, first) if first in (GROUND, *expansion.output) else (first, second)
                joined[other] = stays
    primitives = [replace(each, nodes=tuple(_joined(node, joined) for node in each.nodes)) for each in kept]
    ideal = replace(
        expansion,
        primitives=tuple(each for each in primitives if each.nodes[0] != each.nodes[1]),
        generators=(),
        input=(_joined(expansion.input[0], joined), _joined(expansion.input[1], joined)),
        output=(_joined(expansion.output[0], joined), _joined(expansion.output[1], joined)),
    )
    return Ideal(ideal, tuple(none), tuple(unbounded))


def _joined(node: str, joined: Mapping[str, str]) -> str:
    while node in joined:
        node = joined[node]
    return node
