"""What a designer of any laser driver ought to be told: people's eyes, the laser, its pins, how it is switched."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.drivers import launch
from opto_ckt.circuits.drivers.laser import safety
from opto_ckt.circuits.drivers.side import SIDES, side_of
from opto_ckt.circuits.drivers.warmth import heat
from opto_ckt.limits import Values
from opto_ckt.request import LaserDriverRequest
from opto_ckt.units import write

HOT = 333.15  #: a surface that burns when it is touched for some seconds, 60 °C; common practice [K]
REVERSE_CURRENT = 10e-3  #: through D2 when the laser is probed the wrong way round, common practice [A]


def about_the_driver(values: Values, request: LaserDriverRequest, brightest: float) -> list[str]:
    """Cautions for people and laser, then advice on the pins, the diode and the disable input."""
    found = [*safety(request, brightest), *launch.advice(request)]
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
    return found + _shut_off(values, request)


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
