"""Elements, nodes and drawing of the cascode transimpedance amplifier."""

from __future__ import annotations

from opto_ckt.circuits.receivers import board
from opto_ckt.circuits.receivers.detector import POLARITY
from opto_ckt.circuits.receivers.feed import bias_elements, bias_node, far_side, feed_drawn, photodiode
from opto_ckt.request import CascodeRequest
from opto_ckt.topology import (
    GROUND,
    RIGHT,
    UP,
    BipolarTransistor,
    Capacitor,
    Element,
    OpAmp,
    Point,
    Resistor,
    Terminal,
    Topology,
)

SUM: Point = (3, 2.5)
EMITTER: Point = (1, 2.5)
BASE: Point = (2, 1.5)
LIT: Point = (-0.5, 2.5)  #: where the detector meets the emitter
BACK: Point = (3.7, 2.5)  #: where R5 meets the summing node
OUT: Point = (10.5, 2)


def topology(request: CascodeRequest) -> Topology:
    """The amplifier behind its transistor, the level of a single supply, strays, load and supply bypass."""
    negative, level = board.negative_node(request), board.level_node(request)
    polarity = int(POLARITY[request.detector.output])
    toward, back = (negative, "positive") if polarity > 0 else ("positive", negative)
    side = far_side(request)
    far: Point = (LIT[0], LIT[1] + 2 * side)
    supply, openings = feed_drawn(request, far)
    pulled: Point = (-6.5 if "bias_filter" in request.blocks_asked else -2.5, LIT[1])
    rails, rail_marks = board.rails(request, 13)
    divider, divider_marks, divider_wires = board.level(request, 13)
    elements: list[Element] = [
        photodiode(request, LIT, far, node="emitter"),
        BipolarTransistor("Q1", drain="sum", control=level, source="emitter", polarity=polarity, role="common base",
                          table="transistor", at=BASE, facing=UP, flipped=True),
        Resistor("R4", "emitter", toward, role="emitter current", at=pulled, to=(pulled[0], pulled[1] + 2 * side)),
        Resistor("R5", back, "sum", role="collector current", at=(BACK[0], BACK[1] - 2 * side), to=BACK),
        Resistor("R1", "sum", "amp", role="feedback", at=(5, 4.5), to=(9, 4.5)),
        Capacitor("C1", "sum", "amp", role="feedback", at=(5, 6), to=(9, 6)),
        OpAmp("U1", plus=level, minus="sum", out="amp", positive="positive", negative=negative, role="amplifier",
              table="amplifier", at=(6, 2), facing=RIGHT),
        *rails,
        Terminal("OUT", "out", at=OUT),
        Capacitor("CS", "sum", "amp", role="stray across R1", fitted=False),
        Capacitor("CB", "sum", GROUND, role="board", fitted=False),
        Capacitor("CE", "emitter", GROUND, role="board, emitter", fitted=False),
        Resistor("RB", "sum", GROUND, role="leakage", fitted=False),
        *bias_elements(request),
        *divider,
        *board.load(request),
    ]  # fmt: skip
    raised = level != GROUND
    return Topology(
        elements=tuple(elements),
        input="D1",
        output=("out", GROUND),
        loop="U1",
        wires=(
            (pulled, EMITTER),
            (SUM, (6, 2.5)),
            ((5, 2.5), (5, 6)),
            ((9, 2), (9, 6)),
            ((8, 2), board.line_start(OUT)),
            ((5.4, 1.5), (6, 1.5)),
            *divider_wires,
            *(() if raised else (((5.4, 1.5), (5.4, 1)),)),
        ),
        marks=(
            ((7, 3), "positive"),
            ((7, 1), negative),
            (BASE, level),
            ((pulled[0], pulled[1] + 2 * side), toward),
            ((BACK[0], BACK[1] - 2 * side), back),
            (supply, bias_node(request)),
            *board.servo_marks(request, (9, 4.5), SUM),
            ((5.4, 1.5) if raised else (5.4, 1), level),
            *rail_marks,
            *divider_marks,
        ),
        slots={"bias_filter": (bias_node(request), "far"), **board.SLOTS},
        taps=board.TAPS,
        openings=openings | board.openings(OUT),
    )
