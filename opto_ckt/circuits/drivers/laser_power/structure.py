"""Elements, nodes and drawing of the power-controlled laser driver, on the low side or mirrored on the high side."""

from __future__ import annotations

from opto_ckt.circuits.drivers.drawing import Drawing, disable_drawing, filter_drawing
from opto_ckt.circuits.drivers.side import Side, refuse_wrong_side, side_of
from opto_ckt.parts.transistor import BipolarData
from opto_ckt.request import LaserPowerRequest
from opto_ckt.topology import (
    GROUND,
    RIGHT,
    Capacitor,
    Diode,
    Element,
    MonitoredLaser,
    OpAmp,
    Point,
    Reference,
    Resistor,
    Topology,
    Transistor,
    Trimmer,
)


def topology(request: LaserPowerRequest) -> Topology:
    """Reference, integrator, clamp divider, current source, laser with its monitor, filter; the disable input if asked.

    Raises
    ------
    InfeasibleError : the transistor is of the wrong polarity for the laser's pins.
    """
    refuse_wrong_side(request)
    side = side_of(request)
    pieces = (
        _power(side),
        _source(request, side),
        _laser(request, side),
        filter_drawing(request, side),
        disable_drawing(request, side, "level"),
    )
    near = GROUND if side == "low" else "rail"
    return Topology(
        elements=tuple(element for piece in pieces for element in piece[0]),
        input="R10",
        output=("mon", near) if side == "low" else (near, "mon"),
        loop="D1",
        wires=tuple(wire for piece in pieces for wire in piece[1]),
        marks=tuple(mark for piece in pieces for mark in piece[2]),
    )


def _placing(side: Side) -> tuple[bool, str, str]:
    """Whether on the low side, the rail that all is counted from, and the other."""
    return (True, GROUND, "rail") if side == "low" else (False, "rail", GROUND)


def _power(side: Side) -> Drawing:
    """Reference, soft start, integrator, set resistor and trimmer; its output is ``power``."""
    low, near, far = _placing(side)

    def p(x: float, y: float) -> Point:
        return (x, y if low else -y)

    top, foot = p(1, 5.5), p(1, 3.5)
    if low:
        reference = Reference("U2", cathode="ref", anode=GROUND, role="reference", table="reference", at=top, to=foot)
        signal = Resistor("R10", "inv", "mon", role="integrator", at=p(14.6, 1.7), to=p(16.6, 1.7))
    else:
        reference = Reference("U2", cathode="rail", anode="ref", role="reference", table="reference", at=foot, to=top)
        signal = Resistor("R10", "mon", "inv", role="integrator", at=p(16.6, 1.7), to=p(14.6, 1.7))
    elements: list[Element] = [
        Resistor("R6", far, "ref", role="reference bias", at=p(1, 10), to=p(1, 8)),
        reference,
        Resistor("R13", "ref", "level", role="soft start", at=p(2, 6.5), to=p(4, 6.5)),
        Capacitor("C2", "level", near, role="soft start", stock="bypass", at=p(6.5, 5), to=p(6.5, 3)),
        Resistor("R15", "level", "plus3", role="input protection", at=p(10, 6.5), to=p(12, 6.5)),
        OpAmp("U3", plus="plus3", minus="inv", out="power", positive="rail", negative=GROUND, role="integrator",
              table="amplifier", at=p(12.8, 6), facing=RIGHT, flipped=low),
        Capacitor("C4", "power", "inv", role="integrator", at=p(14.8, 3.4), to=p(12.8, 3.4)),
        signal,
        Resistor("R14", "mon", "trim", role="power set", at=p(17.6, 1), to=p(17.6, -1)),
        Resistor("R16", "mon", "ref", role="off bias", at=p(19.6, 1), to=p(19.6, -1)),
        Trimmer("RV1", "trim", near, role="power trim", at=p(17.6, -1.4), to=p(17.6, -3.4)),
    ]  # fmt: skip
    wires = [
        (p(1, 8), p(1, 5.5)),
        (p(1, 6.5), p(2, 6.5)),
        (p(4, 6.5), p(10, 6.5)),
        (p(6.5, 6.5), p(6.5, 5)),
        (p(12, 6.5), p(12.8, 6.5)),
        (p(12.8, 5.5), p(12.2, 5.5)),
        (p(12.2, 5.5), p(12.2, 1.7)),
        (p(12.2, 3.4), p(12.8, 3.4)),
        (p(12.2, 1.7), p(14.6, 1.7)),
        (p(14.8, 6), p(15.2, 6)),
        (p(15.2, 6.5), p(15.2, 3.4)),
        (p(15.2, 3.4), p(14.8, 3.4)),
        (p(16.6, 1.7), p(20.2, 1.7)),
        (p(19.6, 1.7), p(19.6, 1)),
        (p(19.6, -1), p(19.6, -1.6)),
        (p(1, 6.5), p(0.4, 6.5)),
        (p(17.6, 1.7), p(17.6, 1)),
        (p(17.6, -1), p(17.6, -1.4)),
    ]
    marks = [
        (p(1, 10), far),
        (p(1, 3.5), near),
        (p(6.5, 3), near),
        ((13.8, p(0, 6)[1] + 1), "rail"),
        ((13.8, p(0, 6)[1] - 1), GROUND),
        (p(17.6, -3.4), near),
        (p(20.2, 1.7), "mon"),
        (p(19.6, -1.6), "ref"),
        (p(0.4, 6.5), "ref"),
    ]
    return elements, wires, marks


