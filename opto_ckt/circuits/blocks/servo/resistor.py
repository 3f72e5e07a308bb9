r"""Injection through a resistor: either direction, one low cut-off whatever the light.

    amp --[R31]--+--|+ \
               [C31]| U30 >--+--[R30]-- sum
                 0  |        |
    level -[R32]-+--|- /     |
                 +---[ C32 ]-+
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from opto_ckt.circuit import Bench, Fitted, Heat, Refusal, Stress
from opto_ckt.circuits.blocks.servo import integrator
from opto_ckt.circuits.blocks.servo.integrator import bypass, bypass_parts, data, neutral, table, wanted_range
from opto_ckt.circuits.receivers.amplifier import warmed
from opto_ckt.circuits.receivers.board import level_node, negative_node
from opto_ckt.circuits.receivers.detector import POLARITY
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import front_end, noise
from opto_ckt.limits import Lanes, Limits, Values
from opto_ckt.request import ReceiverRequest
from opto_ckt.topology import GROUND, RIGHT, Capacitor, Element, OpAmp, Point, Resistor, Topology
from opto_ckt.units import write

SETTLINGS = 3  #: of output and integrator against each other; each shrinks the rest by the open-loop gain


def topology(request: ReceiverRequest) -> Topology:
    """Drawn by itself; the names of its two ends tie it to the amplifier."""
    negative, level = negative_node(request), level_node(request)
    capacitors, ends = bypass(_rails(request), 12)
    elements: list[Element] = [
        Resistor("R31", "in", "sensed", role="servo", at=(0, 0), to=(3, 0)),
        Capacitor("C31", "sensed", GROUND, role="servo", stock="bypass", at=(3, 0), to=(3, 2)),
        Resistor("R32", level, "held", role="servo", at=(0, -1), to=(3, -1)),
        Capacitor("C32", "held", "injected", role="servo", stock="bypass", at=(3.5, -3.5), to=(6.5, -3.5)),
        OpAmp("U30", plus="sensed", minus="held", out="injected", positive="positive", negative=negative,
              role="servo", table=table(request), at=(4, -0.5), facing=RIGHT, flipped=True),
        Resistor("R30", "injected", "out", role="injection", at=(6.5, -0.5), to=(9.5, -0.5)),
        *capacitors,
    ]  # fmt: skip
    marks: list[tuple[Point, str]] = [
        ((0, 0), "in"), ((3, 2), GROUND), ((0, -1), level), ((9.5, -0.5), "out"),
        ((5, 0.5), "positive"), ((5, -1.5), negative), *ends,
    ]  # fmt: skip
    return Topology(
        elements=tuple(elements),
        input="",
        output=("out", GROUND),
        wires=(
            ((3, 0), (4, 0)), ((3, -1), (4, -1)), ((3.5, -1), (3.5, -3.5)),
            ((6.5, -3.5), (6.5, -0.5)), ((6, -0.5), (6.5, -0.5)),
        ),
        marks=tuple(marks),
    )  # fmt: skip


def _rails(request: ReceiverRequest) -> dict[str, str]:
    return {"C38": "positive", "C39": "negative"} if negative_node(request) != GROUND else {"C38": "positive"}


def propose(request: ReceiverRequest, derivation: Derivation, bench: Bench, exact: Values) -> tuple[Fitted, ...]:
    """R30 from the range of current, the integrator from the low cut-off.

    Raises
    ------
    InfeasibleError : the integrator has no headroom for the current.
    """
    resistors = request.preferred.resistors.series
    wanted = wanted_range(request, bench)
    room = _headroom({"supply.positive": bench.low("supply.positive"), **_worst(bench)}, request)
    if room <= 0:
        raise InfeasibleError(
            f"the integrator has no headroom: {write(float(room), 'V')}", ["conditions.supply wider", "another level"]
        )
    injection = request.fixed.get("R30") or derivation.compute(
        "R30", front_end.injection_resistance, reason=f"{write(float(room), 'V')} of headroom for {write(wanted, 'A')}",
        headroom=float(room), current=wanted,
    )  # fmt: skip
    resistor, capacitor = integrator.parts(request, derivation, bench, neutral(exact, {"R30": 1e12}), injection)
    found = [
        Fitted("R30", injection, resistors, high=injection, fixed="R30" in request.fixed), resistor, capacitor,
    ]  # fmt: skip
    for ref, twin, reason in (
        ("R32", resistor, "as R31: bias currents of U30 then make no offset"),
        ("C31", capacitor, "as C32: the two make one integrator"),
    ):
        derivation.note(ref, reason)
        own = request.fixed.get(ref)
        like = replace(twin, ref=ref, twin=twin.ref)
        found.append(like if own is None else replace(like, twin="", exact=own, fixed=True))
    return (*found, *bypass_parts(request, derivation, _rails(request)))


def _worst(bench: Bench) -> dict[str, float]:
    names = ("U30.swing_to_positive", "U30.swing_to_negative", "supply.negative")
    return {name: bench.high(name) for name in names}


def _headroom(values: Values, request: ReceiverRequest) -> float | Lanes:
    """From the level to the integrator's limit in the direction that light drives it. [V]"""
    level = request.conditions.input_level
    if POLARITY[request.detector.output] > 0:
        return values["supply.positive"] - values["U30.swing_to_positive"] - level
    return level - values["supply.negative"] - values["U30.swing_to_negative"]


