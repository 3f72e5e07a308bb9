"""One pulse, and the rest between pulses, lane by lane; the decks of small signals hold the instant of the peak.

A fault is told by values that are otherwise absent:

``D1.open``, ``D1.short``, ``D2.open``, ``Q1.open``, ``Q1.short``, ``C1.short``
    1 where that part is so
``U1.stuck``, ``control.open``
    1 where the gate driver stays high, or where nothing drives the gate
"""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from opto_ckt.circuits.drivers.laser import Forward, forward
from opto_ckt.circuits.drivers.laser_pulse.light import light
from opto_ckt.circuits.drivers.laser_pulse.loop import Loop
from opto_ckt.circuits.drivers.laser_pulse.recoil import recoil
from opto_ckt.formulas import discharge, discharge_shape
from opto_ckt.formulas.formula import Real
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LaserPulseRequest
from opto_ckt.topology import SHORT

Flags = NDArray[np.bool_]

LEAST_OVERDRIVE = 0.1  #: taken for a gate driven, or an on-resistance stated, at less above the threshold [V]
LEAST_CURRENT = 1e-9  #: of a laser that does not conduct, for its model [A]
PASSES = 3  #: over the laser's curve, which the peak current is a point of


def bias(values: Values, request: LaserPulseRequest) -> dict[str, float | Lanes]:
    """Charge, peak, shape, light, heat of every part, what a fault lets flow, node voltages held at the peak."""
    wide = {name: np.asarray(value, dtype=float) for name, value in values.items()}
    switch = on_resistance(wide, request)
    charge = charged(wide)
    line = _line(wide, request, np.asarray(request.source.current_max))
    loop = _loop(wide, line, charge, switch)
    for _ in range(PASSES if request.source.forward is not None else 1):
        line = _line(wide, request, np.maximum(loop.peak, LEAST_CURRENT))
        loop = _loop(wide, line, charge, switch)
    steady = _steady(wide, request, line, switch)
    dead = _flag(wide, "D1.open") | _flag(wide, "Q1.open") | _flag(wide, "C1.short") | _off(wide)
    peak = np.where(dead, 0.0, loop.peak)
    through = np.where(_flag(wide, "D1.short"), 0.0, peak)
    found: dict[str, float | Lanes] = {
        **values,
        "Q1.resistance": switch,
        "Q1.overdrive": wide["U1.high"] - wide["Q1.threshold_voltage"],
        "Q1.current": peak,
        "D1.current": np.maximum(through, LEAST_CURRENT),
        "D1.turn_on_voltage": line.turn_on,
        "D1.series_resistance": line.resistance,
        "D1.forward_voltage": line.at(through),
        "loop.damping": loop.damping,
        "loop.voltage": loop.voltage,
        "charge_voltage": charge,
        **_shape(loop),
    }
    found |= light(wide, request, loop, line, through, steady)
    found |= recoil(wide, request, loop, line, peak)
    found |= _heat(wide, line, found, steady)
    return found | _held(wide, found, switch, peak, line)


def on_resistance(values: Values, request: LaserPulseRequest) -> Lanes:
    """Of the switch at the drive that it gets: times the overdrive, it is constant. [Ω]"""
    data = request.transistor
    threshold = np.asarray(values["Q1.threshold_voltage"], dtype=float)
    stated = np.maximum(data.on_resistance_gate - threshold, LEAST_OVERDRIVE)
    drive = np.maximum(values["U1.high"] - threshold, LEAST_OVERDRIVE)
    return np.asarray(values["Q1.on_resistance"] * stated / drive)


def charged(values: Values) -> Lanes:
    """Voltage of C1 as the switch closes. [V]"""
    parallel, share = feed(values)
    found = discharge.charged_voltage(
        supply=values["supply.positive"] * share,
        resistance=parallel,
        capacitance=values["C1"],
        repetition_rate=values["signal.repetition_rate"],
    )
    return np.asarray(found)


def feed(values: Values) -> tuple[Lanes, Lanes]:
    """Charging resistor and bleed side by side [Ω], and the share of the supply that the bleed leaves. [1]"""
    charging, bleed = np.asarray(values["R1"], dtype=float), np.asarray(values["R2"], dtype=float)
    return charging * bleed / (charging + bleed), bleed / (charging + bleed)


def stuck(values: Values) -> Flags:
    """Whether the switch stays on."""
    return np.asarray(_flag(values, "Q1.short") | _flag(values, "U1.stuck"))


def _flag(values: Values, name: str) -> Flags:
    return np.asarray(np.asarray(values.get(name, 0.0)) > 0)


def _off(values: Values) -> Flags:
    """Whether the gate does not reach the threshold, or nothing drives it."""
    weak = np.asarray(values["U1.high"]) <= np.asarray(values["Q1.threshold_voltage"])
    return np.asarray((weak | _flag(values, "control.open")) & ~_flag(values, "Q1.short"))


