"""Elements, nodes and drawing around a bought amplifier."""

from __future__ import annotations

from opto_ckt.circuits.receivers import board
from opto_ckt.circuits.receivers.feed import bias_elements, bias_node, far_side, feed_drawn, photodiode
from opto_ckt.request import FixedTiaRequest
from opto_ckt.topology import GROUND, RIGHT, Capacitor, Element, FixedTia, Point, Terminal, Topology

SUM: Point = (3, 2)
OUT: Point = (9, 2)


def passes_dc(request: FixedTiaRequest) -> bool:
    """Whether the amplifier's sheet states no low cut-off."""
    return request.fixed_tia.low_cutoff is None


def topology(request: FixedTiaRequest) -> Topology:
    """Detector, amplifier, supply bypass, load."""
    negative = board.negative_node(request)
    far: Point = (SUM[0], SUM[1] + 2 * far_side(request))
    supply, openings = feed_drawn(request, far)
    rails, rail_marks = board.rails(request, 11.5)
    elements: list[Element] = [
        photodiode(request, SUM, far),
        FixedTia("U1", input="sum", out="amp", positive="positive", negative=negative, passes_dc=passes_dc(request),
                 role="amplifier", table="fixed_tia", at=(5, 2), facing=RIGHT),
        *rails,
        Terminal("OUT", "out", at=OUT),
        Capacitor("CB", "sum", GROUND, role="board", fitted=False),
        *bias_elements(request),
        *board.load(request),
    ]  # fmt: skip
    return Topology(
        elements=tuple(elements),
        input="D1",
        output=("out", GROUND),
        wires=((SUM, (5, 2)), ((7, 2), board.line_start(OUT))),
        marks=((((6, 3), "positive")), ((6, 1), negative), (supply, bias_node(request)), *rail_marks),
        slots={"bias_filter": (bias_node(request), "far"), **board.SLOTS},
        taps={"decision": board.TAPS["decision"]},
        openings=openings | board.openings(OUT),
    )
