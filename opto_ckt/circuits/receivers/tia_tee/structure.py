"""Elements, nodes and drawing of the transimpedance amplifier with a tee."""

from __future__ import annotations

from opto_ckt.circuits.receivers import board
from opto_ckt.circuits.receivers.feed import bias_elements, bias_node, far_side, feed_drawn, photodiode
from opto_ckt.request import OpAmpReceiverRequest
from opto_ckt.topology import (
    GROUND,
    RIGHT,
    Capacitor,
    Element,
    OpAmp,
    Point,
    Resistor,
    Terminal,
    Topology,
)

SUM: Point = (3, 2.5)
OUT: Point = (13.5, 2)
LEFT_END, MIDDLE, RIGHT_END = 5.0, 8.5, 12.0  #: of the feedback, on the drawing
RESISTIVE, CAPACITIVE = 5.5, 9.0  #: heights of the two ways


def resistive(request: OpAmpReceiverRequest) -> bool:
    """Whether the resistance is a tee."""
    return request.target.tee != "capacitive"


def capacitive(request: OpAmpReceiverRequest) -> bool:
    """Whether the capacitance is a tee."""
    return request.target.tee != "resistive"


def topology(request: OpAmpReceiverRequest) -> Topology:
    """The amplifier with its two ways of feedback, strays, load and supply bypass."""
    negative = board.negative_node(request)
    far: Point = (SUM[0], SUM[1] + 2 * far_side(request))
    supply, openings = feed_drawn(request, far)
    rails, rail_marks = board.rails(request, 16)
    resistors, resistor_marks = _way(request, Resistor, "R", RESISTIVE, tee=resistive(request))
    capacitors, capacitor_marks = _way(request, Capacitor, "C", CAPACITIVE, tee=capacitive(request))
    elements: list[Element] = [
        photodiode(request, SUM, far),
        *resistors,
        *capacitors,
        OpAmp("U1", plus=GROUND, minus="sum", out="amp", positive="positive", negative=negative, role="amplifier",
              table="amplifier", at=(7, 2), facing=RIGHT),
        *rails,
        Terminal("OUT", "out", at=OUT),
        Capacitor("CS", "sum", "amp", role="stray across the feedback", fitted=False),
        Capacitor("CB", "sum", GROUND, role="board", fitted=False),
        Resistor("RB", "sum", GROUND, role="leakage", fitted=False),
        *([Capacitor("CR", "sum", "tee", role="body of R1", fitted=False)] if resistive(request) else []),
        *([Resistor("RT", "tap", GROUND, role="leakage at C5", fitted=False)] if capacitive(request) else []),
        *bias_elements(request),
        *board.load(request),
    ]  # fmt: skip
    return Topology(
        elements=tuple(elements),
        input="D1",
        output=("out", GROUND),
        loop="U1",
        wires=(
            (SUM, (7, 2.5)),
            ((LEFT_END, 2.5), (LEFT_END, CAPACITIVE)),
            ((RIGHT_END, 2), (RIGHT_END, CAPACITIVE)),
            ((9, 2), board.line_start(OUT)),
            ((6.4, 1.5), (7, 1.5)),
            ((6.4, 1.5), (6.4, 1)),
        ),
        marks=(
            ((8, 3), "positive"),
            ((8, 1), negative),
            ((6.4, 1), GROUND),
            (supply, bias_node(request)),
            *board.servo_marks(request, (RIGHT_END, 4), SUM),
            *resistor_marks,
            *capacitor_marks,
            *rail_marks,
        ),
        slots={"bias_filter": (bias_node(request), "far"), **board.SLOTS},
        taps=board.TAPS,
        openings=openings | board.openings(OUT),
    )


def _way(
    request: OpAmpReceiverRequest, kind: type[Resistor] | type[Capacitor], letter: str, height: float, *, tee: bool
) -> tuple[list[Element], list[tuple[Point, str]]]:
    """One part across the amplifier, or a tee of three with its marks."""
    left, middle, right = (LEFT_END, height), (MIDDLE, height), (RIGHT_END, height)
    if not tee:
        return [kind(f"{letter}1", "sum", "amp", role="feedback", at=left, to=right)], []
    node = "tee" if letter == "R" else "tap"
    ground = (MIDDLE, height + 2)
    return [
        kind(f"{letter}1", "sum", node, role="feedback", at=left, to=middle),
        kind(f"{letter}4", node, "amp", role="tee, output", at=middle, to=right),
        kind(f"{letter}5", node, GROUND, role="tee, ground", at=middle, to=ground),
    ], [(ground, GROUND)]
