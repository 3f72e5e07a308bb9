"""Operating point of the linear LED driver: the least of regulation, compliance and drive, lane by lane.

A fault is told by values that are otherwise absent: ``D1.open``, ``D1.short``, ``Q1.short``, ``U2.open`` 1 where that
part is so; ``U1.stuck`` +1 where the op amp drives the transistor as hard as it can, -1 where it shuts it off.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from opto_ckt.circuits.drivers.current_source import (
    PASSES,
    amplifier_errors,
    below_ground,
    flowing,
    regulated_current,
)
from opto_ckt.circuits.drivers.led import asked_current, heated, led_limits, lit
from opto_ckt.circuits.drivers.pass_transistor import Around, pass_transistor
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas.reference import divided_voltage, parallel_resistance
from opto_ckt.limits import Lanes, Limit, Values
from opto_ckt.request import LedLinearRequest
from opto_ckt.topology import OPEN, SHORT

STEP = 1e-3  #: of the current, over which the LED's voltage is taken as straight
OF_NO_ACCOUNT = 1e-9  #: bias current of a FET input, at 25 °C, that moves no figure here [A]
HELD = (
    "U1.slew_rate", "U1.common_mode_to_positive", "U1.common_mode_to_negative", "Q1.gate_charge",
    "Q1.output_capacitance", "Q1.storage_time", "Q1.base_resistance",
)  # fmt: skip
"""Figures of the sheets that nothing here depends on: held at nominal."""


class Levels(NamedTuple):
    """The quiet part of the circuit."""

    reference: Lanes
    set: Lanes
    plus: Lanes  #: at the op amp's input, after the drop of its bias current
    bias: Lanes  #: current through R6 [A]


def given(request: LedLinearRequest) -> dict[str, Limit]:
    """Curves of the LED, tolerance of the reference with its drift, offset and bias current with either sign."""
    reference, amplifier, temperature = request.reference, request.amplifier, request.conditions.temperature
    farthest = max(abs(end - ROOM_TEMPERATURE) for end in (temperature.low, temperature.high))
    spread = reference.voltage * (reference.tolerance + reference.temperature_coefficient * farthest)
    offset, current = amplifier.offset_voltage.high, amplifier.bias_current.high
    if amplifier.bias_current_doubling is not None and current < OF_NO_ACCOUNT:
        current = 0.0
    sheets = {"U1": request.limits("amplifier"), "Q1": request.limits("transistor")}
    unread = {f"{ref}.{name}": figure.nominal for ref, sheet in sheets.items() for name, figure in sheet.items()}
    source = request.signal.source_resistance
    return {
        **{name: Limit(unread[name], unread[name], unread[name]) for name in HELD if name in unread},
        **led_limits(request),
        "U1.offset_voltage": Limit(0.0, -offset, offset),
        "U1.bias_current": Limit(0.0, -current, current),
        "U2.voltage": Limit(reference.voltage, reference.voltage - spread, reference.voltage + spread),
        "RG": Limit(source, source, source),
    }


def bias(values: Values, request: LedLinearRequest) -> dict[str, float | Lanes]:
    """Current, light, heat, small-signal figures and node voltages at the standing current of each lane."""
    wide = {name: np.asarray(value, dtype=float) for name, value in values.items()}
    wide |= amplifier_errors(wide, request)
    transistor, rail = pass_transistor(request.transistor), wide["supply.positive"]
    levels = levels_of(wide, request, rail)
    current = np.asarray(asked_current(request) + 0.0 * rail)
    for _ in range(PASSES):
        around = around_at(wide, request, current)
        regulated = regulated_current(wide, transistor, levels.plus, rail, around, "low")
        hard_on = transistor.hard_on(wide, around)
        current = flowing(wide, request, regulated, hard_on, around)
    return _written(values, wide, request, around, levels, regulated, hard_on, current)


def levels_of(values: Values, request: LedLinearRequest, rail: Lanes) -> Levels:
    """The reference as far as R6 feeds it, and the set voltage; the sheet's voltage holds at its operating current."""
    divider, slope, feed = values["R2"] + values["R3"], values["U2.output_resistance"], values["R6"]
    emf = values["U2.voltage"] - slope * request.reference.operating_current
    regulating = (emf + slope * rail / feed) / (1 + slope / feed + slope / divider)
    starved = divided_voltage(voltage=rail, upper=feed, lower=divider)
    opened = np.asarray(values.get("U2.open", 0.0)) > 0
    reference = np.where(opened, starved, np.clip(regulating, 0.0, starved))
    tap = divided_voltage(voltage=reference, upper=values["R2"], lower=values["R3"])
    level = tap - values["U1.bias_current"] * parallel_resistance(first=values["R2"], second=values["R3"])
    plus = level - values["U1.bias_current"] * values["R9"]
    return Levels(reference, np.asarray(level), np.asarray(plus), np.asarray((rail - reference) / feed))


