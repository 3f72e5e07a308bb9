"""What happens when a joint opens, a part shorts or a supply is missing."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Fault, FaultOutcome
from opto_ckt.circuits.receivers.detector import POLARITY
from opto_ckt.circuits.receivers.feedback.faults import INPUT_CLAMP_CURRENT, OVERLOAD
from opto_ckt.circuits.receivers.feedback.faults import faults as stage_faults
from opto_ckt.circuits.receivers.load_resistor.operation import most_current
from opto_ckt.limits import Values
from opto_ckt.request import OpAmpReceiverRequest
from opto_ckt.units import write

__all__ = ["OVERLOAD", "faults", "outcome"]


def faults(request: OpAmpReceiverRequest) -> tuple[Fault, ...]:
    """The cases of a receiver; each computed by overriding values."""
    return stage_faults(request)


def outcome(fault: Fault, values: Values, request: OpAmpReceiverRequest) -> FaultOutcome:
    """Voltage at R1 and at the output, current into the amplifier's input, over all lanes."""
    sign, level = POLARITY[request.detector.output], np.asarray(values["input_level"], dtype=float)
    far = values["supply.bias"]
    light = most_current(values, request)
    leak = np.abs(level - far) / (values["D1.shunt_resistance"] + values["R1"] + values.get("R10", 0.0))
    wanted = level - sign * np.minimum((light + leak) * values["R1"], np.abs(level - far) + FORWARD)
    low, high = values["supply.negative"] - CLAMP, values["supply.positive"] + CLAMP
    clamped = np.clip(wanted, low, high)
    into = np.abs(wanted - clamped) / (
        values["R10"] if "R10" in values else np.maximum(values["D1.shunt_resistance"], 1.0)
    )
    into = np.minimum(into, np.abs(wanted - clamped) / CLAMP_RESISTANCE)
    positive, negative = values["supply.positive"], values["supply.negative"]
    upper = positive - np.minimum(values["U1.swing_to_positive"], positive)
    lower = negative + np.minimum(values["U1.swing_to_negative"], np.abs(negative))
    output = np.clip(clamped * values["buffer.gain"], lower, upper)
    ok = bool(np.max(into) <= INPUT_CLAMP_CURRENT)
    span = dict.fromkeys(write(round(float(end), 4) + 0.0, "V") for end in (np.min(output), np.max(output)))
    text = f"output {' … '.join(span)}"
    if float(np.max(into)):
        text += f", {write(float(np.max(into)), 'A')} into U1's input"
    return FaultOutcome(text if ok else f"{text}: put a resistor in D1's bias path", ok)


FORWARD = 0.5  #: an unbiased diode drives R1 no further than this, common practice [V]
CLAMP = 0.3  #: beyond a rail at which an input's protection begins to conduct, common practice [V]
CLAMP_RESISTANCE = 10.0  #: of that protection and the supply behind the diode, common practice [Ω]
