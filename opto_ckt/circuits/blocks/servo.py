r"""Loop that takes the steady light away: an integrator drives a current into the summing node.

    amp --[R31]--+--|+ \
               [C31]| U30 >--+--[R30]-- sum
                 0  |        |
    level -[R32]-+--|- /     |
                 +---[ C32 ]-+
"""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from opto_ckt.circuit import Bench, Block, Fitted, Heat, Refusal, Stress
from opto_ckt.circuits.blocks.cutoff import allowed
from opto_ckt.circuits.receivers.amplifier import either_sign, warmed
from opto_ckt.circuits.receivers.board import BYPASS, level_node, negative_node
from opto_ckt.circuits.receivers.detector import POLARITY, brightest
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import front_end, noise
from opto_ckt.formulas.reference import filter_capacitance
from opto_ckt.limits import Lanes, Limit, Limits, Values
from opto_ckt.parts.opamp import OpAmpData
from opto_ckt.request import ReceiverRequest
from opto_ckt.topology import GROUND, RIGHT, Capacitor, Element, OpAmp, Point, Resistor, Topology
from opto_ckt.units import write

INTEGRATOR = 100e3  #: R31 and R32: no burden to the amplifier, little offset; common practice [Ω]
LARGEST_CAPACITOR = 1e-6  #: of the integrator, above which the resistors grow; common practice [F]
ROOM = 1.1  #: range of the current over the most that the design has
SETTLINGS = 3  #: of output and integrator against each other; each shrinks the rest by the open-loop gain


def table(request: ReceiverRequest) -> str:
    """Table of the design file that holds U30."""
    return "amplifier" if request.second_amplifier is None else "second_amplifier"


def data(request: ReceiverRequest) -> OpAmpData:
    """The op amp of the integrator."""
    record = request.second_amplifier or request.amplifier
    if record is None:
        raise ValueError("refused before: no op amp")
    return record


def topology(request: ReceiverRequest) -> Topology:
    """Drawn by itself; the names of its two ends tie it to the amplifier."""
    negative, level = negative_node(request), level_node(request)
    elements: list[Element] = [
        Resistor("R31", "in", "sensed", role="servo", at=(0, 0), to=(3, 0)),
        Capacitor("C31", "sensed", GROUND, role="servo", stock="bypass", at=(3, 0), to=(3, 2)),
        Resistor("R32", level, "held", role="servo", at=(0, -1), to=(3, -1)),
        Capacitor("C32", "held", "injected", role="servo", stock="bypass", at=(3.5, -3.5), to=(6.5, -3.5)),
        OpAmp("U30", plus="sensed", minus="held", out="injected", positive="positive", negative=negative,
              role="servo", table=table(request), at=(4, -0.5), facing=RIGHT, flipped=True),
        Resistor("R30", "injected", "out", role="injection", at=(6.5, -0.5), to=(9.5, -0.5)),
        Capacitor("C38", "positive", GROUND, role="bypass", stock="bypass", at=(12, 1), to=(12, -1)),
    ]  # fmt: skip
    marks: list[tuple[Point, str]] = [
        ((0, 0), "in"), ((3, 2), GROUND), ((0, -1), level), ((9.5, -0.5), "out"),
        ((5, 0.5), "positive"), ((5, -1.5), negative), ((12, 1), "positive"), ((12, -1), GROUND),
    ]  # fmt: skip
    if negative != GROUND:
        elements.append(Capacitor("C39", GROUND, "negative", role="bypass", stock="bypass", at=(14, 1), to=(14, -1)))
        marks += [((14, 1), GROUND), ((14, -1), "negative")]
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


def given(request: ReceiverRequest) -> dict[str, Limit]:
    """Offset of the integrator with either sign."""
    return either_sign(data(request), "U30")


