"""The resistor that sets the power, and the trimmer that takes up the monitor's spread."""

from __future__ import annotations

from typing import NamedTuple

from opto_ckt.circuit import Bench
from opto_ckt.circuits.drivers.fitting import Sizing
from opto_ckt.circuits.drivers.laser_power.given import SETTING
from opto_ckt.circuits.drivers.laser_power.monitor import sheet_share
from opto_ckt.circuits.drivers.slack import offset_error
from opto_ckt.circuits.drivers.spread import resistor_spread
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import power_loop, reference
from opto_ckt.preferred import neighbours
from opto_ckt.request import LaserPowerRequest
from opto_ckt.units import percent, write

COARSEST = 0.05  #: of the power, that a setting may be off where the fixed resistor is all there is; common practice
LARGEST = 2e6  #: of trimmers to be had; common practice [Ω]
OFF = 3.0  #: times the largest offset; common practice
MOST_OFF_BIAS = 2.2e6  #: above it leakage of a board counts; common practice [Ω]
NEXT = 2.2  #: from one value of E3 to the next
STEPS = 5.0  #: a track may be so many times what is needed


class Range(NamedTuple):
    """Resistance at the most and the least monitor current that a trimmed unit has."""

    least: float  #: [Ω]
    most: float  #: [Ω]


def needed_range(request: LaserPowerRequest, bench: Bench) -> Range:
    """From the brightest monitor at the highest power to the faintest at the lowest, reference and offset with them."""
    power = request.signal.power
    low, high = (0.0, 0.0) if power is None else (power.low, power.high)
    offset = bench.high("U3.offset_voltage")
    least = power_loop.set_resistance(
        reference=bench.low("U2.voltage") - offset,
        monitor_responsivity=bench.high("D1.monitor_responsivity"),
        power=high / sheet_share(request, bench, "low")
        + bench.high("D1.monitor_dark_current") / bench.high("D1.monitor_responsivity"),
    )
    most = power_loop.set_resistance(
        reference=bench.high("U2.voltage") + offset,
        monitor_responsivity=bench.low("D1.monitor_responsivity"),
        power=low / sheet_share(request, bench, "high"),
    )
    return Range(float(least), float(most))


def coarseness(request: LaserPowerRequest, bench: Bench) -> float:
    """How far the power may lie off its setting at the short end of the track, the next longer track fitted. [1]"""
    found, tolerance = needed_range(request, bench), request.preferred.trimmers.tolerance
    track = (found.most - found.least) / (1 - tolerance)
    return min(SETTING * NEXT * track / found.least, COARSEST)


def fit_trimmer(sizing: Sizing[LaserPowerRequest], bench: Bench) -> Range:
    """R14 and RV1.

    Raises
    ------
    InfeasibleError : one trimmer does not reach over the span, or is too coarse at its short end.
    """
    request: LaserPowerRequest = sizing.request
    found, spread, track = needed_range(request, bench), resistor_spread(request), request.preferred.trimmers
    fixed = sizing.derivation.compute(
        "R14", power_loop.set_resistance,
        reason=f"brightest monitor, {write(bench.high('D1.monitor_responsivity'), 'A/W')}, at the highest power,"
        f" reference at its least, and {percent(spread)} of tolerance: {write(found.least, 'Ω')} or less",
        reference=bench.low("U2.voltage"), monitor_responsivity=bench.high("D1.monitor_responsivity"),
        power=bench.low("U2.voltage") / found.least / bench.high("D1.monitor_responsivity"),
    ) / (1 + spread)  # fmt: skip
    sizing.fit("R14", fixed, "resistors", low=0.93 * fixed, high=fixed)
    least = (found.most - 0.93 * fixed * (1 - spread)) / (1 - track.tolerance)
    values = neighbours(least, track.series, 1, least, min(STEPS * least, LARGEST))
    span = found.most / found.least
    said = f"the monitor's spread and the range of power ask for {write(found.least, 'Ω')} to {write(found.most, 'Ω')},"
    said += f" a span of {span:.3g}"
    if "RV1" not in request.fixed and not values:
        raise InfeasibleError(
            f"{said}: no trimmer of [preferred] has a track from {write(least, 'Ω')} up",
            _longer(request, bench, least, span),
        )
    value = request.fixed.get("RV1", values[0] if values else least)
    coarse = SETTING * value / found.least
    if coarse > COARSEST:
        raise InfeasibleError(
            f"{said}: a track of {write(value, 'Ω')} can be set to {percent(SETTING)} of itself, which is"
            f" {percent(coarse)} of the power at its short end; one trimmer does not do",
            _narrower(request, bench, span * COARSEST / coarse),
        )
    _refuse_short(sizing, found, spread)
    sizing.fit("RV1", least, "trimmers", low=least, high=STEPS * least,
               why=f"from R14 at its least to {write(found.most, 'Ω')} for the faintest monitor, track at its least;"
               " a rheostat, so that an open wiper lowers the power")  # fmt: skip
    _fit_off_bias(sizing, bench, found)
    return found


