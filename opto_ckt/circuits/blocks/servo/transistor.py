r"""Injection by a transistor: range up to the far rail, one direction, a low cut-off that follows the light.

                              rail
                             [ R30 ]
    amp --[R31]--+--|- \       |
                 |  |   U30 >--|> Q30
    0 -----------|--|+ /    |  |
                 +--[ C32 ]-+  +-- sum

U30 works between ground and the rail that R30 goes to: on both rails it could pull the base past the summing node, and
the collector's junction would then latch the loop.
"""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Bench, Fitted, Heat, Refusal, Stress
from opto_ckt.circuits.blocks.servo import integrator
from opto_ckt.circuits.blocks.servo.integrator import WHERE, bypass, bypass_parts, data, neutral, table, wanted_range
from opto_ckt.circuits.receivers import bipolar
from opto_ckt.circuits.receivers.amplifier import warmed
from opto_ckt.circuits.receivers.detector import POLARITY
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import common_base, front_end
from opto_ckt.limits import Lanes, Limits, Values
from opto_ckt.parts.transistor import BipolarData
from opto_ckt.request import ReceiverRequest
from opto_ckt.topology import GROUND, RIGHT, BipolarTransistor, Capacitor, Element, OpAmp, Point, Resistor, Topology
from opto_ckt.units import write

KINDS = {1: "pnp", -1: "npn"}  #: by the way that light drives the output
NODES = {1: "positive", -1: "negative"}
RAILS = {1: "supply.positive", -1: "supply.negative"}  #: that R30 goes to
TURN_OFF = 0.2  #: of base-emitter voltage for a thousandth of the current [V]
LEAST_CURRENT = 1e-12  #: of Q30 where nothing is to be taken away [A]
LEAST_ROOM = 1e-3  #: where a supply is missing [V]
SETTLINGS = 3  #: of output and integrator against each other; each shrinks the rest by the open-loop gain


def _sign(request: ReceiverRequest) -> int:
    return int(POLARITY[request.detector.output])


def topology(request: ReceiverRequest) -> Topology:
    """Drawn by itself; the names of its two ends tie it to the amplifier."""
    sign = _sign(request)
    rail = NODES[sign]
    positive, negative = (rail, GROUND) if sign > 0 else (GROUND, rail)
    capacitors, ends = bypass({"C38": rail}, 12)
    emitter, collector = -0.5 + sign, -0.5 - sign
    elements: list[Element] = [
        Resistor("R31", "in", "held", role="servo", at=(0, 0), to=(3, 0)),
        Capacitor("C32", "held", "injected", role="servo", stock="bypass", at=(3.5, 2), to=(6.5, 2)),
        OpAmp("U30", plus=GROUND, minus="held", out="injected", positive=positive, negative=negative,
              role="servo", table=table(request), at=(4, -0.5), facing=RIGHT),
        BipolarTransistor("Q30", drain="out", control="injected", source="emitter", polarity=-sign, role="injection",
                          table="transistor", at=(8, -0.5), facing=RIGHT, flipped=sign > 0),
        Resistor("R30", rail, "emitter", role="injection", at=(9, emitter + 2 * sign), to=(9, emitter)),
        *capacitors,
    ]  # fmt: skip
    marks: list[tuple[Point, str]] = [
        ((0, 0), "in"), ((3, -1), GROUND), ((9, collector), "out"), ((9, emitter + 2 * sign), rail),
        ((5, 0.5), positive), ((5, -1.5), negative), *ends,
    ]  # fmt: skip
    return Topology(
        elements=tuple(elements),
        input="",
        output=("out", GROUND),
        wires=(
            ((3, 0), (4, 0)), ((3, -1), (4, -1)), ((3.5, 0), (3.5, 2)),
            ((6.5, 2), (6.5, -0.5)), ((6, -0.5), (8, -0.5)),
        ),
        marks=tuple(marks),
    )  # fmt: skip


