"""Load, heat, faults and advice of the pair."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Fault, FaultOutcome, Heat, Stress
from opto_ckt.circuits.receivers import avalanche, board
from opto_ckt.circuits.receivers.detector import POLARITY, one_level
from opto_ckt.circuits.receivers.feedback.faults import faults as stage_faults
from opto_ckt.circuits.receivers.tia_discrete.operation import junction, resting, top
from opto_ckt.limits import Lanes, Limits, Values
from opto_ckt.request import DiscreteRequest
from opto_ckt.units import write


def _most(values: Values, request: DiscreteRequest) -> float | Lanes:
    return one_level(values, request) + values["D1.ambient_current"] + values["D1.dark_current"]


def stresses(values: Values, request: DiscreteRequest) -> tuple[Stress, ...]:
    """Levels at the average light across each part, most current through R1."""
    current, supply = _most(values, request), values["supply.positive"]
    across = supply - values["node.col"]
    emitter = values["node.amp"] - values["supply.negative"]
    return (
        Stress("R1", power=current**2 * values["R1"], voltage=current * values["R1"], current=current),
        Stress("C1", voltage=current * values["R1"]),
        Stress("R2", power=supply**2 / values["R2"], voltage=np.maximum(across, supply)),
        Stress("R3", power=emitter**2 / values["R3"], voltage=emitter),
        Stress("Q1", voltage=supply, current=values["Q1.drain_current"]),
        Stress("Q2", voltage=supply - values["supply.negative"], current=values["Q2.drain_current"]),
        Stress("D1", voltage=values["detector.reverse_bias"], current=current),
        *board.stresses(values),
    )


def heat(values: Values, request: DiscreteRequest) -> tuple[Heat, ...]:
    """Both transistors, where the sheet states the way to the ambient."""
    record = request.transistor
    if record.junction_to_ambient is None:
        return ()
    resistance = record.junction_to_ambient.high
    powers = {
        "Q1": values["node.col"] * values["Q1.drain_current"],
        "Q2": (values["supply.positive"] - values["node.amp"]) * values["Q2.drain_current"],
    }
    return tuple(
        Heat(ref, power, values["temperature"] + power * resistance, record.junction_max)
        for ref, power in powers.items()
    )


def faults(request: DiscreteRequest) -> tuple[Fault, ...]:
    """The cases of a receiver; each computed by overriding values."""
    return stage_faults(request)


def outcome(fault: Fault, values: Values, request: DiscreteRequest) -> FaultOutcome:
    """Output level and current into the base of Q1 that the fault leads to, over all lanes."""
    sign = POLARITY[request.detector.output]
    base = junction(values, "Q1")
    across = np.abs(base - values["supply.bias"])
    leak = across / (values["D1.shunt_resistance"] + values.get("R10", 0.0) + values["D1.series_resistance"])
    drawn = sign * (_most(values, request) + leak)
    point = resting(values, request, drawn)
    output = np.clip(point["amp"], values["supply.negative"], top(values, request))
    into = np.maximum(-drawn - (base - values["supply.negative"]) / values["R1"], 0.0)
    limit = request.transistor.current_max
    ok = bool(np.max(into) <= limit and np.max(np.abs(drawn)) <= limit)
    ends = dict.fromkeys(write(round(float(end), 4) + 0.0, "V") for end in (np.min(output), np.max(output)))
    text = f"output {' … '.join(ends)}"
    if float(np.max(into)):
        text += f", {write(min(float(np.max(into)), 1e3), 'A')} into the base of Q1"
    return FaultOutcome(text if ok else f"{text}: put a resistor in D1's bias path", ok)


def remarks(values: Values, limits: Limits, request: DiscreteRequest) -> tuple[str, ...]:
    """Polarity, currents, what the output's level does over temperature."""
    rises = POLARITY[request.detector.output] > 0
    first, second = (write(float(np.median(values[f"{ref}.drain_current"])), "A") for ref in ("Q1", "Q2"))
    low, high = (write(float(end), "V") for end in (np.min(values["node.amp"]), np.max(values["node.amp"])))
    found = [
        f"output {'rises' if rises else 'falls'} with light; it rests at {low} … {high} over the corners: couple the"
        " load through a capacitor, or see that it stands that",
        f"{first} through Q1, {second} through Q2; base-emitter voltages fall by 2 mV/K, common practice",
    ]
    return (*found, *avalanche.remarks(request))
