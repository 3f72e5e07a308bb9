"""Data of a diode that protects, clamps or steers."""

from __future__ import annotations

from typing import Annotated, Any, ClassVar

import numpy as np

from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas.formula import Real
from opto_ckt.parts.forward import ForwardPoint, voltage_through
from opto_ckt.parts.record import Assumed, Points, Record, Sheet, Spread, Unit


class DiodeData(Record):
    """Diode; figures hold at 25 °C."""

    section: ClassVar[str] = "diode"

    forward: Annotated[tuple[ForwardPoint, ...], Points(1), Sheet("forward voltage, VF, at currents")]
    forward_voltage_temperature: Annotated[float, Unit("V/K", "-2 mV/K", "any"), Sheet("dVF/dT")] = 0.0
    reverse_voltage_max: Annotated[float, Unit("V", "30 V"), Sheet("absolute maximum reverse voltage, VRRM")]
    reverse_current: Annotated[
        Spread | None, Unit("A", "1 µA", "not negative"), Assumed(0.0, 4.0), Sheet("reverse leakage current, IR")
    ] = None
    capacitance: Annotated[Spread, Unit("F", "10 pF"), Assumed(0.2, 0.2), Sheet("diode capacitance, Cd, CT")]
    current_max: Annotated[float | None, Unit("A", "200 mA"), Sheet("absolute maximum forward current, IF")] = None
    pulse_current_max: Annotated[float | None, Unit("A", "2 A"), Sheet("peak forward current, IFRM, IFSM")] = None

    def forward_voltage_at(self, current: Real, temperature: Real = ROOM_TEMPERATURE, position: Real = 0.0) -> Any:
        """Forward voltage [V] at a current [A] and junction temperature [K]; `position` -1 (least) … 1 (greatest)."""
        rise = np.asarray(temperature) - ROOM_TEMPERATURE
        return voltage_through(self.forward, current, position) + self.forward_voltage_temperature * rise