def _line(values: Values, request: LaserPulseRequest, current: Real) -> Forward:
    line = forward(values, request, current)
    gone = _flag(values, "D1.short")
    return Forward(np.where(gone, 0.0, line.turn_on), np.where(gone, SHORT, line.resistance))


def _loop(values: Values, line: Forward, charge: Lanes, switch: Lanes) -> Loop:
    return Loop(
        capacitance=np.asarray(values["C1"], dtype=float),
        inductance=np.asarray(values["LS"], dtype=float),
        resistance=np.asarray(values["R3"] + values["LS.resistance"] + switch + line.resistance),
        voltage=np.maximum(charge - line.turn_on, 0.0),
    )


def _shape(loop: Loop) -> dict[str, float | Lanes]:
    """Times of the pulse. [s]"""
    damping = loop.damping
    return {
        "discharge.width": loop.unit * discharge_shape.width(damping=damping),
        "discharge.rise_time": loop.unit * discharge_shape.rise_time(damping=damping),
    }


def _steady(values: Values, request: LaserPulseRequest, line: Forward, switch: Lanes) -> Lanes:
    """Direct current through the laser where the switch stays on: what the charging resistor lets through. [A]"""
    parallel, share = feed(values)
    turn_on, resistance = (np.asarray(part) for part in forward(values, request, LEAST_CURRENT))
    shorted = _flag(values, "D1.short")
    drop = np.where(shorted, 0.0, turn_on)
    series = parallel + values["R3"] + values["LS.resistance"] + switch + np.where(shorted, SHORT, resistance)
    shut = _flag(values, "D1.open") | _flag(values, "C1.short")
    flowing = np.maximum(values["supply.positive"] * share - drop, 0.0) / series
    return np.where(stuck(values) & ~shut, flowing, 0.0)


def _heat(values: Values, line: Forward, found: dict[str, float | Lanes], steady: Lanes) -> dict[str, float | Lanes]:
    """Average power of every part, and what the supply gives."""
    rate = np.where(stuck(values) | (np.asarray(found["Q1.current"]) <= 0), 0.0, values["signal.repetition_rate"])
    charge, supply = np.asarray(found["charge_voltage"]), np.asarray(values["supply.positive"], dtype=float)
    squared, recoiled = np.asarray(found["discharge.squared"]), np.asarray(found["recoil.energy"])
    switch = np.asarray(found["Q1.resistance"])
    share = switch / (switch + values["R3"] + values["LS.resistance"])
    output = discharge.stored_energy(capacitance=values["Q1.output_capacitance"], voltage=charge)
    gate = values["Q1.gate_charge"] * values["U1.high"] * rate
    whole = supply * feed(values)[1]
    still = np.where(charge > line.turn_on, whole, np.minimum(line.turn_on, whole))  # too fast: drawn as it comes
    still = np.where(_flag(values, "C1.short"), 0.0, still)
    low = np.where(stuck(values) & (steady > 0), steady * (line.resistance + values["R3"] + switch), still)
    resting = (supply - low) ** 2 / values["R1"]
    drawn = rate * values["C1"] * charge
    return {
        "R1.power": np.where(rate > 0, drawn * (supply - charge / 2), 0.0) + resting,
        "R3.power": rate * (squared * values["R3"] + recoiled * (1 - share)) + steady**2 * values["R3"],
        "Q1.power": rate * (squared * switch + recoiled * share + output) + steady**2 * switch,
        "D2.power": rate * recoiled,
        "gate.power": gate,
        "supply.current": drawn + (supply - low) / values["R1"],
    }


def _held(
    values: Values, found: dict[str, float | Lanes], switch: Lanes, peak: Lanes, line: Forward
) -> dict[str, float | Lanes]:
    """Node voltages at the peak, where the inductance has none across it, and what the deck of a pulse begins with."""
    stray = values["LS.resistance"]
    store = line.turn_on + peak * (line.resistance + values["R3"] + stray + switch)
    supply = np.asarray(values["supply.positive"], dtype=float)
    driver = values["U1.source_resistance"]
    gate = values["U1.high"] / (driver + values["R4"] + values["R5"])
    held = peak - (supply - store) / values["R1"] + store / values["R2"]
    return {
        "IH": held,
        "U1.level": values["U1.high"],
        "U1.resistance": driver,
        "set_voltage": found["charge_voltage"],
        "pulse.IH": 0.0 * held,
        "pulse.supply.positive": np.asarray(found["charge_voltage"]) / feed(values)[1],
        "node.positive": supply,
        "node.store": store,
        "node.anode": store - peak * values["R3"],
        "node.cathode": peak * (stray + switch),
        "node.drain": peak * switch,
        "node.trigger": values["U1.high"] - gate * driver,
        "node.gate": gate * values["R5"],
    }
