"""Elements, nodes and drawing of the linear LED driver."""

from __future__ import annotations

from opto_ckt.parts.transistor import BipolarData
from opto_ckt.request import LedLinearRequest
from opto_ckt.topology import (
    GROUND,
    RIGHT,
    Capacitor,
    Element,
    Led,
    OpAmp,
    Reference,
    Resistor,
    Supply,
    Terminal,
    Topology,
    Transistor,
)


def topology(request: LedLinearRequest) -> Topology:
    """Reference and divider for the standing current, coupled input, op amp, transistor, sense resistor, LED."""
    negative = "negative" if request.conditions.supply.negative else GROUND
    elements: list[Element] = [
        Supply("VP", "positive", value="supply.positive"),
        Resistor("RG", GROUND, "in", role="source", fitted=False),
        Terminal("IN", "in", at=(0, 1.5)),
        Resistor("R6", "positive", "ref", role="reference bias", at=(1, 10), to=(1, 8)),
        Reference("U2", cathode="ref", anode=GROUND, role="reference", table="reference", at=(1, 5.5), to=(1, 3.5)),
        Resistor("R2", "ref", "set", role="divider", at=(2, 6.5), to=(4, 6.5)),
        Resistor("R3", "set", GROUND, role="divider", at=(4.8, 5), to=(4.8, 3)),
        Capacitor("C2", "in", "set", role="coupling", stock="bypass", at=(7, 3), to=(7, 5)),
        Resistor("R9", "set", "plus", role="input protection", at=(8.6, 6.5), to=(10.6, 6.5)),
        OpAmp("U1", plus="plus", minus="minus", out="drive", positive="positive", negative=negative, role="control",
              table="amplifier", at=(11.8, 6), facing=RIGHT, flipped=True),
        Capacitor("C1", "drive", "minus", role="compensation", at=(13.8, 3.4), to=(11.8, 3.4)),
        Resistor("R4", "sense", "minus", role="compensation", at=(15.6, 1.7), to=(13.6, 1.7)),
        Resistor("R5", "drive", "control", role="gate", at=(14.6, 6), to=(16.6, 6)),
        Transistor("Q1", drain="drain", control="control", source="sense", role="pass transistor", table="transistor",
                   bipolar=isinstance(request.transistor, BipolarData), at=(16.8, 6), facing=RIGHT),
        Resistor("R1", "sense", GROUND, role="sense", at=(17.8, 1), to=(17.8, -1)),
        Resistor("R7", "led", "drain", role="fail-safe", at=(17.8, 9.6), to=(17.8, 7.6)),
        Led("D1", anode="positive", cathode="led", role="LED", table="source", at=(17.8, 12.6), to=(17.8, 10.6)),
        Capacitor("C8", "positive", GROUND, role="bypass", stock="bypass", at=(7, 11), to=(7, 9)),
    ]  # fmt: skip
    marks = [
        ((1, 10), "positive"), ((1, 3.5), GROUND), ((4.8, 3), GROUND), ((12.8, 7), "positive"), ((12.8, 5), negative),
        ((17.8, -1), GROUND), ((17.8, 12.6), "positive"), ((7, 11), "positive"), ((7, 9), GROUND),
    ]  # fmt: skip
    if request.conditions.supply.negative:
        elements += [
            Supply("VN", "negative", value="supply.negative"),
            Capacitor("C9", GROUND, "negative", role="bypass", stock="bypass", at=(9.4, 11), to=(9.4, 9)),
        ]
        marks += [((9.4, 11), GROUND), ((9.4, 9), "negative")]
    return Topology(
        elements=tuple(elements),
        input="RG",
        output=("light", GROUND),
        loop="U1",
        wires=(
            ((1, 8), (1, 5.5)), ((1, 6.5), (2, 6.5)), ((4, 6.5), (8.6, 6.5)), ((4.8, 6.5), (4.8, 5)),
            ((7, 6.5), (7, 5)), ((7, 3), (7, 1.5)), ((0, 1.5), (7, 1.5)), ((10.6, 6.5), (11.8, 6.5)),
            ((11.8, 5.5), (11.2, 5.5)), ((11.2, 5.5), (11.2, 1.7)), ((11.2, 3.4), (11.8, 3.4)),
            ((11.2, 1.7), (13.6, 1.7)), ((13.8, 6), (14.6, 6)), ((14.2, 6), (14.2, 3.4)), ((14.2, 3.4), (13.8, 3.4)),
            ((16.6, 6), (16.8, 6)), ((17.8, 5), (17.8, 1)), ((15.6, 1.7), (17.8, 1.7)), ((17.8, 7), (17.8, 7.6)),
            ((17.8, 9.6), (17.8, 10.6)),
        ),
        marks=tuple(marks),
    )  # fmt: skip
