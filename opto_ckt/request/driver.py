"""What is asked of a driver: source, transistor, amplifier, reference, the current or the light."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, ClassVar, Literal

from pydantic import Field

from opto_ckt.parts.diode import DiodeData
from opto_ckt.parts.fibre import FibreData
from opto_ckt.parts.laser import LaserData
from opto_ckt.parts.opamp import OpAmpData
from opto_ckt.parts.record import Check, Choice, Finding, ReadBy, Spread, Table, Unit, Whole
from opto_ckt.parts.reference import ReferenceData
from opto_ckt.parts.transistor import BipolarData, MosfetData
from opto_ckt.request.receiver import amplifier_supplied
from opto_ckt.request.request import Request
from opto_ckt.request.tables import Conditions, read_temperature
from opto_ckt.units import percent, write


def _contrast(ratio: float | None) -> Iterator[Finding]:
    if ratio is not None and ratio <= 1:
        yield Finding(
            ("extinction_ratio",), f"{ratio:g} leaves no signal; a ratio above 1 (0 dB) is needed, such as '9 dB'"
        )


def _shares(mark_density: float, modulation_index: float | None) -> Iterator[Finding]:
    if not 0 < mark_density < 1:
        yield Finding(("mark_density",), f"{percent(mark_density)} is not between 0 and 1; half of the bits is 0.5")
    if modulation_index is not None and modulation_index > 1:
        yield Finding(
            ("modulation_index",), f"{percent(modulation_index)} is above 1; the current would have to reverse"
        )


class DriveSignal(Table):
    """What the source has to do: a current through it, or an average optical power at a plane."""

    current: Annotated[Spread | None, Unit("A", "25 mA")] = None
    power: Annotated[Spread | None, Unit("W", "1 mW")] = None
    plane: Literal["facet", "fibre"] | None = None  #: of `power`; left out, that of the source's sheet
    bit_rate: Annotated[float | None, Unit("bit/s", "10 Mbit/s")] = None
    extinction_ratio: Annotated[float | None, Unit("W/W", "9 dB")] = None  #: one level over zero level
    mark_density: Annotated[float, Unit("1", "0.5", "not negative")] = 0.5  #: share of ones
    run_length: Annotated[int, Whole(1)] = 72  #: equal bits in a row; 72 is that of scrambled telecom signals
    modulation_index: Annotated[float | None, Unit("1", "0.5")] = None  #: peak over standing current, analog
    enable: bool = False  #: whether a logic input switches the source
    startup_time: Annotated[float, Unit("s", "10 ms")] = 10e-3  #: to 95 % of the current after the supply is there

    choices = (Choice("what the source has to do", (("current",), ("power",))),)
    checks = (Check(("extinction_ratio",), _contrast), Check(("mark_density", "modulation_index"), _shares))


class Ageing(Table):
    """Change of the source over its life, relative."""

    threshold: Annotated[float, Unit("1", "50 %", "not negative")] = 0.0
    slope: Annotated[float, Unit("1", "-10 %", "any")] = 0.0


class DriverConditions(Conditions):
    """Where a driver runs, and how its heat leaves."""

    sink_resistance: Annotated[float, Unit("K/W", "20 K/W", "not negative")] = (
        0.0  #: case of the source to what `temperature` is of
    )
    temperature_of: Literal["air", "case"] = "air"
    ageing: Ageing = Field(default_factory=Ageing.model_construct)


def _cooled(air: Spread | None, temperature_of: str, sink_resistance: float) -> Iterator[Finding]:
    if air is None:
        return
    if temperature_of != "case":
        yield Finding(("air",), 'is the air around a case that is held at `temperature`: add temperature_of = "case"')
    if sink_resistance == 0.0:
        yield Finding(("air",), "needs sink_resistance, from the case to the air past the cooler, such as '100 K/W'")


class LaserConditions(DriverConditions):
    """Where a laser driver runs; the laser's case may be held at `temperature` by a cooler in air of its own."""

    air: Annotated[Spread | None, ReadBy(read_temperature)] = None  #: around the cooled case, and around the driver

    checks = (Check(("air", "temperature_of", "sink_resistance"), _cooled),)


def _in_reach(source: LaserData, signal: DriveSignal, conditions: DriverConditions) -> Iterator[Finding]:
    supply = conditions.supply
    least = supply.positive * (1 - supply.tolerance)
    current = source.threshold_at(conditions.temperature.nominal) if signal.current is None else signal.current.high
    voltage = float(source.forward_voltage_at(current))
    if voltage > least:
        yield Finding(
            ("conditions", "supply", "positive"),
            f"{write(least, 'V')}, after its tolerance of {percent(supply.tolerance)}, is below the forward voltage"
            f" of the source, {write(voltage, 'V')} at {write(float(current), 'A')}",
        )


def _within_source(source: LaserData, signal: DriveSignal, fibre: FibreData | None) -> Iterator[Finding]:
    if signal.current is not None and signal.current.high > source.current_max:
        limit = write(source.current_max, "A")
        yield Finding(
            ("signal", "current"), f"{write(signal.current.high, 'A')} is above current_max {limit} of the source"
        )
    plane = signal.plane or source.plane
    launched = plane == "fibre" and fibre is not None and source.divergence_parallel is not None
    if plane != source.plane and source.coupling is None and not launched:
        instead = ", or [fibre] and the divergence of its beam" if plane == "fibre" else ""
        yield Finding(
            ("signal", "plane"),
            f"the source states its power at the {source.plane}; its coupling is needed for the {plane}{instead}",
        )
    if signal.power is not None and plane == source.plane and signal.power.high > source.power_max:
        limit = write(source.power_max, "W")
        yield Finding(("signal", "power"), f"{write(signal.power.high, 'W')} is above power_max {limit} of the source")


class LaserRequest(Request):
    """What every design file of a laser driver has."""

    source: LaserData
    diode: DiodeData | None = None  #: across the source, against reverse voltage
    fibre: FibreData | None = None  #: that the light leaves by
    signal: DriveSignal
    conditions: DriverConditions


class LaserDriverRequest(LaserRequest):
    """A design file of a driver of a steady laser current."""

    transistor: Annotated[BipolarData | MosfetData, Field(discriminator="kind")]
    amplifier: OpAmpData
    reference: ReferenceData
    conditions: LaserConditions

    checks: ClassVar[tuple[Check, ...]] = (
        Check(("source", "signal", "conditions"), _in_reach),
        Check(("source", "signal", "fibre"), _within_source),
        Check(("amplifier", "conditions"), amplifier_supplied),
    )
