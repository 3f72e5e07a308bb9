"""Network functions by algebra: quotients of polynomials in s from the nodal matrix, and the same by lcapy."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from functools import cached_property
from typing import Any

import numpy as np
import sympy
from numpy.typing import NDArray
from sympy.polys.matrices import DomainMatrix

from opto_ckt.analyses.network import GROUND, Expansion, Primitive

S = sympy.Symbol("s")


class Symbols(Mapping[str, Any]):
    """Hands out a positive symbol for any name, named as the value."""

    def __init__(self) -> None:
        self._known: dict[str, Any] = {}

    def __getitem__(self, name: str) -> Any:
        return self._known.setdefault(name, sympy.Symbol(name, positive=True))

    def __iter__(self) -> Iterator[str]:
        return iter(self._known)

    def __len__(self) -> int:
        return len(self._known)


class SymbolicNetwork:
    """Network functions as quotients of polynomials in s, from sympy's determinants of the nodal matrix.

    Parameters
    ----------
    expansion : the network; its values become symbols of the same names.
    """

    def __init__(self, expansion: Expansion) -> None:
        self.expansion = expansion
        primitives = expansion.primitives
        nodes = dict.fromkeys(node for primitive in primitives for node in primitive.nodes if node != GROUND)
        branches = [primitive.name for primitive in primitives if primitive.kind in "LEV"]
        self._place = {label: index for index, label in enumerate([*nodes, *(("branch", name) for name in branches)])}
        symbols = Symbols()
        self._weights = {primitive.name: sympy.Symbol(f"y{i}") for i, primitive in enumerate(primitives)}
        self._fractions = [_fraction(primitive, symbols) for primitive in primitives]
        self._gain = sympy.nsimplify(expansion.gain(symbols), rational=True)

    def transfer(self) -> Any:
        """Output voltage for an input signal of 1."""
        return self._gain * self.transfer_from(self.expansion.input)

    def transfer_from(self, nodes: tuple[str, str]) -> Any:
        """Output voltage for a current of 1 from the first node through a source to the second."""
        first, second = self.expansion.output
        numerator = self._cleared(self._driven(nodes, first) - self._driven(nodes, second))
        return _collected(numerator) / _collected(self._denominator)

    def return_ratio(self) -> Any:
        """T = D/D0 - 1 where D0 is the determinant with the gain of the loop primitive at zero."""
        matrix = self._matrix.subs(self._weights[str(self.expansion.loop)], 0)
        opened = self._cleared(self._determinant(matrix))
        return _collected(self._denominator - opened) / _collected(opened)

    @cached_property
    def _denominator(self) -> Any:
        return self._cleared(self._determinant(self._matrix))

    @cached_property
    def _matrix(self) -> Any:
        matrix = sympy.zeros(len(self._place), len(self._place))
        for primitive in self.expansion.primitives:
            weight = self._weights[primitive.name] * (S if primitive.kind in "CL" else 1)
            ends, control = primitive.nodes[:2], primitive.nodes[2:]
            if primitive.kind in "RCG":
                self._add(matrix, ends, control or ends, weight)
                continue
            branch = (("branch", primitive.name), GROUND)
            self._add(matrix, ends, branch, sympy.Integer(1))
            self._add(matrix, branch, ends, sympy.Integer(1))
            if primitive.kind != "V":
                self._add(matrix, branch, control or branch, -weight)
        return matrix

    def _add(self, matrix: Any, rows: tuple[Any, ...], columns: tuple[Any, ...], weight: Any) -> None:
        for row, row_sign in zip(rows, (1, -1), strict=True):
            for column, column_sign in zip(columns, (1, -1), strict=True):
                if GROUND not in (row, column):
                    matrix[self._place[row], self._place[column]] += row_sign * column_sign * weight

    def _driven(self, nodes: tuple[str, str], output: str) -> Any:
        """Cramer's numerator of one node voltage."""
        if output == GROUND:
            return sympy.Poly(0, *self._generators)
        matrix, column = self._matrix.copy(), self._place[output]
        matrix[:, column] = sympy.zeros(matrix.rows, 1)
        for node, sign in zip(nodes, (-1, 1), strict=True):
            if node != GROUND:
                matrix[self._place[node], column] += sign
        return self._determinant(matrix)

    @property
    def _generators(self) -> tuple[Any, ...]:
        return (S, *self._weights.values())

    def _determinant(self, matrix: Any) -> Any:
        domain = sympy.ZZ[self._generators]
        result = DomainMatrix.from_Matrix(matrix).convert_to(domain).charpoly()[-1]
        sign = -1 if matrix.rows % 2 else 1
        return sympy.Poly(domain.to_sympy(result) * sign, *self._generators)

    def _cleared(self, determinant: Any) -> Any:
        """The determinant with every weight written as its fraction, times the product of all their denominators."""
        total = sympy.Integer(0)
        for (order, *present), factor in determinant.terms():
            term = factor * S**order
            for power, (above, below) in zip(present, self._fractions, strict=True):
                term *= above if power else below
            total += term
        return total


