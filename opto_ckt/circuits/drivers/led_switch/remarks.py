"""What a designer ought to be told about a switched LED, people's eyes first."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.drivers.led import safety, unstated
from opto_ckt.circuits.drivers.led_switch.structure import is_peaked
from opto_ckt.formulas.switching import charging_delay, recovery_frequency, settled_frequency
from opto_ckt.limits import Limits, Values
from opto_ckt.parts.transistor import BipolarData
from opto_ckt.request import LedSwitchRequest
from opto_ckt.units import percent, write

MUCH_OF_A_BIT = 0.1  #: share from which on a delay is told; common practice


def remarks(values: Values, limits: Limits, request: LedSwitchRequest) -> tuple[str, ...]:
    """Cautions for people and LED, then advice that depends on the values."""
    found = [*safety(request, float(np.max(values["D1.emitted_power"]))), *unstated(request)]
    limit = write(request.source.reverse_voltage_max, "V")
    found.append(f"the LED takes {limit} the wrong way round: a supply reversed destroys it")
    if is_peaked(request) and request.source.pulse_current_max is None:
        found.append("the LED's sheet gives no pulse_current_max: the peak is held below current_max")
    if "off.power" in values:
        lit, off = (np.asarray(values[name], dtype=float) for name in ("D1.emitted_power", "off.power"))
        with np.errstate(divide="ignore"):
            least = float(np.min(lit / off))
        if np.isfinite(least):
            found.append(
                f"the pre-bias leaves up to {write(float(np.max(off)), 'W')} of light while off: an extinction ratio of"
                f" {10 * np.log10(least):.1f} dB at the worst; it saves the junction's charging at turn-on"
            )
    found += _charging(values, request)
    if isinstance(request.transistor, BipolarData):
        found += _stored(values, request, request.transistor)
    return tuple(found)


def _charging(values: Values, request: LedSwitchRequest) -> list[str]:
    """How long the junction's capacitance holds the light back, where that is much of a bit."""
    rate = request.signal.bit_rate
    lit = np.asarray(values["D1.current"], dtype=float)
    if rate is None or not np.min(lit) > 0:
        return []
    delay = charging_delay(
        capacitance=np.asarray(values["D1.capacitance"]),
        forward_voltage=np.asarray(values["D1.forward_voltage"]),
        resting_voltage=np.asarray(values["off.voltage"]),
        current=lit,
    )
    longest = float(np.max(delay))
    if longest * rate < MUCH_OF_A_BIT:
        return []
    helped = "a smaller R1 with more supply" if "R6" in values else "signal.pre_bias"
    return [
        f"the drive charges the LED's capacitance for up to {write(longest, 's')} before any light comes,"
        f" {percent(longest * rate)} of a bit; {helped} shortens it"
    ]


def _stored(values: Values, request: LedSwitchRequest, transistor: BipolarData) -> list[str]:
    """What the charge of a saturated transistor costs in time."""
    if "C1" in values:
        resistance, capacitance = float(np.max(values["R2"])), float(np.max(values["C1"]))
        recovered = recovery_frequency(base_resistance=resistance, capacitance=capacitance)
        settled = settled_frequency(
            source_resistance=float(np.max(values["U1.source_resistance"])),
            base_resistance=resistance,
            capacitance=capacitance,
        )
        slower = min(float(recovered), float(settled))
        said = f"C1 recovers up to {write(slower, 'Hz')} on its terminals"
        left = float(np.max(values["storage"]))
        if left > 0:
            said += f"; it leaves up to {write(left, 's')} of storage"
        rate = request.signal.bit_rate
        if rate is not None and rate / 2 > slower:
            said += f", below the {write(rate / 2, 'Hz')} of the bit rate: a MOSFET, or a smaller C1, keeps up"
        return [said]
    if transistor.storage_time is None:
        return ["the transistor's sheet gives no storage_time: the delay at turn-off is not in turn_off_time"]
    return [
        f"the transistor stores its charge for up to {write(float(np.max(values['storage'])), 's')} after the drive has"
        " gone; signal.speed_up = true fits a capacitor that carries it away"
    ]
