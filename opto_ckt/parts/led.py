"""Data of a light-emitting diode."""

from __future__ import annotations

from collections.abc import Callable, Iterator, Mapping
from types import MappingProxyType
from typing import Annotated, Any, ClassVar, Literal

import numpy as np

from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas.formula import Real
from opto_ckt.parts.curve import along
from opto_ckt.parts.forward import ForwardPoint, rising, voltage_through
from opto_ckt.parts.record import (
    Assumed,
    Check,
    Choice,
    Coefficient,
    EitherUnit,
    Finding,
    Points,
    Record,
    Sheet,
    Spread,
    Table,
    Unit,
)
from opto_ckt.units import write


class PowerPoint(Table):
    """Optical power at one current."""

    current: Annotated[float, Unit("A", "60 mA")]
    power: Annotated[Spread, Unit("W", "-15 dBm")]


def _less_than_fed(forward: tuple[ForwardPoint, ...], power: tuple[PowerPoint, ...]) -> Iterator[Finding]:
    for point in power:
        fed = point.current * float(voltage_through(forward, point.current))
        if point.power.nominal >= fed:
            yield Finding(
                ("power",),
                f"{write(point.power.nominal, 'W')} of light at {write(point.current, 'A')} is no less than the"
                f" {write(fed, 'W')} fed into the LED",
            )


class LedData(Record):
    """Light-emitting diode; figures hold at 25 °C, powers at `plane`."""

    section: ClassVar[str] = "led"

    wavelength: Annotated[Spread, Unit("m", "850 nm"), Sheet("peak wavelength, λp")]
    spectral_width: Annotated[Spread | None, Unit("m", "40 nm"), Sheet("spectral width, FWHM, Δλ")] = None
    forward: Annotated[tuple[ForwardPoint, ...], Points(1), Sheet("forward voltage, VF, at currents")]
    power: Annotated[tuple[PowerPoint, ...], Points(1), Sheet("output or coupled power, PO, PT, at currents")]
    plane: Annotated[Literal["facet", "fibre"], Sheet("total power from the chip, or power in a fibre")]
    lifetime: Annotated[Spread | None, Unit("s", "3 ns"), Assumed(0.2, 0.2), Sheet("carrier lifetime, τ")] = None
    optical_rise_time: Annotated[
        Spread | None, Unit("s", "4 ns"), Assumed(0.2, 0.2), Sheet("rise time of the light, tr")
    ] = None
    capacitance: Annotated[Spread, Unit("F", "55 pF"), Assumed(0.2, 0.2), Sheet("diode capacitance, CT")]
    current_max: Annotated[float, Unit("A", "100 mA"), Sheet("absolute maximum forward current, steady")]
    pulse_current_max: Annotated[float | None, Unit("A", "200 mA"), Sheet("absolute maximum peak forward current")] = (
        None
    )
    reverse_voltage_max: Annotated[float, Unit("V", "1.8 V"), Sheet("absolute maximum reverse voltage")]
    power_temperature: Annotated[
        Coefficient | None,
        EitherUnit(Unit("1/K", "-0.5 %/K", "any"), Unit("dB/K", "-0.02 dB/K", "any")),
        Sheet("temperature coefficient of the power"),
    ] = None
    forward_voltage_temperature: Annotated[float, Unit("V/K", "-2 mV/K", "any"), Sheet("dVF/dT")] = 0.0
    wavelength_temperature: Annotated[float | None, Unit("m/K", "0.3 nm/K", "any"), Sheet("dλ/dT")] = None
    junction_to_ambient: Annotated[Spread, Unit("K/W", "300 K/W"), Sheet("thermal resistance, junction to ambient")]
    junction_max: Annotated[float, Unit("°C", "110 °C", "any"), Sheet("maximum junction temperature")]

    checks = (Check(("forward",), rising), Check(("forward", "power"), _less_than_fed))
    choices = (Choice("the speed", (("lifetime",), ("optical_rise_time",))),)

    def forward_voltage_at(self, current: Real, temperature: Real = ROOM_TEMPERATURE, position: Real = 0.0) -> Any:
        """Forward voltage [V] at a current [A] and junction temperature [K]; `position` -1 (least) … 1 (greatest)."""
        rise = np.asarray(temperature) - ROOM_TEMPERATURE
        return voltage_through(self.forward, current, position) + self.forward_voltage_temperature * rise

    def power_at(self, current: Real, temperature: Real = ROOM_TEMPERATURE, position: Real = 0.0) -> Any:
        """Optical power [W] at a current [A] and junction temperature [K]; `position` -1 (least) … 1 (greatest).

        Straight lines from zero through the listed points, on beyond the last; exponential in the temperature.
        """
        at = [0.0, *(point.current for point in self.power)]
        low, typ, high = (
            along(current, at=at, values=[0.0, *(float(getattr(point.power, side)) for point in self.power)])
            for side in ("low", "nominal", "high")
        )
        place = np.asarray(position, dtype=float)
        power = typ + np.maximum(place, 0.0) * (high - typ) - np.minimum(place, 0.0) * (low - typ)
        if self.power_temperature is None:
            return np.maximum(power, 0.0) + 0.0 * np.asarray(temperature)
        rise = np.asarray(temperature) - ROOM_TEMPERATURE
        return np.maximum(power, 0.0) * POWERS[self.power_temperature.unit](self.power_temperature.value * rise)


POWERS: Mapping[str, Callable[[Any], Any]] = MappingProxyType(
    {"1/K": np.exp, "dB/K": lambda change: 10 ** (change / 10)}
)
