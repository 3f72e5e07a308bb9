"""What every laser driver shares: limits of the laser, where it settles, what it must not exceed, what to warn of."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from opto_ckt.circuit import Bench
from opto_ckt.circuits.drivers import launch
from opto_ckt.derivation import Derivation
from opto_ckt.formulas import laser
from opto_ckt.formulas.formula import Real
from opto_ckt.formulas.laser_heating import OperatingPoint, settle_at_current, settle_at_power
from opto_ckt.limits import Lanes, Limit, Values
from opto_ckt.parts.laser import LaserData
from opto_ckt.parts.record import facts
from opto_ckt.request import LaserDriverRequest, LaserRequest
from opto_ckt.topology import SHORT
from opto_ckt.units import write

READ = frozenset(
    {"slope_efficiency", "turn_on_voltage", "series_resistance", "capacitance", "junction_to_case", "coupling", "rin"}
)
"""Figures of the laser's sheet that a steady current depends on; the others are held at nominal."""

TEMPERATURES = 9  #: tried between the ends of the range for the one at which the laser is brightest
CURRENTS = 400  #: steps up to the largest current in the search for the power limit
REFINEMENTS = 8  #: of the junction temperature at the limit found, each a tenth as far off or better
INVISIBLE_FROM = 700e-9  #: of wavelength: the eye does not turn away from what it does not see [m]


class Forward(NamedTuple):
    """The laser's voltage as a straight line about a current."""

    turn_on: Real  #: [V]
    resistance: Real  #: [Ω]

    def at(self, current: Real) -> Real:
        """Forward voltage. [V]"""
        return laser.forward_voltage(turn_on_voltage=self.turn_on, current=current, series_resistance=self.resistance)


def laser_limits(request: LaserRequest) -> dict[str, Limit]:
    """Limits of what the sheet states as a curve, ageing in them; the rest held still."""
    data, ageing = request.source, request.conditions.ageing
    found = {
        f"D1.{name}": Limit(limit.nominal, limit.nominal, limit.nominal)
        for name, limit in request.limits("source").items()
        if name not in READ
    }
    known = facts(LaserData)

    def spread(name: str, figure_name: str) -> Limit:
        figure = data.threshold_figure if name == "threshold_current" else data.slope_efficiency
        return Limit(*request.assumed.get(figure_name, known[figure_name].assumed).limits(figure))

    threshold = spread(
        "threshold_current", "threshold_current" if data.threshold_minimum is None else "threshold_minimum"
    )
    slope = spread("slope_efficiency", "slope_efficiency")
    found["D1.threshold_current"] = Limit(
        threshold.nominal, threshold.low, threshold.high * (1 + ageing.threshold), threshold.assumed
    )
    found["D1.slope_efficiency"] = Limit(slope.nominal, slope.low * (1 + ageing.slope), slope.high, slope.assumed)
    if data.forward is not None:
        found["D1.forward_position"] = Limit(0.0, -1.0, 1.0)
    launched = launch.launched(request)
    if launched is not None:
        found["D1.coupling"] = launched
    return found


def forward(values: Values, request: LaserRequest, current: Real) -> Forward:
    """Straight line through the laser's voltage at a current: its own law, or the tangent of listed points."""
    data = request.source
    if data.forward is None:
        return Forward(values["D1.turn_on_voltage"], values["D1.series_resistance"])
    position = values["D1.forward_position"]
    step = 1e-3 * np.maximum(current, 1e-6)
    at, above = (np.asarray(data.forward_voltage_at(current + rise, position)) for rise in (0.0, step))
    resistance = np.maximum((above - at) / step, SHORT)
    return Forward(at - current * resistance, resistance)


def coupling(values: Values, request: LaserRequest) -> Real:
    """Power at the plane asked for over power at the plane of the sheet. [1]"""
    plane = request.signal.plane or request.source.plane
    if plane == request.source.plane:
        return 1.0
    share = values["D1.coupling"]
    return share if plane == "fibre" else 1 / share


def thermal_resistance(values: Values, request: LaserRequest) -> Real:
    """Junction to the place that the temperature of the design is of. [K/W]"""
    sink = request.conditions.sink_resistance if request.conditions.temperature_of == "air" else 0.0
    return values["D1.junction_to_case"] + sink


def settle(values: Values, request: LaserRequest, current: Real) -> OperatingPoint:
    """Where the laser settles at a current; the power is that at the plane of its sheet."""
    data = request.source
    line = forward(values, request, current)
    return settle_at_current(
        current=current,
        case_temperature=values["temperature"],
        thermal_resistance=thermal_resistance(values, request),
        turn_on_voltage=line.turn_on,
        series_resistance=line.resistance,
        threshold=lambda at: data.threshold_at(at, values["D1.threshold_current"]),
        slope=lambda at: data.slope_at(at, values["D1.slope_efficiency"]),
    )


def lasing(values: Values, request: LaserRequest, current: Real) -> dict[str, float | Lanes]:
    """What the laser is at a current: voltage, light, junction; threshold and slope at that junction."""
    data = request.source
    line, point = forward(values, request, current), settle(values, request, current)
    junction, share = point.junction_temperature, coupling(values, request)
    heat = current * line.at(current) - point.power
    return {
        "D1.current": current,
        "D1.turn_on_voltage": line.turn_on,
        "D1.series_resistance": line.resistance,
        "D1.forward_voltage": line.at(current),
        "D1.threshold_current": data.threshold_at(junction, values["D1.threshold_current"]),
        "D1.slope_efficiency": data.slope_at(junction, values["D1.slope_efficiency"]) * share,
        "D1.power": point.power,
        "D1.optical_power": point.power * share,
        "D1.junction_temperature": junction,
        "D1.case_temperature": junction - heat * values["D1.junction_to_case"],
        "D1.heat": heat,
    }


