"""Current that the aged, hot laser needs, what a cold one stands, and the clamp between the two."""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np

from opto_ckt.circuit import Bench
from opto_ckt.circuits.drivers.laser import Most, forward, safe_current, settle
from opto_ckt.circuits.drivers.laser_power.given import tracking_error
from opto_ckt.circuits.drivers.laser_power.monitor import sheet_share, wanted_point
from opto_ckt.circuits.drivers.laser_power.trim import coarseness
from opto_ckt.circuits.drivers.side import side_of
from opto_ckt.circuits.drivers.slack import offset_error
from opto_ckt.circuits.drivers.spread import resistor_spread
from opto_ckt.derivation import Derivation
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import laser
from opto_ckt.limits import Lanes
from opto_ckt.request import LaserPowerRequest
from opto_ckt.units import percent, write

TEMPERATURES = 9  #: tried between the ends of the range
SPARE = 0.03  #: of the clamp beyond the current needed where no clamp_margin is asked for; common practice
SCANS, STEPS = 3, 101  #: of a range of powers or temperatures


class Need(NamedTuple):
    """The most current that the power ever asks for."""

    current: float  #: [A]
    threshold: float  #: in it [A]
    temperature: float  #: of the case or air, where it is needed [K]


class Clamp(NamedTuple):
    """Share of the integrator's output that sets the current source, from the least to the most that do."""

    least: float
    most: float
    safe: Most


def most_power(request: LaserPowerRequest, bench: Bench) -> float:
    """The most that a trimmed unit ever gives, at the plane of the laser's sheet. [W]"""
    power = request.signal.power
    asked = 0.0 if power is None else power.high
    drift = bench.high("U2.drift") + bench.high("set.drift") + coarseness(request, bench)
    return asked / sheet_share(request, bench, "low") * 10 ** (tracking_error(request) / 10) * (1 + drift)


def _worn(request: LaserPowerRequest, bench: Bench, temperature: Lanes | float) -> dict[str, float | Lanes]:
    """The aged laser that needs most current, at temperatures."""
    high = ("threshold_current", "turn_on_voltage", "series_resistance", "forward_position", "junction_to_case")
    values: dict[str, float | Lanes] = {f"D1.{name}": bench.high(f"D1.{name}") for name in high
                                        if f"D1.{name}" in bench.limits}  # fmt: skip
    return {**values, "D1.slope_efficiency": bench.low("D1.slope_efficiency"), "temperature": temperature}


def _point(request: LaserPowerRequest, bench: Bench, temperature: Lanes, power: float | Lanes) -> tuple[Lanes, Lanes]:
    """Current [A], nan where the laser runs away, and junction [K]."""
    values, current = _worn(request, bench, temperature), np.full_like(temperature, 20e-3)
    for _ in range(4):
        line = forward(values, request, np.nan_to_num(current, nan=20e-3))
        point = wanted_point(values, request, line, np.asarray(power))
        current = np.asarray(point.current)
    return current, np.asarray(point.junction_temperature)


def needed(request: LaserPowerRequest, bench: Bench, derivation: Derivation) -> Need:
    """The aged laser at the temperature at which it needs most.

    Raises
    ------
    InfeasibleError : it runs away.
    """
    temperatures = np.linspace(bench.low("temperature"), bench.high("temperature"), TEMPERATURES)
    power = most_power(request, bench)
    current, junction = _point(request, bench, temperatures, power)
    if np.isnan(current).any():
        raise _runs_away(request, bench, temperatures, power, current)
    worst = int(np.argmax(current))
    data = request.source
    threshold = float(data.threshold_at(junction[worst], bench.high("D1.threshold_current")))
    slope = float(data.slope_at(junction[worst], bench.low("D1.slope_efficiency")))
    found = derivation.compute(
        "current needed", laser.current_for_power,
        reason=f"aged laser of least slope at {write(float(temperatures[worst]), '°C')}, junction"
        f" {write(float(junction[worst]), '°C')}, {write(power, 'W')} with tracking error and drift",
        power=power, threshold=threshold, slope=slope,
    )  # fmt: skip
    return Need(float(found), threshold, float(temperatures[worst]))


def most_settled(request: LaserPowerRequest, bench: Bench, temperature: float, ceiling: float) -> float:
    """The most power, up to a ceiling, at which the aged laser settles at a temperature; beyond, it runs away. [W]"""
    return _last(lambda power: _point(request, bench, np.full_like(power, temperature), power)[0], 0.0, ceiling)


def _last(settled: Callable[[Lanes], Lanes], low: float, high: float) -> float:
    """The last of a range that is still settled, nan being what is not; by ever finer scans."""
    for _ in range(SCANS):
        tried = np.linspace(low, high, STEPS)
        good = np.isfinite(settled(tried))
        if good.all():
            return high
        last = max(int(np.argmin(good)) - 1, 0)
        low, high = float(tried[last]), float(tried[last + 1])
    return low


