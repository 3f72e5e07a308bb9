"""What follows a pulse: the capacitor has swung through zero, the clamp diode carries the current back."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.drivers.laser import Forward
from opto_ckt.circuits.drivers.laser_pulse.loop import Loop
from opto_ckt.formulas import discharge
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LaserPulseRequest

PASSES = 3  #: over the clamp's forward voltage, which the current back depends on
LEAST_CURRENT = 1e-6  #: at which the clamp's curve is read [A]


def recoil(
    values: Values, request: LaserPulseRequest, loop: Loop, line: Forward, peak: Lanes
) -> dict[str, float | Lanes]:
    """Voltage the other way round at the laser, current back through the clamp, a second pulse if one follows.

    The switch is taken to conduct either way till it is over; without a clamp the laser bears the voltage.
    """
    swung = loop.voltage * loop.end_voltage - line.turn_on
    shorted = np.asarray(values.get("D1.short", 0.0)) > 0
    back = np.where(peak > 0, np.maximum(swung, 0.0), 0.0)
    resistance = loop.resistance - line.resistance
    diode, gone = request.diode, np.asarray(values.get("D2.open", 0.0)) > 0
    current = drop = np.zeros_like(back)
    second = loop._replace(voltage=back, resistance=resistance)
    if diode is not None:
        drop = np.asarray(diode.forward_voltage_at(LEAST_CURRENT)) + 0.0 * back
        for _ in range(PASSES):
            second = loop._replace(voltage=np.maximum(back - drop, 0.0), resistance=resistance)
            current = second.peak
            drop = np.asarray(diode.forward_voltage_at(np.maximum(current, LEAST_CURRENT)))
    clamped = (diode is not None) & ~gone
    again = loop._replace(voltage=np.maximum(second.voltage * second.end_voltage - drop - line.turn_on, 0.0))
    energy = discharge.stored_energy(capacitance=loop.capacitance, voltage=back)
    return {
        "D2.current": np.where(clamped, current, 0.0),
        "D2.forward_voltage": drop,
        "D1.reverse_voltage": np.where(shorted, 0.0, np.where(clamped, np.minimum(drop, back), back)),
        "D1.second_current": np.where(clamped & ~shorted, again.peak, 0.0),
        "recoil.energy": np.where(clamped, energy, 0.0),
        "recoil.voltage": back,
    }
