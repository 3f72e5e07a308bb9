"""Bounds on the resistance in the way of an LED's current."""

from __future__ import annotations

from math import inf

from opto_ckt.circuits.drivers.led import heated, nominal
from opto_ckt.circuits.drivers.spread import resistor_spread
from opto_ckt.derivation import Derivation
from opto_ckt.formulas import driver
from opto_ckt.request import LedDriverRequest
from opto_ckt.units import write


def largest_current(request: LedDriverRequest, *others: float | None) -> float:
    """The least of what the design, the LED and ``others`` allow; None where one says nothing. [A]"""
    asked = request.signal.current
    limits = [request.source.current_max, None if asked is None else asked.max, *others]
    return min(limit for limit in limits if limit is not None)


def least_resistance(
    request: LedDriverRequest,
    derivation: Derivation,
    most: float,
    voltage: float,
    drop: float,
    shunt: float = inf,
) -> float:
    """Resistance that keeps the largest current where the LED takes least, the resistor's own spread in it. [Ω]

    Parameters
    ----------
    most : current allowed. [A]
    voltage : highest over switch, resistor and LED. [V]
    drop : least of what else is in the way, at that current. [V]
    shunt : resistance beside the LED, whose current flows through the resistance too. [Ω]
    """
    ends = request.conditions.temperature
    forward = min(float(heated(nominal(request, end, forward=-1.0), request, most)[0]) for end in (ends.low, ends.high))
    least = derivation.compute(
        "least R1",
        driver.series_resistance,
        reason=f"{write(most, 'A')} at the most: highest voltage, lowest forward voltage",
        supply=voltage,
        switch_drop=drop,
        forward_voltage=forward,
        current=most + forward / (shunt * (1 + resistor_spread(request))),
    )
    return max(least, 0.0) / (1 - resistor_spread(request))
