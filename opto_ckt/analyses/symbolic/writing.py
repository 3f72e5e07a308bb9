"""Expressions made fit to be read: coefficients by powers of s, short numbers, plain text and LaTeX."""

from __future__ import annotations

import re
from collections.abc import Mapping, Sequence
from fractions import Fraction
from typing import Any

import numpy as np
import sympy

from opto_ckt.analyses.symbolic.networks import S


def coefficients(
    expression: Any, values: Mapping[str, float] | None = None, share: float = 0.0
) -> tuple[list[Any], list[Any]]:
    """Numerator and denominator of a network function by powers of s, lowest first, each factored, with π as such.

    What is a factor of both is left out. With values, the smallest terms of each coefficient are dropped that make up
    no more than ``share`` of it together.
    """
    above, below = ([_terms(part) for part in _powers(polynomial)] for polynomial in sympy.fraction(expression))
    numbers = [number for part in below for number, _ in part]
    scale = max(map(abs, numbers)) * (-1 if all(number < 0 for number in numbers) else 1)
    common = _common([rest for part in (*above, *below) for _, rest in part])
    exact = [
        [[_circular(number / scale) * rest / common for number, rest in part] for part in side]
        for side in (above, below)
    ]
    kept = [[sympy.factor(sympy.Add(*_larger(part, values or {}, share))) for part in side] for side in exact]
    return kept[0], kept[1]


def value_of(expression: Any, values: Mapping[str, float]) -> float:
    """An expression without s as a number, its symbols looked up by name."""
    return float(expression.subs({symbol: values[symbol.name] for symbol in expression.free_symbols}))


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


def _powers(polynomial: Any) -> list[Any]:
    """Coefficients of s, lowest power first."""
    return list(reversed(sympy.Poly(polynomial, S).all_coeffs()))


def _terms(part: Any) -> list[tuple[Any, Any]]:
    """The terms that a coefficient is a sum of, each as its number and the rest; none of a coefficient that is zero."""
    symbols = sorted(part.free_symbols, key=str) or [S]
    return [term.as_coeff_Mul() for term in sympy.Poly(part, *symbols).as_expr().as_ordered_terms() if term != 0]


def _common(products: Sequence[Any]) -> Any:
    """The largest product that all of them hold."""
    powers = [product.as_powers_dict() for product in products]
    shared = set.intersection(*(set(each) for each in powers))
    return sympy.Mul(*(symbol ** min(each[symbol] for each in powers) for symbol in shared))


def _larger(terms: Sequence[Any], values: Mapping[str, float], share: float) -> list[Any]:
    """The terms without the smallest ones that make up no more than a share of all."""
    if not share:
        return list(terms)
    ascending = sorted(terms, key=lambda term: (abs(value_of(term, values)), str(term)))
    left = share * sum(abs(value_of(term, values)) for term in terms)
    for place, term in enumerate(ascending):
        left -= abs(value_of(term, values))
        if left < 0:
            return ascending[place:]
    return []


def _circular(number: Any) -> Any:
    """A number as a short fraction times the power of 2π that leaves one; as it is where none does."""
    for power in sorted(range(-12, 13), key=abs):
        size = float(number) * (2 * np.pi) ** power
        fraction = Fraction(size).limit_denominator(64)
        if abs(size - fraction) <= 1e-9 * abs(fraction):
            return sympy.Rational(fraction) / (2 * sympy.pi) ** power
    return number


def _shortened(expression: Any) -> Any:
    long = [number for number in expression.atoms(sympy.Rational) if number.q > 10_000]
    return expression.xreplace({number: sympy.Float(number, 6) for number in long})