def bias(values: Values, request: ReceiverRequest) -> dict[str, float | Lanes]:
    """The output held at its level, and the integrator's output that does it, as far as it reaches."""
    found = warmed(values, data(request), "U30")
    level = values["input_level"]
    offset = (values["R31"] - values["R32"]) * found["U30.bias_current"] - found["U30.offset"]
    wanted = level + values["U1.offset"]
    gain = 1 + values["feedback_ratio"]
    injected: float | Lanes = level
    output: float | Lanes = level + offset
    summed = wanted
    for _ in range(SETTLINGS):
        output = level + offset + injected / values["U30.open_loop_gain"]
        summed = wanted - output / values["U1.open_loop_gain"]
        drawn = values["summing_current"] + summed * values["summing_conductance"]
        back = (output - summed * gain) / values["feedback_resistance"]
        injected = summed + (drawn - back) * values["R30"]
    return {
        **found,
        "servo.offset": offset,
        "servo.range": _headroom(values, request) / values["R30"],
        "node.amp": output,
        "node.sum": summed,
        "node.injected": injected,
    }


def stresses(values: Values, request: ReceiverRequest) -> tuple[Stress, ...]:
    """The integrator at its limit across R30; the output's limit across the rest."""
    volts = np.maximum(values["supply.positive"], np.abs(values["supply.negative"]))
    found = [Stress(ref, voltage=volts, power=volts**2 / values[ref]) for ref in ("R30", "R31", "R32")]
    across = {"U30": values["supply.positive"] - values["supply.negative"]} | dict.fromkeys(
        ("C31", "C32", "C38", "C39"), volts
    )
    return (*found, *(Stress(ref, voltage=each) for ref, each in across.items()))


def remarks(values: Values, limits: Limits, request: ReceiverRequest) -> tuple[str, ...]:
    """What it takes away, and what its resistor adds to the noise."""
    reach, resistance = float(np.min(values["servo.range"])), float(np.median(values["R30"]))
    density = float(
        noise.thermal_current_noise(resistance=resistance, temperature=float(np.max(values["temperature"])))
    )
    return (
        f"servo: takes away up to {write(reach, 'A')} of steady current; R30 adds {write(density, 'A/√Hz')}, the shot"
        " noise of the light itself stays",
    )


def heat(values: Values, request: ReceiverRequest) -> tuple[Heat, ...]:
    """The op amp."""
    return integrator.heat(values, request, values["supply.positive"] - values["supply.negative"])


def refused(request: ReceiverRequest) -> tuple[Refusal, ...]:
    """Nothing beside what any servo cannot do."""
    return ()
