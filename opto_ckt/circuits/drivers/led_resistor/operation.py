"""Operating point of the LED behind a resistor.

A fault is told by values that are otherwise absent: ``D1.open`` and ``D1.short`` 1 where the LED is so, ``U1.stuck`` 1
where the logic output rests at the level that keeps the LED dark.
"""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from opto_ckt.circuits.drivers.led import current_through, led_limits, lit
from opto_ckt.circuits.drivers.led_resistor.structure import feed_of
from opto_ckt.limits import Lanes, Limit, Values
from opto_ckt.request import LedDriverRequest


class Drive(NamedTuple):
    """What stands behind resistor and LED."""

    voltage: Lanes  #: over resistor and LED, no current [V]
    resistance: Lanes  #: of the output [Ω]


def given(request: LedDriverRequest) -> dict[str, Limit]:
    """Curves of the LED, and the figures of the logic output that nothing here reads."""
    found = led_limits(request)
    if request.logic_output is not None:
        rise = request.limits("logic_output").get("rise_time")
        found |= {} if rise is None else {"U1.rise_time": Limit(rise.nominal, rise.nominal, rise.nominal)}
    return found


def drive(values: Values, request: LedDriverRequest) -> Drive:
    """Of the rail, of a high output against ground, or of the rail against a low output."""
    feed = feed_of(request)
    supply, still = np.asarray(values["supply.positive"], dtype=float), np.asarray(values.get("U1.stuck", 0.0)) > 0
    if feed == "rail":
        return Drive(supply, np.asarray(0.0))
    high, low = np.asarray(values["U1.high"]), np.asarray(values["U1.low"])
    source, sink = np.asarray(values["U1.source_resistance"]), np.asarray(values["U1.sink_resistance"])
    if feed == "source":
        return Drive(np.where(still, low, high), np.where(still, sink, source))
    return Drive(supply - np.where(still, high, low), np.where(still, source, sink))


def bias(values: Values, request: LedDriverRequest) -> dict[str, float | Lanes]:
    """Current, light, heat, small-signal figures and node voltages at the operating point of each lane."""
    feed, driven = feed_of(request), drive(values, request)
    series = np.asarray(values["R1"], dtype=float)
    current = current_through(values, request, driven.voltage, series + driven.resistance)
    led = lit(values, request, current)
    drop = np.where(np.asarray(values.get("D1.short", 0.0)) > 0, 0.0, np.asarray(led["D1.forward_voltage"]))
    found: dict[str, float | Lanes] = {
        **values,
        **led,
        "loop.current": current,
        "set_voltage": driven.voltage,
        "node.light": led["D1.emitted_power"],
    }
    if feed == "rail":
        return found | {"node.led": drop, "node.positive": driven.voltage}
    if feed == "source":
        gate = driven.voltage - current * driven.resistance
        return (
            found
            | {"U1.level": driven.voltage, "U1.resistance": driven.resistance, "node.led": drop}
            | {"node.gate": gate}
        )
    supply = np.asarray(values["supply.positive"], dtype=float)
    level = supply - driven.voltage
    gate = level + current * driven.resistance
    return found | {"U1.level": level, "U1.resistance": driven.resistance, "node.led": gate + drop, "node.gate": gate}
