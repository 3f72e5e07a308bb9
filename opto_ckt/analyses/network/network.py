"""A network compiled once and evaluated on as many lanes of values as wanted."""

from __future__ import annotations

from collections.abc import Mapping, Sequence
from functools import cached_property
from math import exp, inf, isfinite, log
from typing import Any

import numpy as np

from opto_ckt.analyses.network.determinant import Determinants
from opto_ckt.analyses.network.evaluation import Evaluation, Generators
from opto_ckt.analyses.network.lanes import Array, root_extent, trimmed
from opto_ckt.analyses.network.polynomial import Polynomial, difference_of, product_of, squared_magnitude_of, sum_of
from opto_ckt.analyses.network.primitives import Expansion
from opto_ckt.analyses.network.program import Node, Program, Values
from opto_ckt.analyses.network.stamps import CONDUCTANCE_SCALE, FREQUENCY_SCALE, Stamp, merge_parallel, stamps_of
from opto_ckt.analyses.network.tape import Tape

np.empty(1 << 21)  # given back at once: the C library then keeps smaller tables instead of returning them to the system

NEAR = 1e3
"""A frequency scale is left as it is if the middle of the poles lies no further from it than this factor."""


class Network:
    """Transfer function, loop gain and noise transfers of an expansion, as programs of its named values.

    Parameters
    ----------
    expansion : what to compile.

    Raises
    ------
    ValueError : a node or branch is left undetermined, the loop names no G or E primitive, two primitives share a name.
    """

    def __init__(self, expansion: Expansion) -> None:
        self.expansion = expansion
        names = [primitive.name for primitive in expansion.primitives]
        if len(set(names)) < len(names):
            raise ValueError(f"primitives share the name {max(names, key=names.count)!r}")
        self._program = program = Program()
        values = Values(program)
        self._gain = program.node(expansion.gain(values))
        self._strengths = [
            (
                program.node(generator.density(values)),
                program.node(generator.corner(values)) if generator.corner else program.zero,
            )
            for generator in expansion.generators
        ]
        self._determinants, self._loop = self._assemble()
        self.inputs = frozenset(program.inputs) - {CONDUCTANCE_SCALE, FREQUENCY_SCALE}

    def _assemble(self) -> tuple[Determinants, Stamp | None]:
        """The nodal matrix as stamps, the one at which the loop is opened apart from the others."""
        program, opened = self._program, self.expansion.loop
        loop: Stamp | None = None
        stamps: list[Stamp] = []
        for primitive in self.expansion.primitives:
            own = stamps_of(primitive, program)
            if primitive.name == opened:
                if primitive.kind not in ("G", "E"):
                    raise ValueError(f"a loop is opened at a G or E primitive; {opened} is of kind {primitive.kind}")
                loop, own = own[-1], own[:-1]
            stamps.extend(own)
        if opened is not None and loop is None:
            raise ValueError(f"the loop is to be opened at {opened!r}, which is no primitive of the network")
        merged = merge_parallel(stamps)
        return Determinants([*merged, loop] if loop else merged, program), loop

    @cached_property
    def _signal(self) -> _Polynomials:
        """Program of D, N, D - D0, D0 and the rival's N in s, then of |D|², |N|² and |D - D0|² - |D0|² in x."""
        expansion, determinants, program = self.expansion, self._determinants, self._program
        returned: Polynomial = ()
        opened: Polynomial = ()
        if self._loop:
            returned = determinants.derivative(self._loop.rows, self._loop.columns, self._loop.weight[0])
            opened = determinants.determinant(without=self._loop)
            denominator = sum_of(opened, returned)
        else:
            denominator = determinants.determinant()
        if not denominator:
            raise ValueError("the network has no solution: its determinant is zero for all values")
        gain = self._gain / program.input(CONDUCTANCE_SCALE)
        numerator = determinants.derivative(expansion.input[::-1], expansion.output, gain)
        rival: Polynomial = ()
        if expansion.rival is not None:
            nodes, strength = expansion.rival
            scaled = program.node(strength(Values(program))) / program.input(CONDUCTANCE_SCALE)
            rival = determinants.derivative(nodes[::-1], expansion.output, scaled)
        powers = [squared_magnitude_of(each) for each in (denominator, numerator, returned, opened)]
        excess = difference_of(powers[2], powers[3])
        in_s = (denominator, numerator, returned, opened, rival)
        return _Polynomials(program, in_s, (powers[0], powers[1], excess))

    @cached_property
    def _noise(self) -> _Polynomials:
        """Program of Σ density |N|² and of Σ density corner |N|² over all generators, in x."""
        white: Polynomial = ()
        flicker: Polynomial = ()
        for nodes, power in self._noise_powers.items():
            own = [
                strength
                for generator, strength in zip(self.expansion.generators, self._strengths, strict=True)
                if generator.nodes == nodes
            ]
            white = sum_of(white, product_of((_total([density for density, _ in own]),), power))
            flicker = sum_of(flicker, product_of((_total([density * corner for density, corner in own]),), power))
        return _Polynomials(self._program, (), (white, flicker))

    @cached_property
    def _noise_apart(self) -> _Polynomials:
        """Program of density |N|² of each generator, in x, and of their corners."""
        alone = [
            product_of((density,), self._noise_powers[generator.nodes])
            for generator, (density, _) in zip(self.expansion.generators, self._strengths, strict=True)
        ]
        return _Polynomials(self._program, (), alone, [tuple(corner for _, corner in self._strengths)])

    @cached_property
    def _noise_powers(self) -> dict[tuple[str, str], Polynomial]:
        """|N|² from a current between the nodes of each generator to the output, in x."""
        places = dict.fromkeys(generator.nodes for generator in self.expansion.generators)
        scale = 1.0 / self._program.input(CONDUCTANCE_SCALE)
        output = self.expansion.output
        return {
            nodes: squared_magnitude_of(self._determinants.derivative(nodes[::-1], output, scale)) for nodes in places
        }

    def evaluate(self, values: Mapping[str, Any]) -> Evaluation:
        """Every network function at the given values.

        Parameters
        ----------
        values : each a float or an array of lanes, all arrays of one length; names the network does not need are
            passed over.

        Raises
        ------
        KeyError : a value is missing. ValueError : arrays differ in length or have more than one axis.
        """
        missing = sorted(self.inputs - values.keys())
        if missing:
            raise KeyError(f"values are missing: {', '.join(missing)}")
        lanes, given = _same_lanes({name: values[name] for name in self.inputs})
        conductance, frequency = self._scales({name: _first(value) for name, value in given.items()})
        given[CONDUCTANCE_SCALE], given[FREQUENCY_SCALE] = conductance, frequency
        table = self._signal.run(given, lanes)
        low, high = root_extent(self._signal.split(table)[0])
        centre = (low * high) ** 0.5 if 0 < low < high < inf else 1.0
        centre = 1.0 if 1 / NEAR < centre < NEAR else centre
        given[FREQUENCY_SCALE] = frequency * centre
        denominator, numerator, returned, opened, rival, *powers = map(trimmed, self._signal.split(table, centre))
        return Evaluation(
            lanes=lanes,
            frequency_scale=frequency * centre,
            extent=(low / centre, high / centre) if low < high else (1.0, 1.0),
            denominator=denominator,
            numerator=numerator,
            loop_numerator=returned if self._loop else None,
            loop_denominator=opened if self._loop else None,
            rival_numerator=rival if self.expansion.rival else None,
            denominator_power=powers[0],
            numerator_power=powers[1],
            loop_excess=powers[2] if self._loop else None,
            gain=np.broadcast_to(np.asarray(self.expansion.gain(given), dtype=float), (lanes,)),
            read_noise=lambda: self._noise.split(self._noise.run(given, lanes)),
            read_generators=lambda: self._generators(given, lanes),
            at=self.evaluate,
        )

    def _generators(self, given: Mapping[str, Any], lanes: int) -> Generators:
        labels = tuple(generator.label for generator in self.expansion.generators)
        *white, corners = self._noise_apart.split(self._noise_apart.run(given, lanes))
        return Generators(labels, tuple(white), corners[: len(labels)])

    def _scales(self, first: Mapping[str, float]) -> tuple[float, float]:
        """Geometric means of the conductances [S] and of the corner frequencies [rad/s] in the first lane."""
        size: dict[str, list[float]] = {kind: [] for kind in "RCLGEV"}
        for primitive in self.expansion.primitives:
            if primitive.kind in "RCLG":
                number = abs(float(primitive.value(first)))
                if number > 0 and isfinite(number):
                    size[primitive.kind].append(log(number))
        conductances = [-resistance for resistance in size["R"]] + size["G"]
        conductance = sum(conductances) / len(conductances) if conductances else 0.0
        corners = [conductance - capacitance for capacitance in size["C"]]
        corners += [-conductance - inductance for inductance in size["L"]]
        return exp(conductance), exp(sum(corners) / len(corners)) if corners else 1.0


