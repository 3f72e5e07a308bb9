"""What happens to the cascode stage when a joint opens, a part shorts or a supply is missing."""

from __future__ import annotations

import numpy as np

from opto_ckt.analyses import response
from opto_ckt.circuit import Fault, FaultOutcome, Refusal
from opto_ckt.circuits.receivers import refusals
from opto_ckt.circuits.receivers.detector import POLARITY
from opto_ckt.circuits.receivers.feed import bias_node
from opto_ckt.circuits.receivers.feedback import faults as feedback
from opto_ckt.circuits.receivers.feedback.comparison import evaluated
from opto_ckt.circuits.receivers.tia_cascode import structure
from opto_ckt.circuits.receivers.tia_cascode.transistor import KIND
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import CascodeRequest
from opto_ckt.topology import OPEN, SHORT
from opto_ckt.units import write

SHORTED, UNSUPPLIED, STARVED = "detector short", "supplies before bias", "R4 open"


def refused(request: CascodeRequest) -> tuple[Refusal, ...]:
    """As any receiver; a transistor of the other kind; a bias that the base-emitter voltage takes all of."""
    found = list(refusals.refused(request))
    output, kind = request.detector.output, request.transistor.kind
    if kind != KIND[output]:
        message = f"'{kind}' has to be {KIND[output]} behind the {output} of the detector; or turn that round"
        found.append(Refusal(("transistor", "kind"), message))
    takes = request.transistor.base_emitter_voltage.high
    if bias_node(request) != "bias" and request.detector.resting_bias <= takes:
        message = f"the emitter lies {write(takes, 'V')} nearer to the far end than the level: more bias than that"
        found.append(Refusal(("detector", "reverse_bias"), message))
    return tuple(found)


def faults(request: CascodeRequest) -> tuple[Fault, ...]:
    """Those of the stage; each bias resistor open."""
    return (*feedback.faults(request), Fault(STARVED, {"R4": OPEN}), Fault("R5 open", {"R5": OPEN}))


def outcome(fault: Fault, values: Values, request: CascodeRequest) -> FaultOutcome:
    """Output voltage that the fault leads to over all lanes, and what flows through Q1 and D1."""
    if fault.case == SHORTED:
        return _shorted(values, request)
    if fault.case == UNSUPPLIED:
        return _unsupplied(values, request)
    output = _output(values)
    said = f"output {write(float(np.min(output)), 'V', 3)} … {write(float(np.max(output)), 'V', 3)}"
    if fault.case == STARVED:
        slow = float(np.min(response.bandwidth(evaluated(structure.topology(request), values))))
        return FaultOutcome(f"{said}, Q1 lives on light alone: bandwidth down to {write(slow, 'Hz')}", True)
    current, most = float(np.max(values["Q1.emitter_current"])), request.transistor.current_max
    limit = request.detector.photocurrent_max
    light = float(np.max(current - np.min(values["Q1.emitter_current"])))
    ok = current <= most and (limit is None or light <= limit)
    return FaultOutcome(f"{said}, {write(current, 'A')} through Q1", ok)


def _output(values: Values) -> Lanes:
    """Of the amplifier between its limits. [V]"""
    upper = values["supply.positive"] - np.minimum(values["U1.swing_to_positive"], values["supply.positive"])
    lower = values["supply.negative"] + np.minimum(values["U1.swing_to_negative"], np.abs(values["supply.negative"]))
    return np.asarray(np.round(np.clip(values["node.amp"], lower, upper), 4) + 0.0)


def _shorted(values: Values, request: CascodeRequest) -> FaultOutcome:
    """The supply of the detector across the base-emitter junction, whatever is in the way."""
    sign = POLARITY[request.detector.output]
    drive = sign * (values["input_level"] - values["supply.bias"]) - values["Q1.base_emitter_voltage"]
    current = float(np.max(drive / (values.get("R10", 0.0) + SHORT)))
    most = request.transistor.current_max
    if current <= most:
        return FaultOutcome(f"{write(current, 'A')} through the base of Q1, limited by R10", True)
    flow = f"up to {write(current, 'A')}, against {write(most, 'A')} that Q1 stands,"
    if "R10" not in values:
        flow = "a current that nothing but that supply limits"
    return FaultOutcome(
        f"the bias supply drives {flow} through the base of Q1: put a resistor in D1's bias path", False
    )


def _unsupplied(values: Values, request: CascodeRequest) -> FaultOutcome:
    """The current of R4 finds its way through the detector, forward."""
    current = float(np.max(values["Q1.emitter_current"]))
    limit = request.detector.photocurrent_max
    ok = limit is None or current <= limit
    return FaultOutcome(f"R4 draws up to {write(current, 'A')} through D1 forward instead of Q1", ok)