def _runs_away(
    request: LaserPowerRequest, bench: Bench, temperatures: Lanes, power: float, current: Lanes
) -> InfeasibleError:
    """Says so, with the largest power and the hottest place at which it does not."""
    where, hottest = float(temperatures[np.isnan(current)][0]), float(temperatures[-1])
    least = most_settled(request, bench, hottest, power)
    coldest = _last(lambda at: _point(request, bench, at, power)[0], where - 150.0, where)
    asked = request.signal.power
    nominal = 0.0 if asked is None else asked.nominal
    remedies = [
        f"signal.power ≤ {write(nominal * least / power, 'W')}",
        f"conditions.temperature.max ≤ {write(coldest, '°C')}",
        "conditions.sink_resistance lower, or a laser with less junction_to_case",
    ]
    return InfeasibleError(
        f"thermal runaway: from {write(where, '°C')} on the aged laser of least slope does not settle at"
        f" {write(power, 'W')}; at {write(hottest, '°C')} it does up to {write(least, 'W')}",
        remedies if least > 0 else remedies[1:],
    )


def clamp(request: LaserPowerRequest, bench: Bench, derivation: Derivation, need: Need) -> Most:
    """What the coldest, brightest laser stands; refused where no clamp lets the one through and spares the other.

    Raises
    ------
    InfeasibleError : a clamp that suits the hot, aged laser lets a cold one past its limit.
    """
    safe = safe_current(request, bench, derivation)
    most = need.current * (1 + spare(request)) * spread(request, bench)
    if most <= safe.current:
        return safe
    cold = bench.low("temperature")
    reached = brightest(request, bench, most, cold)
    lessened = (safe.current / most * need.current - need.threshold) / (need.current - need.threshold)
    power = request.signal.power
    nominal = 0.0 if power is None else power.nominal
    remedies = [f"signal.power ≤ {write(nominal * lessened, 'W')}"] if lessened > 0 else []
    raise InfeasibleError(
        f"a clamp that lets the aged laser have its {write(need.current, 'A')} at {write(need.temperature, '°C')} lets"
        f" up to {write(most, 'A')} flow with its own spread, with which a bright laser at {write(cold, '°C')} gives"
        f" {write(reached, 'W')}; {safe.reason}",
        [
            *remedies,
            "conditions.temperature closer together",
            f"a laser whose {'power_max' if safe.by_power else 'current_max'} is higher, or its threshold_current and"
            " slope_efficiency in narrower limits",
            "less of conditions.ageing",
            "a clamp that follows the temperature, by a thermistor, which this circuit does not have",
        ],
    )


def brightest(request: LaserPowerRequest, bench: Bench, current: float, temperature: float) -> float:
    """Power of the brightest laser at a current and a temperature, at the plane of the sheet. [W]"""
    low = ("threshold_current", "turn_on_voltage", "series_resistance", "forward_position", "junction_to_case")
    values: dict[str, float | Lanes] = {f"D1.{name}": bench.low(f"D1.{name}") for name in low
                                        if f"D1.{name}" in bench.limits}  # fmt: skip
    values |= {"D1.slope_efficiency": bench.high("D1.slope_efficiency"), "temperature": temperature}
    return float(settle(values, request, current).power)


def spare(request: LaserPowerRequest) -> float:
    """What the clamp is to leave beyond the current needed. [1]"""
    required = request.require.get("clamp_margin")
    return SPARE if required is None or required.min is None else required.min


def swing(request: LaserPowerRequest, bench: Bench, need: Need | None = None) -> tuple[float, float]:
    """Least and most voltage of the integrator at its end, counted from the near rail. [V]"""
    name = "U3.swing_to_positive" if side_of(request) == "low" else "U3.swing_to_negative"
    drop = bench.high("L1.resistance") * (0.0 if need is None else need.current)
    return (
        bench.low("supply.positive") - drop - bench.high(name),
        bench.high("supply.positive") - bench.low(name),
    )


def divided(request: LaserPowerRequest) -> float:
    """Spread of sense resistor and divider, all against it. [1]"""
    return 3 * resistor_spread(request)


def spread(request: LaserPowerRequest, bench: Bench) -> float:
    """Most over least current that one clamp lets flow; the op amp's offset apart. [1]"""
    low, high = swing(request, bench)
    return high / low * (1 + divided(request)) / (1 - divided(request))


def shares(request: LaserPowerRequest, bench: Bench, need: Need, safe: Most, sense: float) -> tuple[float, float]:
    """Least and most share of the integrator's output at the current source, its sense resistance given.

    Raises
    ------
    InfeasibleError : offset and drop of the filter leave none.
    """
    low, high = swing(request, bench, need)
    offset = offset_error(request, bench)
    least = (need.current * (1 + spare(request)) * sense + offset) / (low * (1 - divided(request)))
    most = (safe.current * sense - offset) / (high * (1 + divided(request)))
    if least > most:
        raise InfeasibleError(
            f"the clamp would have to let {write(need.current, 'A')} through and stop {write(safe.current, 'A')}, with"
            f" {percent(spread(request, bench) - 1)} of spread and {write(offset / sense, 'A')} of offset",
            ["an op amp with less offset_voltage", "a lower conditions.supply.tolerance", "less signal.power"],
        )
    return least, most