def symbolic_transfer(expansion: Expansion) -> Any:
    """Output voltage for an input signal of 1, N/D in s, with symbols named as the values."""
    return SymbolicNetwork(expansion).transfer()


def symbolic_return_ratio(expansion: Expansion) -> Any:
    """Return ratio of the loop, in s, with symbols named as the values."""
    return SymbolicNetwork(expansion).return_ratio()


def lcapy_circuit(expansion: Expansion, values: Mapping[str, Any]) -> tuple[Any, dict[str, str]]:
    """The network as a circuit of lcapy, and the number it gives each node; values are numbers or expressions.

    lcapy drives G sources opposite to SPICE: their output nodes are exchanged here.
    """
    from lcapy import Circuit  # half a second to import, for this function alone

    names = [node for primitive in expansion.primitives for node in primitive.nodes]
    number = {node: str(index) for index, node in enumerate(dict.fromkeys([GROUND, *names]))}
    circuit = Circuit()
    for index, primitive in enumerate(expansion.primitives):
        nodes = [number[node] for node in primitive.nodes]
        if primitive.kind == "G":
            nodes[0], nodes[1] = nodes[1], nodes[0]
        value = "0" if primitive.kind == "V" else f"{{{sympy.sympify(primitive.value(values))}}}"
        circuit.add(f"{primitive.kind}{index} {' '.join(nodes)} {value}")
    return circuit, number


def lcapy_transfer(
    expansion: Expansion, values: Mapping[str, float], frequencies: NDArray[np.float64]
) -> NDArray[np.complex128]:
    """Output voltage for an input signal of 1 at each frequency [Hz], by lcapy. [V per unit of input]"""
    circuit, number = lcapy_circuit(expansion, values)
    first, second = expansion.input
    ports = (number[second], number[first], *(number[node] for node in expansion.output))
    expression = circuit.transimpedance(*ports).sympy
    (variable,) = expression.free_symbols or {S}
    function = sympy.lambdify(variable, expression, "mpmath")
    gain = float(expansion.gain(values))
    return np.array([gain * complex(function(2j * np.pi * float(frequency))) for frequency in frequencies])


def _fraction(primitive: Primitive, symbols: Symbols) -> tuple[Any, Any]:
    """Numerator and denominator of what a primitive enters into the matrix."""
    if primitive.kind == "V":
        return sympy.Integer(1), sympy.Integer(1)
    value = sympy.together(sympy.nsimplify(primitive.value(symbols), rational=True))
    above, below = sympy.fraction(value)
    return (below, above) if primitive.kind == "R" else (above, below)


def _collected(expression: Any) -> Any:
    return sympy.Poly(sympy.expand(expression), S).as_expr()
