"""How far what a driver is made of may lie off its value."""

from __future__ import annotations

from typing import Any

from opto_ckt.constants import ROOM_TEMPERATURE


def resistor_spread(request: Any) -> float:
    """Tolerance and temperature of one resistor, relative."""
    resistors, temperature = request.preferred.resistors, request.conditions.temperature
    farthest = max(abs(end - ROOM_TEMPERATURE) for end in (temperature.low, temperature.high))
    return float(resistors.tolerance + resistors.temperature_coefficient * farthest)
