"""The part of a network that decides how it answers, found by leaving out one primitive after the other."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass, replace
from typing import Literal

import numpy as np
from numpy.typing import NDArray

from opto_ckt.analyses import response, stability
from opto_ckt.analyses.network import GROUND, Expansion, Network, Primitive

Complex = NDArray[np.complex128]
Values = Mapping[str, float]
Way = Literal["open", "short"]

TOLERANCES = (0.01, 0.02, 0.05, 0.1, 0.15)  #: tried in turn until what is left can be read
READABLE = 13  #: primitives that formulas of hand calculation have at most
POINTS = 25  #: frequencies at which answers are compared
DECADES = 6  #: below the highest of them
SIGNS = (1.0, -1.0)
ADMITTANCES: Mapping[str, Callable[[float, Complex], Complex | float]] = {
    "R": lambda size, laplace: 1 / size,
    "C": lambda size, laplace: laplace * size,
    "G": lambda size, laplace: size,
}


@dataclass(frozen=True)
class Core:
    """A network without what hardly matters."""

    expansion: Expansion
    opened: tuple[str, ...]  #: primitives taken as an open
    shorted: tuple[str, ...]  #: primitives taken as a short
    error: float  #: largest change of transfer or closed loop, as a share of the largest transfer, or of one


def frequencies_of(expansion: Expansion, values: Values) -> NDArray[np.float64]:
    """Frequencies up to the bandwidth or the crossover of the loop, whichever is higher. [Hz]"""
    evaluation = Network(expansion).evaluate(values)
    found = [float(response.bandwidth(evaluation)[0])]
    if expansion.loop is not None:
        found.append(float(stability.crossover_frequency(evaluation)[0]))
    top = max(frequency for frequency in found if np.isfinite(frequency))
    return np.geomspace(top / 10**DECADES, top, POINTS)


def core(expansion: Expansion, values: Values, frequencies: NDArray[np.float64]) -> Core:
    """The network at the smallest of `TOLERANCES` that leaves no more than `READABLE` primitives; else at the largest.

    Parameters
    ----------
    values : at which it is judged what matters.
    frequencies : at which the answers are compared. [Hz]
    """
    found = simplified(expansion, values, frequencies, TOLERANCES[0])
    for tolerance in TOLERANCES[1:]:
        if len(found.expansion.primitives) <= READABLE:
            break
        found = simplified(expansion, values, frequencies, tolerance)
    return found


def simplified(expansion: Expansion, values: Values, frequencies: NDArray[np.float64], tolerance: float) -> Core:
    """Leave out, what matters least first, as long as the answers change by no more than the tolerance in all."""
    exact = answers(expansion, values, frequencies)
    scales = np.array([[np.max(np.abs(exact[0]))], [1.0]])

    def error(other: Expansion) -> float:
        return float(np.max(np.abs(answers(other, values, frequencies) - exact) / scales))

    found = Core(replace(expansion, generators=()), (), (), 0.0)
    for name, way in _by_effect(found.expansion, error):
        without = _without(found.expansion, name, way)
        if without is not None and (apart := error(without)) <= tolerance:
            opened, shorted = ((name,), ()) if way == "open" else ((), (name,))
            found = Core(without, (*found.opened, *opened), (*found.shorted, *shorted), apart)
    return found


def _by_effect(expansion: Expansion, error: Callable[[Expansion], float]) -> list[tuple[str, Way]]:
    """Every way to leave one primitive out, the one that changes the answers least first."""
    effects = []
    for name, way in _ways(expansion):
        without = _without(expansion, name, way)
        if without is not None:
            effects.append((error(without), name, way))
    return [(name, way) for _, name, way in sorted(effects, key=lambda effect: effect[0])]


def _ways(expansion: Expansion) -> Iterator[tuple[str, Way]]:
    for primitive in expansion.primitives:
        conductance = primitive.kind == "G" and primitive.nodes[:2] == primitive.nodes[2:]
        if primitive.kind in "RCL" or conductance:
            yield primitive.name, "open"
        if primitive.kind in "RCL":
            yield primitive.name, "short"


def _without(expansion: Expansion, name: str, way: Way) -> Expansion | None:
    """The network with one primitive left out; None where it is gone already, or may not be shorted."""
    primitive = next((each for each in expansion.primitives if each.name == name), None)
    if primitive is None:
        return None
    others = tuple(each for each in expansion.primitives if each is not primitive)
    if way == "open":
        return replace(expansion, primitives=others)
    first, second = primitive.nodes[:2]
    gone, stays = (second, first) if first in (GROUND, *expansion.output) else (first, second)
    if gone in (GROUND, *expansion.output):
        return None
    joined = tuple(
        replace(each, nodes=tuple(stays if node == gone else node for node in each.nodes)) for each in others
    )
    source = tuple(stays if node == gone else node for node in expansion.input)
    if source[0] == source[1]:
        return None
    kept = tuple(each for each in joined if each.nodes[0] != each.nodes[1])
    return replace(expansion, primitives=kept, input=(source[0], source[1]))


def answers(expansion: Expansion, values: Values, frequencies: NDArray[np.float64]) -> Complex:
    """Transfer and T/(1 + T), T the return ratio, as rows over frequency; infinite where the network has none."""
    labels, matrix, opened = _matrices(expansion, values, frequencies)
    column = np.zeros((len(frequencies), len(labels), 1), dtype=complex)
    for node, sign in zip(expansion.input, (-1, 1), strict=True):
        if node in labels:
            column[:, labels[node]] += sign
    try:
        solved = np.linalg.solve(matrix, column)[..., 0]
        ratio = np.linalg.det(opened @ np.linalg.inv(matrix))
    except np.linalg.LinAlgError:
        return np.full((2, len(frequencies)), np.inf, dtype=complex)
    above, below = (
        solved[:, labels[node]] if node in labels else np.zeros(len(frequencies)) for node in expansion.output
    )
    found = np.stack([float(expansion.gain(values)) * (above - below), 1 - ratio])
    return np.asarray(np.nan_to_num(found, nan=np.inf), dtype=np.complex128)


def _matrices(
    expansion: Expansion, values: Values, frequencies: NDArray[np.float64]
) -> tuple[dict[str, int], Complex, Complex]:
    """Place of each unknown; the nodal matrix at each frequency; the same with the loop opened."""
    nodes = dict.fromkeys(node for each in expansion.primitives for node in each.nodes if node != GROUND)
    branches = [f"through {each.name}" for each in expansion.primitives if each.kind in "LEV"]
    labels = {label: place for place, label in enumerate([*nodes, *branches])}
    laplace = np.asarray(2j * np.pi * frequencies, dtype=np.complex128)
    matrix = np.zeros((len(frequencies), len(labels), len(labels)), dtype=np.complex128)
    loop = np.zeros_like(matrix)
    for each in expansion.primitives:
        for row, column, weight in _stamps(each, values, laplace):
            if row in labels and column in labels:
                matrix[:, labels[row], labels[column]] += weight
                if each.name == expansion.loop:
                    loop[:, labels[row], labels[column]] += weight
    return labels, matrix, matrix - loop


def _stamps(each: Primitive, values: Values, laplace: Complex) -> Iterator[tuple[str, str, Complex | float]]:
    ends, control = each.nodes[:2], each.nodes[2:] or each.nodes[:2]
    if each.kind in ADMITTANCES:
        weight = ADMITTANCES[each.kind](float(each.value(values)), laplace)
        for row, up in zip(ends, SIGNS, strict=True):
            for column, down in zip(control, SIGNS, strict=True):
                yield row, column, up * down * weight
        return
    branch = f"through {each.name}"
    for node, sign in zip(ends, SIGNS, strict=True):
        yield node, branch, sign
        yield branch, node, sign
    if each.kind == "L":
        yield branch, branch, -laplace * float(each.value(values))
    if each.kind == "E":
        for node, sign in zip(control, SIGNS, strict=True):
            yield branch, node, -sign * float(each.value(values))
