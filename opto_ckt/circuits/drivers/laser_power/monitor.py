"""What the monitor diode sees, what the trimmer is set to, and the power and current that the loop then asks for."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from opto_ckt.circuit import Bench
from opto_ckt.circuits.drivers.current_source import amplifier_errors, disabled
from opto_ckt.circuits.drivers.laser import Forward, coupling, thermal_resistance
from opto_ckt.circuits.drivers.side import side_of
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas.laser_heating import OperatingPoint, settle_at_power
from opto_ckt.formulas.leakage import dark_current
from opto_ckt.formulas.reference import parallel_resistance
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LaserPowerRequest
from opto_ckt.topology import OPEN, SHORT

FAULTY = ("control.open", "U2.open", "U2.short")  #: what a set-up does not meet
DOUBLING = 10.0  #: rise of temperature that doubles the monitor's dark current, common practice [K]


class Levels(NamedTuple):
    """The quiet part of the circuit; voltages from the near rail."""

    reference: Lanes
    level: Lanes  #: after the soft start
    plus: Lanes  #: at the integrator's + input
    drawn: Lanes  #: by each input of the integrator, out of its node [A]
    offset: Lanes  #: of the integrator, as it raises the monitor's voltage
    bias: Lanes  #: current through R6 [A]


def levels(values: Values, request: LaserPowerRequest, rail: Lanes) -> Levels:
    """The reference as far as R6 feeds it, and what the integrator compares the monitor's voltage with."""
    slope, feed = values["U2.output_resistance"], values["R6"]
    emf = values["U2.voltage"] * (1 + values["U2.drift"]) - slope * request.reference.operating_current
    regulating = (emf + slope * rail / feed) / (1 + slope / feed)
    opened = np.asarray(values.get("U2.open", 0.0)) > 0
    shorted = np.asarray(values.get("U2.short", 0.0)) > 0
    reference = np.where(shorted, 0.0, np.where(opened, rail, np.clip(regulating, 0.0, rail)))
    sign = 1.0 if side_of(request) == "low" else -1.0
    drawn = sign * values["U3.bias_current"]
    level = np.where(disabled(values), 0.0, reference - drawn * values["R13"])
    plus = level - drawn * values["R15"]
    return Levels(reference, level, plus, np.asarray(drawn), np.asarray(sign * values["U3.offset"]),
                  (rail - reference) / feed)  # fmt: skip


def tracking(values: Values, request: LaserPowerRequest, temperature: Lanes) -> Lanes:
    """Power over that at 25 °C for the same current of the monitor. [1]"""
    span = request.source.tracking_error_temperatures or request.conditions.temperature
    ends = (span.low, span.high)
    farthest = max(abs(end - ROOM_TEMPERATURE) for end in ends)
    share = np.abs(temperature - ROOM_TEMPERATURE) / max(farthest, 1.0)
    return np.asarray(10 ** (values["D1.tracking_error"] * share / 10))


def responsivity(values: Values, request: LaserPowerRequest, temperature: Lanes) -> Lanes:
    """Monitor current over the power at the plane of the sheet, at a temperature. [A/W]"""
    return np.asarray(values["D1.monitor_responsivity"] / tracking(values, request, temperature))


def leaking(values: Values, temperature: Lanes) -> Lanes:
    """Dark current of the monitor. [A]"""
    return np.asarray(
        dark_current(
            dark_current=values["D1.monitor_dark_current"],
            temperature=temperature,
            reference_temperature=ROOM_TEMPERATURE,
            doubling=DOUBLING,
        )
    )


def asked_power(values: Values, request: LaserPowerRequest) -> Lanes:
    """The power asked for, at the plane of the laser's sheet. [W]"""
    power = request.signal.power
    return np.asarray((0.0 if power is None else power.nominal) / coupling(values, request))


def set_resistance(values: Values, request: LaserPowerRequest) -> Lanes:
    """Fixed resistor and trimmer in all. [Ω]

    The trimmer is set at the temperature of the set-up and the typical supply, all parts sound, with a meter at the
    plane asked for; it takes away what stands still: reference, offset, resistors, monitor. What moves with
    temperature comes on top, and what a setting is off.
    """
    at = np.asarray(values["trim.temperature"])
    cold = {**values, "temperature": at, "U2.drift": 0.0, "control.disable": 0.0}
    cold |= amplifier_errors(cold, request, "U3")
    sound = {name: value for name, value in cold.items() if name not in FAULTY}
    quiet = levels(sound, request, np.asarray(request.conditions.supply.positive))
    voltage = quiet.plus + quiet.offset + quiet.drawn * values["R10"]
    current = responsivity(values, request, at) * asked_power(values, request) + leaking(values, at)
    needed = voltage / (current - quiet.drawn + (quiet.reference - voltage) / values["R16"])
    fixed, track = np.asarray(values["R14"]), np.asarray(values["RV1"])
    setting = np.clip(needed - fixed + track * values["RV1.settability"], 0.0, track)
    setting = np.where(np.asarray(values.get("RV1.open", 0.0)) > 0, track, setting)
    total = np.maximum((fixed + setting) * (1 + values["set.drift"]), SHORT)
    total = np.where(np.asarray(values.get("set.open", 0.0)) > 0, OPEN, total)
    return np.where(np.asarray(values.get("set.short", 0.0)) > 0, SHORT, total)


def wanted_power(values: Values, request: LaserPowerRequest, quiet: Levels, total: Lanes, output: Lanes) -> Lanes:
    """Power at the plane of the sheet at which the integrator rests; not above zero where it wants no light. [W]"""
    raised = quiet.offset + quiet.drawn * values["R10"] - output / values["U3.open_loop_gain"]
    voltage = quiet.plus + raised
    current = voltage / total + quiet.drawn - (quiet.reference - voltage) / values["R16"]
    light = current - leaking(values, np.asarray(values["temperature"]))
    wanted = light / responsivity(values, request, np.asarray(values["temperature"]))
    blind = np.asarray(values.get("D1.monitor_open", 0.0)) > 0
    dazzled = np.asarray(values.get("D1.monitor_short", 0.0)) > 0
    return np.asarray(np.where(dazzled, -np.inf, np.where(blind, np.inf, wanted)))


def wanted_point(values: Values, request: LaserPowerRequest, line: Forward, power: Lanes) -> OperatingPoint:
    """Where the laser settles at a power; nan where it runs away."""
    data = request.source
    return settle_at_power(
        power=power,
        case_temperature=np.asarray(values["temperature"]),
        thermal_resistance=thermal_resistance(values, request),
        turn_on_voltage=line.turn_on,
        series_resistance=line.resistance,
        threshold=lambda at: data.threshold_at(at, values["D1.threshold_current"]),
        slope=lambda at: data.slope_at(at, values["D1.slope_efficiency"]),
    )


def beside(values: Values, total: Lanes) -> Lanes:
    """The set resistance with R16 beside it, which comes from the reference and holds the integrator off. [Ω]"""
    return np.asarray(parallel_resistance(first=total, second=values["R16"]))


def sheet_share(request: LaserPowerRequest, bench: Bench, level: str) -> float:
    """Power at the plane asked for over that at the plane of the sheet, at its low or high end. [1]"""
    values = {name: getattr(bench, level)(name) for name in bench.limits if name.startswith("D1.")}
    return float(coupling(values, request))
