"""Formulas and steps of a derivation in words: what they are of, numbers put in, result, source."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Mapping
from dataclasses import dataclass
from functools import cache
from inspect import getdoc, unwrap
from typing import Any

from opto_ckt.derivation import Step
from opto_ckt.units import known, write

_SECTION = re.compile(r"^(Parameters|Returns|Notes|Examples|Raises)\n-+\n", re.MULTILINE)
_ENTRY = re.compile(r"(\w+) : (.*?)\[([^\]]+)\]", re.DOTALL)
_SYMBOL = re.compile(r"[^\W\d_]\w{0,3}(?:_\w+)?(?=[\s,;.]|$)")
_UNIT = re.compile(r"\[([^\]]+)\]")


@dataclass(frozen=True)
class Quantity:
    """A parameter of a formula as its description states it."""

    symbol: str  #: as equations call it; the name itself where the description gives none
    words: str
    unit: str


@dataclass(frozen=True)
class Described:
    """A formula by its description."""

    title: str
    parameters: Mapping[str, Quantity]
    unit: str  #: of the result


@cache
def described(formula: Callable[..., Any]) -> Described:
    """What the description of a formula says: first sentence, symbol and unit of each parameter, unit of the result."""
    opening, *pieces = _SECTION.split(getdoc(unwrap(formula)) or "")
    sections = dict(zip(pieces[::2], pieces[1::2], strict=True))
    entries = re.split(r"\n(?=\w+ : )", sections.get("Parameters", ""))
    found = [match for entry in entries if (match := _ENTRY.match(entry.strip()))]
    quantities = {match[1]: _quantity(match[1], " ".join(match[2].split()), match[3]) for match in found}
    result = _UNIT.search(sections.get("Returns", ""))
    return Described(opening.strip().split("\n")[0], _distinct(quantities), result[1] if result else "")


def _quantity(name: str, words: str, unit: str) -> Quantity:
    symbol = _SYMBOL.match(words)
    return Quantity(symbol[0] if symbol else name, words.rstrip(" .;"), unit)


def _distinct(quantities: Mapping[str, Quantity]) -> dict[str, Quantity]:
    """Parameters that share a symbol keep their names."""
    symbols = [quantity.symbol for quantity in quantities.values()]
    return {
        name: quantity if symbols.count(quantity.symbol) == 1 else Quantity(name, quantity.words, quantity.unit)
        for name, quantity in quantities.items()
    }


def steps(step: Step) -> Iterator[str]:
    """What was computed by which formula; then the numbers put in, the reason and the source, where there are any."""
    about = described(step.formula)
    yield f"{step.name} = {number(step.result, about.unit)}   {step.equation}"
    units = {name: quantity.unit for name, quantity in about.parameters.items()}
    yield ", ".join(
        f"{name.replace('_', ' ')} {number(value, units.get(name, ''))}" for name, value in step.inputs.items()
    )
    if step.reason:
        yield step.reason
    if step.source:
        yield f"source: {step.source}"


def number(value: float, unit: str) -> str:
    """A number with its unit; units that have no prefixes are put behind the number as they are.

    >>> number(24300.0, "Ω"), number(0.70710678, "1"), number(2.5e-21, "A²/Hz")
    ('24.3 kΩ', '0.7071', '2.5e-21 A²/Hz')
    """
    if known(unit) and unit != "1":
        return write(value, unit, 4, trim=True)
    return f"{value:.4g} {unit if unit != '1' else ''}".rstrip()
