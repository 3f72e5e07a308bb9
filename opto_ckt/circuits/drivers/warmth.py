"""How warm the parts of a laser driver get, and loads that every one has."""

from __future__ import annotations

from opto_ckt.circuit import Heat, Stress
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LaserDriverRequest


def resistor_load(ref: str, current: float | Lanes, values: Values) -> Stress:
    """Load of a resistor by its current."""
    return Stress(ref, power=current**2 * values[ref], voltage=current * values[ref], current=current)


def supply_drop(values: Values) -> float | Lanes:
    """Over the filter, steady. [V]"""
    return values["supply.positive"] - values["node.rail"]


def heat(values: Values, request: LaserDriverRequest) -> tuple[Heat, ...]:
    """The laser's case, the junction of the pass transistor, that of the op amp where its sheet has one."""
    found = [
        Heat("D1", values["D1.heat"], values["D1.case_temperature"], request.source.case_max),
        Heat("Q1", values["Q1.power"], transistor_temperature(values), request.transistor.junction_max),
    ]
    amplifier = request.amplifier
    if amplifier.junction_to_ambient is not None:
        warm = air_temperature(values) + values["U1.power"] * amplifier.junction_to_ambient.high
        found.append(Heat("U1", values["U1.power"], warm, amplifier.junction_max))
    return tuple(found)


def transistor_temperature(values: Values) -> float | Lanes:
    """Junction of the pass transistor: to the air, else to a case at its temperature. [K]"""
    name = "Q1.junction_to_ambient" if "Q1.junction_to_ambient" in values else "Q1.junction_to_case"
    return air_temperature(values) + values["Q1.power"] * values[name]


def air_temperature(values: Values) -> float | Lanes:
    """Around the driver: that of the design, or where it is of a cooled case, the air's of its own. [K]"""
    return values.get("temperature.air", values["temperature"])