def propose(request: ReceiverRequest, derivation: Derivation, bench: Bench, exact: Values) -> tuple[Fitted, ...]:
    """R30 from the range of current, the integrator from the low cut-off.

    Raises
    ------
    InfeasibleError : the integrator has no headroom for the current.
    """
    asked, most = request.blocks.servo, brightest(request, bench)
    resistors, stock = request.preferred.resistors.series, request.preferred.bypass
    average = most["D1.responsivity"] * most["signal.power"] + most["D1.ambient_current"] + most["D1.dark_current"]
    wanted = ROOM * average if asked is None or asked.range is None else asked.range
    room = _headroom({"supply.positive": bench.low("supply.positive"), **_worst(bench)}, request)
    if room <= 0:
        raise InfeasibleError(
            f"the integrator has no headroom: {write(float(room), 'V')}", ["conditions.supply wider", "another level"]
        )
    injection = request.fixed.get("R30") or derivation.compute(
        "R30", front_end.injection_resistance, reason=f"{write(float(room), 'V')} of headroom for {write(wanted, 'A')}",
        headroom=float(room), current=wanted,
    )  # fmt: skip
    corner, reason = allowed(request, asked) or (1.0, "")
    feedback = float(bench.evaluate(_neutral(exact))["transimpedance"][0])
    constant = derivation.compute(
        "time constant of the servo", front_end.servo_time_constant, reason=reason,
        feedback_resistance=feedback, injection_resistance=injection, corner=corner,
    )  # fmt: skip
    resistance = max(INTEGRATOR, constant / LARGEST_CAPACITOR)
    shrunk = 0.75 * (1 - stock.tolerance)
    capacitance = derivation.compute(
        "C32", filter_capacitance, reason=f"{reason}; tolerance and class 2 taken off",
        resistance=resistance, corner=shrunk / (2 * np.pi * constant),
    )  # fmt: skip
    derivation.note("C31", "as C32: the two make one integrator")
    for ref in ("R31", "R32"):
        derivation.note(ref, "common practice: no burden to the amplifier, little offset")
    fixed = request.fixed
    found = [
        Fitted("R30", injection, resistors, high=injection, fixed="R30" in fixed),
        Fitted(
            "R31",
            fixed.get("R31", resistance),
            resistors,
            low=resistance / 1.05,
            high=resistance * 1.05,
            fixed="R31" in fixed,
        ),
        Fitted(
            "C32",
            fixed.get("C32", capacitance),
            stock.series,
            low=capacitance,
            high=5 * capacitance,
            fixed="C32" in fixed,
        ),
    ]
    for ref, twin in (("R32", found[1]), ("C31", found[2])):
        own = fixed.get(ref)
        like = replace(twin, ref=ref, twin=twin.ref)
        found.append(like if own is None else replace(like, twin="", exact=own, fixed=True))
    for ref in ("C38", "C39") if request.conditions.supply.negative else ("C38",):
        derivation.note(ref, "common practice: 100 nF close to each supply pin")
        value = request.fixed.get(ref, BYPASS)
        found.append(Fitted(ref, value, stock.series, low=value, high=value, fixed=ref in request.fixed))
    return tuple(found)


def _neutral(exact: Values) -> dict[str, Lanes]:
    """The servo as good as not there: a huge injection resistance."""
    parts = {"R30": 1e12, "R31": 1e5, "R32": 1e5, "C31": 1e-6, "C32": 1e-6, "C38": BYPASS, "C39": BYPASS}
    return {name: np.array([value]) for name, value in {**exact, **parts}.items()}


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


def heat(values: Values, request: ReceiverRequest) -> tuple[Heat, ...]:
    """U30, where its sheet says what it is heated by."""
    record = data(request)
    if record.junction_to_ambient is None:
        return ()
    power = (values["supply.positive"] - values["supply.negative"]) * values["U30.quiescent_current"]
    return (Heat("U30", power, values["temperature"] + power * record.junction_to_ambient.high, record.junction_max),)


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


def refused(request: ReceiverRequest) -> tuple[Refusal, ...]:
    """A band that begins at DC; no op amp."""
    where = ("blocks", "servo")
    if allowed(request, request.blocks.servo) is None:
        message = "needs low_cutoff in it, or min under signal.band: this band begins at dc"
        return (Refusal(where, message),)
    if request.amplifier is None and request.second_amplifier is None:
        return (Refusal(where, "needs an op amp: a table [second_amplifier]"),)
    return ()


BLOCK = Block(
    name="servo",
    topology=topology,
    propose=propose,
    given=given,
    bias=bias,
    stresses=stresses,
    heat=heat,
    remarks=remarks,
    refused=refused,
    formulas=(
        front_end.injection_resistance,
        front_end.servo_corner,
        front_end.servo_time_constant,
        filter_capacitance,
    ),
)
