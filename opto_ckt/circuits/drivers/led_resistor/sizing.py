"""The resistor of an LED: by the forward voltage at its current, never so small that a corner passes a limit."""

from __future__ import annotations

from math import inf

from opto_ckt.circuit import Bench, Fitted
from opto_ckt.circuits.drivers.led import asked_current, heated, nominal
from opto_ckt.circuits.drivers.led_resistor.operation import drive
from opto_ckt.circuits.drivers.led_resistor.structure import feed_of
from opto_ckt.circuits.drivers.led_sizing import largest_current, least_resistance
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import diode, driver, led, transit
from opto_ckt.preferred import neighbours
from opto_ckt.request import LedDriverRequest
from opto_ckt.units import write

FORMULAS = (
    driver.series_resistance,
    driver.series_current,
    diode.forward_voltage,
    diode.dynamic_resistance,
    led.electrical_bandwidth,
    led.optical_bandwidth,
    transit.rise_time,
)
NEIGHBOURS = 2  #: values next to the exact one that are tried; at a limit, the next one above it


def propose(request: LedDriverRequest, derivation: Derivation, bench: Bench) -> tuple[Fitted, ...]:
    """R1 at the typical corner; its window ends where the largest current reaches what LED or output bear.

    Raises
    ------
    InfeasibleError : what drives the LED does not reach its forward voltage with the current asked for.
    """
    current = asked_current(request)
    exact = _resistance(request, derivation, bench, current)
    least = _least(request, derivation, bench)
    fixed = request.fixed.get("R1")
    if fixed is not None:
        derivation.note("R1", "fixed in the design file")
        return (Fitted("R1", fixed, request.preferred.resistors.series, fixed=True),)
    if least > exact:
        limit = write(_most(request), "A")
        derivation.note("R1", f"{write(exact, 'Ω')} would be typical; at the largest current {limit} needs more")
    value = max(exact, least)
    series = request.preferred.resistors.series
    near = neighbours(value, series, 1 if least > exact else NEIGHBOURS, least, inf)
    return (Fitted("R1", value, series, low=min(near, default=least), high=max(near, default=inf)),)


def _resistance(request: LedDriverRequest, derivation: Derivation, bench: Bench, current: float) -> float:
    """R1 for the current asked for, everything typical. [Ω]"""
    feed = drive({name: bench.nominal(name) for name in bench.limits}, request)
    voltage, junction = heated(nominal(request), request, current)
    left = float(feed.voltage) - float(voltage) - current * float(feed.resistance)
    if left <= 0:
        taken = current * float(feed.resistance)
        raise InfeasibleError(
            f"{write(float(feed.voltage), 'V')} leaves nothing for a resistor: at {write(current, 'A')} the LED takes"
            f" {write(float(voltage), 'V')}, the output {write(taken, 'V')}",
            [_higher(request, float(voltage) + taken), f"signal.current below {write(current, 'A')}"],
        )
    return derivation.compute(
        "R1",
        driver.series_resistance,
        reason=f"{write(current, 'A')} with the forward voltage at that current, junction at"
        f" {write(float(junction), '°C')}",
        supply=float(feed.voltage),
        switch_drop=current * float(feed.resistance),
        forward_voltage=float(voltage),
        current=current,
    )


def _most(request: LedDriverRequest) -> float:
    """Largest current allowed: by the design, the LED, the output. [A]"""
    return largest_current(request, None if request.logic_output is None else request.logic_output.current_max)


def _least(request: LedDriverRequest, derivation: Derivation, bench: Bench) -> float:
    """R1 that keeps the largest current where voltage is highest and output and LED take least. [Ω]"""
    most = _most(request)
    extreme = {name: bench.high(name) for name in bench.limits}
    extreme |= {name: bench.low(name) for name in ("U1.source_resistance", "U1.sink_resistance") if name in extreme}
    if feed_of(request) == "sink":
        extreme["U1.low"] = bench.low("U1.low")
    feed = drive(extreme, request)
    return least_resistance(request, derivation, most, float(feed.voltage), most * float(feed.resistance))


def _higher(request: LedDriverRequest, needed: float) -> str:
    key = "logic_output.high" if feed_of(request) == "source" else "conditions.supply.positive"
    return f"{key} above {write(needed, 'V')}"
