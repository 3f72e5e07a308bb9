"""The cards that stand for an element in a deck, and the subcircuit that they call.

Inner conductances that have no physical resistor behind them are voltage-controlled current sources on their own nodes:
they make no noise, as in the engine.
"""

from __future__ import annotations

from collections.abc import Mapping
from functools import singledispatch
from typing import NamedTuple

from opto_ckt.topology import Element

NOWHERE = 1e14  #: frequencies from here on stand for a pole that the sheet does not give [Hz]

Values = Mapping[str, float]


class Cards(NamedTuple):
    """What an element puts into the circuit, and the subcircuit that it calls."""

    calls: str
    subcircuit: str = ""


@singledispatch
def cards(element: Element, values: Values, driven: bool) -> Cards:
    """Cards of an element; ``driven`` where the circuit's input enters through it."""
    raise TypeError(f"no SPICE model for {type(element).__name__}")


def figures_of(element: Element, values: Values) -> dict[str, float]:
    """Figures that the small-signal model of an element reads."""
    return {figure: values[element.value_name(figure)] for figure in element.figures}
