"""Data of an analog switch: one contact, closed or open."""

from __future__ import annotations

from typing import Annotated, ClassVar

from opto_ckt.parts.record import Assumed, Record, Sheet, Spread, Unit


class AnalogSwitchData(Record):
    """Analog switch or relay contact; figures hold at 25 °C and the supply of the design."""

    section: ClassVar[str] = "analog_switch"

    on_resistance: Annotated[Spread, Unit("Ω", "5 Ω"), Assumed(0.3, 0.3), Sheet("on resistance, RON")]
    off_capacitance: Annotated[
        Spread, Unit("F", "0.5 pF"), Assumed(0.2, 0.2), Sheet("capacitance across the open contact")
    ]
    terminal_capacitance: Annotated[
        Spread, Unit("F", "5 pF"), Assumed(0.2, 0.2), Sheet("source or drain capacitance, CS, CD, each to ground")
    ]
    leakage: Annotated[
        Spread, Unit("A", "10 pA", "not negative"), Assumed(1.0, 0.0), Sheet("source off leakage, IS(OFF)")
    ]
    leakage_doubling: Annotated[float, Unit("K", "10 K"), Sheet("rise that doubles the leakage")] = 10.0
    voltage_max: Annotated[float, Unit("V", "5.5 V"), Sheet("analog signal range, or contact voltage")]
    current_max: Annotated[float, Unit("A", "50 mA"), Sheet("continuous current through the contact")]
