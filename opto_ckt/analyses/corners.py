"""Corners, the only place: what varies and between which limits; the search over them is in `extremes`."""

from __future__ import annotations

from collections.abc import Iterable
from typing import Any

from opto_ckt.analyses.extremes import Extreme, extremes
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.limits import Limit, Tolerance
from opto_ckt.preferred import DIELECTRICS, Dielectric
from opto_ckt.topology import Element, Topology

__all__ = ["Extreme", "extremes", "limits_of", "tolerances_of"]

SMALL_CAPACITOR = 10e-12  #: below it makers state the tolerance in farads [F]
AGEING_DECADES = 2.0  #: from the 1000 h after which makers measure to ten years; common practice, from memory


def limits_of(topology: Topology, request: Any) -> dict[str, Limit]:
    """Limits of every figure of every part, of supply and temperature, and of the light where it is received.

    A figure that the sheet does not give gets the value that stands for it; the circuit adds what no sheet gives, and
    what its sheet states as a curve.
    """
    limits: dict[str, Limit] = {}
    for element in topology:
        given = request.limits(element.table) if element.table else {}
        absent = {name: (value, value, value) for name, value in element.absent.items() if name not in given}
        limits |= {element.value_name(name): Limit(*limit) for name, limit in {**given, **absent}.items()}
    return limits | _surroundings(request.conditions) | _light(request)


def _surroundings(conditions: Any) -> dict[str, Limit]:
    temperature, supply = conditions.temperature, conditions.supply
    rails = {"supply.positive": supply.positive, "supply.negative": supply.negative}
    return {
        "temperature": Limit(temperature.nominal, temperature.low, temperature.high),
        **{
            name: Limit(volts, volts - abs(volts) * supply.tolerance, volts + abs(volts) * supply.tolerance)
            for name, volts in rails.items()
        },
    }


def _light(request: Any) -> dict[str, Limit]:
    """Of a receiver: average power from dark, or the least stated, to most; background from none to most."""
    ambient = getattr(request, "ambient_current", None)
    if ambient is None:
        return {}
    power = request.signal.power
    return {
        "signal.power": Limit(power.nominal, 0.0 if power.min is None else power.min, power.high),
        "signal.ambient": Limit(ambient.nominal, min(ambient.low, 0.0), ambient.high),
    }


def tolerances_of(elements: Iterable[Element], request: Any) -> dict[str, Tolerance]:
    """What each fitted part may deviate by, from the entry of ``[preferred]`` that it is chosen from.

    Temperature counts from 25 °C to the farther end of the ambient range. Parts bought by name are left out.
    """
    temperature = request.conditions.temperature
    span = (temperature.low, temperature.high)
    return {
        element.ref: _tolerance(getattr(request.preferred, element.chosen_from), span)
        for element in elements
        if element.chosen_from
    }


def _tolerance(stock: Any, span: tuple[float, float]) -> Tolerance:
    """Tolerance, temperature coefficient or dielectric, ageing: as far as the entry states them."""
    farthest = max(abs(end - ROOM_TEMPERATURE) for end in span)
    coefficient = getattr(stock, "temperature_coefficient", 0.0)
    low, high, assumed = -coefficient * farthest, coefficient * farthest, False
    if hasattr(stock, "dielectric"):
        dielectric = DIELECTRICS[stock.dielectric]
        low, high = _dielectric_drift(dielectric, span)
        assumed = span[0] < dielectric.temperature_low or span[1] > dielectric.temperature_high
    absolute = getattr(stock, "tolerance_below_10pF", 0.0)
    return Tolerance(
        low=-stock.tolerance,
        high=stock.tolerance,
        absolute=absolute,
        absolute_below=SMALL_CAPACITOR if absolute else 0.0,
        assumed=assumed,
        drift_low=low,
        drift_high=high,
    )


def _dielectric_drift(dielectric: Dielectric, span: tuple[float, float]) -> tuple[float, float]:
    """Relative change from 25 °C over a range of temperatures, and by ageing: of class 2 what its code allows."""
    coefficient, spread = dielectric.temperature_coefficient, dielectric.temperature_coefficient_tolerance
    changes = [dielectric.change_low, dielectric.change_high]
    if coefficient is not None and spread is not None:
        slopes = (coefficient - spread, coefficient + spread)
        changes = [slope * (end - ROOM_TEMPERATURE) for slope in slopes for end in span]
    most = dielectric.ageing[1] if dielectric.ageing else 0.0
    return min(0.0, *changes) - AGEING_DECADES * most, max(0.0, *changes)
