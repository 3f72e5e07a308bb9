"""Elements, nodes and drawing of the constant-current laser driver, on the low side or mirrored on the high side."""

from __future__ import annotations

from collections.abc import Callable
from dataclasses import replace

from opto_ckt.circuits.drivers.drawing import Drawing, disable_drawing, filter_drawing
from opto_ckt.circuits.drivers.side import Side, refuse_wrong_side, side_of
from opto_ckt.parts.transistor import BipolarData
from opto_ckt.request import LaserDriverRequest
from opto_ckt.topology import (
    GROUND,
    RIGHT,
    Capacitor,
    Diode,
    Element,
    LaserDiode,
    OpAmp,
    Point,
    Reference,
    Resistor,
    Topology,
    Transistor,
)


def topology(request: LaserDriverRequest) -> Topology:
    """Reference, divider, op amp, pass transistor, sense resistor, laser, filter; the disable input if asked for.

    Raises
    ------
    InfeasibleError : the transistor is of the wrong polarity for the laser's pins.
    """
    refuse_wrong_side(request)
    side = side_of(request)
    elements, wires, marks = _loop(request, side)
    for more in (filter_drawing(request, side), disable_drawing(request, side, "set")):
        elements += more[0]
        wires += more[1]
        marks += more[2]
    near = GROUND if side == "low" else "rail"
    return Topology(
        elements=tuple(elements),
        input="R9",
        output=("sense", near) if side == "low" else (near, "sense"),
        loop="U1",
        wires=tuple(wires),
        marks=tuple(marks),
    )


def _loop(request: LaserDriverRequest, side: Side) -> Drawing:
    """From the reference to the laser; on the high side the same picture upside down."""
    low = side == "low"
    near, far = (GROUND, "rail") if low else ("rail", GROUND)
    negative = "negative" if request.conditions.supply.negative else GROUND

    def p(x: float, y: float) -> Point:
        return (x, y if low else -y)

    elements: list[Element] = [
        Resistor("R6", far, "ref", role="reference bias", at=p(1, 10), to=p(1, 8)),
        Resistor("R2", "ref", "set", role="divider", at=p(2, 6.5), to=p(4, 6.5)),
        Resistor("R3", "set", near, role="divider", at=p(4.5, 5), to=p(4.5, 3)),
        Capacitor("C2", "set", near, role="soft start", stock="bypass", at=p(6.5, 5), to=p(6.5, 3)),
        _signal_resistor(p(10, 6.5), p(12, 6.5), low=low),
        OpAmp("U1", plus="plus", minus="minus", out="drive", positive="rail", negative=negative, role="control",
              table="amplifier", at=p(12.8, 6), facing=RIGHT, flipped=low),
        Capacitor("C1", "drive", "minus", role="compensation", at=p(14.8, 3.4), to=p(12.8, 3.4)),
        Resistor("R4", "sense", "minus", role="compensation", at=p(16.6, 1.7), to=p(14.6, 1.7)),
        Resistor("R5", "drive", "control", role="gate", at=p(15.6, 6), to=p(17.6, 6)),
        Transistor("Q1", drain="drain", control="control", source="sense", role="pass transistor", table="transistor",
                   polarity=1 if low else -1, bipolar=isinstance(request.transistor, BipolarData),
                   at=p(17.8, 6), facing=RIGHT, flipped=not low),
        Resistor("R1", "sense", near, role="sense", at=p(18.8, 1), to=p(18.8, -1)),
        Resistor("R7", "laser", "drain", role="fail-safe", at=p(18.8, 9.6), to=p(18.8, 7.6)),
    ]  # fmt: skip
    elements += _ends(p, low=low)
    wires = [
        (p(1, 8), p(1, 5.5)),
        (p(1, 6.5), p(2, 6.5)),
        (p(4, 6.5), p(10, 6.5)),
        (p(4.5, 6.5), p(4.5, 5)),
        (p(6.5, 6.5), p(6.5, 5)),
        (p(12, 6.5), p(12.8, 6.5)),
        (p(12.8, 5.5), p(12.2, 5.5)),
        (p(12.2, 5.5), p(12.2, 1.7)),
        (p(12.2, 3.4), p(12.8, 3.4)),
        (p(12.2, 1.7), p(14.6, 1.7)),
        (p(14.8, 6), p(15.6, 6)),
        (p(15.2, 6), p(15.2, 3.4)),
        (p(15.2, 3.4), p(14.8, 3.4)),
        (p(17.6, 6), p(17.8, 6)),
        (p(18.8, 5), p(18.8, 1)),
        (p(16.6, 1.7), p(18.8, 1.7)),
        (p(18.8, 7), p(18.8, 7.6)),
        (p(18.8, 9.6), p(18.8, 10.6)),
    ]
    marks = [
        (p(1, 10), far),
        (p(1, 3.5), near),
        (p(4.5, 3), near),
        (p(6.5, 3), near),
        ((13.8, p(0, 6)[1] + 1), "rail"),
        ((13.8, p(0, 6)[1] - 1), negative),
        (p(18.8, -1), near),
        (p(18.8, 12.6), far),
    ]
    if request.diode is not None:
        anode, cathode = ("laser", "rail") if low else (GROUND, "laser")
        ends = (p(20.3, 10.6), p(20.3, 12.6)) if low else (p(20.3, 12.6), p(20.3, 10.6))
        elements.append(
            Diode("D2", anode=anode, cathode=cathode, role="reverse protection", table="diode", at=ends[0], to=ends[1])
        )
        wires += [(p(18.8, 12.6), p(20.3, 12.6)), (p(18.8, 10.6), p(20.3, 10.6))]
    return elements, wires, marks


def _ends(p: Callable[[float, float], Point], *, low: bool) -> tuple[Reference, LaserDiode]:
    """Reference at the near rail, laser at the far one; current flows downwards through both on either side."""
    top, foot, lit, unlit = p(1, 5.5), p(1, 3.5), p(18.8, 12.6), p(18.8, 10.6)
    if low:
        reference = Reference("U2", cathode="ref", anode=GROUND, role="reference", table="reference", at=top, to=foot)
        laser = LaserDiode("D1", anode="rail", cathode="laser", role="laser", table="source", at=lit, to=unlit)
    else:
        reference = Reference("U2", cathode="rail", anode="ref", role="reference", table="reference", at=foot, to=top)
        laser = LaserDiode("D1", anode="laser", cathode=GROUND, role="laser", table="source", at=unlit, to=lit)
    return reference, replace(laser, flipped=True)


def _signal_resistor(outer: Point, inner: Point, *, low: bool) -> Resistor:
    """R9, named so that a signal in series with it raises the current on either side."""
    role = "input protection"
    if low:
        return Resistor("R9", "set", "plus", role=role, at=outer, to=inner)
    return Resistor("R9", "plus", "set", role=role, at=inner, to=outer)
