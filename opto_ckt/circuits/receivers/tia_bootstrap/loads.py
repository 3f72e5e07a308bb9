"""Load and heat of the parts of the bootstrapped stage."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Heat, Stress
from opto_ckt.circuits.receivers.feedback import loads
from opto_ckt.limits import Values
from opto_ckt.request import BootstrapRequest


def stresses(values: Values, request: BootstrapRequest) -> tuple[Stress, ...]:
    """Those of the stage; the rest current through J1 and R4, the steady photocurrent through R5."""
    current, steady = values["J1.drain_current"], loads.most_current(values, request)
    return (
        *loads.stresses(values, request),
        Stress("J1", power=current * values["J1.across"], voltage=values["J1.across"], current=current),
        Stress("R4", power=current**2 * values["R4"], voltage=current * values["R4"], current=current),
        Stress("R5", power=steady**2 * values["R5"], voltage=steady * values["R5"], current=steady),
        Stress("C4", voltage=np.abs(values["node.follow"] - values["supply.bias"])),
    )


def heat(values: Values, request: BootstrapRequest) -> tuple[Heat, ...]:
    """The op amp where its sheet says what it is heated by, and J1."""
    power = values["J1.drain_current"] * values["J1.across"]
    name = "J1.junction_to_ambient" if "J1.junction_to_ambient" in values else "J1.junction_to_case"
    hot = values["temperature"] + power * values[name]
    return (*loads.heat(values, request), Heat("J1", power, hot, request.follower.junction_max))
