"""What is asked of a laser driver that holds the average power by the laser's monitor diode."""

from __future__ import annotations

from collections.abc import Iterator

from opto_ckt.parts.laser import LaserData
from opto_ckt.parts.record import Check, Finding
from opto_ckt.request.driver import DriverConditions, DriveSignal, LaserDriverRequest
from opto_ckt.units import write

MONITORED = ("laser anode with monitor cathode", "laser cathode with monitor anode")
"""Pins joined in the laser's case that leave the monitor reverse biased on a single supply."""


def _power_asked(signal: DriveSignal) -> Iterator[Finding]:
    if signal.power is None:
        yield Finding(
            ("signal", "current"), "this driver holds a power: give signal.power, such as '0.5 mW', in place of it"
        )


def _monitored(source: LaserData) -> Iterator[Finding]:
    if source.monitor_responsivity is None:
        yield Finding(
            ("source", "monitor_responsivity"),
            "is missing; this driver holds the power by the laser's monitor diode, expected a figure such as '0.3 A/W'",
        )
    if source.common not in MONITORED:
        yield Finding(
            ("source", "common"),
            f"'{source.common}' does not let the monitor be reverse biased on the supply of the laser; allowed here are"
            f" {', '.join(MONITORED)}",
        )


def _amplifiers_supplied(conditions: DriverConditions) -> Iterator[Finding]:
    if conditions.supply.negative:
        yield Finding(
            ("conditions", "supply", "negative"),
            f"{write(conditions.supply.negative, 'V')}: the clamp of this driver is the swing of its op amp above"
            " ground; leave it out",
        )


class LaserPowerRequest(LaserDriverRequest):
    """A design file of a laser driver with power control; the tables are those of any laser driver."""

    checks = (
        *LaserDriverRequest.checks,
        Check(("signal",), _power_asked),
        Check(("source",), _monitored),
        Check(("conditions",), _amplifiers_supplied),
    )