def propose(request: ReceiverRequest, derivation: Derivation, bench: Bench, exact: Values) -> tuple[Fitted, ...]:
    """R30 from the range of current, the integrator from the low cut-off at most light.

    Raises
    ------
    InfeasibleError : the transistor has no headroom for the current.
    """
    wanted = wanted_range(request, bench)
    sign = _sign(request)
    names = ("Q30.base_emitter_voltage", "U30.swing_to_positive", "U30.swing_to_negative", "supply.negative")
    worst = {name: bench.high(name) for name in names} | {"supply.positive": bench.low("supply.positive")}
    room = float(_headroom({**worst, "temperature": bench.low("temperature")}, sign))
    if room <= 0:
        raise InfeasibleError(f"R30 and Q30 have no headroom: {write(room, 'V')}", ["conditions.supply wider"])
    injection = request.fixed.get("R30") or derivation.compute(
        "R30", front_end.injection_resistance, reason=f"{write(room, 'V')} of headroom for {write(wanted, 'A')}",
        headroom=room, current=wanted,
    )  # fmt: skip
    without = neutral(exact, {"R30": 1e12})
    return (
        Fitted("R30", injection, request.preferred.resistors.series, high=injection, fixed="R30" in request.fixed),
        *integrator.parts(request, derivation, bench, without, injection),
        *bypass_parts(request, derivation, ("C38",)),
    )


def _headroom(values: Values, sign: int) -> float | Lanes:
    """Left for R30 by the reach of U30, whose output comes near to ground, at the base of Q30. [V]"""
    drop = values["Q30.base_emitter_voltage"] + bipolar.DRIFT * (values["temperature"] - ROOM_TEMPERATURE)
    return sign * values[RAILS[sign]] - values[f"U30.swing_to_{NODES[-sign]}"] - drop


def bias(values: Values, request: ReceiverRequest) -> dict[str, float | Lanes]:
    """Current of Q30 that holds the output at its level; where light asks for none, Q30 is off and nothing holds it."""
    found, sign = warmed(values, data(request), "U30"), _sign(request)
    reach = np.maximum(_headroom({**values, **found}, sign), LEAST_ROOM) / values["R30"]
    offset = values["R31"] * found["U30.bias_current"] + found["U30.offset"]
    collector, base, volts = np.asarray(reach), np.asarray(0.0), np.asarray(0.0)
    output: float | Lanes = offset
    for _ in range(SETTLINGS):
        output = offset - base / values["U30.open_loop_gain"]
        collector = np.maximum(sign * _wanted(values, output, values["summing_current"]), LEAST_CURRENT)
        emitter = collector * (values["Q30.current_gain"] + 1) / values["Q30.current_gain"]
        volts = _base_emitter(values, reach, emitter)
        base = values[RAILS[sign]] - sign * (emitter * values["R30"] + volts)
    off = collector <= LEAST_CURRENT
    output = np.where(off, values["node.amp"], output)
    swung = values["U30.open_loop_gain"] * (offset - output)
    light = sign * (values["D1.responsivity"] * values["signal.power"] + values["D1.ambient_current"])
    dark_current = values["summing_current"] - light
    holds = sign * _wanted(values, offset, dark_current) > 0
    return {
        **found,
        **bipolar.small_signal(values, "Q30", collector, volts),
        "servo.offset": np.where(holds, offset, _unheld(values, dark_current)),
        "servo.range": reach * values["Q30.current_gain"] / (values["Q30.current_gain"] + 1),
        "node.amp": output,
        "node.sum": values["U1.offset"] - output / values["U1.open_loop_gain"],
        "node.injected": np.where(off, swung, base),
    }


def _wanted(values: Values, output: float | Lanes, drawn: float | Lanes) -> Lanes:
    """Current into the summing node that an output leaves to be injected. [A]"""
    summed = values["U1.offset"] - output / values["U1.open_loop_gain"]
    back = (output - summed * (1 + values["feedback_ratio"])) / values["feedback_resistance"]
    return np.asarray(drawn + summed * values["summing_conductance"] - back)


def _unheld(values: Values, drawn: float | Lanes) -> Lanes:
    """Output with Q30 off, for a current drawn from the summing node. [V]"""
    summed = values["U1.offset"]
    through = drawn + summed * values["summing_conductance"]
    return np.asarray(summed * (1 + values["feedback_ratio"]) + values["feedback_resistance"] * through)


def _base_emitter(values: Values, stated: float | Lanes, current: float | Lanes) -> Lanes:
    """At a current of the emitter; the sheet's voltage is taken to hold at the servo's range. [V]"""
    return np.asarray(
        common_base.base_emitter_voltage(
            base_emitter_voltage=values["Q30.base_emitter_voltage"],
            stated_current=stated,
            current=current,
            temperature=values["temperature"],
            reference_temperature=ROOM_TEMPERATURE,
            coefficient=bipolar.DRIFT,
        )
    )


