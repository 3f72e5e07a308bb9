"""Load and heat of the parts."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Heat, Stress
from opto_ckt.circuits.receivers import board
from opto_ckt.circuits.receivers.feedback.loads import heat as heat_of_amplifier
from opto_ckt.circuits.receivers.load_resistor import level_buffer
from opto_ckt.circuits.receivers.load_resistor.operation import most_current
from opto_ckt.limits import Values
from opto_ckt.request import LoadResistorRequest


def stresses(values: Values, request: LoadResistorRequest) -> tuple[Stress, ...]:
    """Most current through R1, dark bias across D1; the output's limit around the amplifier; the supplies."""
    current = most_current(values, request)
    volts = np.maximum(values["supply.positive"], np.abs(values["supply.negative"]))
    found = [
        Stress("R1", power=current**2 * values["R1"], voltage=current * values["R1"], current=current),
        Stress("D1", voltage=np.abs(values["input_level"] - values["supply.bias"]), current=current),
        Stress("U1", voltage=values["supply.positive"] - values["supply.negative"]),
        *level_buffer.stresses(values),
        *board.stresses(values),
    ]
    if "R4" in values:
        through = volts / (values["R4"] + values["R5"])
        found += [
            Stress(ref, power=through**2 * values[ref], voltage=through * values[ref], current=through)
            for ref in ("R4", "R5")
        ]
        found.append(Stress("C5", voltage=volts))
    return tuple(found)


def heat(values: Values, request: LoadResistorRequest) -> tuple[Heat, ...]:
    """The op amps, where their sheets say what they are heated by."""
    return (*heat_of_amplifier(values, request), *level_buffer.heat(values, request))
