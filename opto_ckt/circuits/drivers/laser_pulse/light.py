"""Light and warmth of the laser: of a pulse at the average junction temperature, of a direct current once settled."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.drivers.laser import Forward, coupling, settle, thermal_resistance
from opto_ckt.circuits.drivers.laser_pulse.loop import Loop
from opto_ckt.formulas import discharge_shape
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LaserPulseRequest

LOST = 10.0  #: direct current over the largest allowed, from which the laser is lost and no warmth is worked out [1]
WARMING = 4  #: passes: warmth takes light, less light leaves more warmth


def light(
    values: Values, request: LaserPulseRequest, loop: Loop, line: Forward, peak: Lanes, steady: Lanes
) -> dict[str, float | Lanes]:
    """Peak power, energy of a pulse, average power at the plane; junction, case and heat of the laser.

    Parameters
    ----------
    peak : of the current through the laser. [A]
    steady : direct current through it, where a fault lets one flow. [A]
    """
    data = request.source
    pulsing = (peak > 0) & (steady <= 0)
    rate = np.where(pulsing, values["signal.repetition_rate"], 0.0)
    left = loop.end_voltage
    passed = np.where(peak > 0, loop.capacitance * loop.voltage * (1 + left), 0.0)
    squared = np.where(peak > 0, loop.capacitance * loop.voltage**2 * (1 - left**2) / (2 * loop.resistance), 0.0)
    electrical = line.turn_on * passed + line.resistance * squared
    resistance, case = thermal_resistance(values, request), values["temperature"]
    junction = np.asarray(case + 0.0 * peak)
    for _ in range(WARMING):
        threshold = np.asarray(data.threshold_at(junction, values["D1.threshold_current"]))
        slope = np.asarray(data.slope_at(junction, values["D1.slope_efficiency"]))
        energy = slope * charge_above(loop, peak, threshold)
        junction = case + resistance * rate * (electrical - energy)
    start = [np.asarray(law) for law in (
        data.threshold_at(case, values["D1.threshold_current"]), data.slope_at(case, values["D1.slope_efficiency"])
    )]  # fmt: skip
    share = coupling(values, request)
    flash = np.maximum(slope * (peak - threshold), 0.0)
    borne = np.minimum(steady, LOST * data.current_max)
    still = settle(values, request, borne)
    warm = rate * (electrical - energy)
    standing = borne * line.at(borne) - still.power
    heat = np.where(steady > 0, standing, warm)
    hottest = np.where(steady > 0, still.junction_temperature, junction)
    return {
        "D1.threshold_current": threshold,
        "D1.slope_efficiency": slope * share,
        "D1.power": flash,
        "D1.peak_power": flash * share,
        "D1.pulse_energy": energy * share,
        "D1.optical_power": np.where(steady > 0, still.power, rate * energy) * share,
        "D1.average_power": np.where(steady > 0, still.power, rate * energy),
        "D1.steady_current": steady,
        "D1.steady_power": np.maximum(start[1] * (steady - start[0]), 0.0),
        "D1.junction_temperature": hottest,
        "D1.case_temperature": hottest - heat * values["D1.junction_to_case"],
        "D1.heat": heat,
        "discharge.squared": squared,
    }


def charge_above(loop: Loop, peak: Lanes, threshold: Lanes) -> Lanes:
    """Charge that passes the laser above its threshold in one pulse. [C]"""
    lasing = peak > threshold
    level = np.where(lasing, threshold / np.where(lasing, peak, 1.0), 0.5)
    when = discharge_shape.crossings(damping=loop.damping, level=level)
    first, last = (discharge_shape.voltage_left(damping=loop.damping, time=time) for time in when)
    above = loop.capacitance * loop.voltage * (first - last) - threshold * loop.unit * (when.falling - when.rising)
    return np.where(lasing, above, 0.0)
