"""What happens to a transimpedance stage when a joint opens, a part shorts or a supply is missing."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Fault, FaultOutcome
from opto_ckt.circuits.receivers.detector import POLARITY, one_level
from opto_ckt.circuits.receivers.feed import bias_node
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import OpAmpReceiverRequest, ReceiverRequest
from opto_ckt.topology import OPEN, SHORT
from opto_ckt.units import write

INPUT_CLAMP_CURRENT = 5e-3
"""Into the protection of an op amp's input; common practice where a sheet gives no limit [A]"""
DIODE_DROP = 0.3  #: beyond a rail at which an input's protection begins to conduct, common practice [V]
OVERLOAD = 10.0  #: light beyond the most asked for, as when a connector is probed with a test source


def faults(request: ReceiverRequest) -> tuple[Fault, ...]:
    """The cases of a receiver; each computed by overriding values."""
    return (
        Fault("detector open", {"D1.responsivity": 0.0, "D1.dark_current": 0.0, "signal.ambient": 0.0}),
        Fault("detector short", {"D1.shunt_resistance": SHORT}),
        Fault("R1 open", {"R1": OPEN}),
        Fault("R1 short", {"R1": SHORT}),
        *supplies(request),
        Fault(f"light {OVERLOAD:.0f} times the most", {"signal.power": OVERLOAD * request.signal.power.high}),
    )


def supplies(request: ReceiverRequest) -> list[Fault]:
    """Supplies and bias one before the other; a bias from a rail comes and goes with that rail."""
    off = {"supply.positive": 0.0, "supply.negative": 0.0}
    node = bias_node(request)
    if node == "bias":
        return [Fault("bias before supplies", off), Fault("supplies before bias", {"supply.bias": 0.0})]
    found = [Fault("light before supplies", off)]
    if node in ("positive", "negative") and request.conditions.supply.negative:
        other = "negative" if node == "positive" else "positive"
        found.append(Fault(f"{node} supply before {other}", {f"supply.{other}": 0.0}))
        found.append(Fault(f"{other} supply before {node}", {f"supply.{node}": 0.0}))
    return found


def outcome(fault: Fault, values: Values, request: OpAmpReceiverRequest) -> FaultOutcome:
    """Output voltage and current into the summing node that the fault leads to, over all lanes."""
    sign = POLARITY[request.detector.output]
    level = np.asarray(values["input_level"], dtype=float)
    light = one_level(values, request) + values["D1.ambient_current"]
    drop = sign * (level - values["supply.bias"])
    through_diode = (
        light + values["D1.dark_current"] + np.abs(drop) / (values["D1.shunt_resistance"] + values.get("R10", 0.0))
    )
    wanted = level + sign * through_diode * values["feedback_resistance"]
    upper = values["supply.positive"] - np.minimum(values["U1.swing_to_positive"], values["supply.positive"])
    lower = values["supply.negative"] + np.minimum(values["U1.swing_to_negative"], np.abs(values["supply.negative"]))
    output = np.clip(wanted, lower, upper)
    feedback = np.abs(output - level) / values["feedback_resistance"]
    excess = np.maximum(through_diode - feedback, 0.0)
    beyond = (values["supply.bias"] < values["supply.negative"] - DIODE_DROP) | (
        values["supply.bias"] > values["supply.positive"] + DIODE_DROP
    )
    outdone = excess > 1e-6 * through_diode
    pulled = bool(np.any(outdone))
    to_bias = np.abs(output - values["supply.bias"]) / values["feedback_resistance"]
    through_diode = np.where(outdone & ~beyond, np.minimum(to_bias, through_diode), through_diode)
    excess = np.where(beyond & outdone, excess, 0.0)
    limit = _diode_limit(request)
    ok = bool(np.max(excess) <= INPUT_CLAMP_CURRENT and np.max(through_diode) <= limit)
    return FaultOutcome(_sentence(np.asarray(output), np.asarray(excess), np.asarray(through_diode), ok, pulled), ok)


def _diode_limit(request: OpAmpReceiverRequest) -> float:
    limit = request.detector.photocurrent_max
    return np.inf if limit is None else limit


def _sentence(output: Lanes, excess: Lanes, current: Lanes, ok: bool, pulled: bool) -> str:
    span = dict.fromkeys(write(_rounded(float(end)), "V") for end in (np.min(output), np.max(output)))
    text = f"output {' … '.join(span)}"
    worst = float(np.max(excess))
    if worst:
        into = f"{write(worst, 'A')} beyond what R1 carries goes into U1's input"
        if worst > 1.0:
            into = "the bias supply drives U1's input through D1, limited by nothing but that supply"
        text += f", {into}"
    elif pulled:
        text += ", the summing node goes to the bias, within U1's rails"
    if not worst and not ok:
        text += f", {write(float(np.max(current)), 'A')} through D1"
    return text if ok else text + ": put a resistor in D1's bias path"


def _rounded(voltage: float) -> float:
    """The voltage to 0.1 mV: what is less says nothing here. [V]"""
    return round(voltage, 4) + 0.0
