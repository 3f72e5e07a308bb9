"""Elements, nodes and drawing of the switched LED."""

from __future__ import annotations

from opto_ckt.formulas.led import electrical_bandwidth
from opto_ckt.parts.transistor import BipolarData
from opto_ckt.request import LedSwitchRequest
from opto_ckt.topology import (
    GROUND,
    RIGHT,
    Capacitor,
    ClosedSwitch,
    Element,
    Led,
    LogicOutput,
    Point,
    Resistor,
    Supply,
    Topology,
)


def peaking_gain(request: LedSwitchRequest) -> float:
    """Bandwidth asked for over that of the slowest LED; up to 1 nothing has to be peaked. [1]"""
    limit = request.require.get("bandwidth")
    if limit is None or limit.min is None:
        return 1.0
    limits = request.limits("source")
    slowest = limits["lifetime"].high if "lifetime" in limits else limits["optical_rise_time"].high / 2.197
    return limit.min / float(electrical_bandwidth(lifetime=slowest))


def is_peaked(request: LedSwitchRequest) -> bool:
    """Whether R4 and C2 are fitted."""
    return peaking_gain(request) > 1 or "R4" in request.fixed


def topology(request: LedSwitchRequest) -> Topology:
    """Resistor, LED and switch in series, the drive of the switch, and what hastens it."""
    bipolar, peaked = isinstance(request.transistor, BipolarData), is_peaked(request)
    elements: list[Element] = [
        Supply("VP", "positive", value="supply.positive"),
        Resistor("R1", "positive", "peak" if peaked else "led", role="series", at=(6, 12), to=(6, 10)),
        Led("D1", anode="led", cathode="drain", role="LED", table="source", at=(6, 7), to=(6, 5)),
        ClosedSwitch("Q1", drain="drain", control="control", source=GROUND, role="switch", table="transistor",
                     bipolar=bipolar, at=(5, 3.4), facing=RIGHT),
        LogicOutput("U1", "gate", role="drive", table="logic_output", at=(-3.2, 3.4)),
        Resistor("R2", "gate", "control", role="base" if bipolar else "gate", at=(0, 3.4), to=(2, 3.4)),
        Resistor("R3", "control", GROUND, role="bleed" if bipolar else "pull-down", at=(3.6, 2.4), to=(3.6, 0.4)),
    ]  # fmt: skip
    wires: list[tuple[Point, Point]] = [
        ((-1.2, 3.4), (0, 3.4)),
        ((2, 3.4), (5, 3.4)),
        ((3.6, 3.4), (3.6, 2.4)),
        ((6, 5), (6, 4.4)),
    ]
    marks: list[tuple[Point, str]] = [((6, 12), "positive"), ((6, 2.4), GROUND), ((3.6, 0.4), GROUND)]
    if peaked:
        elements += [
            Resistor("R4", "peak", "led", role="peaking", at=(6, 9.6), to=(6, 7.6)),
            Capacitor("C2", "peak", "led", role="peaking", at=(8.4, 9.6), to=(8.4, 7.6)),
        ]
        wires += [((6, 10), (6, 9.6)), ((6, 7.6), (6, 7)), ((6, 9.6), (8.4, 9.6)), ((6, 7.6), (8.4, 7.6))]
    else:
        wires.append(((6, 10), (6, 7)))
    if request.signal.sweep_out is not None:
        elements.append(Resistor("R5", "led", "drain", role="sweep-out", at=(3.8, 7), to=(3.8, 5)))
        wires += [((3.8, 7), (6, 7)), ((3.8, 5), (6, 5))]
    if request.signal.pre_bias is not None:
        elements.append(Resistor("R6", "drain", GROUND, role="pre-bias", at=(8.4, 4.4), to=(8.4, 2.4)))
        wires.append(((6, 4.4), (8.4, 4.4)))
        marks.append(((8.4, 2.4), GROUND))
    if request.signal.speed_up and bipolar:
        elements.append(Capacitor("C1", "gate", "control", role="speed-up", at=(0, 4.8), to=(2, 4.8)))
        wires += [((0, 3.4), (0, 4.8)), ((2, 3.4), (2, 4.8))]
    return Topology(
        elements=tuple(elements), input="R1", output=("light", GROUND), wires=tuple(wires), marks=tuple(marks)
    )