def around_at(values: Values, request: LedLinearRequest, current: Lanes) -> Around:
    """What the transistor sits in, the LED's voltage a straight line about a current."""
    transistor = pass_transistor(request.transistor)
    step = STEP * np.maximum(current, 1e-6)
    at, above = (heated(values, request, current + rise)[0] for rise in (0.0, step))
    bridged, opened = (np.asarray(values.get(f"D1.{fault}", 0.0)) > 0 for fault in ("short", "open"))
    resistance = np.where(bridged, 0.0, np.maximum((above - at) / step, SHORT))
    turn_on = np.where(bridged, 0.0, at - current * resistance)
    sense = np.asarray(values["R1"] / transistor.share(values))
    return Around(
        supply=np.asarray(values["supply.positive"] - turn_on),
        series=np.where(opened, OPEN, resistance + values["R7"] + sense),
        sense=sense,
        drive=np.maximum(values["supply.positive"] - values["U1.swing_to_positive"], 0.0),
        gate=np.asarray(values["R5"]),
        drive_current=np.asarray(values["U1.output_current_max"]),
    )


def _written(
    given: Values,
    values: Values,
    request: LedLinearRequest,
    around: Around,
    levels: Levels,
    regulated: Lanes,
    hard_on: Lanes,
    current: Lanes,
) -> dict[str, float | Lanes]:
    transistor, rail = pass_transistor(request.transistor), values["supply.positive"]
    across = np.maximum(around.across(current), 0.0)
    control, drawn = transistor.control_voltage(values, current, across), transistor.control_current(values, current)
    led = lit(values, request, current)
    drop = np.where(np.asarray(values.get("D1.short", 0.0)) > 0, 0.0, np.asarray(led["D1.forward_voltage"]))
    sense, span = current * around.sense, rail + below_ground(values)
    output = control + sense + drawn * around.gate
    crest = regulated * (1 + request.signal.modulation_index)
    return {
        **given,
        "U1.offset": values["U1.offset"],
        "U1.bias_current": values["U1.bias_current"],
        **led,
        **{f"Q1.{name}": value for name, value in transistor.small_signal(values, current, across).items()},
        "Q1.drain_current": current,
        "Q1.control_voltage": control,
        "Q1.power": current * across + drawn * control,
        "U1.power": span * values["U1.quiescent_current"] + drawn * np.maximum(rail - output, 0.0),
        "U2.voltage": values["U2.voltage"] - values["U2.output_resistance"] * request.reference.operating_current,
        "U2.current": np.maximum(levels.bias - levels.reference / (values["R2"] + values["R3"]), 0.0),
        "regulated_current": regulated,
        "hard_on_current": hard_on,
        "peak_current": crest,
        "compliance_margin": transistor.margin(values, crest, around_at(values, request, crest)),
        "supply.current": current + levels.bias + values["U1.quiescent_current"] + drawn,
        "supply.span": span,
        "set_voltage": levels.set,
        "node.light": led["D1.emitted_power"],
        "node.positive": rail,
        "node.ref": levels.reference,
        "node.set": levels.set,
        "node.plus": levels.plus,
        "node.minus": sense - values["U1.bias_current"] * values["R4"],
        "node.sense": sense,
        "node.control": control + sense,
        "node.drive": output,
        "node.led": rail - drop,
        "node.drain": rail - drop - current * values["R7"],
    }
