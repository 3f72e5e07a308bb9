"""What other circuits would give, a sentence each."""

from __future__ import annotations

from collections.abc import Iterator
from math import isfinite

from opto_ckt.outputs.figure_text import figure_text
from opto_ckt.result import Result


def alternatives(result: Result) -> Iterator[str]:
    """Circuit, verdict, a few figures, the number of parts, and what its faults risk."""
    for other in result.alternatives:
        told = [f"{name} {figure_text(name, value)}" for name, value in other.figures.items() if isfinite(value)]
        told += [f"{other.parts} parts"] if other.parts else []
        if other.faults is not None:
            told.append(f"{other.faults[0]} of {other.faults[1]} faults pass a limit")
        yield f"{other.circuit}: {'; '.join([other.verdict, *told])}"
