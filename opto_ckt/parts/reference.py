"""Data of a voltage reference."""

from __future__ import annotations

from typing import Annotated, ClassVar

from opto_ckt.parts.record import Record, Sheet, Spread, Unit


class ReferenceData(Record):
    """Voltage reference, shunt or series; figures hold at 25 °C."""

    section: ClassVar[str] = "reference"

    voltage: Annotated[float, Unit("V", "1.25 V"), Sheet("reference or output voltage, VREF, VZ")]
    tolerance: Annotated[float, Unit("1", "0.5 %", "not negative"), Sheet("initial accuracy, grade")]
    temperature_coefficient: Annotated[
        float, Unit("1/K", "50 ppm/K", "not negative"), Sheet("temperature coefficient, most")
    ] = 0.0
    noise: Annotated[Spread | None, Unit("V/√Hz", "100 nV/√Hz"), Sheet("noise voltage density, en")] = None
    output_resistance: Annotated[
        Spread | None, Unit("Ω", "0.3 Ω", "not negative"), Sheet("dynamic impedance, load regulation")
    ] = None
    operating_current: Annotated[
        float, Unit("A", "1 mA"), Sheet("shunt: cathode current; series: quiescent current")
    ] = 1e-3
