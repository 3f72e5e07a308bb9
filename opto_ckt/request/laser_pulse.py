"""What is asked of a pulse driver of a laser: peak current, width, rate, and the loop that carries the pulse."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated

from opto_ckt.parts.laser import LaserData
from opto_ckt.parts.logic import LogicOutputData
from opto_ckt.parts.record import Check, Finding, Spread, Unit
from opto_ckt.parts.transistor import MosfetData
from opto_ckt.request.driver import DriverConditions, DriveSignal, LaserRequest
from opto_ckt.units import percent, write


class PulseSignal(DriveSignal):
    """Peaks: `current` is the peak current, `power` the peak optical power, at the plane."""

    pulse_width: Annotated[Spread, Unit("s", "20 ns")]  #: of the current, at half of its peak
    repetition_rate: Annotated[Spread, Unit("Hz", "5 kHz")]  #: of the pulses; max where it varies


class PulseConditions(DriverConditions):
    """Where the driver runs, its high voltage, the strays of the loop that the pulse takes, and who may touch it."""

    layout_inductance: Annotated[
        Spread, Unit("H", "3 nH")
    ]  #: of capacitor, tracks and vias, and of what the records of laser and transistor leave out
    layout_resistance: Annotated[float, Unit("Ω", "20 mΩ", "not negative")] = 0.0  #: of capacitor (ESR) and tracks
    safe_voltage: Annotated[float, Unit("V", "60 V")] = 60.0  #: safe to touch; the limit of dc extra-low voltage
    discharge_time: Annotated[float, Unit("s", "1 s")] = (
        1.0  #: after power-off, down to `safe_voltage` or a tenth of the supply, whichever is less
    )


def _in_reach(source: LaserData, signal: PulseSignal, conditions: PulseConditions) -> Iterator[Finding]:
    supply = conditions.supply
    least, current = supply.positive * (1 - supply.tolerance), signal.current
    if current is None:
        return
    voltage = float(source.forward_voltage_at(current.nominal))
    if voltage >= least:
        yield Finding(
            ("conditions", "supply", "positive"),
            f"{write(least, 'V')}, after its tolerance of {percent(supply.tolerance)}, does not pass the forward"
            f" voltage of the laser, {write(voltage, 'V')} at {write(current.nominal, 'A')}",
        )


def _within_laser(source: LaserData, signal: PulseSignal) -> Iterator[Finding]:
    """Peak, width, duty and light within what the sheet allows of pulses."""
    current, width, rate = signal.current, signal.pulse_width, signal.repetition_rate
    name = "current_max" if source.pulse_current_max is None else "pulse_current_max"
    most = source.current_max if source.pulse_current_max is None else source.pulse_current_max
    if current is not None and current.nominal > most:
        yield Finding(
            ("signal", "current"), f"{write(current.nominal, 'A')} is above {name} {write(most, 'A')} of the source"
        )
    if source.pulse_width_max is not None and width.nominal > source.pulse_width_max:
        limit = write(source.pulse_width_max, "s")
        yield Finding(
            ("signal", "pulse_width"),
            f"{write(width.nominal, 's')} is above pulse_width_max {limit} of the source",
        )
    duty = width.nominal * rate.high
    if source.duty_max is not None and duty > source.duty_max:
        yield Finding(
            ("signal", "repetition_rate"),
            f"{write(rate.high, 'Hz')} with pulses of {write(width.nominal, 's')} is a duty of {percent(duty)}, above"
            f" duty_max {percent(source.duty_max)} of the source",
        )
    elif duty >= 1:
        yield Finding(
            ("signal", "repetition_rate"),
            f"{write(rate.high, 'Hz')} leaves no time between pulses of {write(width.nominal, 's')}",
        )
    plane = signal.plane or source.plane
    if plane != source.plane and source.coupling is None:
        yield Finding(
            ("signal", "plane"),
            f"the source states its power at the {source.plane}; its coupling is needed for the {plane}",
        )
    if signal.power is not None and plane == source.plane and signal.power.nominal > source.power_max:
        limit = write(source.power_max, "W")
        yield Finding(
            ("signal", "power"), f"{write(signal.power.nominal, 'W')} is above power_max {limit} of the source"
        )


class LaserPulseRequest(LaserRequest):
    """A design file of a capacitor-discharge pulse driver; the supply is the high voltage."""

    transistor: MosfetData
    logic_output: LogicOutputData  #: the gate driver
    signal: PulseSignal
    conditions: PulseConditions

    checks = (
        Check(("source", "signal", "conditions"), _in_reach),
        Check(("source", "signal"), _within_laser),
    )
