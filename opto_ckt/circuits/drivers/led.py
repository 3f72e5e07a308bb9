"""What every LED driver shares: limits of the LED, its heat, its light and speed at a current, what to warn of."""

from __future__ import annotations

from functools import cache

import numpy as np

from opto_ckt.circuits.drivers.laser import INVISIBLE_FROM
from opto_ckt.circuits.drivers.root import falling_root
from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE, ROOM_TEMPERATURE
from opto_ckt.formulas.diode import DiodeLaw, fit
from opto_ckt.formulas.formula import Real
from opto_ckt.limits import Lanes, Limit, Values
from opto_ckt.parts.forward import ForwardPoint
from opto_ckt.parts.led import LedData
from opto_ckt.request import LedDriverRequest
from opto_ckt.topology import SHORT
from opto_ckt.units import write

PASSES = 4  #: of voltage and heat, each smaller than the one before by R_th·I·dV/dT, some hundredths
HALVINGS = 46  #: of the interval that holds a current: to a part in 10^13 of it
STEP = 1e-3  #: of the current, either way, over which the slope of the light is taken
FAINT = 1e-9  #: current that stands for none where a junction's resistance is asked for [A]
RISE = float(np.log(9))  #: 10-90 % of one pole, over its time constant
HOTTEST = 2000.0  #: no junction is taken to be hotter, whatever a fault drives through it [K]
READ = frozenset({"capacitance", "lifetime", "junction_to_ambient"})


def led_limits(request: LedDriverRequest) -> dict[str, Limit]:
    """Limits of what the sheet states as a curve, ageing in them; what nothing here reads is held still."""
    data, limits = request.source, request.limits("source")
    found = {
        f"D1.{name}": Limit(limit.nominal, limit.nominal, limit.nominal)
        for name, limit in limits.items()
        if name not in READ
    }
    if data.lifetime is None:
        rise = Limit(*limits["optical_rise_time"])
        found["D1.lifetime"] = Limit(rise.nominal / RISE, rise.low / RISE, rise.high / RISE, rise.assumed)
    found["D1.forward_position"] = _position(any(_spread(point.voltage) for point in data.forward))
    found["D1.power_position"] = _position(any(_spread(point.power) for point in data.power))
    aged = 1 + request.conditions.ageing.slope
    found["D1.output"] = Limit(1.0, min(1.0, aged), max(1.0, aged))
    return found


def _spread(figure: object) -> bool:
    return getattr(figure, "low", None) != getattr(figure, "high", None)


def _position(spread: bool) -> Limit:
    return Limit(0.0, -1.0, 1.0) if spread else Limit(0.0, 0.0, 0.0)


def heated(values: Values, request: LedDriverRequest, current: Real) -> tuple[Lanes, Lanes]:
    """Forward voltage and junction temperature at a current, each from the other. [V, K]

    The light that leaves takes its share of the heat along where the sheet states all of it, at the facet.
    """
    data, ambient = request.source, np.asarray(values["temperature"], dtype=float)
    cold = np.asarray(data.forward_voltage_at(current, ROOM_TEMPERATURE, values["D1.forward_position"]))
    junction = ambient
    for _ in range(PASSES):
        voltage = np.maximum(cold + data.forward_voltage_temperature * (junction - ROOM_TEMPERATURE), 0.0)
        leaving = emitted(values, request, current, junction) if data.plane == "facet" else 0.0
        heat = np.maximum(current * voltage - leaving, 0.0)
        junction = np.minimum(ambient + values["D1.junction_to_ambient"] * heat, HOTTEST)
    return np.asarray(voltage), np.asarray(junction)


def emitted(values: Values, request: LedDriverRequest, current: Real, junction: Real) -> Lanes:
    """Light at the plane of the sheet, aged. [W]"""
    return np.asarray(
        request.source.power_at(current, junction, values["D1.power_position"]) * values.get("D1.output", 1.0)
    )


