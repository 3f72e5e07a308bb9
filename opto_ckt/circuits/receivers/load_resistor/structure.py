"""Elements, nodes and drawing of the load resistor and its amplifier."""

from __future__ import annotations

from opto_ckt.circuits.receivers import board
from opto_ckt.circuits.receivers.feed import bias_elements, bias_node, far_side, feed_drawn, photodiode
from opto_ckt.circuits.receivers.load_resistor import level_buffer
from opto_ckt.circuits.receivers.load_resistor.form import amplified, equalised
from opto_ckt.request import LoadResistorRequest
from opto_ckt.topology import GROUND, RIGHT, Capacitor, Element, OpAmp, Point, Resistor, Terminal, Topology

SUM: Point = (3, 2.5)
OUT: Point = (12, 2)
LOAD_X = 5.5  #: of R1 on the drawing


def topology(request: LoadResistorRequest) -> Topology:
    """The load, the amplifier with what its form asks for, the level of a single supply, strays, load and bypass."""
    negative, level = board.negative_node(request), board.level_node(request)
    far: Point = (SUM[0], SUM[1] + 2 * far_side(request))
    supply, openings = feed_drawn(request, far)
    rails, rail_marks = board.rails(request, 14.5)
    divider, divider_marks, divider_wires = level_buffer.drawn(request, 14.5)
    shaped = equalised(request) or amplified(request)
    network, wires, marks = _network(request) if shaped else ([], [((7, 1.5), (6.5, 1.5)), ((6.5, 1.5), (6.5, -0.5)),
        ((6.5, -0.5), (9.5, -0.5))], [])  # fmt: skip
    elements: list[Element] = [
        photodiode(request, SUM, far),
        Resistor("R1", "sum", level, role="load", at=(LOAD_X, 2.5), to=(LOAD_X, 0.5)),
        OpAmp("U1", plus="sum", minus="set" if shaped else "amp", out="amp", positive="positive", negative=negative,
              role="amplifier", table="amplifier", at=(7, 2), facing=RIGHT, flipped=True),
        *network,
        *rails,
        Terminal("OUT", "out", at=OUT),
        Capacitor("CB", "sum", GROUND, role="board", fitted=False),
        Resistor("RB", "sum", GROUND, role="leakage", fitted=False),
        *bias_elements(request),
        *divider,
        *board.load(request),
    ]  # fmt: skip
    return Topology(
        elements=tuple(elements),
        input="D1",
        output=("out", GROUND),
        loop="U1",
        wires=(
            (SUM, (7, 2.5)),
            ((9.5, 2), (9.5, -0.5)),
            ((9, 2), board.line_start(OUT)),
            *wires,
            *divider_wires,
        ),
        marks=(
            ((8, 3), "positive"),
            ((8, 1), negative),
            (supply, bias_node(request)),
            ((LOAD_X, 0.5), level),
            *marks,
            *rail_marks,
            *divider_marks,
        ),
        slots={"bias_filter": (bias_node(request), "far"), **board.SLOTS},
        taps={"decision": board.TAPS["decision"]},
        openings=openings | board.openings(OUT),
    )


def _network(
    request: LoadResistorRequest,
) -> tuple[list[Element], list[tuple[Point, Point]], list[tuple[Point, str]]]:
    """R4 and R5 around the inverting input; of an equaliser C5 between R5 and ground."""
    level = board.level_node(request)
    foot = "foot" if equalised(request) else level
    role = "equaliser" if equalised(request) else "gain"
    elements: list[Element] = [
        Resistor("R4", "set", "amp", role=role, at=(6.5, -0.5), to=(9.5, -0.5)),
        Resistor("R5", "set", foot, role=role, at=(6.5, -0.5), to=(6.5, -2.5)),
    ]
    wires: list[tuple[Point, Point]] = [((7, 1.5), (6.5, 1.5)), ((6.5, 1.5), (6.5, -0.5))]
    if not equalised(request):
        return elements, wires, [((6.5, -2.5), level)]
    elements.append(Capacitor("C5", foot, GROUND, role=role, at=(6.5, -2.5), to=(6.5, -4.5)))
    return elements, wires, [((6.5, -4.5), GROUND)]
