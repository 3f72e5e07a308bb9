"""What the pair cannot do for a request."""

from __future__ import annotations

from opto_ckt.circuit import Refusal
from opto_ckt.circuits.receivers import refusals
from opto_ckt.request import DiscreteRequest
from opto_ckt.units import write

KIND = "npn"
JUNCTIONS = 2  #: base-emitter voltages that R2's end rests on


def refused(request: DiscreteRequest) -> tuple[Refusal, ...]:
    """What no receiver can do; another kind of transistor, a supply out of its reach, a level for the input."""
    found = list(refusals.refused(request))
    record, supply = request.transistor, request.conditions.supply
    if record.kind != KIND:
        found.append(Refusal(("transistor", "kind"), f"{record.kind!r} does not go here; both transistors are {KIND}"))
    across = supply.positive * (1 + supply.tolerance) - supply.negative * (1 + supply.tolerance)
    if across > record.voltage_max:
        found.append(
            Refusal(
                ("conditions", "supply"),
                f"{write(across, 'V')}, tolerance in it, is above voltage_max {write(record.voltage_max, 'V')} of the"
                " transistors",
            )
        )
    least, needed = supply.positive * (1 - supply.tolerance), JUNCTIONS * record.base_emitter_voltage.high
    if least <= needed:
        found.append(
            Refusal(
                ("conditions", "supply", "positive"),
                f"{write(least, 'V')}, after its tolerance, leaves R2 nothing above two base-emitter voltages,"
                f" {write(needed, 'V')}",
            )
        )
    if request.conditions.input_level:
        found.append(
            Refusal(("conditions", "input_level"), "has no meaning here: the base of Q1 sets the level of the input")
        )
    return tuple(found)
