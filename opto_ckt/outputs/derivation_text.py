"""Steps of a derivation in words: formula, numbers put in, result, source."""

from __future__ import annotations

import re
from collections.abc import Callable, Iterator, Mapping
from functools import cache
from inspect import getdoc
from typing import Any

from opto_ckt.derivation import Step
from opto_ckt.units import known, write

_PARAMETER = re.compile(r"^(\w+) : .*?\[([^\]]+)\]\s*$", re.MULTILINE | re.DOTALL)
_SECTION = re.compile(r"^(Parameters|Returns|Notes|Examples|Raises)\n-+\n", re.MULTILINE)
_UNIT = re.compile(r"\[([^\]]+)\]")


def steps(step: Step) -> Iterator[str]:
    """What was computed by which formula; then the numbers put in, the reason and the source, each where there is one."""
    units = units_of(step.formula)
    yield f"{step.name} = {quantity(step.result, units[''])}   {step.equation}"
    yield ", ".join(f"{name.replace('_', ' ')} {quantity(value, units.get(name, ''))}" for name, value in step.inputs.items())
    if step.reason:
        yield step.reason
    if step.source:
        yield f"source: {step.source}"


@cache
def units_of(formula: Callable[..., Any]) -> Mapping[str, str]:
    """Unit of each parameter of a formula, and of its result under the empty name, as its description states them."""
    _, *pieces = _SECTION.split(getdoc(formula) or "")
    sections = dict(zip(pieces[::2], pieces[1::2], strict=True))
    units = {}
    for entry in re.split(r"\n(?=\w+ : )", sections.get("Parameters", "")):
        if found := _PARAMETER.match(entry.strip()):
            units[found[1]] = found[2]
    result = _UNIT.search(sections.get("Returns", ""))
    return {**units, "": result[1] if result else ""}


def quantity(value: float, unit: str) -> str:
    """A number with its unit; units that have no prefixes are put behind the number as they are.

    >>> quantity(24300.0, "Ω"), quantity(0.70710678, "1"), quantity(2.5e-21, "A²/Hz")
    ('24.3 kΩ', '0.7071', '2.5e-21 A²/Hz')
    """
    if known(unit) and unit != "1":
        return write(value, unit, 4, trim=True)
    return f"{value:.4g} {unit if unit != '1' else ''}".rstrip()
