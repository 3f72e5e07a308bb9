"""What a designer ought to be told about a sized constant-current laser driver, people's eyes first."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.drivers.laser import safety
from opto_ckt.circuits.drivers.side import SIDES, side_of
from opto_ckt.circuits.drivers.warmth import heat
from opto_ckt.formulas.driver import output_current_noise
from opto_ckt.limits import Limits, Values
from opto_ckt.request import LaserDriverRequest
from opto_ckt.units import write

HOT = 333.15  #: a surface that burns when it is touched for some seconds, 60 °C; common practice [K]
REVERSE_CURRENT = 10e-3  #: through D2 when the laser is probed the wrong way round, common practice [A]


def remarks(values: Values, limits: Limits, request: LaserDriverRequest) -> tuple[str, ...]:
    """Cautions for people and laser, then advice that depends on the values."""
    found = [*safety(request, float(np.max(values["D1.power"])))]
    found += _hot(values, request)
    if SIDES[request.source.common] is None:
        found.append("the laser floats: keep its case off ground, or insulate it")
    elif side_of(request) == "low":
        found.append("the laser's case is at the supply: insulate it from whatever it is mounted on")
    if request.diode is None:
        found.append("no diode across the laser: add [diode] to keep reverse voltage from it")
    elif request.source.reverse_voltage_max < (drop := float(request.diode.forward_voltage_at(REVERSE_CURRENT))):
        limit = request.source.reverse_voltage_max
        found.append(f"D2 lets {write(drop, 'V')} of reverse voltage stand, the laser takes {write(limit, 'V')}")
    found.append("connect the laser before the supply: reconnected live, it takes the current that R7 allows")
    if request.signal.enable:
        switches = "Q2" if side_of(request) == "low" else "Q2 and Q3"
        least = float(np.min(values["node.rail"]))
        found.append(
            f"{switches}: any small MOSFET that is fully on at {write(least / 2, 'V')} on its gate, and off at the low"
            " level of what pulls the disable input down"
        )
    else:
        found.append("no disable input: signal.enable = true fits one that keeps the laser off while it is open")
    found += _shut_off(values, request)
    found.append(_noise(values))
    rail = "negative" if side_of(request) == "low" else "positive"
    if getattr(request.amplifier, f"common_mode_to_{rail}") is None:
        found.append(f"the amplifier's sheet says nothing of inputs near its {rail} rail: see that they work there")
    if request.signal.power is not None:
        found.append("the power is not trimmed: its span holds the spread of the laser; trim R2, or control the power")
    return tuple(found)


def _hot(values: Values, request: LaserDriverRequest) -> list[str]:
    found = []
    for part in heat(values, request):
        warmest = float(np.max(part.temperature))
        if part.ref == "Q1" and warmest > HOT:
            found.append(f"Q1 gets hot, {write(warmest, '°C')} inside: give it copper, do not touch it")
    return found


def _shut_off(values: Values, request: LaserDriverRequest) -> list[str]:
    """Whether the op amp can take gate or base below its threshold."""
    name = "swing_to_negative" if side_of(request) == "low" else "swing_to_positive"
    rest = float(np.max(values[f"U1.{name}"]))
    least = float(np.min(values.get("Q1.threshold_voltage", values.get("Q1.base_emitter_voltage", np.inf))))
    if rest < least:
        return []
    return [
        f"U1 rests {write(rest, 'V')} off its rail, Q1 conducts from {write(least, 'V')}: the laser is not fully off"
    ]


def _noise(values: Values) -> str:
    density = float(
        np.max(
            output_current_noise(
                voltage_noise=values["U1.voltage_noise"],
                sense_resistance=values["R1"],
                temperature=values["temperature"],
            )
        )
    )
    return (
        f"current noise of the loop {write(density, 'A/√Hz')} below its bandwidth, 1/f noise and the reference's apart"
    )
