"""Advice on the light of pulses that an eye may meet; never a classification."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.drivers import eye_safety
from opto_ckt.limits import Values
from opto_ckt.request import LaserPulseRequest
from opto_ckt.units import write


def advice(values: Values, request: LaserPulseRequest, fault: float) -> tuple[str, ...]:
    """What the average may do, beside the limit of Class 1, and that pulses have limits of their own.

    Parameters
    ----------
    fault : largest average power that a fault leads to, at the plane of the laser's sheet. [W]
    """
    energy = float(np.max(np.asarray(values["D1.pulse_energy"])))
    average = {**values, "D1.power": values["D1.average_power"]}
    return (
        *eye_safety.advice(average, request, fault),
        f"the figures of eye safety are those of the average power: one pulse, {write(energy, 'J')}, and a train of"
        " them have limits of their own, often stricter, which are not worked out here",
    )
