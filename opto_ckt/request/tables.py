"""Tables of a design file that circuits of every kind share, with the values they have when left out."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, Any, Literal

from pydantic import Field

from opto_ckt.constants import ROOM_TEMPERATURE, ZERO_CELSIUS
from opto_ckt.parts.record import Check, Finding, ReadBy, Spread, Table, Unit
from opto_ckt.preferred import CHIP_RESISTORS, DIELECTRICS, Series
from opto_ckt.request.reading import one_of, series_in

RATIO = Unit("1", "5 %", "not negative")
CAPACITANCE = Unit("F", "0.3 pF", "not negative")


def read_temperature(value: Any, *, from_file: bool) -> Spread:
    """A temperature; its typical value, where none is given, is 25 °C or the end nearest to that."""
    temperature = Unit("°C", "25 °C", "any").read_spread(value, from_file=from_file)
    if temperature.typ is not None:
        return temperature
    return Spread(temperature.min, min(max(ROOM_TEMPERATURE, temperature.low), temperature.high), temperature.max)


Temperature = Annotated[Spread, ReadBy(read_temperature)]
INDOORS = Spread(min=ZERO_CELSIUS, typ=ROOM_TEMPERATURE, max=ZERO_CELSIUS + 50)  #: 0 °C, 25 °C, 50 °C


class Supply(Table):
    """The rails; negative is 0 V with a single supply."""

    positive: Annotated[float, Unit("V", "5 V")]
    negative: Annotated[float, Unit("V", "-5 V", "not positive")] = 0.0
    tolerance: Annotated[float, RATIO] = 0.05

    @property
    def total(self) -> float:
        """Rail to rail, nominal. [V]"""
        return self.positive - self.negative


class Conditions(Table):
    """Where and from what the circuit runs."""

    temperature: Temperature = INDOORS
    supply: Supply


def _rising(low: float, high: float) -> Iterator[Finding]:
    if low >= high:
        yield Finding(("min",), "min is not below max")


class Band(Table):
    """A band of frequencies."""

    min: Annotated[float, Unit("Hz", "1 kHz", "not negative")] = 0.0
    max: Annotated[float, Unit("Hz", "10 MHz")]

    checks = (Check(("min", "max"), _rising),)


class Load(Table):
    """What hangs on the output; without a resistance there is none."""

    resistance: Annotated[float | None, Unit("Ω", "1 kΩ")] = None
    capacitance: Annotated[float, Unit("F", "5 pF", "not negative")] = 0.0
    coupling: Literal["dc", "ac"] = "dc"


class PreferredResistors(Table):
    """Resistors that may be fitted."""

    series: Annotated[Series, series_in(Unit("Ω", "10 kΩ"))] = "E96"
    tolerance: Annotated[float, RATIO] = 0.01
    temperature_coefficient: Annotated[float, Unit("1/K", "100 ppm/K", "not negative")] = 100e-6
    size: Annotated[str, one_of("size", CHIP_RESISTORS)] = "0603"


class PreferredCapacitors(Table):
    """Capacitors that may be fitted where the signal passes."""

    series: Annotated[Series, series_in(Unit("F", "1 pF"))] = "E24"
    tolerance: Annotated[float, RATIO] = 0.05
    tolerance_below_10pF: Annotated[float, Unit("F", "0.1 pF", "not negative")] = 0.1e-12  # noqa: N815 - a key of the file
    dielectric: Annotated[str, one_of("dielectric", DIELECTRICS)] = "C0G"
    size: Annotated[str, one_of("size", CHIP_RESISTORS)] = "0603"


class PreferredBypass(Table):
    """Capacitors that may be fitted across supplies and references."""

    series: Annotated[Series, series_in(Unit("F", "100 nF"))] = "E6"
    tolerance: Annotated[float, RATIO] = 0.1
    dielectric: Annotated[str, one_of("dielectric", DIELECTRICS)] = "X7R"
    size: Annotated[str, one_of("size", CHIP_RESISTORS)] = "0805"


class PreferredInductors(Table):
    """Inductors that may be fitted."""

    series: Annotated[Series, series_in(Unit("H", "10 µH"))] = "E12"
    tolerance: Annotated[float, RATIO] = 0.1


class PreferredTrimmers(Table):
    """Trimming resistors that may be fitted; the list of track resistances, and the spread of one."""

    series: Annotated[Series, series_in(Unit("Ω", "10 kΩ"))] = "E3"
    tolerance: Annotated[float, RATIO] = 0.1
    temperature_coefficient: Annotated[float, Unit("1/K", "100 ppm/K", "not negative")] = 100e-6


class Preferred(Table):
    """What may be fitted."""

    resistors: PreferredResistors = Field(default_factory=PreferredResistors.model_construct)
    capacitors: PreferredCapacitors = Field(default_factory=PreferredCapacitors.model_construct)
    bypass: PreferredBypass = Field(default_factory=PreferredBypass.model_construct)
    inductors: PreferredInductors = Field(default_factory=PreferredInductors.model_construct)
    trimmers: PreferredTrimmers = Field(default_factory=PreferredTrimmers.model_construct)
