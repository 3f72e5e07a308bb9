"""Operating point of the power-controlled laser driver: the least of power loop, clamp, compliance and drive.

Voltages are distances from the near rail, as in `current_source`, which tells most faults. Besides them, 1 where it is
so: ``U2.open``, ``U2.short``, ``D1.monitor_open``, ``D1.monitor_short``, ``set.open`` and ``set.short`` of the set
resistor, ``RV1.open`` of the trimmer's wiper. ``U3.stuck`` is +1 where the integrator is at the rail that asks for most
light, -1 at the other.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from opto_ckt.circuits.drivers.current_source import (
    PASSES,
    amplifier_errors,
    filter_resistance,
    flowing,
    laser_line,
    logic_levels,
    placed,
    regulated_current,
    surroundings,
)
from opto_ckt.circuits.drivers.laser import asked_current, lasing
from opto_ckt.circuits.drivers.laser_power import monitor
from opto_ckt.circuits.drivers.pass_transistor import Around, PassTransistor, pass_transistor
from opto_ckt.circuits.drivers.side import Side, side_of
from opto_ckt.formulas.reference import divided_voltage, parallel_resistance
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LaserPowerRequest


class Ends(NamedTuple):
    """Least and most that the integrator's swing lets flow, and that swing."""

    floor: Lanes  #: [A]
    clamp: Lanes  #: [A]
    low: Lanes  #: [V]
    high: Lanes  #: [V]


class Found(NamedTuple):
    """What was found, before it is written."""

    around: Around
    quiet: monitor.Levels
    ends: Ends
    total: Lanes  #: set resistor and trimmer [Ω]
    wanted: Lanes  #: power at the plane of the sheet [W]
    needed: Lanes  #: current at the power wanted; inf where the laser runs away [A]
    asked: Lanes  #: of the current source [A]
    hard_on: Lanes  #: [A]
    current: Lanes  #: [A]
    rail: Lanes  #: [V]
    output: Lanes  #: of the integrator [V]


def bias(values: Values, request: LaserPowerRequest) -> dict[str, float | Lanes]:
    """Current, light, heat, small-signal figures and node voltages at the operating point of each lane."""
    wide = {name: np.asarray(value, dtype=float) for name, value in values.items()}
    cold = dict(wide)
    wide |= amplifier_errors(wide, request) | amplifier_errors(wide, request, "U3")
    return _written(values, wide, request, _found(wide, cold, request))


def _found(wide: dict[str, Lanes], cold: dict[str, Lanes], request: LaserPowerRequest) -> Found:
    """Passes over rail, laser and finite gain; ``cold`` holds the figures of the sheets, as the trimmer meets them."""
    side, transistor = side_of(request), pass_transistor(request.transistor)
    supply, filtered = wide["supply.positive"], filter_resistance(wide)
    current = np.asarray(asked_current(request))
    line = laser_line(wide, request, current)
    rail = supply
    output = np.zeros_like(supply)
    for _ in range(PASSES):
        quiet = monitor.levels(wide, request, rail)
        others = quiet.bias + wide["U1.quiescent_current"] + wide["U3.quiescent_current"]
        around = surroundings(wide, request, transistor, line, supply - filtered * others, rail, side)
        ends = _ends(wide, transistor, rail, around, side)
        total = monitor.set_resistance(cold, request)
        wanted = monitor.wanted_power(wide, request, quiet, total, output)
        point = monitor.wanted_point(wide, request, line, np.clip(wanted, 0.0, 1.0))
        needed = np.where(wanted > 0, np.nan_to_num(np.asarray(point.current), nan=np.inf), 0.0)
        needed = np.where(np.isposinf(wanted), np.inf, needed)
        asked = _asked(wide, needed, ends)
        hard_on = transistor.hard_on(wide, around)
        current = flowing(wide, request, asked, hard_on, around)
        if request.source.forward is not None:
            line = laser_line(wide, request, np.maximum(current, 1e-6))
        output = _output(wide, transistor, asked, around, ends, rail, side)
        rail = supply - filtered * (others + current)
    return Found(around, quiet, ends, total, wanted, needed, asked, hard_on, current, rail, output)


def _ends(values: Values, transistor: PassTransistor, rail: Lanes, around: Around, side: Side) -> Ends:
    """The integrator's output between its rails, divided: what the current source can be asked for."""
    up, down = values["U3.swing_to_positive"], values["U3.swing_to_negative"]
    to_far, to_near = (up, down) if side == "low" else (down, up)
    high, low = np.maximum(rail - to_far, 0.0), np.asarray(to_near + 0.0 * rail)

    def current(output: Lanes) -> Lanes:
        tap = divided_voltage(voltage=output, upper=values["R2"], lower=values["R3"]) - _divider_drop(values, side)
        return regulated_current(values, transistor, np.asarray(tap), rail, around, side)

    return Ends(current(np.minimum(low, high)), current(high), np.minimum(low, high), high)


def _divider_drop(values: Values, side: Side) -> Lanes:
    """What the + input of the current source takes from the divider's voltage by its bias current. [V]"""
    drawn = values["U1.bias_current"] * (1.0 if side == "low" else -1.0)
    resistance = parallel_resistance(first=values["R2"], second=values["R3"]) + values["R9"]
    return np.asarray(drawn * resistance)


