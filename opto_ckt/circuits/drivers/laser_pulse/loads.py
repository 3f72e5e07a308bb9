"""What the parts of the pulse driver must stand, and how warm they get at the repetition rate."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Heat, Stress
from opto_ckt.limits import Lanes, Values
from opto_ckt.preferred import CHIP_RESISTORS, chip_for
from opto_ckt.request import LaserPulseRequest


def stresses(values: Values, request: LaserPulseRequest) -> tuple[Stress, ...]:
    """R1 with the switch stuck on, for it is what keeps laser and supply whole then; the others pulse after pulse."""
    supply = np.asarray(values["supply.positive"], dtype=float)
    peak, driver = np.asarray(values["Q1.current"]), np.asarray(values["U1.high"])
    damping = peak * values["R3"]
    return (
        Stress("R1", power=supply**2 / values["R1"], voltage=supply, current=supply / values["R1"]),
        Stress("R2", power=supply**2 / values["R2"], voltage=supply),
        Stress("R3", power=values["R3.power"], voltage=damping, current=peak),
        Stress("R4", power=values["gate.power"], voltage=driver, current=gate_current(values)),
        Stress("R5", power=driver**2 / values["R5"], voltage=driver),
        Stress("C1", voltage=supply, current=peak),
        Stress("C2", voltage=supply),
        Stress("D1", power=values["D1.heat"], voltage=values["D1.reverse_voltage"], current=peak),
        Stress("D2", power=values["D2.power"], voltage=values["D1.forward_voltage"], current=values["D2.current"]),
        Stress("Q1", power=values["Q1.power"], voltage=supply, current=peak),
        Stress("U1", power=values["gate.power"], voltage=driver, current=gate_current(values)),
    )


def gate_current(values: Values) -> Lanes:
    """Peak current of the gate driver, into a gate that is still at 0 V. [A]"""
    return np.asarray(values["U1.high"] / (values["U1.source_resistance"] + values["R4"]))


def heat(values: Values, request: LaserPulseRequest) -> tuple[Heat, ...]:
    """Case of the laser, junction of the switch, films of the charging and the damping resistor."""
    return (
        Heat("D1", values["D1.heat"], values["D1.case_temperature"], request.source.case_max),
        Heat("Q1", values["Q1.power"], switch_temperature(values), request.transistor.junction_max),
        *(_film(ref, values, request) for ref in ("R1", "R3")),
    )


def switch_temperature(values: Values) -> Lanes:
    """Average junction temperature of the switch: to the air, else to a case at the temperature. [K]"""
    name = "Q1.junction_to_ambient" if "Q1.junction_to_ambient" in values else "Q1.junction_to_case"
    return np.asarray(values["temperature"] + values["Q1.power"] * values[name])


def _film(ref: str, values: Values, request: LaserPulseRequest) -> Heat:
    """Of the smallest chip that bears what the resistor is stressed with."""
    stress = next(each for each in stresses(values, request) if each.ref == ref)
    hottest = float(np.max(values["temperature"]))
    size = chip_for(
        float(np.max(stress.power)), float(np.max(stress.voltage)), hottest, request.preferred.resistors.size
    )
    chip = CHIP_RESISTORS[size or "2512"]
    power = np.asarray(values[f"{ref}.power"])
    rise = chip.thermal_resistance or CHIP_RESISTORS["0402"].thermal_resistance or 0.0
    return Heat(ref, power, values["temperature"] + power * rise, chip.zero_power_temperature)
