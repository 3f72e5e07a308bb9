"""What is asked of a linear LED driver."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, ClassVar

from pydantic import Field

from opto_ckt.parts.led import LedData
from opto_ckt.parts.opamp import OpAmpData
from opto_ckt.parts.record import Check, Finding, Unit
from opto_ckt.parts.reference import ReferenceData
from opto_ckt.parts.transistor import BipolarData, MosfetData
from opto_ckt.request.driver import DriverConditions
from opto_ckt.request.led import LedDriverRequest, LedSignal
from opto_ckt.request.receiver import amplifier_supplied
from opto_ckt.request.tables import Band
from opto_ckt.units import percent, write

N_TYPE = ("npn", "nmos")


class LedLinearSignal(LedSignal):
    """The standing current or light, and the signal about it; its band has to be known."""

    modulation_index: Annotated[float, Unit("1", "0.5")] = 0.5  #: peak over standing current
    band: Band


def _below(transistor: BipolarData | MosfetData) -> Iterator[Finding]:
    if transistor.kind not in N_TYPE:
        yield Finding(
            ("transistor", "kind"), f"{transistor.kind} does not sink current; expected {' or '.join(N_TYPE)}"
        )


def _analog(signal: LedSignal) -> Iterator[Finding]:
    """A signal read for another circuit may say nothing of it."""
    if signal.band is None or signal.modulation_index is None:
        yield Finding(("signal", "band"), "band and modulation_index of the analog signal are needed")


def _crest(source: LedData, signal: LedSignal) -> Iterator[Finding]:
    if signal.current is None or signal.modulation_index is None:
        return
    crest = signal.current.nominal * (1 + signal.modulation_index)
    if crest > source.current_max:
        yield Finding(
            ("signal", "modulation_index"),
            f"{percent(signal.modulation_index)} of {write(signal.current.nominal, 'A')} reaches {write(crest, 'A')},"
            f" above current_max {write(source.current_max, 'A')} of the LED",
        )


class LedLinearRequest(LedDriverRequest):
    """A design file of a linear LED driver."""

    transistor: Annotated[BipolarData | MosfetData, Field(discriminator="kind")]
    amplifier: OpAmpData
    reference: ReferenceData
    signal: LedLinearSignal
    conditions: DriverConditions

    checks: ClassVar[tuple[Check, ...]] = (
        *LedDriverRequest.checks,
        Check(("transistor",), _below),
        Check(("signal",), _analog),
        Check(("source", "signal"), _crest),
        Check(("amplifier", "conditions"), amplifier_supplied),
    )
