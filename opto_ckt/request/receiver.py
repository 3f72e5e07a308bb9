"""What is asked of a receiver: detector, amplifier, the light, the load."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Annotated, Any, ClassVar, Literal

from pydantic import Field

from opto_ckt.parts.analog_switch import AnalogSwitchData
from opto_ckt.parts.fixed_tia import FixedTiaData
from opto_ckt.parts.opamp import OpAmpData
from opto_ckt.parts.photodiode import WavelengthError
from opto_ckt.parts.record import Check, Choice, Finding, FindingsError, Points, ReadBy, Spread, Table, Unit, Whole
from opto_ckt.parts.transistor import BipolarData, JfetData
from opto_ckt.request.blocks import ReceiverBlocks
from opto_ckt.request.detector import BiasSupply, Detector
from opto_ckt.request.request import Request
from opto_ckt.request.tables import CAPACITANCE, Band, Conditions, Load
from opto_ckt.units import percent, write

WAVELENGTH = Unit("m", "1310 nm")
CURRENT = Unit("A", "1 µA", "not negative")
POWER = Unit("W", "2 µW", "not negative")


@dataclass(frozen=True)
class AmbientLight:
    """Steady background as optical power on the detector."""

    power: Spread
    wavelength: float


def _from_dark(spread: Spread) -> Spread:
    """Background that is not there either: from none to the most."""
    return spread if spread.stated else Spread(min=0.0, typ=spread.nominal, max=spread.nominal)


def read_ambient(value: Any, *, from_file: bool) -> Spread | AmbientLight:
    """Background as photocurrent (figure or { min, typ, max }) or as { power, wavelength }."""
    if isinstance(value, AmbientLight):
        return value
    if not isinstance(value, Mapping) or not {"power", "wavelength"} & set(value):
        return _from_dark(CURRENT.read_spread(value, from_file=from_file))
    findings: list[Finding] = []
    read: dict[str, Any] = {}
    for key, reader in (("power", POWER.read_spread), ("wavelength", WAVELENGTH.read_number)):
        if key not in value:
            findings.append(Finding((), f"{key} is missing; a background is a current, or {{ power, wavelength }}"))
            continue
        try:
            read[key] = reader(value[key], from_file=from_file)
        except FindingsError as error:
            findings += [Finding((key, *finding.path), finding.message) for finding in error.findings]
    findings += [
        Finding((str(key),), "is not known here; power and wavelength are")
        for key in value
        if key not in ("power", "wavelength")
    ]
    if findings:
        raise FindingsError(findings)
    return AmbientLight(_from_dark(read["power"]), read["wavelength"])


def _contrast(ratio: float) -> Iterator[Finding]:
    if ratio <= 1:
        yield Finding(
            ("extinction_ratio",), f"{ratio:g} leaves no signal; a ratio above 1 (0 dB) is needed, such as '9 dB'"
        )


def _mark_density(share: float) -> Iterator[Finding]:
    if not 0 < share < 1:
        yield Finding(("mark_density",), f"{percent(share)} is not between 0 and 1; half of the bits is 0.5")


def _bit_error(share: float) -> Iterator[Finding]:
    if not 0 < share < 0.5:
        yield Finding(("bit_error_ratio",), f"{share:g} is not between 0 and 0.5; a usual one is 1e-9")


class ReceivedSignal(Table):
    """The light on the detector: a data link (bit_rate) or an analog front end (band)."""

    wavelength: Annotated[float, WAVELENGTH]
    power: Annotated[Spread, POWER]  #: average optical power on the detector
    ambient: Annotated[Spread | AmbientLight, ReadBy(read_ambient)] = Spread(typ=0.0)
    bit_rate: Annotated[float | None, Unit("bit/s", "10 Mbit/s")] = None
    extinction_ratio: Annotated[float, Unit("W/W", "9 dB")] = 10.0  #: one level over zero level
    run_length: Annotated[int, Whole(1)] = 72  #: equal bits in a row; 72 is that of scrambled telecom signals
    mark_density: Annotated[float, Unit("1", "0.5", "not negative")] = 0.5  #: share of ones
    bit_error_ratio: Annotated[float, Unit("1", "1e-9", "not negative")] = 1e-9
    band: Band | None = None

    choices = (Choice("what has to pass", (("bit_rate",), ("band",))),)
    checks = (
        Check(("extinction_ratio",), _contrast),
        Check(("mark_density",), _mark_density),
        Check(("bit_error_ratio",), _bit_error),
    )


class Target(Table):
    """Shape of the response, where noise is stated, and which form of a circuit is wanted where it has several."""

    response: Literal["flat", "bessel", "critical"] | None = None
    noise_frequency: Annotated[float | None, Unit("Hz", "1 MHz")] = None
    noise_band: Band | None = None
    balance: Literal["currents", "outputs"] = "currents"  #: where two detectors are subtracted
    front_end: Literal["low_impedance", "high_impedance"] | None = None  #: of a load resistor; else by the noise bound
    tee: Literal["resistive", "capacitive", "both"] = "resistive"  #: which part of the feedback is a tee


class ReceiverConditions(Conditions):
    """Where a receiver runs, and what its board adds."""

    input_level: Annotated[float, Unit("V", "0 V", "any")] = 0.0  #: of the + input; above 0 V for a single supply
    board_capacitance: Annotated[float, CAPACITANCE] = 0.3e-12  #: summing node to ground
    feedback_stray: Annotated[float, CAPACITANCE] = 0.05e-12  #: across the feedback, besides the resistor's own body
    leakage_resistance: Annotated[float, Unit("Ω", "10 GΩ")] = 10e9  #: summing node to ground


def _seen(detector: Detector, signal: ReceivedSignal) -> Iterator[Finding]:
    lights: list[tuple[tuple[str, ...], float]] = [(("signal", "wavelength"), signal.wavelength)]
    if isinstance(signal.ambient, AmbientLight):
        lights.append((("signal", "ambient", "wavelength"), signal.ambient.wavelength))
    for path, wavelength in lights:
        try:
            detector.responsivity_at(wavelength)
        except WavelengthError as error:
            yield Finding(path, str(error))


def amplifier_supplied(amplifier: OpAmpData | None, conditions: Conditions) -> Iterator[Finding]:
    """Whether the rails, at either end of their tolerance, are what the amplifier, where there is one, runs from."""
    if amplifier is None:
        return
    supply = conditions.supply
    path = ("conditions", "supply")
    least, most = (supply.total * (1 + side * supply.tolerance) for side in (-1, 1))
    if most > amplifier.supply_max:
        limit = write(amplifier.supply_max, "V")
        yield Finding(path, f"up to {write(most, 'V')} from rail to rail is above supply_max {limit} of the amplifier")
    if least < amplifier.supply_min:
        limit = write(amplifier.supply_min, "V")
        yield Finding(
            path, f"down to {write(least, 'V')} from rail to rail is below supply_min {limit} of the amplifier"
        )


def _level_within(conditions: ReceiverConditions) -> Iterator[Finding]:
    supply = conditions.supply
    if not supply.negative <= conditions.input_level <= supply.positive:
        between = f"{write(supply.negative, 'V')} and {write(supply.positive, 'V')}"
        yield Finding(
            ("conditions", "input_level"), f"{write(conditions.input_level, 'V')} is not between the rails, {between}"
        )


def _bias_reached(detector: Detector, bias: BiasSupply | None) -> Iterator[Finding]:
    if bias is not None and detector.resting_bias > bias.supply:
        wanted = write(detector.resting_bias, "V")
        yield Finding(("bias", "supply"), f"{write(bias.supply, 'V')} is below the reverse bias of {wanted}")


class GainRange(Table):
    """One range of a receiver of switched gain."""

    power: Annotated[float, Unit("W", "2 µW")]  #: largest average light on the detector


class ReceiverRequest(Request):
    """A design file of a receiver."""

    inverting: ClassVar[bool] = True  #: whether more current out of the amplifier's input raises its output
    levelled: ClassVar[bool] = True  #: whether an input level above 0 V is one that the board makes

    detector: Detector
    amplifier: OpAmpData | None = None
    second_amplifier: OpAmpData | None = None  #: behind the first, or of a block; a second one of the first if left out
    transistor: BipolarData | None = None  #: that the photocurrent flows through, or that amplifies it
    follower: JfetData | None = None  #: that drives the far end of the detector
    comparator: OpAmpData | None = None  #: that decides the bits, by the figures of an op amp's record
    fixed_tia: FixedTiaData | None = None  #: a transimpedance amplifier that is bought whole
    analog_switch: AnalogSwitchData | None = None  #: each contact that switches the gain
    gain_ranges: Annotated[tuple[GainRange, ...], Points(2)] = ()  #: of switched gain
    signal: ReceivedSignal
    target: Target = Field(default_factory=Target.model_construct)
    load: Load = Field(default_factory=Load.model_construct)
    bias: BiasSupply | None = None
    blocks: ReceiverBlocks = Field(default_factory=ReceiverBlocks.model_construct)
    conditions: ReceiverConditions

    checks: ClassVar[tuple[Check, ...]] = (
        Check(("detector", "signal"), _seen),
        Check(("amplifier", "conditions"), amplifier_supplied),
        Check(("second_amplifier", "conditions"), amplifier_supplied),
        Check(("conditions",), _level_within),
        Check(("detector", "bias"), _bias_reached),
    )

    @property
    def ambient_current(self) -> Spread:
        """Photocurrent of the background, from dark to most, before any avalanche gain. [A]"""
        ambient = self.signal.ambient
        if isinstance(ambient, Spread):
            return ambient
        return ambient.power.scaled(self.detector.responsivity_at(ambient.wavelength) / self.detector.responsivity_gain)

    @property
    def blocks_asked(self) -> tuple[str, ...]:
        """Names of the blocks that are to be fitted."""
        asked = [name for name in type(self.blocks).model_fields if getattr(self.blocks, name) is not None]
        coupled = ["ac_coupling"] if self.load.coupling == "ac" and "ac_coupling" not in asked else []
        return (*asked, *coupled)


class OpAmpReceiverRequest(ReceiverRequest):
    """A design file of a receiver around an op amp."""

    amplifier: OpAmpData


class LoadResistorRequest(OpAmpReceiverRequest):
    """A design file of a receiver whose output follows the node that the photocurrent flows from."""

    inverting = False


class FixedTiaRequest(ReceiverRequest):
    """A design file of a receiver around a transimpedance amplifier that is bought whole; its input rests by itself."""

    levelled = False

    fixed_tia: FixedTiaData


class BootstrapRequest(OpAmpReceiverRequest):
    """A design file of a receiver whose detector is driven back by a follower."""

    follower: JfetData


class CascodeRequest(OpAmpReceiverRequest):
    """A design file of a receiver whose photocurrent passes a transistor."""

    transistor: BipolarData


def _up_to_the_most(ranges: tuple[GainRange, ...], signal: ReceivedSignal) -> Iterator[Finding]:
    last, most = ranges[-1].power, signal.power.high
    if abs(last / most - 1) > 1e-9:
        yield Finding(
            ("gain_ranges",),
            f"the last range ends at {write(last, 'W')}, the light at {write(most, 'W')}: the two have to be one",
        )


class SwitchedRequest(OpAmpReceiverRequest):
    """A design file of a receiver whose gain is switched; the ranges are in order of their light."""

    gain_ranges: Annotated[tuple[GainRange, ...], Points(2)]
    analog_switch: AnalogSwitchData

    checks = (*ReceiverRequest.checks, Check(("gain_ranges", "signal"), _up_to_the_most))


class DiscreteRequest(ReceiverRequest):
    """A design file of a receiver made of transistors alone."""

    transistor: BipolarData
