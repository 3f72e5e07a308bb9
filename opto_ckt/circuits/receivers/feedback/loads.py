"""Load and heat of the parts of a transimpedance stage."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Heat, Stress
from opto_ckt.circuits.receivers import board
from opto_ckt.circuits.receivers.detector import one_level
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import OpAmpReceiverRequest


def most_current(values: Values, request: OpAmpReceiverRequest) -> float | Lanes:
    """Through the feedback: a one, ambient light and dark current. [A]"""
    return one_level(values, request) + values["D1.ambient_current"] + values["D1.dark_current"]


def stresses(values: Values, request: OpAmpReceiverRequest) -> tuple[Stress, ...]:
    """Most light and dark current through R1; the supplies across the bypass."""
    current = most_current(values, request)
    return (
        Stress("R1", power=current**2 * values["R1"], voltage=current * values["R1"], current=current),
        Stress("C1", voltage=current * values["R1"]),
        Stress("C3", voltage=np.abs(values["input_level"])),
        *around(values, request),
    )


def around(values: Values, request: OpAmpReceiverRequest) -> tuple[Stress, ...]:
    """All but the feedback."""
    return (
        Stress("D1", voltage=values["detector.reverse_bias"], current=most_current(values, request)),
        Stress("U1", voltage=values["supply.positive"] - values["supply.negative"]),
        *board.stresses(values),
    )


def heat(values: Values, request: OpAmpReceiverRequest) -> tuple[Heat, ...]:
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
