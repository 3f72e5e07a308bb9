"""Elements, nodes and drawing of the bootstrapped transimpedance amplifier."""

from __future__ import annotations

from opto_ckt.circuits.receivers import board
from opto_ckt.circuits.receivers.feed import bias_elements, bias_node, far_side, feed_drawn, photodiode
from opto_ckt.circuits.receivers.tia_bootstrap.follower import POLARITY
from opto_ckt.request import BootstrapRequest
from opto_ckt.topology import (
    GROUND,
    LEFT,
    RIGHT,
    Capacitor,
    Element,
    Jfet,
    OpAmp,
    Point,
    Resistor,
    Terminal,
    Topology,
)

SUM: Point = (3, 2.5)
OUT: Point = (10.5, 2)


def topology(request: BootstrapRequest) -> Topology:
    """The amplifier with its follower, the level of a single supply, strays, load and supply bypass."""
    negative, level = board.negative_node(request), board.level_node(request)
    polarity = POLARITY[request.follower.kind]
    toward, drain = (negative, "positive") if polarity > 0 else ("positive", negative)
    side, rest = far_side(request), -polarity
    gate: Point = (-2.5 if "bias_filter" in request.blocks_asked else 0.5, SUM[1])
    far: Point = (3, SUM[1] + (2 if side == rest else 2.5) * side)
    fed: Point = (3, far[1] + 2 * side)
    supply, openings = feed_drawn(request, fed)
    follow: Point = (gate[0] - 1, gate[1] + 2 * rest)
    rails, rail_marks = board.rails(request, 13)
    divider, divider_marks, divider_wires = board.level(request, 13)
    coupling, around = _coupling(follow, far, side == rest)
    elements: list[Element] = [
        photodiode(request, SUM, far),
        Jfet("J1", drain=drain, control="sum", source="follow", polarity=polarity, role="follower", table="follower",
             at=gate, facing=LEFT, flipped=polarity > 0),
        Resistor("R4", "follow", toward, role="follower current", at=follow, to=(follow[0], follow[1] + 2 * rest)),
        coupling,
        Resistor("R5", "far", "feed", role="detector bias", at=far, to=fed),
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
            (gate, (6, 2.5)),
            ((follow[0], gate[1] + rest), follow),
            *around,
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
            ((follow[0], gate[1] - rest), drain),
            ((follow[0], follow[1] + 2 * rest), toward),
            (supply, bias_node(request)),
            *board.servo_marks(request, (9, 4.5), SUM),
            ((5.4, 1.5) if raised else (5.4, 1), level),
            *rail_marks,
            *divider_marks,
        ),
        slots={"bias_filter": (bias_node(request), "feed"), **board.SLOTS},
        taps=board.TAPS,
        openings=openings | board.openings(OUT),
    )


def _coupling(follow: Point, far: Point, near: bool) -> tuple[Capacitor, tuple[tuple[Point, Point], ...]]:
    """C4 with the wires to it: straight across, or around J1 where the detector lies on its other side."""
    below, start = ((follow[0] - 1.5, height) for height in (follow[1], far[1]))
    wires = () if near else ((follow, below), (below, start))
    at = follow if near else start
    return Capacitor("C4", "follow", "far", role="bootstrap", stock="bypass", at=at, to=far), wires
