"""What happens to LED and switch when a joint opens, a part shorts, or the supply comes and goes."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Fault, FaultOutcome
from opto_ckt.circuits.drivers import led_faults
from opto_ckt.circuits.drivers.led_switch.loads import switch_temperature
from opto_ckt.circuits.drivers.led_switch.structure import is_peaked
from opto_ckt.limits import Values
from opto_ckt.request import LedSwitchRequest
from opto_ckt.topology import OPEN, SHORT


def faults(request: LedSwitchRequest) -> tuple[Fault, ...]:
    """The cases of a switched LED; each computed by overriding values."""
    found = [
        *led_faults.supply_faults(request),
        Fault("supply before control", {"U1.stuck": 1.0}),
        Fault("control before supply, stuck lit", {}),
        Fault("control input open", {"R2": OPEN}),
        Fault("load open", {"D1.open": 1.0}),
        Fault("load short", {"D1.short": 1.0}),
        Fault("load reconnected live", {}),
        Fault("switch short", {"Q1.short": 1.0}),
        Fault("series resistor open", {"R1": OPEN}),
        Fault("series resistor short", {"R1": SHORT}),
    ]
    if is_peaked(request):
        found.append(Fault("peaking capacitor short", {"R4": SHORT}))
    return tuple(found)


def outcome(fault: Fault, values: Values, request: LedSwitchRequest) -> FaultOutcome:
    """Current and light that the fault leads to, and whether LED, switch or logic output pass a limit."""
    others = {
        "current_max of the transistor": (np.asarray(values["Q1.current"]), request.transistor.current_max, "A"),
        "junction_max of the transistor": (
            np.asarray(switch_temperature(values)), request.transistor.junction_max, "°C",
        ),
    }  # fmt: skip
    if request.logic_output.current_max is not None:
        others["current_max of the logic output"] = (
            np.asarray(values["U1.current"]),
            request.logic_output.current_max,
            "A",
        )
    held = "limited by what is left of the resistors" if {"R1", "R4"} & set(fault.overrides) else "limited by R1"
    return led_faults.outcome(values, request, held, others)
