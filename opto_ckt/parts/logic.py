"""Data of a logic output that drives a source or an input."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, ClassVar

from opto_ckt.parts.record import Assumed, Check, Finding, Record, Sheet, Spread, Unit
from opto_ckt.units import write


def _high_above_low(high: Spread, low: Spread) -> Iterator[Finding]:
    if high.nominal <= low.nominal:
        yield Finding(("high",), f"high {write(high.nominal, 'V')} is not above low {write(low.nominal, 'V')}")


class LogicOutputData(Record):
    """Push-pull output without load; figures hold at 25 °C and the supply under `conditions`."""

    section: ClassVar[str] = "logic_output"

    high: Annotated[Spread, Unit("V", "3.3 V", "any"), Assumed(0.05, 0.05), Sheet("high-level output, VOH, no load")]
    low: Annotated[Spread, Unit("V", "0 V", "any"), Sheet("low-level output, VOL, no load")]
    source_resistance: Annotated[Spread, Unit("Ω", "25 Ω"), Assumed(0.5, 0.5), Sheet("(VCC - VOH) / IOH")]
    sink_resistance: Annotated[Spread, Unit("Ω", "20 Ω"), Assumed(0.5, 0.5), Sheet("VOL / IOL")]
    current_max: Annotated[float | None, Unit("A", "25 mA"), Sheet("absolute maximum output current")] = None
    rise_time: Annotated[Spread | None, Unit("s", "2 ns"), Assumed(0.3, 0.3), Sheet("output transition time, tr")] = (
        None
    )

    checks = (Check(("high", "low"), _high_above_low),)
