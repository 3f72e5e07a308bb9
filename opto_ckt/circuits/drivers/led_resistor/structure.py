"""Elements, nodes and drawing of the LED behind a resistor."""

from __future__ import annotations

from typing import Literal

from opto_ckt.request import LedDriverRequest
from opto_ckt.topology import GROUND, Element, Led, LogicOutput, Point, Resistor, Supply, Topology

Feed = Literal["rail", "source", "sink"]


def feed_of(request: LedDriverRequest) -> Feed:
    """What drives the current: the rail alone, or a logic output while high (source) or low (sink)."""
    return "rail" if request.logic_output is None else request.signal.drive


def topology(request: LedDriverRequest) -> Topology:
    """Resistor and LED in series between what feeds them; a signal adds to the voltage over both."""
    feed = feed_of(request)
    top = "gate" if feed == "source" else "positive"
    foot = "gate" if feed == "sink" else GROUND
    elements: list[Element] = [
        Resistor("R1", top, "led", role="series", at=(4, 6), to=(4, 4)),
        Led("D1", anode="led", cathode=foot, role="LED", table="source", at=(4, 3.4), to=(4, 1.4)),
    ]
    wires: list[tuple[Point, Point]] = [((4, 4), (4, 3.4))]
    marks: list[tuple[Point, str]] = []
    if feed != "rail":
        height = 6.0 if feed == "source" else 1.4
        elements.append(LogicOutput("U1", "gate", role="drive", table="logic_output", at=(0.5, height)))
        wires.append(((2.5, height), (4, height)))
    if feed != "source":
        elements.append(Supply("VP", "positive", value="supply.positive"))
        marks.append(((4, 6), "positive"))
    if feed != "sink":
        marks.append(((4, 1.4), GROUND))
    return Topology(
        elements=tuple(elements), input="R1", output=("light", GROUND), wires=tuple(wires), marks=tuple(marks)
    )