def current_through(values: Values, request: LedDriverRequest, voltage: Real, resistance: Real) -> Lanes:
    """Current that a voltage drives through a resistance and the LED; the LED's voltage is that of a warm junction. [A]

    ``D1.short`` 1: the LED is bridged; ``D1.open`` 1: no current.
    """
    bridged = np.asarray(values.get("D1.short", 0.0)) > 0
    top = np.maximum(np.asarray(voltage, dtype=float), 0.0) / np.maximum(resistance, SHORT)

    def left(current: Lanes) -> Lanes:
        drop = np.where(bridged, 0.0, heated(values, request, current)[0])
        return np.asarray(voltage - current * resistance - drop)

    current = falling_root(left, np.zeros_like(top), top)
    return np.asarray(np.where(np.asarray(values.get("D1.open", 0.0)) > 0, 0.0, current))


def lit(values: Values, request: LedDriverRequest, current: Lanes) -> dict[str, float | Lanes]:
    """What the LED is at a current: voltage, heat, light, and the small-signal figures of its junction."""
    through = np.where(np.asarray(values.get("D1.short", 0.0)) > 0, 0.0, current)
    voltage, junction = heated(values, request, through)
    power = emitted(values, request, through, junction)
    law = law_of(request.source)
    step = STEP * np.maximum(through, FAINT)
    above, below = (emitted(values, request, through + sign * step, junction) for sign in (1, -1))
    series = np.minimum(law.series_resistance, 0.5 * voltage / np.maximum(through, FAINT))
    thermal = law.emission * BOLTZMANN * junction / ELEMENTARY_CHARGE
    return {
        "D1.current": through,
        "D1.forward_voltage": voltage,
        "D1.junction_temperature": junction,
        "D1.heat": through * voltage - (power if request.source.plane == "facet" else 0.0),
        "D1.emitted_power": power,
        "D1.slope_efficiency": (above - below) / (2 * step),
        "D1.series_resistance": np.maximum(series, SHORT),
        "D1.junction_resistance": thermal / np.maximum(through, FAINT),
    }


def law_of(data: LedData) -> DiodeLaw:
    """Diode law through the typical points of a sheet; its slope is the dynamic resistance."""
    return _law(data.forward)


@cache
def _law(points: tuple[ForwardPoint, ...]) -> DiodeLaw:
    return fit(
        currents=[point.current for point in points],
        voltages=[float(point.voltage.nominal) for point in points],
        temperature=ROOM_TEMPERATURE,
    )


def nominal(request: LedDriverRequest, temperature: float | None = None, *, forward: float = 0.0) -> dict[str, float]:
    """Values of a typical LED at a temperature, the typical one of the design if None."""
    conditions = request.conditions
    return {
        "temperature": conditions.temperature.nominal if temperature is None else temperature,
        "D1.forward_position": forward,
        "D1.power_position": 0.0,
        "D1.junction_to_ambient": request.source.junction_to_ambient.nominal,
    }


def asked_current(request: LedDriverRequest) -> float:
    """Current asked for, or that which gives the power asked for in a typical LED at the typical temperature. [A]"""
    if request.signal.current is not None:
        return request.signal.current.nominal
    wanted = 0.0 if request.signal.power is None else request.signal.power.nominal
    values = nominal(request)
    low, high = 0.0, request.source.current_max
    for _ in range(HALVINGS):
        middle = (low + high) / 2
        _, junction = heated(values, request, middle)
        enough = float(emitted(values, request, middle, junction)) >= wanted
        low, high = (low, middle) if enough else (middle, high)
    return high


def safety(request: LedDriverRequest, brightest: float) -> tuple[str, ...]:
    """Cautions to people and to the LED; advisory, local rules and a competent person come first."""
    wavelength = request.source.wavelength.nominal
    unseen = "invisible, the eye does not turn away; " if wavelength >= INVISIBLE_FROM else ""
    return (
        f"light of {write(wavelength, 'm')}, up to {write(brightest, 'W')} at the {request.source.plane}: {unseen}do"
        " not look into a bright LED or a fibre end; whether it harms is for a competent person to find by the local"
        " rules",
    )
