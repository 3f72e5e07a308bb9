"""What is asked of a receiver: detector, amplifier, the light, the load."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from dataclasses import dataclass
from typing import Annotated, Any, ClassVar, Literal

from pydantic import Field

from opto_ckt.parts.opamp import OpAmpData
from opto_ckt.parts.photodiode import PhotodiodeData, WavelengthError
from opto_ckt.parts.record import Check, Choice, Finding, FindingsError, ReadBy, Spread, Table, Unit, Whole
from opto_ckt.request.request import Request
from opto_ckt.request.tables import CAPACITANCE, RATIO, Band, Conditions, Load
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


def _bias_within(bias: float, limit: float) -> Iterator[Finding]:
    if bias > limit:
        yield Finding(
            ("reverse_bias",), f"{write(bias, 'V')} is above reverse_voltage_max {write(limit, 'V')} of the detector"
        )


class Detector(PhotodiodeData):
    """The photodiode of a design: its data sheet and how it is used."""

    design_keys: ClassVar[Mapping[str, str]] = {"gain": "wanted_gain"}  #: key in a design file, where the name differs

    reverse_bias: Annotated[float, Unit("V", "5 V", "not negative")] = 0.0
    output: Literal["cathode", "anode"] = "cathode"  #: which end feeds the amplifier
    wanted_gain: Annotated[float | Literal["optimum"] | None, Unit("1", "10")] = (
        None  #: avalanche; `gain` in a design file
    )

    checks: ClassVar[tuple[Check, ...]] = (
        *PhotodiodeData.checks,
        Check(("reverse_bias", "reverse_voltage_max"), _bias_within),
    )


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
    """Shape of the response, and where noise is stated."""

    response: Literal["flat", "bessel", "critical"] | None = None
    noise_frequency: Annotated[float | None, Unit("Hz", "1 MHz")] = None
    noise_band: Band | None = None


class BiasSupply(Table):
    """The supply behind the detector's reverse bias."""

    supply: Annotated[float, Unit("V", "12 V")]
    tolerance: Annotated[float, RATIO] = 0.05
    ripple: Annotated[float, Unit("V", "10 mV", "not negative")] = 0.0
    ripple_frequency: Annotated[float | None, Unit("Hz", "100 kHz")] = None

    choices = (Choice("the ripple", (("ripple", "ripple_frequency"),), needed=False),)


class PostFilter(Table):
    """Low-pass behind the amplifier."""

    order: Annotated[int, Whole(1, 4)] = 2
    cutoff: Annotated[float, Unit("Hz", "7.5 MHz")]


class ReceiverBlocks(Table):
    """Blocks that are fitted; one that is left out is not."""

    post_filter: PostFilter | None = None


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


def amplifier_supplied(amplifier: OpAmpData, conditions: Conditions) -> Iterator[Finding]:
    """Whether the rails, at either end of their tolerance, are what the amplifier runs from."""
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
    if bias is not None and detector.reverse_bias > bias.supply:
        wanted = write(detector.reverse_bias, "V")
        yield Finding(("bias", "supply"), f"{write(bias.supply, 'V')} is below the reverse bias of {wanted}")


def _gain_known(detector: Detector) -> Iterator[Finding]:
    wanted = detector.wanted_gain
    if wanted not in (None, 1.0) and detector.gain is None and detector.gain_points is None:
        yield Finding(
            ("detector", "wanted_gain"),
            "the record of the detector states no avalanche gain (gain_points, or gain at gain_bias)",
        )


class ReceiverRequest(Request):
    """A design file of a receiver."""

    detector: Detector
    amplifier: OpAmpData
    signal: ReceivedSignal
    target: Target = Field(default_factory=Target.model_construct)
    load: Load = Field(default_factory=Load.model_construct)
    bias: BiasSupply | None = None
    blocks: ReceiverBlocks = Field(default_factory=ReceiverBlocks.model_construct)
    conditions: ReceiverConditions

    checks = (
        Check(("detector", "signal"), _seen),
        Check(("amplifier", "conditions"), amplifier_supplied),
        Check(("conditions",), _level_within),
        Check(("detector", "bias"), _bias_reached),
        Check(("detector",), _gain_known),
    )

    @property
    def ambient_current(self) -> Spread:
        """Photocurrent of the background, from dark to most, before any avalanche gain. [A]"""
        ambient = self.signal.ambient
        if isinstance(ambient, Spread):
            return ambient
        return ambient.power.scaled(self.detector.responsivity_at(ambient.wavelength))
