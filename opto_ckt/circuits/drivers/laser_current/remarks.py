"""What a designer ought to be told about a sized constant-current laser driver, people's eyes first."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.drivers.cautions import about_the_driver
from opto_ckt.circuits.drivers.side import side_of
from opto_ckt.formulas.driver import output_current_noise
from opto_ckt.limits import Limits, Values
from opto_ckt.request import LaserDriverRequest
from opto_ckt.units import write


def remarks(values: Values, limits: Limits, request: LaserDriverRequest) -> tuple[str, ...]:
    """Cautions for people and laser, then advice that depends on the values."""
    found = about_the_driver(values, request, float(np.max(values["D1.power"])))
    found.append(_noise(values))
    rail = "negative" if side_of(request) == "low" else "positive"
    if getattr(request.amplifier, f"common_mode_to_{rail}") is None:
        found.append(f"the amplifier's sheet says nothing of inputs near its {rail} rail: see that they work there")
    if request.signal.power is not None:
        found.append("the power is not trimmed: its span holds the spread of the laser; trim R2, or control the power")
    return tuple(found)


def _noise(values: Values) -> str:
    density = float(
        np.max(
            output_current_noise(
                voltage_noise=values["U1.voltage_noise"],
                sense_resistance=values["R1"],
                temperature=values["temperature"],
            )
        )
    )
    return (
        f"current noise of the loop {write(density, 'A/√Hz')} below its bandwidth, 1/f noise and the reference's apart"
    )
