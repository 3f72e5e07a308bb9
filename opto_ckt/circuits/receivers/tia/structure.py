"""Elements, nodes and drawing of the transimpedance amplifier."""

from __future__ import annotations

from opto_ckt.circuits.receivers.detector import POLARITY
from opto_ckt.request import ReceiverRequest
from opto_ckt.topology import (
    DOWN,
    GROUND,
    RIGHT,
    UP,
    Capacitor,
    Element,
    OpAmp,
    Photodiode,
    Point,
    Resistor,
    Supply,
    Terminal,
    Topology,
)

SUM: Point = (3, 2.5)


def topology(request: ReceiverRequest) -> Topology:
    """The amplifier, its level if the supply is single, strays, load and supply bypass."""
    supply = request.conditions.supply
    negative = "negative" if supply.negative else GROUND
    raised = request.conditions.input_level > 0
    level = "level" if raised else GROUND
    bias = bias_node(request)
    elements: list[Element] = [
        _photodiode(request, bias),
        Resistor("R1", "sum", "amp", role="feedback", at=(5, 4.5), to=(9, 4.5)),
        Capacitor("C1", "sum", "amp", role="feedback", at=(5, 6), to=(9, 6)),
        OpAmp("U1", plus=level, minus="sum", out="amp", positive="positive", negative=negative, role="amplifier",
              table="amplifier", at=(6, 2), facing=RIGHT),
        Capacitor("C8", "positive", GROUND, role="bypass", stock="bypass", at=(13, 2.5), to=(13, 0.5)),
        Supply("VP", "positive", value="supply.positive"),
        Terminal("OUT", "out", at=(10.5, 2)),
        Capacitor("CS", "sum", "amp", role="stray across R1", fitted=False),
        Capacitor("CB", "sum", GROUND, role="board", fitted=False),
        Resistor("RB", "sum", GROUND, role="leakage", fitted=False),
    ]  # fmt: skip
    marks: list[tuple[Point, str]] = [((7, 3), "positive"), ((7, 1), negative)]
    marks += [((13, 2.5), "positive"), ((13, 0.5), GROUND), (_bias_point(request), bias)]
    if bias == "bias":
        elements.append(Supply("VB", "bias", value="supply.bias"))
    if negative != GROUND:
        elements += [
            Supply("VN", "negative", value="supply.negative"),
            Capacitor("C9", GROUND, "negative", role="bypass", stock="bypass", at=(14.5, 2.5), to=(14.5, 0.5)),
        ]
        marks += [((14.5, 2.5), GROUND), ((14.5, 0.5), "negative")]
    if raised:
        elements += [
            Resistor("R2", "positive", "level", role="level", at=(13, 8), to=(13, 6)),
            Resistor("R3", "level", GROUND, role="level", at=(13, 6), to=(13, 4)),
            Capacitor("C2", "level", GROUND, role="level filter", stock="bypass", at=(14.5, 6), to=(14.5, 4)),
        ]
        marks += [((13, 8), "positive"), ((13, 4), GROUND), ((14.5, 4), GROUND)]
        marks += [((12.2, 6), "level"), ((5.4, 1.5), "level")]
    else:
        marks.append(((5.4, 1), GROUND))
    elements += _load(request)
    return Topology(
        elements=tuple(elements),
        input="D1",
        output=("out", GROUND),
        loop="U1",
        wires=(
            (SUM, (6, 2.5)),
            ((5, 2.5), (5, 6)),
            ((9, 2), (9, 6)),
            ((8, 2), (10.5, 2)),
            ((5.4, 1.5), (6, 1.5)),
            *((((12.2, 6), (14.5, 6)),) if raised else (((5.4, 1.5), (5.4, 1)),)),
        ),
        marks=tuple(marks),
        slots={"post": ("amp", "out")},
    )


def _photodiode(request: ReceiverRequest, bias: str) -> Photodiode:
    end = _bias_point(request)
    if request.detector.output == "cathode":
        return Photodiode("D1", anode=bias, cathode="sum", role="detector", table="detector", at=end, to=SUM, facing=UP)
    return Photodiode("D1", anode="sum", cathode=bias, role="detector", table="detector", at=SUM, to=end, facing=DOWN)


def _bias_point(request: ReceiverRequest) -> Point:
    """Where the far end of the diode lies: below where it goes to a lower voltage, above where to a higher one."""
    return (3, 0.5) if request.detector.output == "cathode" else (3, 4.5)


def bias_supply(request: ReceiverRequest) -> float:
    """Voltage of the diode's far end that gives the reverse bias asked for. [V]"""
    return request.conditions.input_level - POLARITY[request.detector.output] * request.detector.reverse_bias


def bias_node(request: ReceiverRequest) -> str:
    """Node of the diode's far end: ground or a rail where that gives the bias asked for, else a supply of its own."""
    bias, supply = bias_supply(request), request.conditions.supply
    if request.bias is not None:
        return "bias"
    rails = {supply.negative: "negative", supply.positive: "positive", 0.0: GROUND}
    if request.conditions.input_level > 0:
        rails[request.conditions.input_level] = "level"
    return next((node for volts, node in rails.items() if abs(bias - volts) < 1e-9), "bias")


def _load(request: ReceiverRequest) -> list[Element]:
    parts: list[Element] = []
    if request.load.resistance is not None:
        parts.append(Resistor("RL", "out", GROUND, role="load", fitted=False))
    if request.load.capacitance:
        parts.append(Capacitor("CL", "out", GROUND, role="load", fitted=False))
    return parts