def asked_current(request: LaserDriverRequest, derivation: Derivation | None = None) -> float:
    """Current asked for, or that which gives the power asked for in a typical laser at the typical temperature. [A]"""
    if request.signal.current is not None:
        return request.signal.current.nominal
    data, signal = request.source, request.signal
    nominal = {name: limit.nominal for name, limit in request.limits("source").items()}
    values = {f"D1.{name}": value for name, value in nominal.items()} | {"D1.forward_position": 0.0}
    values["D1.threshold_current"] = data.threshold_figure.nominal
    launched = launch.launched(request)
    if launched is not None:
        values["D1.coupling"] = launched.nominal
    power = (0.0 if signal.power is None else signal.power.nominal) / float(coupling(values, request))
    current = float(data.threshold_figure.nominal + power / data.slope_efficiency.nominal)
    junction = request.conditions.temperature.nominal
    for _ in range(3):
        line = forward(values, request, current)
        point = settle_at_power(
            power=power,
            case_temperature=request.conditions.temperature.nominal,
            thermal_resistance=thermal_resistance(values, request),
            turn_on_voltage=line.turn_on,
            series_resistance=line.resistance,
            threshold=data.threshold_at,
            slope=data.slope_at,
        )
        current, junction = float(point.current), float(point.junction_temperature)
    if derivation is None:
        return current
    return derivation.compute(
        "current", laser.current_for_power, reason=f"junction at {write(junction, '°C')}, typical laser",
        power=power, threshold=float(data.threshold_at(junction)), slope=float(data.slope_at(junction)),
    )  # fmt: skip


class Most(NamedTuple):
    """The largest current that does a laser no harm at any temperature of the design, and why."""

    current: float  #: [A]
    reason: str
    by_power: bool  #: its light is the limit, not its current


def safe_current(request: LaserDriverRequest, bench: Bench, derivation: Derivation) -> Most:
    """The sheet's largest current, or that at which the brightest laser passes its power limit, if that is less."""
    data = request.source
    currents = np.linspace(0.0, data.current_max, CURRENTS + 1)[:, None]
    temperatures = np.linspace(bench.low("temperature"), bench.high("temperature"), TEMPERATURES)
    brightest: dict[str, float | Lanes] = {
        "temperature": temperatures,
        "D1.threshold_current": bench.low("D1.threshold_current"),
        "D1.slope_efficiency": bench.high("D1.slope_efficiency"),
        "D1.junction_to_case": bench.low("D1.junction_to_case"),
    }
    named = ("D1.turn_on_voltage", "D1.series_resistance", "D1.forward_position")
    brightest |= {name: bench.low(name) for name in named if name in bench.limits}
    point = settle(brightest, request, currents)
    power = np.asarray(point.power)
    passed = power > data.power_max
    limit = f"current_max of the laser, {write(data.current_max, 'A')}"
    if not passed.any():
        return Most(data.current_max, limit, by_power=False)
    first = np.where(passed.any(axis=0), passed.argmax(axis=0), CURRENTS)
    place = int(np.argmin(first))
    row = int(first[place])
    dazzling = {**brightest, "temperature": float(temperatures[place])}
    junction = float(np.asarray(point.junction_temperature)[row, place])
    for _ in range(REFINEMENTS):
        threshold = float(data.threshold_at(junction, bench.low("D1.threshold_current")))
        slope = float(data.slope_at(junction, bench.high("D1.slope_efficiency")))
        bright = laser.current_for_power(power=data.power_max, threshold=threshold, slope=slope)
        junction = float(settle(dazzling, request, bright).junction_temperature)
    at = write(float(temperatures[place]), "°C")
    current = derivation.compute(
        "largest current", laser.current_for_power,
        reason=f"brightest laser, {at}: the light reaches power_max {write(data.power_max, 'W')}",
        power=data.power_max,
        threshold=threshold, slope=slope,
    )  # fmt: skip
    reason = f"at {write(current, 'A')} the brightest laser reaches power_max {write(data.power_max, 'W')} at {at}"
    return Most(min(current, data.current_max), reason, by_power=True)


def junction_limit(request: LaserRequest) -> float:
    """Junction of a laser at its hottest case and largest current: beyond it the sheet says nothing. [K]"""
    data = request.source
    heat = data.current_max * float(data.forward_voltage_at(data.current_max))
    return data.case_max + data.junction_to_case.high * heat


def safety(request: LaserRequest, brightest: float) -> tuple[str, ...]:
    """Cautions to people and to the laser; advisory, local rules and a competent person come first."""
    wavelength = request.source.wavelength.nominal
    where = "fibre" if (request.signal.plane or request.source.plane) == "fibre" else "beam"
    unseen = "invisible, the eye does not turn away; " if wavelength >= INVISIBLE_FROM else ""
    look = "never look into a fibre end or port, cap what is open" if where == "fibre" else "never look into the beam"
    return (
        f"laser light, {write(wavelength, 'm')}, up to {write(brightest, 'W')}: {unseen}{look}; its class is for a"
        " competent person to find by the local rules",
        "the laser is sensitive to electrostatic discharge: short its pins until it is wired, work grounded",
    )


def over_temperature(request: LaserRequest) -> float:
    """A temperature 25 K beyond the hottest asked for. [K]"""
    return request.conditions.temperature.high + 25.0
