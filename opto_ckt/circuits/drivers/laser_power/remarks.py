"""What a designer ought to be told about a sized power-controlled laser driver, people's eyes first."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Bench
from opto_ckt.circuits.drivers.cautions import about_the_driver
from opto_ckt.circuits.drivers.laser_power.clamp import most_power, most_settled
from opto_ckt.circuits.drivers.laser_power.figures import clamp_light, runaway
from opto_ckt.circuits.drivers.laser_power.given import MONITOR
from opto_ckt.limits import Limits, Values
from opto_ckt.request import LaserPowerRequest
from opto_ckt.units import percent, write

FAR = 30.0  #: times the power, up to which the onset of runaway is looked for


def remarks(values: Values, limits: Limits, request: LaserPowerRequest) -> tuple[str, ...]:
    """Cautions for people and laser, then how to trim, and what the sheet leaves open."""
    clamped = clamp_light(values, request)
    found = about_the_driver(values, request, float(np.max(clamped)))
    most = write(float(np.max(values["clamp_current"])), "A")
    found.append(
        f"with the monitor open or dark the clamp lets up to {most} flow,"
        f" {write(float(np.max(clamped)), 'W')} from the brightest laser: keep the beam shut till the monitor is proven"
    )
    found += _trimming(values, limits, request)
    found.append(_untrimmed(limits, request))
    found.append(_distance(values, limits, request))
    source = request.source
    absent = [name.replace("_", " ") for name in MONITOR if getattr(source, name) is None]
    if absent:
        found.append(f"the laser's sheet says nothing of its {' and '.join(absent)}: assumed")
    if source.tracking_error is None:
        found.append("the laser's sheet states no tracking error: the power over temperature is told without it")
    signal = request.signal
    if signal.extinction_ratio is not None:
        found.append(
            "the modulation current is that of a modulator of its own, set on each unit at 25 °C and coupled behind R7;"
            " this loop holds the average alone, so the extinction ratio falls as the slope does"
        )
    return tuple(found)


def _trimming(values: Values, limits: Limits, request: LaserPowerRequest) -> list[str]:
    power = request.signal.power
    asked = "the power" if power is None else write(power.nominal, "W")
    plane = request.signal.plane or request.source.plane
    found = [
        f"RV1: begin at its whole track, least light; trim to {asked} at the {plane} at 25 °C, with the supply at its"
        " typical value"
    ]
    limit = limits["D1.tracking_error"]
    if limit.varies:
        most = float(limit.at("high", 0.0))
        found.append(f"at the ends of the temperature the monitor itself moves the power by {most:.2g} dB")
    return found


def _untrimmed(limits: Limits, request: LaserPowerRequest) -> str:
    """Span of the power without a trimmer, set for the typical monitor."""
    limit = limits["D1.monitor_responsivity"]
    low, typical, high = (float(limit.at(level, 0.0)) for level in ("low", "nominal", "high"))
    spread = f"{percent(typical / high - 1)} to +{percent(typical / low - 1)}"
    return f"untrimmed, set for a typical monitor, the power would lie {spread} off: trim every unit"


def _distance(values: Values, limits: Limits, request: LaserPowerRequest) -> str:
    """How far the aged laser at its hottest is from running away."""
    factor, bench = float(np.max(runaway(values, request))), Bench(limits, lambda chosen: {})
    hottest, power = bench.high("temperature"), most_power(request, bench)
    least = most_settled(request, bench, hottest, FAR * power)
    how_far = f"at {least / power:.3g} times that" if least < FAR * power else f"beyond {FAR:g} times that"
    return (
        f"self-heating at constant power has a loop gain of {factor:.2g} at its worst, from 1 on a laser runs away;"
        f" at {write(hottest, '°C')} and {write(power, 'W')} the aged one would run away {how_far}"
    )
