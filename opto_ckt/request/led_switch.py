"""What is asked of a switched LED driver."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, ClassVar

from pydantic import Field

from opto_ckt.parts.logic import LogicOutputData
from opto_ckt.parts.record import Check, Finding, Unit
from opto_ckt.parts.transistor import BipolarData, MosfetData
from opto_ckt.request.led import LedDriverRequest, LedSignal

N_TYPE = ("npn", "nmos")


class LedSwitchSignal(LedSignal):
    """What the LED has to do, and what hastens it."""

    pre_bias: Annotated[float | None, Unit("A", "0.5 mA")] = None  #: through the LED while off: no delay, less contrast
    sweep_out: Annotated[float | None, Unit("A", "5 mA")] = None  #: drawn out of the LED by a resistor across it
    speed_up: bool = False  #: a capacitor across the base resistor


def _below(transistor: BipolarData | MosfetData) -> Iterator[Finding]:
    if transistor.kind not in N_TYPE:
        yield Finding(
            ("transistor", "kind"), f"{transistor.kind} does not switch to ground; expected {' or '.join(N_TYPE)}"
        )


class LedSwitchRequest(LedDriverRequest):
    """A design file of a switched LED driver."""

    logic_output: LogicOutputData
    transistor: Annotated[BipolarData | MosfetData, Field(discriminator="kind")]
    signal: LedSwitchSignal

    checks: ClassVar[tuple[Check, ...]] = (*LedDriverRequest.checks, Check(("transistor",), _below))
