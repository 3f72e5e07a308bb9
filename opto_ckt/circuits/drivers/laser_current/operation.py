"""Operating point of the constant-current laser driver: the least of regulation, compliance and drive, lane by lane.

All voltages here are distances from the near rail, as in `current_source`, which tells most faults too; besides them
``U2.open`` is 1 where the reference is missing.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from opto_ckt.circuits.drivers.current_source import (
    PASSES,
    amplifier_errors,
    below_ground,
    disabled,
    filter_resistance,
    flowing,
    laser_line,
    logic_levels,
    placed,
    regulated_current,
    surroundings,
)
from opto_ckt.circuits.drivers.laser import asked_current, lasing
from opto_ckt.circuits.drivers.pass_transistor import Around, pass_transistor
from opto_ckt.circuits.drivers.side import side_of
from opto_ckt.formulas.reference import divided_voltage, parallel_resistance
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LaserDriverRequest


class Levels(NamedTuple):
    """The quiet part of the circuit, at a rail voltage."""

    reference: Lanes
    set: Lanes
    plus: Lanes  #: at the op amp's input, after the drop of its bias current
    bias: Lanes  #: current through R6 [A]


def bias(values: Values, request: LaserDriverRequest) -> dict[str, float | Lanes]:
    """Current, light, heat, small-signal figures and node voltages at the operating point of each lane."""
    wide = {name: np.asarray(value, dtype=float) for name, value in values.items()}
    wide |= amplifier_errors(wide, request)
    side, transistor = side_of(request), pass_transistor(request.transistor)
    supply = wide["supply.positive"]
    asked = asked_current(request)
    filtered = filter_resistance(wide)
    line = laser_line(wide, request, asked)
    rail, regulated = supply, np.asarray(asked)
    for _ in range(PASSES):
        levels = _levels(wide, request, rail)
        others = levels.bias + wide["U1.quiescent_current"]
        around = surroundings(wide, request, transistor, line, supply - filtered * others, rail, side)
        regulated = regulated_current(wide, transistor, levels.plus, rail, around, side)
        hard_on = transistor.hard_on(wide, around)
        if request.source.forward is not None:
            line = laser_line(wide, request, np.where(hard_on < regulated, hard_on, regulated))
        current = flowing(wide, request, regulated, hard_on, around)
        rail = supply - filtered * (others + current)
    return _written(values, wide, request, around, levels, regulated, hard_on, current, rail)


def _levels(values: Values, request: LaserDriverRequest, rail: Lanes) -> Levels:
    """The reference as far as R6 feeds it, and the set voltage; the sheet's voltage holds at its operating current."""
    divider = values["R2"] + values["R3"]
    slope, feed = values["U2.output_resistance"], values["R6"]
    emf = values["U2.voltage"] - slope * request.reference.operating_current
    regulating = (emf + slope * rail / feed) / (1 + slope / feed + slope / divider)
    starved = divided_voltage(voltage=rail, upper=feed, lower=divider)
    opened = np.asarray(values.get("U2.open", 0.0)) > 0
    reference = np.where(opened, starved, np.clip(regulating, 0.0, starved))
    drawn = values["U1.bias_current"] if side_of(request) == "low" else -values["U1.bias_current"]
    tap = divided_voltage(voltage=reference, upper=values["R2"], lower=values["R3"])
    tap = tap - drawn * parallel_resistance(first=values["R2"], second=values["R3"])
    level = np.where(disabled(values), 0.0, tap)
    return Levels(reference, level, level - drawn * values["R9"], (rail - reference) / feed)


def _written(
    given: Values,
    values: Values,
    request: LaserDriverRequest,
    around: Around,
    levels: Levels,
    regulated: Lanes,
    hard_on: Lanes,
    current: Lanes,
    rail: Lanes,
) -> dict[str, float | Lanes]:
    transistor = pass_transistor(request.transistor)
    across = np.maximum(around.across(current), 0.0)
    control = transistor.control_voltage(values, current, across)
    drawn = transistor.control_current(values, current)
    bypassed = np.asarray(values.get("D1.short", 0.0)) > 0
    laser = lasing(values, request, np.where(bypassed, 0.0, current))
    sense = current * around.sense
    span = values["supply.positive"] + below_ground(values)
    output = control + sense + drawn * around.gate
    through = np.where(bypassed, 0.0, laser["D1.forward_voltage"])
    biased: dict[str, float | Lanes] = {
        **given,
        "U1.offset": values["U1.offset"],
        "U1.bias_current": values["U1.bias_current"],
        **{f"{name}.room": values[name] for name in ("D1.threshold_current", "D1.slope_efficiency")},
        **laser,
        **{f"Q1.{name}": value for name, value in transistor.small_signal(values, current, across).items()},
        "Q1.drain_current": current,
        "Q1.control_voltage": control,
        "Q1.power": current * across + drawn * control,
        "U1.power": span * values["U1.quiescent_current"] + drawn * np.maximum(rail - output, 0.0),
        "U2.voltage": values["U2.voltage"] - values["U2.output_resistance"] * request.reference.operating_current,
        "U2.current": np.maximum(levels.bias - levels.reference / (values["R2"] + values["R3"]), 0.0),
        "regulated_current": regulated,
        "hard_on_current": hard_on,
        "compliance_margin": transistor.margin(values, regulated, around),
        "supply.current": current + levels.bias + values["U1.quiescent_current"] + drawn,
        "supply.span": span,
        "set_voltage": levels.set,
    }
    near = {
        "ref": levels.reference,
        "set": levels.set,
        "plus": levels.plus,
        "minus": sense - values["U1.bias_current"] * values["R4"] * (1 if side_of(request) == "low" else -1),
        "sense": sense,
        "control": control + sense,
        "drive": output,
        "drain": rail - through - current * values["R7"],
        "laser": rail - through,
    }
    return biased | placed(near, rail, request) | logic_levels(values, rail) | {"node.rail": rail}