def _refuse_short(sizing: Sizing[LaserPowerRequest], found: Range, spread: float) -> None:
    """Refuse what the design file fixes where it does not reach over the span.

    Raises
    ------
    InfeasibleError : R14 is too much for the brightest monitor, or with RV1 too little for the faintest.
    """
    fixed, request = sizing.request.fixed, sizing.request
    if "R14" in fixed and fixed["R14"] * (1 - spread) > found.least:
        raise InfeasibleError(
            f"R14, fixed at {write(fixed['R14'], 'Ω')}, holds a unit with the brightest monitor below its power, which"
            f" asks for {write(found.least, 'Ω')}",
            [f"fixed.R14 ≤ {write(found.least / (1 + spread), 'Ω')}"],
        )
    most = sizing["R14"] * (1 + spread) + fixed.get("RV1", found.most) * (1 + request.preferred.trimmers.tolerance)
    if "RV1" in fixed and most < found.most:
        short = (found.most - sizing["R14"] * (1 - spread)) / (1 - request.preferred.trimmers.tolerance)
        raise InfeasibleError(
            f"RV1, fixed at {write(fixed['RV1'], 'Ω')}, leaves a unit with the faintest monitor above its power, which"
            f" asks for {write(found.most, 'Ω')} in all",
            [f"fixed.RV1 ≥ {write(short, 'Ω')}"],
        )


def _fit_off_bias(sizing: Sizing[LaserPowerRequest], bench: Bench, found: Range) -> None:
    """R16 from the reference: with the set level at nothing the integrator sees too much light, its offset in it."""
    voltage = bench.nominal("U2.voltage")
    held = min(OFF * offset_error(sizing.request, bench), 0.2 * voltage)
    exact = sizing.derivation.compute(
        "R16", reference.upper_resistance,
        reason=f"{write(held, 'V')} across the least set resistance, {OFF:g} times the integrator's offset, while the"
        " level is shorted: the laser is off; in control there is next to nothing across R16",
        voltage=voltage, tap_voltage=held, lower=found.least,
    )  # fmt: skip
    exact = min(exact, MOST_OFF_BIAS)
    sizing.fit("R16", exact, "resistors", low=0.5 * exact, high=exact)


def _longer(request: LaserPowerRequest, bench: Bench, track: float, span: float) -> list[str]:
    """A trimmer that would do; more light where there is none so long, else a narrower span."""
    power = request.signal.power
    if track > LARGEST and power is not None:
        return [f"signal.power ≥ {write(power.nominal * track / LARGEST, 'W')}", "a lower reference.voltage"]
    return [f"preferred.trimmers with {write(track, 'Ω')} or more", *_narrower(request, bench, 0.9 * span)]


def _narrower(request: LaserPowerRequest, bench: Bench, span: float) -> list[str]:
    power = request.signal.power
    wide = 1.0 if power is None else power.high / power.low
    spread = bench.high("D1.monitor_responsivity") / bench.low("D1.monitor_responsivity")
    found = [f"lasers sorted to a spread of source.monitor_responsivity of {max(span / wide, 1.0):.2g} : 1"]
    if wide > 1:
        found.append(f"signal.power within {max(span / spread, 1.0):.2g} : 1")
    return found
