"""The designer's formulas of a circuit: its network functions and its sizing relations, as text or as LaTeX."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Mapping, Sequence
from typing import Any

from opto_ckt.analyses.ideal import Ideal, idealised, left_out
from opto_ckt.analyses.network.expansion import expand
from opto_ckt.analyses.symbolic import (
    coefficients,
    formula_expression,
    latex,
    readable,
    renamed,
    symbolic_return_ratio,
    symbolic_transfer,
)
from opto_ckt.formulas.formula import source_of
from opto_ckt.outputs.columns import packed
from opto_ckt.outputs.derivation_text import described
from opto_ckt.topology import Topology

PAGE = 100
POWERS = ("", "·s", "·s²", "·s³", "·s⁴", "·s⁵", "·s⁶", "·s⁷", "·s⁸", "·s⁹")
Write = Callable[[Any], str]


def formula_page(
    title: str, topology: Topology, formulas: Sequence[Callable[..., Any]], *, as_latex: bool = False
) -> str:
    """Transfer function and loop gain of the idealised network, then every sizing relation with its source.

    Parameters
    ----------
    topology : slots filled or closed.
    as_latex : a fragment to be put into a document; else plain text.
    """
    ideal = idealised(expand(topology), *left_out(topology))
    lines = _latex(title, ideal, formulas) if as_latex else _text(title, topology, ideal, formulas)
    return "\n".join(lines) + "\n"


def _functions(ideal: Ideal) -> Iterator[tuple[str, str, list[Any], list[Any]]]:
    """Heading, symbol, numerator and denominator of each network function."""
    yield ("Transfer, output over input", "H", *coefficients(symbolic_transfer(ideal.expansion)))
    if ideal.expansion.loop:
        yield ("Loop gain", "T", *coefficients(symbolic_return_ratio(ideal.expansion)))


def _text(title: str, topology: Topology, ideal: Ideal, formulas: Sequence[Callable[..., Any]]) -> Iterator[str]:
    yield title
    yield "Every quantity in SI units; log is the natural logarithm."
    absent = {element.ref for element in topology if not element.fitted}
    names = [name for name in (*ideal.none, *ideal.unbounded) if "noise" not in name]
    if names:
        yield ""
        yield "Left out of the network functions below, though not of what opto-ckt computes"
        yield from packed([f"{name} ({topology[name].role})" if name in absent else name for name in names], 2, PAGE)
    for heading, symbol, above, below in _functions(ideal):
        yield ""
        yield f"{heading}: {symbol}(s) = {_quotient(above, below)}"
        for letter, part in (("b", above), ("a", below)):
            for power, factor in enumerate(part):
                if factor != 0:
                    yield f"  {letter}{power} = {readable(factor)}"
    for formula in formulas:
        yield ""
        yield from _relation(formula)


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


def _latex(title: str, ideal: Ideal, formulas: Sequence[Callable[..., Any]]) -> Iterator[str]:
    yield f"% opto-ckt: {title}"
    functions = list(_functions(ideal))
    names = _value_names([factor for _, _, above, below in functions for factor in (*above, *below)])
    for heading, symbol, above, below in functions:
        yield f"% {heading}"
        yield rf"\[ {symbol}(s) = \frac{{{_polynomial(above, names)}}}{{{_polynomial(below, names)}}} \]"
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
