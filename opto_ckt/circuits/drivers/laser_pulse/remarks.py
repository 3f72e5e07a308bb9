"""What a designer ought to be told about a sized pulse driver, people first."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.drivers.laser import safety
from opto_ckt.circuits.drivers.laser_pulse.figures import safe_voltage, switch_limit
from opto_ckt.circuits.drivers.laser_pulse.given import budget
from opto_ckt.circuits.drivers.laser_pulse.loads import gate_current
from opto_ckt.formulas import discharge
from opto_ckt.limits import Limits, Values
from opto_ckt.request import LaserPulseRequest
from opto_ckt.units import percent, write

HELD_BACK = 0.8  #: of the voltage that a switch is rated for; common practice [1]
SLOW = 0.2  #: turn-on over width, from which the pulse is lower than told; by simulation, common practice [1]


def remarks(values: Values, limits: Limits, request: LaserPulseRequest) -> tuple[str, ...]:
    """Cautions for people and laser, then advice that depends on the values."""
    found = [*safety(request, float(np.max(values["D1.power"]))), *_charge(values, request)]
    found += _clamp(values, request)
    found += _ratings(values, request)
    shares = ", ".join(f"{name} {write(part.nominal, 'H')}" for name, part in budget(request).items())
    found.append(f"inductance of the loop: {shares}; keep C1, D1, Q1 and their return in one small area")
    if request.source.inductance is None or request.transistor.inductance is None:
        found.append("conditions.layout_inductance has to hold the packages whose records state no inductance")
    found += _speed(values, request)
    energy = float(np.max(np.asarray(values["discharge.squared"]) * values["R3"]))
    found.append(f"R3 takes {write(energy, 'J')} a pulse: a pulse-proof type, several in parallel for less inductance")
    found.append("C1 carries the pulse: C0G of low inductance, several in parallel; a class 2 dielectric loses value")
    common = request.source.common
    if common != "none":
        found.append(f"{common} at the case: the case is at high voltage or pulses with it, insulate it")
    return tuple(found)


def _charge(values: Values, request: LaserPulseRequest) -> list[str]:
    """High voltage, and the charge that stays when the supply is off."""
    supply = float(np.max(values["supply.positive"]))
    safe, touch = float(safe_voltage(request, supply)), request.conditions.safe_voltage
    energy = float(np.max(discharge.stored_energy(
        capacitance=np.asarray(values["C1"]) + np.asarray(values["C2"]), voltage=supply
    )))  # fmt: skip
    after = float(np.max(discharge.discharge_time(
        resistance=np.asarray(values["R1"]) + values["R2"], capacitance=np.asarray(values["C1"]) + values["C2"],
        voltage=supply, safe_voltage=safe,
    )))  # fmt: skip
    what = "high voltage, do not touch" if supply > touch else "the capacitors burn and spark when shorted"
    return [
        f"{write(supply, 'V')} on the board: {what}; C1 and C2 hold {write(energy, 'J')} and are below"
        f" {write(safe, 'V')} only {write(after, 's')} after the supply is off and let go: wait, measure, then touch;"
        " local rules and a competent person come first",
        "R2 bleeds the board alone: what the supply itself stores it has to discharge by itself",
    ]


def _clamp(values: Values, request: LaserPulseRequest) -> list[str]:
    """The swing through zero, with and without a diode across the laser."""
    back, limit = float(np.max(values["recoil.voltage"])), request.source.reverse_voltage_max
    if request.diode is None:
        if back > 0:
            return [f"no diode across the laser: {write(back, 'V')} the other way round follow a pulse; add [diode]"]
        return ["no diode across the laser: the discharge does not swing back, a wrong connection would"]
    found = []
    reached = float(np.max(values["D1.reverse_voltage"]))
    if reached > limit:
        found.append(f"D2 lets {write(reached, 'V')} of reverse voltage stand, the laser takes {write(limit, 'V')}")
    current, stands = float(np.max(values["D2.current"])), request.diode.pulse_current_max
    if stands is None and current > 0:
        found.append(f"D2 carries {write(current, 'A')} back: its sheet says nothing of pulses, see that it stands it")
    elif stands is not None and current > stands:
        found.append(f"D2 carries {write(current, 'A')} back, its pulse_current_max is {write(stands, 'A')}")
    again, threshold = float(np.max(values["D1.second_current"])), float(np.min(values["D1.threshold_current"]))
    if again > threshold:
        found.append(
            f"a second pulse of {write(again, 'A')} follows if the switch is still on: trigger no longer than the pulse"
        )
    return found


def _ratings(values: Values, request: LaserPulseRequest) -> list[str]:
    """Limits that the sheets leave open."""
    found = []
    if request.source.pulse_current_max is None:
        found.append("the laser's sheet gives no pulse_current_max: current_max is taken for the peak")
    if request.source.duty_max is None:
        found.append("the laser's sheet gives no duty_max: the duty is not checked against one")
    if request.transistor.pulse_current_max is None:
        limit = write(switch_limit(request), "A")
        found.append(f"the transistor's sheet gives no pulse_current_max: current_max, {limit}, is taken for the peak")
    supply, stands = float(np.max(values["supply.positive"])), request.transistor.voltage_max
    if supply > HELD_BACK * stands:
        found.append(
            f"the switch bears {write(supply, 'V')} of its {write(stands, 'V')}: common practice keeps to"
            f" {percent(HELD_BACK)}, for the leads add their spikes"
        )
    driver = request.logic_output
    drawn = float(np.max(gate_current(values)))
    if driver.current_max is None:
        found.append(f"the gate driver's sheet gives no current_max: the gate takes {write(drawn, 'A')} of it")
    return found


def _speed(values: Values, request: LaserPulseRequest) -> list[str]:
    """A gate too slow for the pulse."""
    turn_on = np.asarray(
        discharge.turn_on_time(
            gate_charge=values["Q1.gate_charge"],
            resistance=np.asarray(values["U1.source_resistance"]) + values["R4"],
            drive=values["Q1.overdrive"],
            plateau=0.0,
        )
    )
    if float(np.max(turn_on / values["discharge.width"])) <= SLOW:
        return []
    width = write(float(np.min(values["discharge.width"])), "s")
    return [
        f"the gate takes up to {write(float(np.max(turn_on)), 's')} to charge, the pulse is {width} wide: it may come"
        " lower and wider than told; a faster driver, or less gate charge"
    ]
