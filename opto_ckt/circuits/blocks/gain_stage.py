r"""Voltage gain behind the first amplifier, so that its feedback resistance may stay small enough for the bandwidth.

    in ---------|+ \
                | U50 >---+--- out
            +---|- /      |
            +---[ R50 ]---+
            |
          [ R51 ]
            0
"""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Bench, Block, Fitted, Heat, Refusal, Stress
from opto_ckt.circuits.receivers.amplifier import either_sign, warmed
from opto_ckt.circuits.receivers.board import BYPASS, negative_node
from opto_ckt.circuits.receivers.detector import direction, wanted_transimpedance
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas.second_stage import gain_for_transimpedance, upper_feedback_resistance
from opto_ckt.limits import Lanes, Limit, Limits, Values
from opto_ckt.parts.opamp import OpAmpData
from opto_ckt.request import ReceiverRequest
from opto_ckt.topology import GROUND, RIGHT, Capacitor, Element, OpAmp, Point, Resistor, Topology
from opto_ckt.units import write

LOWER = 499.0  #: R51: little thermal noise, and no burden to the output; common practice [Ω]
LEAST_GAIN = 1.05  #: below it the second stage does nothing


def table(request: ReceiverRequest) -> str:
    """Table of the design file that holds U50."""
    return "amplifier" if request.second_amplifier is None else "second_amplifier"


def data(request: ReceiverRequest) -> OpAmpData:
    """The op amp of the second stage."""
    record = request.second_amplifier or request.amplifier
    if record is None:
        raise ValueError("refused before: no op amp")
    return record


def topology(request: ReceiverRequest) -> Topology:
    """The stage with its supply bypass."""
    negative = negative_node(request)
    elements: list[Element] = [
        OpAmp("U50", plus="in", minus="set", out="out", positive="positive", negative=negative,
              role="second stage", table=table(request), at=(1.5, 0), facing=RIGHT),
        Resistor("R50", "set", "out", role="gain", at=(1, 3), to=(4.3, 3)),
        Resistor("R51", GROUND, "set", role="gain", at=(1, 5), to=(1, 3)),
        Capacitor("C58", "positive", GROUND, role="bypass", stock="bypass", at=(1.5, -3), to=(1.5, -5)),
    ]  # fmt: skip
    marks: list[tuple[Point, str]] = [((2.5, 1), "positive"), ((2.5, -1), negative), ((1, 5), GROUND)]
    marks += [((1.5, -3), "positive"), ((1.5, -5), GROUND)]
    if negative != GROUND:
        elements.append(Capacitor("C59", GROUND, "negative", role="bypass", stock="bypass", at=(3.5, -3), to=(3.5, -5)))
        marks += [((3.5, -3), GROUND), ((3.5, -5), "negative")]
    return Topology(
        elements=tuple(elements),
        input="",
        output=("out", GROUND),
        wires=(
            ((0, 0), (0.6, 0)), ((0.6, 0), (0.6, -0.5)), ((0.6, -0.5), (1.5, -0.5)),
            ((1, 0.5), (1.5, 0.5)), ((1, 0.5), (1, 3)),
            ((4.3, 3), (4.3, 0)), ((3.5, 0), (5, 0)),
        ),
        marks=tuple(marks),
        end=(5, 0),
    )  # fmt: skip


def given(request: ReceiverRequest) -> dict[str, Limit]:
    """Offset of the second op amp with either sign."""
    return either_sign(data(request), "U50")


def propose(request: ReceiverRequest, derivation: Derivation, bench: Bench, exact: Values) -> tuple[Fitted, ...]:
    """R50 and R51 for the gain asked for, or for what the first stage leaves of the transimpedance.

    Raises
    ------
    InfeasibleError : the first stage has the transimpedance that is asked for by itself.
    """
    asked = request.blocks.gain_stage
    resistors, bypass = request.preferred.resistors.series, request.preferred.bypass.series
    lower = request.fixed.get("R51", LOWER)
    derivation.note("R51", f"{write(LOWER, 'Ω')}, common practice: little noise, little load")
    gain = None if asked is None else asked.gain
    if gain is None:
        follower = {**exact, "R50": 1e-3, "R51": 1e9, "C58": BYPASS, "C59": BYPASS}
        first = float(
            bench.evaluate({name: np.array([value]) for name, value in follower.items()})["transimpedance"][0]
        )
        wanted = wanted_transimpedance(request) or first
        gain = derivation.compute(
            "gain of U50", gain_for_transimpedance,
            reason=f"{write(wanted, 'V/A')} wanted, {write(first, 'V/A')} by the first stage",
            transimpedance=wanted, first=first,
        )  # fmt: skip
        if gain < LEAST_GAIN:
            raise InfeasibleError(
                f"the first stage alone gives {write(first, 'V/A')} of the {write(wanted, 'V/A')} wanted",
                ["[blocks] without gain_stage", "a larger require.transimpedance.min"],
            )
    upper = request.fixed.get("R50") or derivation.compute(
        "R50", upper_feedback_resistance, reason=f"gain of {gain:.3g}", gain=gain, lower=lower
    )
    parts = [
        Fitted("R50", upper, resistors, fixed="R50" in request.fixed),
        Fitted("R51", lower, resistors, low=lower / 1.5, high=lower * 1.5, fixed="R51" in request.fixed),
    ]
    for ref in ("C58", "C59") if request.conditions.supply.negative else ("C58",):
        derivation.note(ref, "common practice: 100 nF close to each supply pin")
        value = request.fixed.get(ref, BYPASS)
        parts.append(Fitted(ref, value, bypass, low=value, high=value, fixed=ref in request.fixed))
    return tuple(parts)


