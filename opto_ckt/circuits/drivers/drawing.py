"""Parts of drawings that laser drivers share: supply with its filter, disable input; a drawing moved aside."""

from __future__ import annotations

from dataclasses import replace

from opto_ckt.circuits.drivers.side import Side
from opto_ckt.request import LaserDriverRequest
from opto_ckt.topology import (
    GROUND,
    RIGHT,
    Capacitor,
    Element,
    Inductor,
    Point,
    Resistor,
    Supply,
    Switch,
    Terminal,
)

Drawing = tuple[list[Element], list[tuple[Point, Point]], list[tuple[Point, str]]]


def filter_drawing(request: LaserDriverRequest, side: Side) -> Drawing:
    """Supply, its filter and the bypass of the op amp."""
    low = side == "low"
    x, y = (6.0, 11.0) if low else (9.5, 3.6)
    elements: list[Element] = [
        Supply("VP", "positive", value="supply.positive"),
        Inductor("L1", "positive", "rail", role="supply filter", at=(x, y), to=(x + 2.5, y)),
        Resistor("R8", "positive", "rail", role="damping", at=(x, y + 1.6), to=(x + 2.5, y + 1.6)),
        Capacitor("C3", "rail", GROUND, role="supply filter", stock="bypass", at=(x + 4, y), to=(x + 4, y - 2)),
        Capacitor("C8", "rail", GROUND, role="bypass", stock="bypass", at=(x + 6, y), to=(x + 6, y - 2)),
    ]
    wires = [
        ((x - 0.8, y), (x, y)),
        ((x, y), (x, y + 1.6)),
        ((x + 2.5, y), (x + 2.5, y + 1.6)),
        ((x + 2.5, y), (x + 7, y)),
    ]
    marks = [((x - 0.8, y), "positive"), ((x + 4, y - 2), GROUND), ((x + 6, y - 2), GROUND), ((x + 7, y), "rail")]
    if request.conditions.supply.negative:
        elements += [
            Supply("VN", "negative", value="supply.negative"),
            Capacitor(
                "C9", GROUND, "negative", role="bypass", stock="bypass", at=(x + 8, y - 0.5), to=(x + 8, y - 2.5)
            ),
        ]
        marks += [((x + 8, y - 0.5), GROUND), ((x + 8, y - 2.5), "negative")]
    return elements, wires, marks


def disable_drawing(request: LaserDriverRequest, side: Side, shorted: str) -> Drawing:
    """Input that shorts a node to the near rail unless it is pulled low; while it is open the laser stays off."""
    if not request.signal.enable:
        return [], [], []
    return _disable_low(shorted) if side == "low" else _disable_high(shorted)


def _disable_low(shorted: str) -> Drawing:
    role = "disable switch, n-channel"
    return (
        [
            Supply("VE", "off", value="control.disable"),
            Terminal("DISABLE", "off", at=(3, 0)),
            Resistor("R11", "rail", "off", role="pull-up", at=(5.5, 2), to=(5.5, 0)),
            Switch("Q2", drain=shorted, control="off", source=GROUND, role=role, at=(7.8, 4), facing=RIGHT),
        ],
        [((3, 0), (7.8, 0)), ((7.8, 0), (7.8, 4)), ((8.8, 5), (8.8, 6.5))],
        [((5.5, 2), "rail"), ((8.8, 3), GROUND)],
    )


def _disable_high(shorted: str) -> Drawing:
    """The switch sits at the rail: Q3 brings the input's level up to it."""
    shift, role = "level shift, n-channel", "disable switch, p-channel"
    switch = Switch("Q2", drain=shorted, control="shift", source="rail", role=role, polarity=-1, at=(7.6, -4))
    return (
        [
            Supply("VE", "off", value="control.disable"),
            Terminal("DISABLE", "off", at=(2.5, 0.6)),
            Resistor("R11", "rail", "off", role="pull-up", at=(4, 3.2), to=(4, 1.2)),
            Switch("Q3", drain="shift", control="off", source=GROUND, role=shift, at=(5.2, 0.6), facing=RIGHT),
            Resistor("R12", "rail", "shift", role="pull-up", at=(7.6, 4.2), to=(7.6, 2.2)),
            replace(switch, facing=RIGHT, flipped=True),
        ],
        [
            ((2.5, 0.6), (5.2, 0.6)),
            ((4, 1.2), (4, 0.6)),
            ((6.2, 1.6), (7.6, 1.6)),
            ((7.6, 2.2), (7.6, -4)),
            ((8.6, -5), (8.6, -6.5)),
        ],
        [((4, 3.2), "rail"), ((6.2, -0.4), GROUND), ((7.6, 4.2), "rail"), ((8.6, -3), "rail")],
    )
