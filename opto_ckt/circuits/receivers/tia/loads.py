"""Load and heat of the parts of the transimpedance amplifier."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Heat, Stress
from opto_ckt.circuits.receivers.detector import level_factor
from opto_ckt.limits import Values
from opto_ckt.request import ReceiverRequest


def stresses(values: Values, request: ReceiverRequest) -> tuple[Stress, ...]:
    """Most light and dark current through the feedback; the supplies across the bypass."""
    photocurrent = values["D1.responsivity"] * values["signal.power"] * level_factor(request)
    current = photocurrent + values["signal.ambient"] + values["D1.dark_current"]
    positive, negative = values["supply.positive"], np.abs(values["supply.negative"])
    found = [
        Stress("R1", power=current**2 * values["R1"], voltage=current * values["R1"], current=current),
        Stress("C1", voltage=current * values["R1"]),
        Stress("D1", voltage=values["detector.reverse_bias"], current=current),
        Stress("U1", voltage=positive + negative),
        Stress("C8", voltage=positive),
        Stress("C9", voltage=negative),
    ]
    if "R2" in values:
        through = positive / (values["R2"] + values["R3"])
        found += [
            Stress("R2", power=through**2 * values["R2"], voltage=through * values["R2"], current=through),
            Stress("R3", power=through**2 * values["R3"], voltage=through * values["R3"], current=through),
            Stress("C2", voltage=values["input_level"]),
        ]
    return tuple(found)


def heat(values: Values, request: ReceiverRequest) -> tuple[Heat, ...]:
    """The op amp, where its sheet says what it is heated by: supply current, and the load driven from the rail."""
    amplifier = request.amplifier
    span = values["supply.positive"] - values["supply.negative"]
    power = span * values["U1.quiescent_current"]
    if request.load.resistance is not None:
        half = span / 2
        power = power + half**2 / request.load.resistance / 4  # worst where the output rests at half its rail
    if amplifier.junction_to_ambient is None:
        return ()
    rise = power * amplifier.junction_to_ambient.high
    return (Heat("U1", power, values["temperature"] + rise, amplifier.junction_max),)
