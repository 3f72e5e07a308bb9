"""The detector of a design: its data sheet, how it is biased, the supply behind the bias."""

from __future__ import annotations

from collections.abc import Iterator, Mapping
from typing import Annotated, Any, ClassVar, Literal

from opto_ckt.parts.avalanche import bias_for_gain, gain_follows, is_avalanche
from opto_ckt.parts.photodiode import PhotodiodeData
from opto_ckt.parts.record import Check, Choice, Finding, Table, Unit
from opto_ckt.request.tables import RATIO
from opto_ckt.units import write


def _bias_within(bias: float, limit: float) -> Iterator[Finding]:
    if bias > limit:
        yield Finding(
            ("reverse_bias",), f"{write(bias, 'V')} is above reverse_voltage_max {write(limit, 'V')} of the detector"
        )


def _gain_reached(detector: Detector) -> Iterator[Finding]:
    wanted = detector.wanted_gain
    if wanted in (None, 1.0):
        return
    if not is_avalanche(detector):
        message = "the record of the detector states no avalanche gain (gain_points, or gain at gain_bias)"
        yield Finding(("wanted_gain",), message)
    elif not gain_follows(detector):
        message = "needs gain_points, or breakdown_voltage beside gain and gain_bias, to tell the bias of a gain"
        yield Finding(("wanted_gain",), message)
    elif detector.reverse_bias:
        yield Finding(("reverse_bias",), "the gain asked for sets the bias; leave out one of reverse_bias and gain")
    elif isinstance(wanted, float) and wanted < 1:
        yield Finding(("wanted_gain",), f"{wanted:g} is below 1")


class Detector(PhotodiodeData):
    """The photodiode of a design: its data sheet and how it is used."""

    design_keys: ClassVar[Mapping[str, str]] = {"gain": "wanted_gain"}  #: key in a design file, where the name differs

    reverse_bias: Annotated[float, Unit("V", "5 V", "not negative")] = 0.0
    output: Literal["cathode", "anode"] = "cathode"  #: which end feeds the amplifier
    wanted_gain: Annotated[float | Literal["optimum"] | None, Unit("1", "10")] = (
        None  #: avalanche, at 25 °C; `gain` in a design file
    )

    checks: ClassVar[tuple[Check, ...]] = (
        *PhotodiodeData.checks,
        Check(("reverse_bias", "reverse_voltage_max"), _bias_within),
    )

    @classmethod
    def disagreements(cls, values: Mapping[str, Any]) -> Iterator[Finding]:
        """What does not go together, the gain last: it needs a detector that is whole."""
        found = list(super().disagreements(values))
        yield from found
        if not found and len(values) == len(cls.model_fields):
            yield from _gain_reached(cls.model_construct(**values))

    @property
    def resting_bias(self) -> float:
        """Reverse bias without a drop on the way to it: as asked for, or what gives the wanted gain at 25 °C. [V]"""
        if isinstance(self.wanted_gain, float) and gain_follows(self):
            return bias_for_gain(self, self.wanted_gain)
        return self.reverse_bias


class BiasSupply(Table):
    """The supply behind the detector's reverse bias."""

    supply: Annotated[float, Unit("V", "12 V")]
    tolerance: Annotated[float, RATIO] = 0.05
    ripple: Annotated[float, Unit("V", "10 mV", "not negative")] = 0.0
    ripple_frequency: Annotated[float | None, Unit("Hz", "100 kHz")] = None

    choices = (Choice("the ripple", (("ripple", "ripple_frequency"),), needed=False),)
