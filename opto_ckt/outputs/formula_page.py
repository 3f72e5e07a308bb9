"""The designer's formulas of a circuit: its network functions and its sizing relations, as text or as LaTeX."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Mapping, Sequence
from dataclasses import dataclass
from typing import Any

import numpy as np
from numpy.typing import NDArray

from opto_ckt.analyses.ideal import Core, answers, core, frequencies_of
from opto_ckt.analyses.network import Expansion
from opto_ckt.analyses.symbolic import (
    coefficients,
    formula_expression,
    latex,
    readable,
    renamed,
    symbolic_return_ratio,
    symbolic_transfer,
    value_of,
)
from opto_ckt.formulas.formula import source_of
from opto_ckt.outputs.columns import packed
from opto_ckt.outputs.derivation_text import described
from opto_ckt.units import percent, write

PAGE = 100
DROPPED = 0.05  #: of a coefficient, in its smallest terms together
POWERS = ("", "·s", "·s²", "·s³", "·s⁴", "·s⁵", "·s⁶", "·s⁷", "·s⁸", "·s⁹")
Formulas = Sequence[Callable[..., Any]]


@dataclass(frozen=True)
class Function:
    """One network function by its coefficients, lowest power of s first."""

    heading: str
    symbol: str
    above: list[Any]
    below: list[Any]
    apart: float  #: largest distance from the whole network's, as a share of the largest value, or of one


def formula_page(
    title: str, expansion: Expansion, values: Mapping[str, float], formulas: Formulas, *, as_latex: bool = False
) -> str:
    """Transfer function and loop gain, reduced to what matters, then every sizing relation with its source.

    Parameters
    ----------
    values : of everything in the network; they decide what matters.
    as_latex : a fragment to be put into a document; else plain text.
    """
    frequencies = frequencies_of(expansion, values)
    heart = core(expansion, values, frequencies)
    functions = list(_functions(expansion, heart, values, frequencies))
    top = write(float(frequencies[-1]), "Hz")
    lines = _latex(title, top, functions, formulas) if as_latex else _text(title, top, heart, functions, formulas)
    return "\n".join(lines) + "\n"


def _functions(
    expansion: Expansion, heart: Core, values: Mapping[str, float], frequencies: NDArray[np.float64]
) -> Iterator[Function]:
    transfer, closed = answers(expansion, values, frequencies)
    above, below = coefficients(symbolic_transfer(heart.expansion), values, DROPPED)
    apart = np.abs(_evaluated(above, below, values, frequencies) - transfer) / np.max(np.abs(transfer))
    yield Function("Transfer, output over input", "H", above, below, float(np.max(apart)))
    if heart.expansion.loop:
        above, below = coefficients(symbolic_return_ratio(heart.expansion), values, DROPPED)
        ratio = _evaluated(above, below, values, frequencies)
        yield Function("Loop gain", "T", above, below, float(np.max(np.abs(ratio / (1 + ratio) - closed))))


def _evaluated(
    above: Sequence[Any], below: Sequence[Any], values: Mapping[str, float], frequencies: NDArray[np.float64]
) -> NDArray[np.complex128]:
    numbers = [[value_of(factor, values) for factor in reversed(part)] for part in (above, below)]
    point = 2j * np.pi * frequencies
    return np.asarray(np.polyval(numbers[0], point) / np.polyval(numbers[1], point))


def _text(title: str, top: str, heart: Core, functions: Sequence[Function], formulas: Formulas) -> Iterator[str]:
    yield title
    yield "Every quantity in SI units; log is the natural logarithm."
    for words, names in (("an open", heart.opened), ("a short", heart.shorted)):
        if names:
            yield ""
            yield f"Taken as {words} in the two functions below, though not in what opto-ckt computes"
            yield from packed(names, 2, PAGE)
    for function in functions:
        yield ""
        quotient = _quotient(function.above, function.below)
        yield f"{function.heading}: {function.symbol}(s) ≈ {quotient}, {_within(function, top)}"
        for letter, part in (("b", function.above), ("a", function.below)):
            for power, factor in enumerate(part):
                if factor != 0:
                    yield f"  {letter}{power} = {readable(factor)}"
    for formula in formulas:
        yield ""
        yield from _relation(formula)


def _within(function: Function, top: str) -> str:
    """How near it comes: of the loop gain what the closed loop makes of it, T/(1 + T)."""
    of = "the largest" if function.symbol == "H" else "T/(1 + T)"
    return f"within {percent(function.apart, 2)} of {of} up to {top}"


def _quotient(above: Sequence[Any], below: Sequence[Any]) -> str:
    written = [_sum(letter, part) for letter, part in (("b", above), ("a", below))]
    top, bottom = (f"({part})" if " " in part else part for part in written)
    return f"{top}/{bottom}"


def _sum(letter: str, part: Sequence[Any]) -> str:
    return " + ".join(f"{letter}{power}{POWERS[power]}" for power, factor in enumerate(part) if factor != 0)


def _relation(formula: Callable[..., Any]) -> Iterator[str]:
    about = described(formula)
    symbols = {name: quantity.symbol for name, quantity in about.parameters.items()}
    yield about.title
    yield f"  {formula.__name__} [{about.unit}] = {readable(renamed(formula_expression(formula), symbols))}"
    for name, quantity in about.parameters.items():
        words = name.replace("_", " ") + _more(quantity.words, quantity.symbol)
        yield f"    {quantity.symbol} [{quantity.unit}]  {words}"
    yield f"    source: {source_of(formula)}"


def _more(words: str, symbol: str) -> str:
    rest = words.removeprefix(symbol).strip(" ,;.")
    return f": {rest}" if rest else ""


def _latex(title: str, top: str, functions: Sequence[Function], formulas: Formulas) -> Iterator[str]:
    yield f"% opto-ckt: {title}"
    names = _value_names([factor for each in functions for factor in (*each.above, *each.below)])
    for each in functions:
        yield f"% {each.heading}, {_within(each, top)}"
        quotient = rf"\frac{{{_polynomial(each.above, names)}}}{{{_polynomial(each.below, names)}}}"
        yield rf"\[ {each.symbol}(s) \approx {quotient} \]"
    for formula in formulas:
        about = described(formula)
        yield f"% {about.title} Source: {' '.join(source_of(formula).split())}"
        symbols = {name: _symbol(quantity.symbol) for name, quantity in about.parameters.items()}
        yield rf"\[ {_upright(formula.__name__)} = {latex(formula_expression(formula), symbols)} \]"


def _polynomial(part: Sequence[Any], names: Mapping[str, str]) -> str:
    powers = ("", r" s", *(f" s^{{{power}}}" for power in range(2, len(part))))
    terms = [rf"\left({latex(factor, names)}\right){powers[power]}" for power, factor in enumerate(part) if factor != 0]
    return " + ".join(terms)


def _value_names(factors: Sequence[Any]) -> dict[str, str]:
    """LaTeX of every value: ``R1`` as R with an index, a figure of a part upright with the part as index."""
    names: dict[str, str] = {}
    for symbol in (symbol for factor in factors for symbol in factor.free_symbols):
        ref, _, figure = symbol.name.partition(".")
        names[symbol.name] = rf"{_upright(figure)}_{{\mathrm{{{ref}}}}}" if figure else _symbol(_split(ref))
    return names


def _split(ref: str) -> str:
    return re.sub(r"^([A-Za-z]+)([0-9].*)$", r"\1_\2", ref)


def _symbol(name: str) -> str:
    """A symbol with its index: ``C_f`` in italics, longer words upright."""
    head, _, index = name.partition("_")
    if len(head) > 1 and "_" in name and len(index) > 4:
        return _upright(name)
    written = head if len(head) == 1 else _upright(head)
    return rf"{written}_{{\mathrm{{{index}}}}}" if index else written


def _upright(words: str) -> str:
    return "\\mathrm{" + words.replace("_", "\\ ") + "}"
