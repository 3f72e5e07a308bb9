"""What is asked of a switched LED driver."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Annotated, ClassVar

from pydantic import Field

from opto_ckt.parts.logic import LogicOutputData
from opto_ckt.parts.record import Check, Finding
from opto_ckt.parts.transistor import BipolarData, MosfetData
from opto_ckt.request.led import LedDriverRequest

N_TYPE = ("npn", "nmos")


def _below(transistor: BipolarData | MosfetData) -> Iterator[Finding]:
    if transistor.kind not in N_TYPE:
        yield Finding(
            ("transistor", "kind"), f"{transistor.kind} does not switch to ground; expected {' or '.join(N_TYPE)}"
        )


class LedSwitchRequest(LedDriverRequest):
    """A design file of a switched LED driver."""

    logic_output: LogicOutputData
    transistor: Annotated[BipolarData | MosfetData, Field(discriminator="kind")]

    checks: ClassVar[tuple[Check, ...]] = (*LedDriverRequest.checks, Check(("transistor",), _below))
