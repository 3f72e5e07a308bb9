"""Blocks that a receiver may be fitted with, one table each; one that is left out is not fitted."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, ClassVar, Literal

from opto_ckt.parts.record import Check, Choice, Finding, Table, Unit, Whole
from opto_ckt.request.tables import RATIO
from opto_ckt.units import percent


class PostFilter(Table):
    """Low-pass behind the amplifier."""

    order: Annotated[int, Whole(1, 5)] = 2
    cutoff: Annotated[float, Unit("Hz", "7.5 MHz")]  #: of receiver and filter together
    kind: Literal["rc", "active", "ladder"] | None = None  #: else by the order
    response: Literal["bessel", "flat"] = "bessel"  #: of the filter by itself

    @property
    def form(self) -> str:
        """Kind of filter: as asked for, else the simplest of its order."""
        return self.kind or {1: "rc", 2: "active"}.get(self.order, "ladder")


class BiasFilter(Table):
    """Resistor and capacitor between the bias supply and the detector."""

    droop: Annotated[float | None, Unit("V", "0.2 V")] = None  #: most the bias may fall at most light
    corner: Annotated[float | None, Unit("Hz", "1 kHz")] = None  #: else from bias.ripple


class GainStage(Table):
    """Voltage gain behind the first amplifier."""

    gain: Annotated[float | None, Unit("V/V", "10 V/V")] = None  #: else what require.transimpedance leaves for it


def _part_of_a_level(droop: float | None) -> Iterator[Finding]:
    if droop is not None and not 0 < droop < 1:
        yield Finding(("droop",), f"{percent(droop)} is not between 0 and 100 %; a usual one is 5 %")


class LowCutoff(Table):
    """Where DC is taken away, and how far up."""

    droop: Annotated[float | None, RATIO] = None  #: of a level after the longest run of equal bits
    low_cutoff: Annotated[float | None, Unit("Hz", "1 kHz")] = None

    choices: ClassVar[tuple[Choice, ...]] = (Choice("the cut-off", (("droop",), ("low_cutoff",)), needed=False),)
    checks: ClassVar[tuple[Check, ...]] = (Check(("droop",), _part_of_a_level),)


class AcCoupling(LowCutoff):
    """Coupling capacitor at the output."""


class Servo(LowCutoff):
    """Loop that takes the steady light away."""

    range: Annotated[float | None, Unit("A", "50 µA")] = None  #: of steady current; else all that the design has
    injection: Literal["resistor", "transistor"] = "resistor"  #: what carries it; a transistor reaches to the far rail


class Decision(Table):
    """Comparator at the output."""

    hysteresis: Annotated[float | None, Unit("V", "10 mV")] = None  #: from threshold to threshold; else from the noise


class ReceiverBlocks(Table):
    """Blocks that are fitted; one that is left out is not."""

    bias_filter: BiasFilter | None = None
    gain_stage: GainStage | None = None

    post_filter: PostFilter | None = None
    ac_coupling: AcCoupling | None = None
    servo: Servo | None = None
    decision: Decision | None = None
