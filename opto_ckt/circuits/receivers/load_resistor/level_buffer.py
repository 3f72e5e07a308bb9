r"""Level of a single supply behind a follower, so that the current of R1 does not move it.

    positive --[ R2 ]--+-- tap --|+ \
                       |         | U2 >--+--- level
              R3 || C2 |      +--|- /    |
                       0      +----------+
"""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Fitted, Heat, Refusal, Stress
from opto_ckt.circuits.receivers import board
from opto_ckt.circuits.receivers.amplifier import either_sign, warmed
from opto_ckt.circuits.receivers.load_resistor.form import raised
from opto_ckt.derivation import Derivation
from opto_ckt.formulas.reference import divided_voltage, parallel_resistance
from opto_ckt.limits import Lanes, Limit, Values
from opto_ckt.parts.opamp import OpAmpData
from opto_ckt.request import LoadResistorRequest
from opto_ckt.topology import GROUND, RIGHT, Capacitor, Element, OpAmp, Point, renamed

Drawn = tuple[list[Element], list[tuple[Point, str]], list[tuple[Point, Point]]]


def table(request: LoadResistorRequest) -> str:
    """Table of the design file that holds U2."""
    return "amplifier" if request.second_amplifier is None else "second_amplifier"


def data(request: LoadResistorRequest) -> OpAmpData:
    """The op amp of the level."""
    return request.second_amplifier or request.amplifier


def drawn(request: LoadResistorRequest, x: float) -> Drawn:
    """Divider, filter, follower and its bypass, drawn from ``x`` on, with marks and wires; nothing without a level."""
    if not raised(request):
        return [], [], []
    divider, marks, _ = board.level(request, x)
    elements = [renamed(element, {"level": "tap"}) for element in divider]
    marks = [(point, node) for point, node in marks if node != "level"]
    negative, u, y = board.negative_node(request), x + 4, 5.5
    elements += [
        OpAmp("U2", plus="tap", minus="level", out="level", positive="positive", negative=negative,
              role="level buffer", table=table(request), at=(u, y), facing=RIGHT, flipped=True),
        Capacitor("C7", "positive", GROUND, role="bypass", stock="bypass", at=(x + 4, 2.5), to=(x + 4, 0.5)),
    ]  # fmt: skip
    marks += [((u + 1, y + 1), "positive"), ((u + 1, y - 1), negative), ((u + 2.8, y), "level")]
    marks += [((x + 4, 2.5), "positive"), ((x + 4, 0.5), GROUND)]
    if negative != GROUND:
        top, foot = (x + 6, 2.5), (x + 6, 0.5)
        elements.append(Capacitor("C6", GROUND, "negative", role="bypass", stock="bypass", at=top, to=foot))
        marks += [(top, GROUND), (foot, "negative")]
    left, right, back = u - 0.5, u + 2.4, y - 1.9
    wires: list[tuple[Point, Point]] = [((x, y + 0.5), (u, y + 0.5)), ((u + 2, y), (u + 2.8, y))]
    wires += [((u, y - 0.5), (left, y - 0.5)), ((left, y - 0.5), (left, back))]
    wires += [((left, back), (right, back)), ((right, back), (right, y))]
    return elements, marks, wires


def given(request: LoadResistorRequest) -> dict[str, Limit]:
    """Offset of the follower with either sign."""
    return either_sign(data(request), "U2") if raised(request) else {}


def bypass(request: LoadResistorRequest, derivation: Derivation) -> list[Fitted]:
    """Capacitors at the follower's supply pins."""
    if not raised(request):
        return []
    found = []
    for ref in ("C7", "C6") if request.conditions.supply.negative else ("C7",):
        derivation.note(ref, "common practice: 100 nF close to each supply pin")
        value = request.fixed.get(ref, board.BYPASS)
        stock = request.preferred.bypass.series
        found.append(Fitted(ref, value, stock, low=value, high=value, fixed=ref in request.fixed))
    return found


def levels(values: Values, request: LoadResistorRequest) -> dict[str, float | Lanes]:
    """Tap of the divider and level behind the follower, offset and bias current in both; nothing without a level."""
    if "R2" not in values:
        return {}
    found = warmed(values, data(request), "U2")
    upper, lower = values["R2"], values["R3"]
    tap = divided_voltage(voltage=values["supply.positive"], upper=upper, lower=lower)
    tap = tap - found["U2.bias_current"] * parallel_resistance(first=upper, second=lower)
    level = (tap + found["U2.offset"]) / (1 + 1 / values["U2.open_loop_gain"])
    return {**found, "node.tap": tap, "node.level": level}


def stresses(values: Values) -> list[Stress]:
    """The supplies across follower and bypass."""
    span = values["supply.positive"] - values["supply.negative"]
    return [
        Stress("U2", voltage=span),
        Stress("C7", voltage=values["supply.positive"]),
        Stress("C6", voltage=np.abs(values["supply.negative"])),
    ]


def heat(values: Values, request: LoadResistorRequest) -> tuple[Heat, ...]:
    """The follower, where its sheet says what it is heated by."""
    record = data(request)
    if not raised(request) or record.junction_to_ambient is None:
        return ()
    power = (values["supply.positive"] - values["supply.negative"]) * values["U2.quiescent_current"]
    return (Heat("U2", power, values["temperature"] + power * record.junction_to_ambient.high, record.junction_max),)


def refused(request: LoadResistorRequest) -> tuple[Refusal, ...]:
    """A follower that is not stable as one."""
    least = data(request).minimum_stable_gain.high
    if not raised(request) or least <= 1:
        return ()
    message = f"the level's follower is stable from a gain of {least:.3g}; give one that is at 1 as second_amplifier"
    return (Refusal((table(request), "minimum_stable_gain"), message),)
