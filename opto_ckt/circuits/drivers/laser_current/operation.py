"""Operating point of the constant-current laser driver: the least of regulation, compliance and drive, lane by lane.

All voltages here are distances from the near rail, on which sense resistor, reference and divider sit; ``placed`` turns
them into voltages against ground. A fault is told by values that are otherwise absent:

``D1.open``, ``D1.short``, ``Q1.short``, ``U2.open``
    1 where that part is so
``U1.stuck``
    +1 where the op amp drives the transistor as hard as it can, -1 where it shuts it off
``control.open``
    1 where nothing drives the disable input
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from opto_ckt.circuits.drivers.laser import Forward, asked_current, forward, lasing
from opto_ckt.circuits.drivers.pass_transistor import Around, PassTransistor, pass_transistor
from opto_ckt.circuits.drivers.side import Side, side_of
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas.leakage import dark_current
from opto_ckt.formulas.reference import divided_voltage, parallel_resistance
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LaserDriverRequest
from opto_ckt.topology import OPEN

LOGIC_LEVEL = 1.0  #: above it the disable input counts as high [V]
PASSES = 3  #: over terms that are a thousandth of the whole


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
    filter_resistance = _filter_resistance(wide)
    line = _forward(wide, request, asked)
    rail, regulated = supply, np.asarray(asked)
    for _ in range(PASSES):
        levels = _levels(wide, request, rail)
        others = levels.bias + wide["U1.quiescent_current"]
        around = _around(wide, request, transistor, line, supply - filter_resistance * others, rail, side)
        regulated = _regulated(wide, transistor, levels.plus, rail, around, side)
        hard_on = transistor.hard_on(wide, around)
        if request.source.forward is not None:
            line = _forward(wide, request, np.where(hard_on < regulated, hard_on, regulated))
        current = _least(wide, request, regulated, hard_on, around)
        rail = supply - filter_resistance * (others + current)
    return _written(values, wide, request, around, levels, regulated, hard_on, current, rail)


def _filter_resistance(values: Values) -> Lanes:
    """Of the supply filter to a steady current: its winding beside its damping. [Ω]"""
    return np.asarray(parallel_resistance(first=values["L1.resistance"], second=values["R8"]))


def _forward(values: Values, request: LaserDriverRequest, current: float | Lanes) -> Forward:
    line = forward(values, request, current)
    shorted, opened = (np.asarray(values.get(f"D1.{fault}", 0.0)) for fault in ("short", "open"))
    turn_on, resistance = (np.where(shorted > 0, 0.0, part) for part in line)
    return Forward(turn_on, np.where(opened > 0, OPEN, resistance))


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


def disabled(values: Values) -> Lanes:
    """Whether the disable input shorts the set voltage: it is high, or nothing drives it."""
    if "R11" not in values:
        return np.asarray(False)
    level = np.asarray(values["control.disable"])
    return np.asarray((level > LOGIC_LEVEL) | (np.asarray(values.get("control.open", 0.0)) > 0))


def _around(
    values: Values,
    request: LaserDriverRequest,
    transistor: PassTransistor,
    line: Forward,
    supply: Lanes,
    rail: Lanes,
    side: Side,
) -> Around:
    share = transistor.share(values)
    sense = np.asarray(values["R1"] / share)
    headroom = values["U1.swing_to_positive"] if side == "low" else values["U1.swing_to_negative"] - _negative(values)
    return Around(
        supply=np.asarray(supply - line.turn_on),
        series=np.asarray(_filter_resistance(values) + line.resistance + values["R7"] + sense),
        sense=sense,
        drive=np.maximum(rail - headroom, 0.0),
        gate=np.asarray(values["R5"]),
        drive_current=np.asarray(values["U1.output_current_max"]),
    )


def _negative(values: Values) -> float | Lanes:
    """How far the op amp's negative supply lies below ground. [V]"""
    return np.abs(values["supply.negative"])


def _regulated(
    values: Values, transistor: PassTransistor, set_voltage: Lanes, rail: Lanes, around: Around, side: Side
) -> Lanes:
    """Current at which the sense voltage agrees with the set voltage; offset, bias current, finite gain in it. [A]"""
    raised = values["U1.offset"] + values["U1.bias_current"] * values["R4"]
    wanted = set_voltage + (raised if side == "low" else -raised)
    sense = wanted
    for _ in range(PASSES):
        current = np.maximum(sense, 0.0) / around.sense
        control = transistor.control_voltage(values, current, np.maximum(around.across(current), 0.0))
        output = np.clip(control + sense, 0.0, rail)
        output = output if side == "low" else output - rail
        sense = wanted - output / values["U1.open_loop_gain"]
    return np.asarray(np.maximum(sense, 0.0) / around.sense)


def _least(values: Values, request: LaserDriverRequest, regulated: Lanes, hard_on: Lanes, around: Around) -> Lanes:
    """The current that flows; an op amp below its least supply is taken to drive as hard as it can."""
    stuck = np.asarray(values.get("U1.stuck", 0.0))
    lost = values["supply.positive"] + _negative(values) < request.amplifier.supply_min
    current = np.where(lost | (stuck > 0), hard_on, np.minimum(regulated, hard_on))
    current = np.where(stuck < 0, 0.0, current)
    shorted = np.maximum(around.supply, 0.0) / around.series
    return np.asarray(np.where(np.asarray(values.get("Q1.short", 0.0)) > 0, shorted, current))


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
    span = values["supply.positive"] + _negative(values)
    output = control + sense + drawn * around.gate
    through = np.where(bypassed, 0.0, laser["D1.forward_voltage"])
    biased: dict[str, float | Lanes] = {
        **given,
        "U1.offset": values["U1.offset"],
        "U1.bias_current": values["U1.bias_current"],
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
    return biased | placed(near, rail, request) | _logic(values, rail, request) | {"node.rail": rail}


def placed(near: dict[str, Lanes], rail: Lanes, request: LaserDriverRequest) -> dict[str, float | Lanes]:
    """Node voltages against ground from distances to the near rail."""
    if side_of(request) == "low":
        return {f"node.{name}": voltage for name, voltage in near.items()}
    return {f"node.{name}": rail - voltage for name, voltage in near.items()}


def _logic(values: Values, rail: Lanes, request: LaserDriverRequest) -> dict[str, float | Lanes]:
    """Nodes of the disable input."""
    found: dict[str, float | Lanes] = {"node.positive": values["supply.positive"]}
    if "R11" not in values:
        return found
    found["node.off"] = np.where(np.asarray(values.get("control.open", 0.0)) > 0, rail, values["control.disable"])
    if "R12" in values:
        found["node.shift"] = np.where(disabled(values), 0.0, rail)
    return found


def amplifier_errors(values: Values, request: LaserDriverRequest) -> dict[str, Lanes]:
    """Offset with its drift, in its own direction, and input bias current at the temperature; of a FET it doubles."""
    temperature, offset = values["temperature"], values["U1.offset_voltage"]
    drift = values.get("U1.offset_drift", 0.0) * np.abs(temperature - ROOM_TEMPERATURE)
    drawn, doubling = values["U1.bias_current"], request.amplifier.bias_current_doubling
    if doubling is not None:
        drawn = dark_current(
            dark_current=drawn,
            temperature=temperature,
            reference_temperature=ROOM_TEMPERATURE,
            doubling=doubling,
        )
    return {"U1.offset": np.asarray(offset + np.copysign(drift, offset)), "U1.bias_current": np.asarray(drawn)}