def bias(values: Values, request: ReceiverRequest) -> dict[str, float | Lanes]:
    """Gain, offset and headroom of the second stage, and its level at rest."""
    gain = 1 + values["R50"] / values["R51"]
    found = warmed(values, data(request), "U50")
    offset = gain * found["U50.offset"] + values["R50"] * found["U50.bias_current"]
    rising = direction(request) > 0
    limit = (
        values["supply.positive"] - values["U50.swing_to_positive"]
        if rising
        else -(values["supply.negative"] + values["U50.swing_to_negative"])
    )
    loop = 1 / (1 + gain / values["U50.open_loop_gain"])
    return {
        **found,
        "second.gain": gain,
        "second.offset": offset,
        "second.headroom": limit,
        "node.raised": (gain * values["node.amp"] + offset) * loop,
    }


def stresses(values: Values, request: ReceiverRequest) -> tuple[Stress, ...]:
    """The output at its limit across the two resistors; the supplies across the bypass."""
    positive, negative = values["supply.positive"], np.abs(values["supply.negative"])
    current = np.maximum(positive, negative) / (values["R50"] + values["R51"])
    found = [
        Stress(ref, power=current**2 * values[ref], voltage=current * values[ref], current=current)
        for ref in ("R50", "R51")
    ]
    return (
        *found,
        Stress("U50", voltage=positive + negative),
        Stress("C58", voltage=positive),
        Stress("C59", voltage=negative),
    )


def heat(values: Values, request: ReceiverRequest) -> tuple[Heat, ...]:
    """U50, where its sheet says what it is heated by."""
    record = data(request)
    if record.junction_to_ambient is None:
        return ()
    span = values["supply.positive"] - values["supply.negative"]
    power = span * values["U50.quiescent_current"]
    return (Heat("U50", power, values["temperature"] + power * record.junction_to_ambient.high, record.junction_max),)


def remarks(values: Values, limits: Limits, request: ReceiverRequest) -> tuple[str, ...]:
    """What each stage gives."""
    gain = float(np.median(values["second.gain"]))
    share = float(np.median(values["U50.gain_bandwidth"])) / gain
    return (f"gain is split: {gain:.3g} V/V in the second stage, good for {write(share, 'Hz')} by itself",)


def refused(request: ReceiverRequest) -> tuple[Refusal, ...]:
    """A level above ground, which the stage would amplify too; no op amp; no figure to tell the gain from."""
    where = ("blocks", "gain_stage")
    found = []
    if request.conditions.input_level > 0:
        found.append(
            Refusal(where, "would amplify conditions.input_level too; it needs a negative supply and 0 V there")
        )
    if request.amplifier is None and request.second_amplifier is None:
        found.append(Refusal(where, "needs an op amp: a table [second_amplifier]"))
    asked = request.blocks.gain_stage
    if asked is not None and asked.gain is None and wanted_transimpedance(request) is None:
        found.append(Refusal(where, 'needs gain = "10" in it, or min under require.transimpedance'))
    if asked is not None and asked.gain is not None and asked.gain < LEAST_GAIN:
        found.append(Refusal((*where, "gain"), f"{asked.gain:g} is no gain; {LEAST_GAIN:g} is the least"))
    return tuple(found)


BLOCK = Block(
    name="gain_stage",
    topology=topology,
    propose=propose,
    given=given,
    bias=bias,
    stresses=stresses,
    heat=heat,
    remarks=remarks,
    refused=refused,
    formulas=(gain_for_transimpedance, upper_feedback_resistance),
)
