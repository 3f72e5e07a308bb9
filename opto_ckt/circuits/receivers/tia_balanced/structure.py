"""Elements, nodes and drawing of two detectors with one amplifier, or with one each."""

from __future__ import annotations

from dataclasses import replace

from opto_ckt.circuits.receivers import board
from opto_ckt.circuits.receivers.detector import POLARITY
from opto_ckt.circuits.receivers.feed import bias_elements, bias_node, far_side, photodiode
from opto_ckt.request import OpAmpReceiverRequest
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
    renamed,
)

SUM: Point = (3, 2.5)
OUT: Point = (10.5, 2)
SECOND = -9.0  #: how far below the first the second amplifier is drawn
PAIRS = {"R1": "R4", "C1": "C4", "U1": "U2", "D1": "D2", "CS": "CS2", "CB": "CB2", "RB": "RB2"}
"""Part of the first amplifier -> its like at the second."""


def by_outputs(request: OpAmpReceiverRequest) -> bool:
    """Whether each diode has an amplifier of its own."""
    return request.target.balance == "outputs"


def second_supply(request: OpAmpReceiverRequest) -> float:
    """Voltage of the far end of D2 where both diodes share a node: as far on the other side of it. [V]"""
    return request.conditions.input_level + POLARITY[request.detector.output] * request.detector.resting_bias


def second_node(request: OpAmpReceiverRequest) -> str:
    """Node of the far end of D2: a rail where that gives the bias, else a supply of its own."""
    supply, wanted = request.conditions.supply, second_supply(request)
    rails = {supply.negative: "negative", supply.positive: "positive", 0.0: GROUND}
    return next((node for volts, node in rails.items() if abs(wanted - volts) < 1e-9), "bias2")


def topology(request: OpAmpReceiverRequest) -> Topology:
    """One amplifier with both diodes, or two amplifiers with one each."""
    first = _amplifier(request)
    rails, rail_marks = board.rails(request, 13.5)
    divider, divider_marks, divider_wires = board.level(request, 13.5)
    base = replace(
        first,
        elements=(*first.elements, *rails, *bias_elements(request), *divider),
        marks=(*first.marks, *rail_marks, *divider_marks),
        wires=(*first.wires, *divider_wires),
    )
    return _two_amplifiers(request, base, first) if by_outputs(request) else _one_amplifier(request, base)


def _amplifier(request: OpAmpReceiverRequest) -> Topology:
    """D1 with its amplifier, drawn by itself."""
    negative, level = board.negative_node(request), board.level_node(request)
    far: Point = (SUM[0], SUM[1] + 2 * far_side(request))
    raised = level != GROUND
    diode = renamed(photodiode(request, SUM, far), {"far": bias_node(request)})
    elements: list[Element] = [
        diode,
        Resistor("R1", "sum", "amp", role="feedback", at=(5, 4.5), to=(9, 4.5)),
        Capacitor("C1", "sum", "amp", role="feedback", at=(5, 6), to=(9, 6)),
        OpAmp("U1", plus=level, minus="sum", out="amp", positive="positive", negative=negative, role="amplifier",
              table="amplifier", at=(6, 2), facing=RIGHT),
        Capacitor("CS", "sum", "amp", role="stray across R1", fitted=False),
        Capacitor("CB", "sum", GROUND, role="board", fitted=False),
        Resistor("RB", "sum", GROUND, role="leakage", fitted=False),
    ]  # fmt: skip
    return Topology(
        elements=tuple(elements),
        input="D1",
        output=("amp", GROUND),
        loop="U1",
        wires=(
            (SUM, (6, 2.5)), ((5, 2.5), (5, 6)), ((9, 2), (9, 6)), ((8, 2), board.line_start(OUT)),
            ((5.4, 1.5), (6, 1.5)), *(() if raised else (((5.4, 1.5), (5.4, 1)),)),
        ),
        marks=(
            ((7, 3), "positive"), ((7, 1), negative), (far, bias_node(request)),
            ((5.4, 1.5) if raised else (5.4, 1), level),
        ),
    )  # fmt: skip


def _one_amplifier(request: OpAmpReceiverRequest, base: Topology) -> Topology:
    """D2 at the same node, the other way round."""
    far: Point = (SUM[0], SUM[1] - 2 * far_side(request))
    node = second_node(request)
    own = (Supply("VB2", "bias2", value="supply.bias2"),) if node == "bias2" else ()
    first_cathode = request.detector.output == "cathode"
    diode = (
        Photodiode("D2", anode="sum", cathode=node, role="detector", table="detector", at=SUM, to=far, facing=DOWN)
        if first_cathode
        else Photodiode("D2", anode=node, cathode="sum", role="detector", table="detector", at=far, to=SUM, facing=UP)
    )
    return replace(
        base,
        elements=(*base.elements, diode, *own, Terminal("OUT", "out", at=OUT), *board.load(request)),
        output=("out", GROUND),
        rival="D2",
        marks=(*base.marks, (far, node), *board.servo_marks(request, (9, 4.5), SUM)),
        slots=board.SLOTS,
        taps=board.TAPS,
        openings=board.openings(OUT),
    )


def _two_amplifiers(request: OpAmpReceiverRequest, base: Topology, first: Topology) -> Topology:
    """The amplifier a second time, with a diode of its own; the answer lies between the two outputs."""
    names = {"sum": "sum2", "amp": "amp2"}
    drawn = first.moved((0, SECOND))
    second = tuple(replace(renamed(element, names), ref=PAIRS[element.ref]) for element in drawn.elements)
    ends = [((OUT[0] - 0.75, OUT[1] + dy), (OUT[0], OUT[1] + dy)) for dy in (0, SECOND)]
    load: list[Element] = []
    if request.load.resistance is not None:
        load.append(Resistor("RL", "amp", "amp2", role="load", fitted=False))
    if request.load.capacitance:
        load.append(Capacitor("CL", "amp", "amp2", role="load", fitted=False))
    return replace(
        base,
        elements=(
            *base.elements, *second, *load,
            Terminal("OUT", "amp", at=OUT), Terminal("OUTN", "amp2", at=(OUT[0], OUT[1] + SECOND)),
        ),
        output=("amp", "amp2"),
        rival="D2",
        wires=(*base.wires, *drawn.wires, *ends),
        marks=(*base.marks, *drawn.marks),
    )  # fmt: skip
