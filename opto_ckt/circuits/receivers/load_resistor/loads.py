"""Load and heat of the parts, and what a designer ought to be told."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Stress
from opto_ckt.circuits.receivers import avalanche, board
from opto_ckt.circuits.receivers.detector import POLARITY, noise_band
from opto_ckt.circuits.receivers.feedback.loads import heat
from opto_ckt.circuits.receivers.load_resistor.operation import most_current
from opto_ckt.circuits.receivers.load_resistor.structure import equalised
from opto_ckt.limits import Limits, Values
from opto_ckt.request import OpAmpReceiverRequest
from opto_ckt.units import write

__all__ = ["heat", "remarks", "stresses"]


def stresses(values: Values, request: OpAmpReceiverRequest) -> tuple[Stress, ...]:
    """Most current through R1; the output's limit around the amplifier."""
    current = most_current(values, request)
    volts = np.maximum(values["supply.positive"], np.abs(values["supply.negative"]))
    around = [ref for ref in ("R4", "R5") if ref in values]
    return (
        Stress("R1", power=current**2 * values["R1"], voltage=current * values["R1"], current=current),
        *(Stress(ref, voltage=volts, power=volts**2 / (values["R4"] + values["R5"])) for ref in around),
        Stress("C5", voltage=volts),
        Stress("D1", voltage=request.detector.resting_bias, current=current),
        Stress("U1", voltage=values["supply.positive"] - values["supply.negative"]),
        *board.stresses(values),
    )


def remarks(values: Values, limits: Limits, request: OpAmpReceiverRequest) -> tuple[str, ...]:
    """Polarity, the bias that light takes away, thick film, what the equaliser lives on."""
    falls = POLARITY[request.detector.output] > 0
    found = ["output falls with light" if falls else "output rises with light"]
    standing = float(np.max((values["D1.signal_current"] + values["D1.ambient_current"]) * values["R1"]))
    if standing > 0.05 and noise_band(request)[0] < 1e3:
        found.append(
            f"R1 carries {write(standing, 'V')} of standing photocurrent: fit thin film, thick film adds 1/f noise"
        )
    if equalised(request):
        pole = float(np.median(1 / (2 * np.pi * values["R1"] * loads_of(values))))
        gain = float(np.median(1 + values["R4"] / values["R5"]))
        found.append(
            f"the current integrates above {write(pole, 'Hz')}; the equaliser lifts {gain:.3g} times from there and has"
            " to match to a few per cent: trim R5 against the step, runs of equal bits use up the range"
        )
    return (*found, *avalanche.remarks(request))


def loads_of(values: Values) -> float | np.ndarray:
    """Capacitance across R1, of the differential input only what the loop leaves. [F]"""
    return values["D1.capacitance"] + values["U1.common_capacitance"] + values["CB"]
