"""Symbolic algebra: the designer's formulas, and a second road to every network function.

Nothing here is on the way of sizing a design; sympy and lcapy are imported by this file alone.
"""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Mapping
from fractions import Fraction
from functools import cached_property
from inspect import signature
from types import FunctionType
from typing import Any

import numpy as np
import sympy
from numpy.typing import NDArray
from sympy.polys.matrices import DomainMatrix

from opto_ckt.analyses.network import GROUND, Expansion, Primitive

S = sympy.Symbol("s")

REBOUND = {"sqrt": sympy.sqrt, "log": sympy.log, "exp": sympy.exp, "pi": sympy.pi}

CONSTANTS = {
    "ELEMENTARY_CHARGE": sympy.Symbol("q", positive=True),
    "BOLTZMANN": sympy.Symbol("k", positive=True),
    "PLANCK": sympy.Symbol("h", positive=True),
    "LIGHT_SPEED": sympy.Symbol("c", positive=True),
}
"""What a printed formula writes for the names of `opto_ckt.constants`."""


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


def formula_expression(formula: Callable[..., Any]) -> Any:
    """A closed form as an expression of symbols named as its parameters: the function itself, run on symbols.

    Constants appear as q, k, h, c; decimal numbers as fractions.
    """
    symbols = {name: sympy.Symbol(name, positive=True) for name in signature(formula).parameters}
    return sympy.nsimplify(_rebound(formula)(**symbols), rational=True)


def coefficients(expression: Any) -> tuple[list[Any], list[Any]]:
    """Numerator and denominator of a network function by powers of s, lowest first, each factored, with π as such."""
    above, below = (sympy.Poly(part, S) for part in sympy.fraction(expression))
    every = [factor for part in (above, below) for factor in _numbers(part)]
    scale = max(map(abs, every)) * (-1 if all(factor < 0 for factor in _numbers(below)) else 1)
    return _by_power(above, scale), _by_power(below, scale)


def renamed(expression: Any, names: Mapping[str, str]) -> Any:
    """The expression with symbols called by other names."""
    symbols = expression.free_symbols - {S}
    return expression.xreplace({one: sympy.Symbol(names.get(one.name, one.name), positive=True) for one in symbols})


def latex(expression: Any, names: Mapping[str, str] | None = None) -> str:
    """An expression in LaTeX; `names` gives the LaTeX of symbols by their name."""
    written = {sympy.Symbol(name, positive=True): text for name, text in (names or {}).items()}
    return str(sympy.latex(_shortened(expression), symbol_names=written))


def readable(expression: Any) -> str:
    """An expression as one line of plain text; numbers that are no short fraction to six digits.

    >>> x, y = sympy.symbols("x y")
    >>> readable(x**2 * y / 3)
    'x^2·y/3'
    """
    written = str(sympy.sstr(_shortened(expression))).replace("**", "^").replace("*", "·")
    return re.sub(r"\bpi\b", "π", written)


def _rebound(formula: Callable[..., Any]) -> Callable[..., Any]:
    """The same function with the names it uses bound to what takes symbols."""
    if not isinstance(formula, FunctionType):
        raise TypeError(f"{formula!r} is not a plain function")
    rebound = FunctionType(formula.__code__, formula.__globals__ | REBOUND | CONSTANTS, formula.__name__)
    rebound.__kwdefaults__ = formula.__kwdefaults__
    return rebound


def _fraction(primitive: Primitive, symbols: Symbols) -> tuple[Any, Any]:
    """Numerator and denominator of what a primitive enters into the matrix."""
    if primitive.kind == "V":
        return sympy.Integer(1), sympy.Integer(1)
    value = sympy.together(sympy.nsimplify(primitive.value(symbols), rational=True))
    above, below = sympy.fraction(value)
    return (below, above) if primitive.kind == "R" else (above, below)


def _collected(expression: Any) -> Any:
    return sympy.Poly(sympy.expand(expression), S).as_expr()


def _numbers(polynomial: Any) -> list[Any]:
    """Factors of all products that a polynomial in s is a sum of."""
    symbols = sorted(polynomial.free_symbols_in_domain, key=str) or [S]
    return [factor for part in polynomial.all_coeffs() if part for factor in sympy.Poly(part, *symbols).coeffs()]


def _by_power(polynomial: Any, scale: Any) -> list[Any]:
    def with_pi(part: Any) -> Any:
        terms = sympy.Poly(part, *(sorted(part.free_symbols, key=str) or [S])).as_expr().as_ordered_terms()
        split = [term.as_coeff_Mul() for term in terms]
        return sympy.factor(sympy.Add(*(_circular(number / scale) * rest for number, rest in split)))

    return [with_pi(part) for part in reversed(polynomial.all_coeffs())]


def _circular(number: Any) -> Any:
    """A number as a short fraction times the power of 2π that leaves one; as it is where none does."""
    for power in range(13):
        fraction = sympy.Rational(Fraction(float(number) * (2 * np.pi) ** power).limit_denominator(64))
        if abs(float(number) * (2 * np.pi) ** power - float(fraction)) <= 1e-9 * abs(float(fraction)):
            return fraction / (2 * sympy.pi) ** power
    return number


def _shortened(expression: Any) -> Any:
    long = [number for number in expression.atoms(sympy.Rational) if number.q > 10_000]
    return expression.xreplace({number: sympy.Float(number, 6) for number in long})
