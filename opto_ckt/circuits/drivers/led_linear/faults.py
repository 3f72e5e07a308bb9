"""What happens to LED and transistor when a joint opens, a part shorts, or supply and reference come and go."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Fault, FaultOutcome
from opto_ckt.circuits.drivers import led_faults
from opto_ckt.circuits.drivers.warmth import transistor_temperature
from opto_ckt.limits import Values
from opto_ckt.request import LedLinearRequest
from opto_ckt.topology import OPEN, SHORT


def faults(request: LedLinearRequest) -> tuple[Fault, ...]:
    """The cases of a driver with a loop; each computed by overriding values."""
    return (
        *led_faults.supply_faults(request),
        Fault("reference missing", {"U2.open": 1.0}),
        Fault("reference short", {"U2.voltage": 0.0}),
        Fault("op amp at the rail that turns Q1 on", {"U1.stuck": 1.0}),
        Fault("op amp at the rail that turns Q1 off", {"U1.stuck": -1.0}),
        Fault("load open", {"D1.open": 1.0}),
        Fault("load short", {"D1.short": 1.0}),
        Fault("load reconnected after wind-up", {"U1.stuck": 1.0}),
        Fault("sense resistor open", {"R1": OPEN}),
        Fault("sense resistor short", {"R1": SHORT}),
        Fault("pass transistor short", {"Q1.short": 1.0}),
    )


def outcome(fault: Fault, values: Values, request: LedLinearRequest) -> FaultOutcome:
    """Standing current and light that the fault leads to, and whether LED or transistor pass a limit."""
    others = {
        "current_max of the transistor": (np.asarray(values["Q1.drain_current"]), request.transistor.current_max, "A"),
        "junction_max of the transistor": (
            np.asarray(transistor_temperature(values)), request.transistor.junction_max, "°C",
        ),
    }  # fmt: skip
    pair = (np.asarray(values[name]) for name in ("Q1.drain_current", "hard_on_current"))
    current, hard_on = np.broadcast_arrays(*pair)
    worst = int(np.argmax(current))
    loose = "Q1.short" in fault.overrides or bool(current.ravel()[worst] >= 0.9999 * hard_on.ravel()[worst])
    return led_faults.outcome(values, request, "limited by R7" if loose else "regulated", others)
