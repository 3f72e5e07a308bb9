"""Elements, nodes and drawing of the pulse driver."""

from __future__ import annotations

from opto_ckt.request import LaserPulseRequest
from opto_ckt.topology import (
    GROUND,
    RIGHT,
    Capacitor,
    Diode,
    Element,
    HeldCurrent,
    Inductor,
    LaserDiode,
    LogicOutput,
    Point,
    PulseSwitch,
    Resistor,
    Supply,
    Topology,
)


def topology(request: LaserPulseRequest) -> Topology:
    """Capacitor, damping, laser, stray inductance and switch in a loop; charging, bleeding and the gate beside it.

    A signal in series with the damping resistor moves the capacitor's voltage: a two-pole low-pass whose frequency and
    damping are those of the discharge.
    """
    elements: list[Element] = [
        Supply("VP", "positive", value="supply.positive"),
        Capacitor("C2", "positive", GROUND, role="reservoir", stock="bypass", at=(1.5, 8), to=(1.5, 6)),
        Resistor("R1", "positive", "store", role="charging", at=(4, 8), to=(4, 6)),
        Resistor("R2", "store", GROUND, role="bleed", at=(5.5, 6), to=(5.5, 4)),
        Capacitor("C1", "store", GROUND, role="storage", at=(8, 6), to=(8, 4)),
        HeldCurrent("IH", GROUND, "store", fitted=False),
        Resistor("R3", "store", "anode", role="damping", at=(9.2, 6), to=(11.2, 6)),
        LaserDiode("D1", anode="anode", cathode="cathode", role="laser", table="source",
                   at=(12, 6), to=(12, 4), flipped=True),
        Inductor("LS", "cathode", "drain", role="stray of the whole loop", fitted=False, at=(12, 4), to=(12, 2)),
        PulseSwitch("Q1", drain="drain", control="gate", source=GROUND, role="switch", table="transistor",
                    at=(11, 1), facing=RIGHT),
        LogicOutput("U1", "trigger", role="gate driver", table="logic_output", at=(3.5, 1)),
        Resistor("R4", "trigger", "gate", role="gate", at=(6.5, 1), to=(8.5, 1)),
        Resistor("R5", "gate", GROUND, role="gate pull-down", at=(9.5, 1), to=(9.5, -1)),
    ]  # fmt: skip
    wires: list[tuple[Point, Point]] = [
        ((0.5, 8), (4, 8)),
        ((4, 6), (9.2, 6)),
        ((11.2, 6), (12, 6)),
        ((5.5, 1), (6.5, 1)),
        ((8.5, 1), (11, 1)),
    ]
    marks: list[tuple[Point, str]] = [
        ((0.5, 8), "positive"),
        ((1.5, 6), GROUND),
        ((5.5, 4), GROUND),
        ((8, 4), GROUND),
        ((12, 0), GROUND),
        ((9.5, -1), GROUND),
    ]
    if request.diode is not None:
        clamp = Diode("D2", anode="cathode", cathode="anode", role="clamp", table="diode", at=(15, 4), to=(15, 6))
        elements.append(clamp)
        wires += [((12, 6), (15, 6)), ((12, 4), (15, 4))]
    return Topology(
        elements=tuple(elements),
        input="R3",
        output=("store", GROUND),
        trigger="U1",
        wires=tuple(wires),
        marks=tuple(marks),
    )