def _source(request: LaserPowerRequest, side: Side) -> Drawing:
    """Clamp divider from the integrator's output, then the current source."""
    low, near, _ = _placing(side)

    def p(x: float, y: float) -> Point:
        return (x, y if low else -y)

    elements: list[Element] = [
        Resistor("R2", "power", "set", role="clamp", at=p(16, 6.5), to=p(18, 6.5)),
        Resistor("R3", "set", near, role="clamp", at=p(19, 5), to=p(19, 3)),
        Resistor("R9", "set", "plus", role="input protection", at=p(20, 6.5), to=p(22, 6.5)),
        OpAmp("U1", plus="plus", minus="minus", out="drive", positive="rail", negative=GROUND, role="control",
              table="amplifier", at=p(22.8, 6), facing=RIGHT, flipped=low),
        Capacitor("C1", "drive", "minus", role="compensation", at=p(24.8, 3.4), to=p(22.8, 3.4)),
        Resistor("R4", "sense", "minus", role="compensation", at=p(26.6, 1.7), to=p(24.6, 1.7)),
        Resistor("R5", "drive", "control", role="gate", at=p(25.6, 6), to=p(27.6, 6)),
        Transistor("Q1", drain="drain", control="control", source="sense", role="pass transistor", table="transistor",
                   polarity=1 if low else -1, bipolar=isinstance(request.transistor, BipolarData),
                   at=p(27.8, 6), facing=RIGHT, flipped=not low),
        Resistor("R1", "sense", near, role="sense", at=p(28.8, 1), to=p(28.8, -1)),
        Resistor("R7", "laser", "drain", role="fail-safe", at=p(28.8, 9.6), to=p(28.8, 7.6)),
    ]  # fmt: skip
    wires = [
        (p(15.2, 6.5), p(16, 6.5)),
        (p(18, 6.5), p(20, 6.5)),
        (p(19, 6.5), p(19, 5)),
        (p(22, 6.5), p(22.8, 6.5)),
        (p(22.8, 5.5), p(22.2, 5.5)),
        (p(22.2, 5.5), p(22.2, 1.7)),
        (p(22.2, 3.4), p(22.8, 3.4)),
        (p(22.2, 1.7), p(24.6, 1.7)),
        (p(24.8, 6), p(25.6, 6)),
        (p(25.2, 6), p(25.2, 3.4)),
        (p(25.2, 3.4), p(24.8, 3.4)),
        (p(27.6, 6), p(27.8, 6)),
        (p(28.8, 5), p(28.8, 1)),
        (p(26.6, 1.7), p(28.8, 1.7)),
        (p(28.8, 7), p(28.8, 7.6)),
        (p(28.8, 9.6), p(28.8, 10.6)),
    ]
    marks = [
        (p(19, 3), near),
        ((23.8, p(0, 6)[1] + 1), "rail"),
        ((23.8, p(0, 6)[1] - 1), GROUND),
        (p(28.8, -1), near),
    ]
    return elements, wires, marks


def _laser(request: LaserPowerRequest, side: Side) -> Drawing:
    """Laser and monitor at the far rail; current flows downwards through both on either side."""
    low, _, far = _placing(side)
    foot = 10.6 if low else -12.6
    anode, cathode = ("rail", "laser") if low else ("laser", GROUND)
    monitor = ("rail", "mon") if low else ("mon", GROUND)
    x, aside, rail_y, free_y = 28.8, 26.6, (12.6 if low else -12.6), (10.6 if low else -10.6)
    elements: list[Element] = [
        MonitoredLaser("D1", anode=anode, cathode=cathode, monitor_cathode=monitor[0], monitor_anode=monitor[1],
                       role="laser with monitor", table="source", at=(x, foot)),
    ]  # fmt: skip
    wires = [((x, rail_y), (x + 1.5, rail_y)), ((x + 1.5, free_y), (x + 2.4, free_y))]
    marks = [((x, rail_y), far), ((x + 2.4, free_y), "mon")]
    if request.diode is not None:
        ends = ((aside, foot), (aside, foot + 2))
        elements.append(
            Diode("D2", anode=cathode, cathode=anode, role="reverse protection", table="diode", at=ends[0], to=ends[1])
        )
        wires += [((x, foot), (aside, foot)), ((x, foot + 2), (aside, foot + 2))]
    return elements, wires, marks
