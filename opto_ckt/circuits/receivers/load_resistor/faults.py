"""What happens when a joint opens, a part shorts, a supply is missing or the light is far too much."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Fault, FaultOutcome
from opto_ckt.circuits.receivers.detector import POLARITY
from opto_ckt.circuits.receivers.feedback.faults import DIODE_DROP, INPUT_CLAMP_CURRENT, OVERLOAD, supplies
from opto_ckt.circuits.receivers.load_resistor.form import amplified
from opto_ckt.circuits.receivers.load_resistor.operation import PHOTOVOLTAIC, most_current
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LoadResistorRequest
from opto_ckt.topology import OPEN, SHORT
from opto_ckt.units import write

FORWARD = 0.5  #: a diode in full light drives its load no further than this past its bias, common practice [V]
ENDLESS = 1.0  #: a current above it is limited by nothing on the board [A]


def faults(request: LoadResistorRequest) -> tuple[Fault, ...]:
    """The cases; each computed by overriding values."""
    around = [Fault("R4 open", {"R4": OPEN}), Fault("R5 open", {"R5": OPEN})] if amplified(request) else []
    return (
        Fault("detector open", {"D1.responsivity": 0.0, "D1.dark_current": 0.0, "signal.ambient": 0.0}),
        Fault("detector short", {"D1.shunt_resistance": SHORT}),
        Fault("R1 open", {"R1": OPEN}),
        Fault("R1 short", {"R1": SHORT}),
        *around,
        *supplies(request),
        Fault(f"light {OVERLOAD:.0f} times the most", {"signal.power": OVERLOAD * request.signal.power.high}),
    )


def outcome(fault: Fault, values: Values, request: LoadResistorRequest) -> FaultOutcome:
    """Level of the output, current through D1 and into U1's input, and what has become of D1's bias, over all lanes.

    Light drives the node until it has used up D1's bias; D1 then conducts and carries what is left itself. Only a
    bias beyond the rails drives the protection of U1's input.
    """
    sign, level = POLARITY[request.detector.output], np.asarray(values["input_level"], dtype=float)
    far, load, light = values["supply.bias"], values["R1"], most_current(values, request)
    path = values["D1.shunt_resistance"] + values.get("R10", 0.0)
    bias = np.maximum(sign * (level - far), 0.0)
    wanted = np.asarray((light + bias / path) / (1 / load + 1 / path))
    moved = np.minimum(wanted, bias + FORWARD)
    low, high = values["supply.negative"] - DIODE_DROP, values["supply.positive"] + DIODE_DROP
    driven = (far < low) | (far > high)
    node = np.where(driven, np.clip(level - sign * moved, low, high), level - sign * moved)
    carried = np.abs(node - level) / load
    into = np.where(node != level - sign * moved, np.maximum(light + np.abs(far - node) / path - carried, 0.0), 0.0)
    healthy = np.asarray(values["D1.shunt_resistance"]) > SHORT
    through = np.where(healthy, carried + into, 0.0)
    limit = request.detector.photocurrent_max
    ok = bool(np.max(into) <= INPUT_CLAMP_CURRENT and (limit is None or np.max(through) <= limit))
    text = [_span(_output(node, values)), _input(into)]
    if limit is not None and float(np.max(through)) > limit:
        text.append(f"{write(float(np.max(through)), 'A')} through D1, its sheet allows {write(limit, 'A')}")
    if np.any(healthy & (moved >= bias) & (bias > PHOTOVOLTAIC)):
        text.append("the drop across R1 takes all of D1's bias, which no longer follows the light")
    said = ", ".join(part for part in text if part)
    return FaultOutcome(said if ok else f"{said}: put a resistor in D1's bias path", ok)


def _output(node: Lanes, values: Values) -> Lanes:
    """Output of U1 for a voltage of its input, within its range. [V]"""
    positive, negative, level = values["supply.positive"], values["supply.negative"], values["input_level"]
    upper = positive - np.minimum(values["U1.swing_to_positive"], positive)
    lower = negative + np.minimum(values["U1.swing_to_negative"], np.abs(negative))
    return np.asarray(np.clip(level + (node - level) * values["buffer.gain"], lower, upper))


def _span(output: Lanes) -> str:
    ends = (round(float(end), 4) + 0.0 for end in (np.min(output), np.max(output)))
    return f"output {' … '.join(dict.fromkeys(write(end, 'V') for end in ends))}"


def _input(into: Lanes) -> str:
    worst = float(np.max(into))
    if worst > ENDLESS:
        return "the bias supply drives U1's input through D1, limited by nothing but that supply"
    return f"{write(worst, 'A')} into U1's input" if worst else ""