def _asked(values: Values, needed: Lanes, ends: Ends) -> Lanes:
    """Current that the power loop asks the current source for, between its ends. [A]"""
    stuck = np.asarray(values.get("U3.stuck", 0.0))
    dark = np.asarray(values.get("D1.open", 0.0)) + np.asarray(values.get("D1.short", 0.0)) > 0
    wanted = np.where(dark & (needed > 0), np.inf, needed)
    asked = np.clip(wanted, ends.floor, np.maximum(ends.clamp, ends.floor))
    return np.asarray(np.where(stuck > 0, ends.clamp, np.where(stuck < 0, ends.floor, asked)))


def _output(
    values: Values, transistor: PassTransistor, asked: Lanes, around: Around, ends: Ends, rail: Lanes, side: Side
) -> Lanes:
    """Voltage of the integrator's output at a current asked for. [V]"""
    raised = values["U1.offset"] + values["U1.bias_current"] * values["R4"]
    sense = asked * around.sense
    control = transistor.control_voltage(values, asked, np.maximum(around.across(asked), 0.0))
    driven = np.clip(control + sense, 0.0, rail)
    driven = driven if side == "low" else driven - rail
    tap = sense - (raised if side == "low" else -raised) + driven / values["U1.open_loop_gain"]
    tap = tap + _divider_drop(values, side)
    return np.asarray(np.clip(tap * (values["R2"] + values["R3"]) / values["R3"], ends.low, ends.high))


def _written(given: Values, values: Values, request: LaserPowerRequest, found: Found) -> dict[str, float | Lanes]:
    side, transistor = side_of(request), pass_transistor(request.transistor)
    around, quiet, current, rail = found.around, found.quiet, found.current, found.rail
    across = np.maximum(around.across(current), 0.0)
    control = transistor.control_voltage(values, current, across)
    drawn = transistor.control_current(values, current)
    bypassed = np.asarray(values.get("D1.short", 0.0)) > 0
    laser = lasing(values, request, np.where(bypassed, 0.0, current))
    sense, span = current * around.sense, values["supply.positive"]
    drive = control + sense + drawn * around.gate
    through = np.where(bypassed, 0.0, laser["D1.forward_voltage"])
    watched = _monitored(values, request, laser)
    fixed = np.asarray(values["R14"])
    bled = quiet.reference / values["R16"]
    mon = np.asarray(watched["D1.monitor_current"] - quiet.drawn + bled) * monitor.beside(values, found.total)
    others = quiet.bias + values["U1.quiescent_current"] + values["U3.quiescent_current"]
    tap = divided_voltage(voltage=found.output, upper=values["R2"], lower=values["R3"])
    parallel = parallel_resistance(first=values["R2"], second=values["R3"])
    sign = 1.0 if side == "low" else -1.0
    level = tap - sign * values["U1.bias_current"] * parallel
    biased: dict[str, float | Lanes] = {
        **given,
        **{name: values[name] for name in ("U1.offset", "U1.bias_current", "U3.offset", "U3.bias_current")},
        **{f"{name}.room": values[name] for name in ("D1.threshold_current", "D1.slope_efficiency")},
        **laser,
        **watched,
        **{f"Q1.{name}": value for name, value in transistor.small_signal(values, current, across).items()},
        "RV1.setting": np.maximum(found.total - fixed, 1e-3),
        "Q1.drain_current": current,
        "Q1.control_voltage": control,
        "Q1.power": current * across + drawn * control,
        "U1.power": span * values["U1.quiescent_current"] + drawn * np.maximum(rail - drive, 0.0),
        "U3.power": span * values["U3.quiescent_current"],
        "U2.voltage": values["U2.voltage"] * (1 + values["U2.drift"])
        - values["U2.output_resistance"] * request.reference.operating_current,
        "U2.current": quiet.bias,
        "wanted_power": found.wanted,
        "needed_current": found.needed,
        "regulated_current": found.asked,
        "clamp_current": found.ends.clamp,
        "hard_on_current": found.hard_on,
        "compliance_margin": transistor.margin(values, found.asked, around),
        "supply.current": current + others + drawn,
        "supply.span": span,
        "set_voltage": quiet.level,
    }
    near = {
        "ref": quiet.reference,
        "level": quiet.level,
        "plus3": quiet.plus,
        "mon": mon,
        "inv": mon - quiet.drawn * values["R10"],
        "trim": mon * np.asarray(biased["RV1.setting"]) / (np.asarray(biased["RV1.setting"]) + fixed),
        "power": found.output,
        "set": level,
        "plus": level - sign * values["U1.bias_current"] * values["R9"],
        "minus": sense - sign * values["U1.bias_current"] * values["R4"],
        "sense": sense,
        "control": control + sense,
        "drive": drive,
        "drain": rail - through - current * values["R7"],
        "laser": rail - through,
    }
    return biased | placed(near, rail, request) | logic_levels(values, rail) | {"node.rail": rail}


def _monitored(values: Values, request: LaserPowerRequest, laser: Values) -> dict[str, float | Lanes]:
    """The monitor at the laser's light: its share of the laser's current, its own current and what makes its noise."""
    temperature = np.asarray(values["temperature"])
    sees = monitor.responsivity(values, request, temperature)
    dark = monitor.leaking(values, temperature)
    slope = request.source.slope_at(laser["D1.junction_temperature"], values["D1.slope_efficiency"])
    lit = np.asarray(laser["D1.power"]) > 0
    total = sees * laser["D1.power"] + dark
    return {
        "D1.monitor_gain": np.where(lit, sees * slope, 0.0),
        "D1.monitor_current": total,
        "D1.monitor_dark": dark,
        "D1.monitor_shot": total,
    }
