"""Limits of the power-controlled laser driver that no sheet states as they stand here."""

from __future__ import annotations

from opto_ckt.circuits.drivers.laser_current import given as current
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.limits import Limit
from opto_ckt.request import LaserPowerRequest

MONITOR_CAPACITANCE = Limit(15e-12, 8e-12, 25e-12, assumed=True)
"""Of the monitor, where the sheet states none: small reverse-biased chips; from memory [F]"""

MONITOR_DARK = Limit(10e-9, 0.0, 100e-9, assumed=True)
"""Of the monitor at 25 °C, where the sheet states none; from memory [A]"""

SETTING = 0.002  #: of its track that a multi-turn trimmer can be set to, and keeps; common practice, from memory [1]

MONITOR = ("monitor_responsivity", "monitor_capacitance", "monitor_dark_current")


def given(request: LaserPowerRequest) -> dict[str, Limit]:
    """Those of the current source; the reference's tolerance apart from its drift, which no trimmer takes away."""
    found = current.given(request)
    amplifier = {name: limit for name, limit in found.items() if name.startswith("U1.")}
    reference, temperature = request.reference, request.conditions.temperature
    farthest = max(abs(end - ROOM_TEMPERATURE) for end in (temperature.low, temperature.high))
    drift = reference.temperature_coefficient * farthest
    spread = reference.voltage * reference.tolerance
    resistors, trimmers = request.preferred.resistors, request.preferred.trimmers
    moved = max(resistors.temperature_coefficient, trimmers.temperature_coefficient) * farthest
    tracking = tracking_error(request)
    return {
        **found,
        **{name.replace("U1.", "U3."): limit for name, limit in amplifier.items()},
        **_monitor(request),
        "U2.voltage": Limit(reference.voltage, reference.voltage - spread, reference.voltage + spread),
        "U2.drift": Limit(0.0, -drift, drift),
        "set.drift": Limit(0.0, -moved, moved),
        "RV1.settability": Limit(0.0, -SETTING, SETTING),
        "D1.tracking_error": Limit(0.0, -tracking, tracking),
        "trim.temperature": Limit(ROOM_TEMPERATURE, ROOM_TEMPERATURE, ROOM_TEMPERATURE),
    }


def tracking_error(request: LaserPowerRequest) -> float:
    """The largest that the sheet allows, either sign. [dB]"""
    stated = request.source.tracking_error
    return 0.0 if stated is None else max(abs(stated.low), abs(stated.high))


def _monitor(request: LaserPowerRequest) -> dict[str, Limit]:
    """Figures of the monitor as the sheet states them."""
    stated = request.limits("source")
    found = {"D1.monitor_capacitance": MONITOR_CAPACITANCE, "D1.monitor_dark_current": MONITOR_DARK}
    return found | {f"D1.{name}": Limit(*stated[name]) for name in MONITOR if name in stated}
