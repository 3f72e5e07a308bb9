"""Data of inductors and thermistors; resistors and capacitors are chosen from series instead."""

from __future__ import annotations

from typing import Annotated, Any, ClassVar

import numpy as np

from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas.formula import Real
from opto_ckt.parts.curve import along
from opto_ckt.parts.record import Assumed, Choice, Points, Record, Sheet, Spread, Table, Unit


class InductorData(Record):
    """Inductor; figures hold at 25 °C."""

    section: ClassVar[str] = "inductor"

    inductance: Annotated[float, Unit("H", "10 µH"), Sheet("inductance, L")]
    tolerance: Annotated[float, Unit("1", "10 %", "not negative"), Sheet("tolerance")] = 0.1
    resistance: Annotated[Spread, Unit("Ω", "0.5 Ω"), Assumed(0.2, 0.2), Sheet("dc resistance, DCR")]
    self_resonance: Annotated[Spread, Unit("Hz", "30 MHz"), Assumed(0.2, 0.2), Sheet("self-resonant frequency, SRF")]
    saturation_current: Annotated[float, Unit("A", "200 mA"), Sheet("saturation current, Isat")]


class ResistancePoint(Table):
    """Resistance at one temperature."""

    temperature: Annotated[float, Unit("°C", "25 °C", "any")]
    resistance: Annotated[Spread, Unit("Ω", "10 kΩ")]


class ThermistorData(Record):
    """Resistor that tells the temperature."""

    section: ClassVar[str] = "thermistor"

    resistance: Annotated[Spread | None, Unit("Ω", "10 kΩ"), Sheet("resistance at 25 °C, R25")] = None
    beta: Annotated[float | None, Unit("K", "3950 K", "any"), Sheet("B value, B25/85")] = None
    resistance_points: Annotated[
        tuple[ResistancePoint, ...] | None, Points(2), Sheet("table of resistance against temperature")
    ] = None
    tolerance: Annotated[float, Unit("1", "1 %", "not negative"), Sheet("tolerance at 25 °C")] = 0.05

    choices = (Choice("the resistance", (("resistance", "beta"), ("resistance_points",))),)

    def resistance_at(self, temperature: Real) -> Any:
        """Resistance [Ω] at a temperature [K]: R25 exp(B (1/T - 1/T25)); or through points, log R linear in 1/T."""
        inverse = 1 / np.asarray(temperature, dtype=float)
        if self.resistance_points is not None:
            points = self.resistance_points[::-1]
            at = [1 / point.temperature for point in points]
            return np.exp(along(inverse, at=at, values=[float(np.log(point.resistance.nominal)) for point in points]))
        if self.resistance is None or self.beta is None:
            raise ValueError("the record states no resistance")
        return self.resistance.nominal * np.exp(self.beta * (inverse - 1 / ROOM_TEMPERATURE))
