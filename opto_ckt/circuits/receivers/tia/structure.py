"""Elements, nodes and drawing of the transimpedance amplifier."""

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
ADDED: Point = (0.5, 2.5)  #: where capacitance to ground is added for a decompensated op amp
OUT: Point = (10.5, 2)


def topology(request: OpAmpReceiverRequest) -> Topology:
    """The amplifier, its level if the supply is single, strays, load and supply bypass."""
    negative, level = board.negative_node(request), board.level_node(request)
    far: Point = (3, SUM[1] + 2 * far_side(request))
    supply, openings = feed_drawn(request, far)
    rails, rail_marks = board.rails(request, 13)
    divider, divider_marks, divider_wires = board.level(request, 13)
    added = (
        [Capacitor("C3", "sum", GROUND, role="for stability", at=ADDED, to=(ADDED[0], 0.5))]
        if lifts_noise_gain(request)
        else []
    )
    elements: list[Element] = [
        photodiode(request, SUM, far),
        Resistor("R1", "sum", "amp", role="feedback", at=(5, 4.5), to=(9, 4.5)),
        Capacitor("C1", "sum", "amp", role="feedback", at=(5, 6), to=(9, 6)),
        OpAmp("U1", plus=level, minus="sum", out="amp", positive="positive", negative=negative, role="amplifier",
              table="amplifier", at=(6, 2), facing=RIGHT),
        *rails,
        Terminal("OUT", "out", at=OUT),
        Capacitor("CS", "sum", "amp", role="stray across R1", fitted=False),
        Capacitor("CB", "sum", GROUND, role="board", fitted=False),
        Resistor("RB", "sum", GROUND, role="leakage", fitted=False),
        *bias_elements(request),
        *added,
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
            (ADDED if added else SUM, (6, 2.5)),
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
            (supply, bias_node(request)),
            *board.servo_marks(request, (9, 4.5), SUM),
            ((5.4, 1.5) if raised else (5.4, 1), level),
            *([((ADDED[0], 0.5), GROUND)] if added else []),
            *rail_marks,
            *divider_marks,
        ),
        slots={"bias_filter": (bias_node(request), "far"), **board.SLOTS},
        taps=board.TAPS,
        openings=openings | board.openings(OUT),
    )


def lifts_noise_gain(request: OpAmpReceiverRequest) -> bool:
    """Whether the op amp is decompensated: a place for capacitance to ground then, empty where none is needed."""
    return request.amplifier.minimum_stable_gain.nominal > 1
