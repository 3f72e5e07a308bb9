"""Elements, nodes and drawing of the pair."""

from __future__ import annotations

from opto_ckt.circuits.receivers import board
from opto_ckt.circuits.receivers.feed import bias_elements, bias_node, far_side, feed_drawn, photodiode
from opto_ckt.request import DiscreteRequest
from opto_ckt.topology import GROUND, RIGHT, BipolarTransistor, Capacitor, Element, Point, Resistor, Terminal, Topology

SUM: Point = (3, 2)
OUT: Point = (13, 3)


def topology(request: DiscreteRequest) -> Topology:
    """Input transistor, follower, feedback, base resistances, strays, load and bypass."""
    negative = board.negative_node(request)
    far: Point = (SUM[0], SUM[1] + 2 * far_side(request))
    supply, openings = feed_drawn(request, far)
    rails, rail_marks = board.rails(request, 15.5)
    elements: list[Element] = [
        photodiode(request, SUM, far),
        BipolarTransistor("Q1", drain="col", control="sum", source=GROUND, role="input", table="transistor",
                   at=(6, 2), facing=RIGHT),
        BipolarTransistor("Q2", drain="positive", control="col", source="amp", role="follower",
                   table="transistor", at=(9, 4), facing=RIGHT),
        Resistor("R2", "positive", "col", role="collector", at=(7, 6.5), to=(7, 4)),
        Resistor("R3", "amp", negative, role="emitter", at=(10, 1.5), to=(10, -0.5)),
        Resistor("R1", "amp", "sum", role="feedback", at=(9, -2), to=(5, -2)),
        Capacitor("C1", "amp", "sum", role="feedback", at=(9, -3.5), to=(5, -3.5)),
        *rails,
        Terminal("OUT", "out", at=OUT),
        Capacitor("CS", "sum", "amp", role="stray across R1", fitted=False),
        Capacitor("CB", "sum", GROUND, role="board", fitted=False),
        Resistor("RB", "sum", GROUND, role="leakage", fitted=False),
        *bias_elements(request),
        *board.load(request),
    ]  # fmt: skip
    return Topology(
        elements=tuple(elements),
        input="D1",
        output=("out", GROUND),
        loop="Q1",
        wires=(
            (SUM, (6, 2)), ((5, 2), (5, -3.5)), ((7, 3), (7, 4)), ((7, 4), (9, 4)),
            ((10, 3), (10, 1.5)), ((10, 3), board.line_start(OUT)),
            ((11, 3), (11, -3.5)), ((9, -2), (11, -2)), ((9, -3.5), (11, -3.5)),
        ),
        marks=(
            ((7, 1), GROUND), ((7, 6.5), "positive"), ((10, 5), "positive"), ((10, -0.5), negative),
            (supply, bias_node(request)), *rail_marks,
        ),
        slots={"bias_filter": (bias_node(request), "far"), **board.SLOTS},
        taps={"decision": board.TAPS["decision"]},
        openings=openings | board.openings(OUT),
    )  # fmt: skip
