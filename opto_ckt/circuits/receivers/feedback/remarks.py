"""What a designer ought to be told about a sized transimpedance stage."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.receivers import avalanche
from opto_ckt.circuits.receivers.detector import POLARITY, noise_band, one_level, wanted_bandwidth
from opto_ckt.circuits.receivers.feedback.stage import BUILDABLE, LARGEST_CHIP
from opto_ckt.limits import Limits, Values
from opto_ckt.request import OpAmpReceiverRequest
from opto_ckt.units import write


def remarks(values: Values, limits: Limits, request: OpAmpReceiverRequest) -> tuple[str, ...]:
    """Advice on slew rate, thick film, dark reach, polarity and capacitors too small to fit."""
    feedback = values["feedback_resistance"]
    found = [
        "output rises with light" if POLARITY[request.detector.output] > 0 else "output falls with light",
    ]
    step = float(np.max(one_level(values, request) * feedback))
    bandwidth = wanted_bandwidth(request)
    if bandwidth is not None:
        needed = 2 * np.pi * bandwidth * step / 2
        if needed > request.amplifier.slew_rate.low:
            found.append(
                f"slew rate: the largest step asks for {write(float(needed), 'V/s')}, U1 gives"
                f" {write(request.amplifier.slew_rate.low, 'V/s')}"
            )
    standing = float(np.max((values["D1.signal_current"] + values["D1.ambient_current"]) * feedback))
    if standing > 0.05 and noise_band(request)[0] < 1e3:
        found.append(
            f"R1 carries {write(standing, 'V')} of standing photocurrent: fit thin film, thick film adds 1/f noise"
        )
    dark = float(np.min(values["input_level"])) - float(np.min(values["supply.negative"]))
    if dark < request.amplifier.swing_to_negative.high:
        found.append("the output cannot reach its dark level: raise conditions.input_level or add a negative supply")
    if float(np.max(values.get("R1", 0.0))) > LARGEST_CHIP:
        found.append(
            f"R1 is beyond the {write(LARGEST_CHIP, 'Ω')} of usual chip resistors: a high-ohmic special, or tia-tee"
        )
    if 0 < float(np.max(values["C1"])) < BUILDABLE:
        found.append("C1 is no more than its pads: leave them bare, trim on the board, lower R1, or tia-tee")
    return (*found, *avalanche.remarks(request))
