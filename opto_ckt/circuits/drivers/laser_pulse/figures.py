"""Figures that the pulse driver offers, and bounds that hold though nobody asks."""

from __future__ import annotations

from functools import cached_property

import numpy as np

from opto_ckt.analyses.network import Evaluation
from opto_ckt.circuit import OnDemand
from opto_ckt.circuits.drivers.laser_pulse.loads import switch_temperature
from opto_ckt.circuits.drivers.laser_pulse.operation import feed
from opto_ckt.formulas import discharge
from opto_ckt.limits import Figures, Lanes, Requirement, Values
from opto_ckt.request import LaserPulseRequest


class LaserPulseFigures:
    """Each figure as a property, computed when it is first asked for."""

    def __init__(self, values: Values, evaluation: Evaluation, request: LaserPulseRequest) -> None:
        self._values, self._evaluation, self._request = values, evaluation, request

    @cached_property
    def rise_time(self) -> Lanes:
        """Of the current, 10-90 % of its peak. [s]"""
        return np.asarray(self._values["discharge.rise_time"])

    @cached_property
    def peak_current(self) -> Lanes:
        """Through the laser. [A]"""
        return np.asarray(self._values["Q1.current"])

    @cached_property
    def pulse_width(self) -> Lanes:
        """Of the current at half of its peak. [s]"""
        return np.asarray(self._values["discharge.width"])

    @cached_property
    def peak_power(self) -> Lanes:
        """Of the light at the plane asked for. [W]"""
        return np.asarray(self._values["D1.peak_power"])

    @cached_property
    def pulse_energy(self) -> Lanes:
        """Of the light of one pulse at the plane asked for. [J]"""
        return np.asarray(self._values["D1.pulse_energy"])

    @cached_property
    def optical_power(self) -> Lanes:
        """Average at the plane asked for. [W]"""
        return np.asarray(self._values["D1.optical_power"])

    @cached_property
    def duty(self) -> Lanes:
        """Width over period. [1]"""
        return np.asarray(self._values["discharge.width"] * self._values["signal.repetition_rate"])

    @cached_property
    def repetition_limit(self) -> Lanes:
        """Rate at which five time constants lie between pulses. [Hz]"""
        parallel, _ = feed(self._values)
        return np.asarray(discharge.repetition_limit(capacitance=self._values["C1"], resistance=parallel))

    @cached_property
    def stored_energy(self) -> Lanes:
        """In C1 before a pulse. [J]"""
        values = self._values
        return np.asarray(discharge.stored_energy(capacitance=values["C1"], voltage=values["charge_voltage"]))

    @cached_property
    def discharge_time(self) -> Lanes:
        """After power-off, C1 and C2 through R1 and R2, till nothing is to be feared. [s]"""
        values, supply = self._values, np.asarray(self._values["supply.positive"], dtype=float)
        found = discharge.discharge_time(
            resistance=values["R1"] + values["R2"],
            capacitance=values["C1"] + values["C2"],
            voltage=supply,
            safe_voltage=safe_voltage(self._request, supply),
        )
        return np.asarray(found)

    @cached_property
    def turn_on_time(self) -> Lanes:
        """In which the gate driver charges the gate. [s]"""
        values = self._values
        overdrive = np.maximum(np.asarray(values["Q1.overdrive"], dtype=float), 1e-3)
        found = discharge.turn_on_time(
            gate_charge=values["Q1.gate_charge"],
            resistance=values["U1.source_resistance"] + values["R4"],
            drive=overdrive,
            plateau=0.0,
        )
        return np.asarray(found)

    @cached_property
    def reverse_voltage(self) -> Lanes:
        """At the laser after the pulse. [V]"""
        return np.asarray(self._values["D1.reverse_voltage"])

    @cached_property
    def dissipation(self) -> Lanes:
        """Taken from the supply and from the gate driver. [W]"""
        values = self._values
        return np.asarray(values["supply.positive"] * values["supply.current"] + values["gate.power"])

    @cached_property
    def junction_temperature(self) -> Lanes:
        """Of laser or switch, whichever is hotter, on the average. [K]"""
        return np.maximum(self._values["D1.junction_temperature"], switch_temperature(self._values))


OFFERS = tuple(name for name, entry in vars(LaserPulseFigures).items() if isinstance(entry, cached_property))


def figures(values: Values, evaluation: Evaluation, request: LaserPulseRequest) -> Figures:
    """Every figure that the driver offers, each computed when it is asked for."""
    return OnDemand(LaserPulseFigures(values, evaluation, request), OFFERS)


def safe_voltage(request: LaserPulseRequest, supply: float | Lanes) -> Lanes:
    """Where nothing is to be feared of a capacitor: the voltage asked for, a tenth of a supply that is low itself."""
    return np.asarray(np.minimum(request.conditions.safe_voltage, np.asarray(supply) / 10))


def pulse_limit(request: LaserPulseRequest) -> float:
    """Peak current that the laser's sheet allows; that of direct current where it does not speak of pulses. [A]"""
    data = request.source
    return data.current_max if data.pulse_current_max is None else data.pulse_current_max


def switch_limit(request: LaserPulseRequest) -> float:
    """Peak current that the switch's sheet allows. [A]"""
    data = request.transistor
    return data.current_max if data.pulse_current_max is None else data.pulse_current_max


def implied(request: LaserPulseRequest) -> tuple[Requirement, ...]:
    """Laser and switch stay within their sheets; C1 is charged anew at the rate; limits of what is asked are kept."""
    data, signal, conditions = request.source, request.signal, request.conditions
    most = min(pulse_limit(request), switch_limit(request))
    rate = signal.repetition_rate.high
    bounds = [
        Requirement("peak_current", "max", most, most),
        Requirement("repetition_limit", "min", rate, rate),
        Requirement("reverse_voltage", "max", data.reverse_voltage_max, data.reverse_voltage_max),
        Requirement("discharge_time", "max", conditions.discharge_time, conditions.discharge_time),
    ]
    if data.duty_max is not None:
        bounds.append(Requirement("duty", "max", data.duty_max, data.duty_max))
    if data.pulse_width_max is not None:
        bounds.append(Requirement("pulse_width", "max", data.pulse_width_max, data.pulse_width_max))
    if (signal.plane or data.plane) == data.plane:
        bounds.append(Requirement("peak_power", "max", data.power_max, data.power_max))
    asked = {"peak_current": signal.current, "peak_power": signal.power, "pulse_width": signal.pulse_width}
    for name, spread in asked.items():
        if spread is not None and spread.min is not None:
            bounds.append(Requirement(name, "min", spread.min, spread.min))
        if spread is not None and spread.max is not None:
            bounds.append(Requirement(name, "max", spread.max, spread.max))
    return tuple(bounds)


def noise_frequency(request: LaserPulseRequest) -> float:
    """Where densities are stated: a tenth of the reciprocal width. [Hz]"""
    return 0.1 / request.signal.pulse_width.nominal


def noise_band(request: LaserPulseRequest) -> tuple[float, float]:
    """Band over which noise is summed: up to the reciprocal width. [Hz]"""
    top = 1 / request.signal.pulse_width.nominal
    return top / 1e4, top
