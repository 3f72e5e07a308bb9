"""What is asked of an LED driver."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, ClassVar, Literal

from pydantic import Field

from opto_ckt.parts.led import LedData
from opto_ckt.parts.logic import LogicOutputData
from opto_ckt.parts.opamp import OpAmpData
from opto_ckt.parts.record import Check, Finding, Unit
from opto_ckt.parts.reference import ReferenceData
from opto_ckt.parts.transistor import BipolarData, MosfetData
from opto_ckt.request.driver import DriverConditions, DriveSignal
from opto_ckt.request.request import Request
from opto_ckt.request.tables import Band
from opto_ckt.units import percent, write


class LedSignal(DriveSignal):
    """What the LED has to do, how it is lit, what hastens it; each circuit reads what concerns it."""

    drive: Literal["source", "sink"] = "sink"  #: current out of the logic output while high, or into it while low
    pre_bias: Annotated[float | None, Unit("A", "0.5 mA")] = None  #: through the LED while off: no delay, less contrast
    sweep_out: Annotated[float | None, Unit("A", "5 mA")] = None  #: drawn out of the LED by a resistor across it
    speed_up: bool = False  #: a capacitor across the base resistor
    band: Band | None = None  #: of an analog signal
    source_resistance: Annotated[float, Unit("Ω", "50 Ω")] = 50.0  #: of what drives an analog input


def _in_reach(
    source: LedData, signal: LedSignal, conditions: DriverConditions, logic_output: LogicOutputData | None
) -> Iterator[Finding]:
    """The least voltage there is must pass the forward voltage."""
    supply = conditions.supply
    least = supply.positive * (1 - supply.tolerance)
    key: tuple[str, ...] = ("conditions", "supply", "positive")
    told = f"{write(least, 'V')}, after its tolerance of {percent(supply.tolerance)},"
    if logic_output is not None and signal.drive == "source":
        least, key = logic_output.high.low, ("logic_output", "high")
        told = f"{write(least, 'V')} at the least"
    current = source.forward[0].current if signal.current is None else signal.current.nominal
    voltage = float(source.forward_voltage_at(current))
    if voltage >= least:
        yield Finding(
            key, f"{told} is below the forward voltage of the LED, {write(voltage, 'V')} at {write(current, 'A')}"
        )


def _within_source(source: LedData, signal: LedSignal) -> Iterator[Finding]:
    if signal.current is not None and signal.current.high > source.current_max:
        limit = write(source.current_max, "A")
        yield Finding(
            ("signal", "current"), f"{write(signal.current.high, 'A')} is above current_max {limit} of the LED"
        )
    if signal.plane is not None and signal.plane != source.plane:
        yield Finding(
            ("signal", "plane"), f"the LED states its power at the {source.plane}; at the {signal.plane} it is unknown"
        )


class LedDriverRequest(Request):
    """A design file of an LED driver; tables that one of the circuits does not use are left alone by it."""

    source: LedData
    logic_output: LogicOutputData | None = None
    transistor: Annotated[BipolarData | MosfetData | None, Field(discriminator="kind")] = None
    amplifier: OpAmpData | None = None
    reference: ReferenceData | None = None
    signal: LedSignal
    conditions: DriverConditions

    checks: ClassVar[tuple[Check, ...]] = (
        Check(("source", "signal", "conditions", "logic_output"), _in_reach),
        Check(("source", "signal"), _within_source),
    )