def stresses(values: Values, request: ReceiverRequest) -> tuple[Stress, ...]:
    """The whole range through R30 and Q30; the output's limit across the rest."""
    rail = np.abs(values[RAILS[_sign(request)]])
    current = values["servo.range"]
    volts = np.maximum(values["supply.positive"], np.abs(values["supply.negative"]))
    return (
        Stress("R30", voltage=rail, power=current**2 * values["R30"], current=current),
        Stress("Q30", voltage=rail, current=current),
        Stress("R31", voltage=volts, power=volts**2 / values["R31"]),
        Stress("U30", voltage=rail),
        *(Stress(ref, voltage=volts) for ref in ("C32", "C38")),
    )


def heat(values: Values, request: ReceiverRequest) -> tuple[Heat, ...]:
    """The op amp; Q30, where its sheet states the way to the ambient."""
    record, rail = request.transistor, np.abs(values[RAILS[_sign(request)]])
    found = integrator.heat(values, request, rail)
    if record is None or record.junction_to_ambient is None:
        return found
    power = values["Q30.drain_current"] * rail
    junction = values["temperature"] + power * record.junction_to_ambient.high
    return (*found, Heat("Q30", power, junction, record.junction_max))


def remarks(values: Values, limits: Limits, request: ReceiverRequest) -> tuple[str, ...]:
    """What it takes away, and how the cut-off follows the light."""
    reach = float(np.min(values["servo.range"]))
    corner = front_end.servo_corner(
        feedback_resistance=values["feedback_resistance"],
        injection_resistance=values["R30"] + 1 / values["Q30.transconductance"],
        time_constant=values["R31"] * values["C32"],
    )
    lowest, highest = (write(float(end), "Hz") for end in (np.min(corner), np.max(corner)))
    return (
        f"servo: takes away up to {write(reach, 'A')} of steady current, in the direction of light only; its cut-off"
        f" follows the light, {lowest} … {highest}; without light it lets go",
    )


def refused(request: ReceiverRequest) -> tuple[Refusal, ...]:
    """A raised level; no transistor, one of the wrong kind, or an op amp that cannot turn it off or lacks supply."""
    record, sign = request.transistor, _sign(request)
    if request.conditions.input_level:
        message = 'an input at 0 V is needed: from a raised one U30 could pull the base past it; injection = "resistor"'
        return (Refusal(WHERE, message),)
    if record is None:
        return (Refusal(WHERE, f'injection = "transistor" needs a table [transistor], {KINDS[sign]}'),)
    if record.kind != KINDS[sign]:
        end = request.detector.output
        message = f"{record.kind!r} cannot take away the light of a detector by its {end}; {KINDS[sign]} does"
        return (Refusal(("transistor", "kind"), message),)
    return _turned_off(request, record, sign)


def _turned_off(request: ReceiverRequest, record: BipolarData, sign: int) -> tuple[Refusal, ...]:
    op_amp, supply = data(request), request.conditions.supply
    least = abs(supply.positive if sign > 0 else supply.negative) * (1 - supply.tolerance)
    if least < op_amp.supply_min:
        message = f"its op amp works between ground and one rail, {write(least, 'V')} at least, and needs"
        return (Refusal(WHERE, f"{message} {write(op_amp.supply_min, 'V')}: another under [second_amplifier]"),)
    swing = (op_amp.swing_to_positive if sign > 0 else op_amp.swing_to_negative).high
    hottest = request.conditions.temperature.high - ROOM_TEMPERATURE
    off = record.base_emitter_voltage.low + bipolar.DRIFT * hottest - TURN_OFF
    if swing <= off:
        return ()
    rail = "positive" if sign > 0 else "negative"
    message = (
        f"its op amp comes to {write(swing, 'V')} of the {rail} rail, Q30 lets go within {write(off, 'V')} of it: an op"
        f" amp with swing_to_{rail} ≤ {write(off, 'V')} under [second_amplifier]"
    )
    return (Refusal(WHERE, message),)


FORMULAS = (common_base.base_emitter_voltage,)