class _Polynomials:
    """One program for the coefficients of several polynomials: in s, in x = ω², and rows of plain values."""

    def __init__(
        self,
        program: Program,
        in_s: Sequence[Polynomial],
        in_x: Sequence[Polynomial],
        plain: Sequence[tuple[Node, ...]] = (),
    ) -> None:
        polynomials = [*in_s, *in_x, *plain]
        self._tape = Tape(program, [term for polynomial in polynomials for term in polynomial])
        self._lengths = [len(polynomial) for polynomial in polynomials]
        powers = [range(len(polynomial)) for polynomial in in_s]
        powers += [range(0, 2 * len(polynomial), 2) for polynomial in in_x]
        powers += [range(0) for _ in plain]
        self._powers = np.array([power for row in powers for power in row], dtype=float)

    def run(self, values: Mapping[str, Any], lanes: int) -> Array:
        """All coefficients, one a row; a lane in which one of them is not finite is nan altogether."""
        table = self._tape.run_lanes(values, lanes)
        if not isfinite(table.sum()):
            table[:, ~np.isfinite(table).all(axis=0)] = np.nan
        return table

    def split(self, table: Array, centre: float = 1.0) -> list[Array]:
        """One array a polynomial, with ω divided by `centre`; a polynomial that is zero has one row of zeros."""
        if centre != 1.0:
            table[: len(self._powers)] *= (centre**self._powers)[:, None]
        result, position = [], 0
        for length in self._lengths:
            result.append(table[position : position + length] if length else np.zeros((1, table.shape[1])))
            position += length
        return result


def _total(nodes: Sequence[Node]) -> Node:
    result, *others = nodes
    for node in others:
        result = result + node
    return result


def _same_lanes(values: Mapping[str, Any]) -> tuple[int, dict[str, Any]]:
    """Number of lanes, and the values as floats or as arrays of that length."""
    lanes = 1
    given: dict[str, Any] = {}
    for name, value in values.items():
        array = np.asarray(value, dtype=float)
        if array.ndim > 1:
            raise ValueError(f"{name}: expected one value or a row of lanes, got an array of {array.ndim} axes")
        if array.size == 1:
            given[name] = float(array.reshape(()))
            continue
        if lanes not in (1, array.size):
            raise ValueError(f"{name}: {array.size} lanes, where other values have {lanes}")
        lanes = array.size
        given[name] = array
    return lanes, given


def _first(value: Any) -> float:
    return float(value[0]) if isinstance(value, np.ndarray) else float(value)
