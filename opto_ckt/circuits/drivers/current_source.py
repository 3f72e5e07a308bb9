"""The current source that laser drivers share: op amp, pass transistor, sense resistor, the laser, the supply's filter.

All voltages here are distances from the near rail, on which the sense resistor sits; ``placed`` turns them into
voltages against ground. A fault is told by values that are otherwise absent:

``D1.open``, ``D1.short``, ``Q1.short``
    1 where that part is so
``U1.stuck``
    +1 where the op amp drives the transistor as hard as it can, -1 where it shuts it off
``control.open``
    1 where nothing drives the disable input
"""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.drivers.laser import Forward, forward
from opto_ckt.circuits.drivers.pass_transistor import Around, PassTransistor
from opto_ckt.circuits.drivers.requests import LoopRequest
from opto_ckt.circuits.drivers.side import Side, side_of
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas.leakage import dark_current
from opto_ckt.formulas.reference import parallel_resistance
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LaserDriverRequest
from opto_ckt.topology import OPEN

LOGIC_LEVEL = 1.0  #: above it the disable input counts as high [V]
PASSES = 3  #: over terms that are a thousandth of the whole


def filter_resistance(values: Values) -> Lanes:
    """Of the supply filter to a steady current: its winding beside its damping. [Ω]"""
    return np.asarray(parallel_resistance(first=values["L1.resistance"], second=values["R8"]))


def laser_line(values: Values, request: LaserDriverRequest, current: float | Lanes) -> Forward:
    """The laser's voltage about a current; shorted none of it, open no current."""
    line = forward(values, request, current)
    shorted, opened = (np.asarray(values.get(f"D1.{fault}", 0.0)) for fault in ("short", "open"))
    turn_on, resistance = (np.where(shorted > 0, 0.0, part) for part in line)
    return Forward(turn_on, np.where(opened > 0, OPEN, resistance))


def disabled(values: Values) -> Lanes:
    """Whether the disable input shorts the set voltage: it is high, or nothing drives it."""
    if "R11" not in values:
        return np.asarray(False)
    level = np.asarray(values["control.disable"])
    return np.asarray((level > LOGIC_LEVEL) | (np.asarray(values.get("control.open", 0.0)) > 0))


def surroundings(
    values: Values,
    request: LaserDriverRequest,
    transistor: PassTransistor,
    line: Forward,
    supply: Lanes,
    rail: Lanes,
    side: Side,
) -> Around:
    """What the transistor sits in."""
    share = transistor.share(values)
    sense = np.asarray(values["R1"] / share)
    headroom = (
        values["U1.swing_to_positive"] if side == "low" else values["U1.swing_to_negative"] - below_ground(values)
    )
    return Around(
        supply=np.asarray(supply - line.turn_on),
        series=np.asarray(filter_resistance(values) + line.resistance + values["R7"] + sense),
        sense=sense,
        drive=np.maximum(rail - headroom, 0.0),
        gate=np.asarray(values["R5"]),
        drive_current=np.asarray(values["U1.output_current_max"]),
    )


def below_ground(values: Values) -> float | Lanes:
    """How far the op amp's negative supply lies below ground. [V]"""
    return np.abs(values["supply.negative"])


def regulated_current(
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


def flowing(values: Values, request: LoopRequest, regulated: Lanes, hard_on: Lanes, around: Around) -> Lanes:
    """The current that flows; an op amp below its least supply is taken to drive as hard as it can."""
    stuck = np.asarray(values.get("U1.stuck", 0.0))
    lost = values["supply.positive"] + below_ground(values) < request.amplifier.supply_min
    current = np.where(lost | (stuck > 0), hard_on, np.minimum(regulated, hard_on))
    current = np.where(stuck < 0, 0.0, current)
    shorted = np.maximum(around.supply, 0.0) / around.series
    return np.asarray(np.where(np.asarray(values.get("Q1.short", 0.0)) > 0, shorted, current))


def placed(near: dict[str, Lanes], rail: Lanes, request: LaserDriverRequest) -> dict[str, float | Lanes]:
    """Node voltages against ground from distances to the near rail."""
    if side_of(request) == "low":
        return {f"node.{name}": voltage for name, voltage in near.items()}
    return {f"node.{name}": rail - voltage for name, voltage in near.items()}


def amplifier_errors(values: Values, request: LoopRequest, ref: str = "U1") -> dict[str, Lanes]:
    """Offset with its drift, in its own direction, and input bias current at the temperature; of a FET it doubles."""
    temperature, offset = values["temperature"], values[f"{ref}.offset_voltage"]
    drift = values.get(f"{ref}.offset_drift", 0.0) * np.abs(temperature - ROOM_TEMPERATURE)
    drawn, doubling = values[f"{ref}.bias_current"], request.amplifier.bias_current_doubling
    if doubling is not None:
        drawn = dark_current(
            dark_current=drawn,
            temperature=temperature,
            reference_temperature=ROOM_TEMPERATURE,
            doubling=doubling,
        )
    return {f"{ref}.offset": np.asarray(offset + np.copysign(drift, offset)), f"{ref}.bias_current": np.asarray(drawn)}


def logic_levels(values: Values, rail: Lanes) -> dict[str, float | Lanes]:
    """Nodes of the disable input."""
    found: dict[str, float | Lanes] = {"node.positive": values["supply.positive"]}
    if "R11" not in values:
        return found
    found["node.off"] = np.where(np.asarray(values.get("control.open", 0.0)) > 0, rail, values["control.disable"])
    if "R12" in values:
        found["node.shift"] = np.where(disabled(values), 0.0, rail)
    return found
