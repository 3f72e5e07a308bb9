"""The side of the supply that a laser driver sits on: the case of the laser decides, the transistor has to fit."""

from __future__ import annotations

from collections.abc import Mapping
from typing import Literal

from opto_ckt.errors import InfeasibleError
from opto_ckt.request import LaserDriverRequest

Side = Literal["low", "high"]

SIDES: Mapping[str, Side | None] = {
    "none": None,
    "laser cathode with monitor anode": "high",
    "laser cathode with monitor cathode": "high",
    "laser anode with monitor cathode": "low",
    "laser anode with monitor anode": "low",
}
"""Where the current is set, by the pins that are joined to the case: it hangs on the end that is free; None: either."""

POLARITY: Mapping[str, int] = {"nmos": 1, "npn": 1, "pmos": -1, "pnp": -1}
"""Of a pass transistor by its kind: +1 sinks from the low side, -1 sources from the high side."""


def side_of(request: LaserDriverRequest) -> Side:
    """Where the current is set: as the case of the laser asks; where that is free, as the transistor does."""
    free: Side = "low" if POLARITY[request.transistor.kind] > 0 else "high"
    return SIDES[request.source.common] or free


def refuse_wrong_side(request: LaserDriverRequest) -> None:
    """Refuse a transistor that the pins of the laser leave no place for.

    Raises
    ------
    InfeasibleError : an n-type transistor where the laser's cathode is joined to the case, or the other way round.
    """
    side, kind, common = side_of(request), request.transistor.kind, request.source.common
    if (side == "low") == (POLARITY[kind] > 0):
        return
    suits = " or ".join(name for name, polarity in POLARITY.items() if (side == "low") == (polarity > 0))
    raise InfeasibleError(
        f"source.common = '{common}' leaves the {'cathode' if side == 'low' else 'anode'} of the laser to drive it by,"
        f" on the {side} side, where the transistor's kind {kind} does not conduct",
        [f"transistor.kind {suits}", "a laser with its other pin joined to the case, or none"],
    )
