r"""Elements, nodes and drawing of the filter.

    rc       in --[R20]--+-- out          ladder   in --[R20]--+--(L20)--+--(L21)--+-- out    orders 2 to 5
                       [C20]                                 [C20]     [C21]     [C22]
                         0                                     0         0         0

    active   in --[R20]--+--[R21]--+--|+ \
                         |       [C21]| U20 >--+-- out                     one such section for two orders
                         |         0 -|- /     |
                         +---[ C20 ]---+-------+
"""

from __future__ import annotations

from opto_ckt.circuits.receivers.board import negative_node
from opto_ckt.request import ReceiverRequest
from opto_ckt.request.blocks import PostFilter
from opto_ckt.topology import GROUND, RIGHT, Capacitor, Element, Inductor, OpAmp, Point, Resistor, Topology

WIDTH = 6.5  #: of one active section, on the drawing
STEP = 3.0  #: of one rung of the ladder, on the drawing

Drawn = tuple[list[Element], list[tuple[Point, Point]], list[tuple[Point, str]], float]


def asked(request: ReceiverRequest) -> PostFilter:
    """The filter's table of the design file."""
    if request.blocks.post_filter is None:
        raise ValueError("the design asks for no filter")
    return request.blocks.post_filter


def table(request: ReceiverRequest) -> str:
    """Table of the design file that holds the followers of an active filter."""
    return "amplifier" if request.second_amplifier is None else "second_amplifier"


def topology(request: ReceiverRequest) -> Topology:
    """The filter of the kind and order that are asked for."""
    build = {"rc": _rc, "active": _active, "ladder": _ladder}[asked(request).form]
    elements, wires, marks, width = build(request)
    return Topology(
        elements=tuple(elements),
        input="",
        output=("out", GROUND),
        wires=tuple(wires),
        marks=tuple(marks),
        end=(width, 0),
    )


def _rc(request: ReceiverRequest) -> Drawn:
    elements: list[Element] = [
        Resistor("R20", "in", "out", role="filter", at=(0, 0), to=(3, 0)),
        Capacitor("C20", "out", GROUND, role="filter", at=(3, 0), to=(3, -2)),
    ]
    return elements, [((3, 0), (4.5, 0))], [((3, -2), GROUND)], 4.5


def _ladder(request: ReceiverRequest) -> Drawn:
    """Behind the resistor capacitors and inductors take turns; the last one is a capacitor."""
    order = asked(request).order
    elements: list[Element] = [Resistor("R20", "in", "rung0", role="source", at=(0, 0), to=(STEP, 0))]
    marks: list[tuple[Point, str]] = []
    x, node, coils, capacitors = STEP, "rung0", 0, 0
    for left in range(order, 0, -1):
        if left % 2:
            elements.append(
                Capacitor(f"C2{capacitors}", node, GROUND, role="ladder", at=(x, 0), to=(x, -2)),
            )
            marks.append(((x, -2), GROUND))
            capacitors += 1
            continue
        following = "out" if left == 2 else f"rung{coils + 1}"
        elements.append(Inductor(f"L2{coils}", node, following, role="ladder", at=(x, 0), to=(x + STEP, 0)))
        x, node, coils = x + STEP, following, coils + 1
    return elements, [((x, 0), (x + 1.5, 0))], marks, x + 1.5


def _active(request: ReceiverRequest) -> Drawn:
    """One section for two orders."""
    count = asked(request).order // 2
    elements: list[Element] = []
    wires: list[tuple[Point, Point]] = []
    marks: list[tuple[Point, str]] = []
    for index in range(count):
        before = "in" if index == 0 else f"section{index}"
        after = "out" if index == count - 1 else f"section{index + 1}"
        more = _section(request, index, before, after, index * WIDTH)
        elements += more[0]
        wires += more[1]
        marks += more[2]
    return elements, wires, marks, count * WIDTH


def _section(
    request: ReceiverRequest, index: int, before: str, after: str, x: float
) -> tuple[list[Element], list[tuple[Point, Point]], list[tuple[Point, str]]]:
    negative = negative_node(request)
    first, second, follower = f"2{2 * index}", f"2{2 * index + 1}", f"U2{index}"
    middle, held = f"middle{index}", f"held{index}"
    elements: list[Element] = [
        Resistor(f"R{first}", before, middle, role="filter", at=(x, 0), to=(x + 1.5, 0)),
        Resistor(f"R{second}", middle, held, role="filter", at=(x + 1.5, 0), to=(x + 3, 0)),
        Capacitor(f"C{second}", held, GROUND, role="filter", at=(x + 3, 0), to=(x + 3, -2)),
        Capacitor(f"C{first}", middle, after, role="filter", at=(x + 1.5, 3), to=(x + 6, 3)),
        OpAmp(follower, plus=held, minus=after, out=after, positive="positive", negative=negative, role="follower",
              table=table(request), at=(x + 3.6, -0.5), facing=RIGHT, flipped=True),
        Capacitor(f"C2{6 + 2 * index}", "positive", GROUND, role="bypass", stock="bypass",
                  at=(x + 1, -3.5), to=(x + 1, -5.5)),
    ]  # fmt: skip
    wires: list[tuple[Point, Point]] = [
        ((x + 1.5, 0), (x + 1.5, 3)),
        ((x + 3, 0), (x + 3.6, 0)),
        ((x + 3.6, -1), (x + 3.6, -2)),
        ((x + 3.6, -2), (x + 6, -2)),
        ((x + 6, -2), (x + 6, 3)),
        ((x + 5.6, -0.5), (x + 6, -0.5)),
        ((x + 6, 0), (x + WIDTH, 0)),
    ]
    marks: list[tuple[Point, str]] = [
        ((x + 3, -2), GROUND),
        ((x + 4.6, 0.5), "positive"),
        ((x + 4.6, -1.5), negative),
        ((x + 1, -3.5), "positive"),
        ((x + 1, -5.5), GROUND),
    ]
    if negative != GROUND:
        elements.append(
            Capacitor(f"C2{7 + 2 * index}", GROUND, "negative", role="bypass", stock="bypass",
                      at=(x + 3, -3.5), to=(x + 3, -5.5)),
        )  # fmt: skip
        marks += [((x + 3, -3.5), GROUND), ((x + 3, -5.5), "negative")]
    return elements, wires, marks
