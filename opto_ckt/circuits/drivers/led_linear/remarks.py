"""What a designer ought to be told about a linear LED driver, people's eyes first."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.drivers.led import asked_current, safety, unstated
from opto_ckt.circuits.drivers.led_linear.harmonics import roll_off
from opto_ckt.formulas.driver import output_current_noise
from opto_ckt.formulas.reference import parallel_resistance
from opto_ckt.limits import Limits, Values
from opto_ckt.request import LedLinearRequest
from opto_ckt.units import percent, write

MISFIT = 0.05  #: of the power, from which on the law of the roll-off is said to miss the sheet's points


def remarks(values: Values, limits: Limits, request: LedLinearRequest) -> tuple[str, ...]:
    """Cautions for people and LED, then advice that depends on the values."""
    found = [*safety(request, float(np.max(values["D1.emitted_power"]))), *unstated(request)]
    limit = write(request.source.reverse_voltage_max, "V")
    found.append(f"the LED takes {limit} the wrong way round: a supply reversed destroys it")
    swing = asked_current(request) * request.signal.modulation_index * float(np.median(values["R1"]))
    load = float(np.median(parallel_resistance(first=values["R2"], second=values["R3"])))
    found.append(
        f"full signal is {write(swing, 'V')} peak at the input, which loads its source with {write(load, 'Ω')}"
    )
    law = roll_off(request.source)
    if law is None:
        found.append("the sheet gives the light at one current: no harmonics are told; give it at two or more")
    elif law.misfit > MISFIT:
        found.append(f"the law of the roll-off misses points of the light by up to {percent(law.misfit)}")
    density = output_current_noise(
        voltage_noise=values["U1.voltage_noise"], sense_resistance=values["R1"], temperature=values["temperature"]
    )
    most = write(float(np.max(density)), "A/√Hz")
    found.append(f"current noise of the loop {most} below its bandwidth, 1/f noise and the reference's apart")
    return tuple(found)
