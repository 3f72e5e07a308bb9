"""What the parts of the switched LED must stand, and how warm they get."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Heat, Stress
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LedSwitchRequest


def stresses(values: Values, request: LedSwitchRequest) -> tuple[Stress, ...]:
    """Every part with the LED lit; what lies across the open switch at the supply."""
    supply, total, drawn = values["supply.positive"], values["loop.current"], values["U1.current"]
    swing = np.asarray(values["U1.high"] - values["node.control"])
    found = [
        _resistor("R1", total, values),
        _resistor("R4", total, values),
        Stress("R2", power=drawn**2 * values["R2"], voltage=drawn * values["R2"], current=drawn),
        Stress("R3", power=values["node.control"] ** 2 / values["R3"], voltage=values["node.control"]),
        Stress("D1", power=values["D1.heat"], voltage=values["D1.forward_voltage"], current=values["peak_current"]),
        Stress("Q1", power=values["Q1.power"], voltage=supply, current=values["peak_current"]),
        Stress("U1", power=drawn**2 * values["U1.resistance"], current=drawn),
        Stress("C1", voltage=swing),
        Stress("C2", voltage=total * values.get("R4", 0.0)),
    ]
    if "R5" in values:
        across = np.asarray(values["D1.forward_voltage"])
        found.append(Stress("R5", power=across**2 / values["R5"], voltage=across, current=across / values["R5"]))
    if "R6" in values:
        off = np.asarray(values["off.current"])
        found.append(Stress("R6", power=off**2 * values["R6"], voltage=off * values["R6"], current=off))
    return tuple(stress for stress in found if stress.ref[0] not in "RC" or stress.ref in values)


def _resistor(ref: str, current: float | Lanes, values: Values) -> Stress:
    value = values.get(ref, 0.0)
    return Stress(ref, power=current**2 * value, voltage=current * value, current=current)


def heat(values: Values, request: LedSwitchRequest) -> tuple[Heat, ...]:
    """Junctions of LED and switch, lit for good."""
    return (
        Heat("D1", values["D1.heat"], values["D1.junction_temperature"], request.source.junction_max),
        Heat("Q1", values["Q1.power"], switch_temperature(values), request.transistor.junction_max),
    )


def switch_temperature(values: Values) -> float | Lanes:
    """Junction of the switch: to the air, else to a case at the temperature. [K]"""
    name = "Q1.junction_to_ambient" if "Q1.junction_to_ambient" in values else "Q1.junction_to_case"
    return values["temperature"] + values["Q1.power"] * values[name]
