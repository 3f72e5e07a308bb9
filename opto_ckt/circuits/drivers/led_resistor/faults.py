"""What happens to the LED and its logic output when a joint opens, a part shorts, or the supply comes and goes."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Fault, FaultOutcome
from opto_ckt.circuits.drivers import led_faults
from opto_ckt.circuits.drivers.led_resistor.structure import feed_of
from opto_ckt.limits import Values
from opto_ckt.request import LedDriverRequest
from opto_ckt.topology import OPEN, SHORT


def faults(request: LedDriverRequest) -> tuple[Fault, ...]:
    """The cases of an LED behind a resistor; each computed by overriding values."""
    found = led_faults.supply_faults(request)
    if feed_of(request) == "source":  # the rail is that of the logic: its output falls with it
        found = [fault for fault in found if "supply.positive" not in fault.overrides]
    found += [
        Fault("load open", {"D1.open": 1.0}),
        Fault("load short", {"D1.short": 1.0}),
        Fault("load reconnected live", {}),
        Fault("series resistor open", {"R1": OPEN}),
        Fault("series resistor short", {"R1": SHORT}),
    ]
    if feed_of(request) != "rail":
        found.append(Fault("control stuck lit", {}))
        found.append(Fault("control stuck dark", {"U1.stuck": 1.0}))
    return tuple(found)


def outcome(fault: Fault, values: Values, request: LedDriverRequest) -> FaultOutcome:
    """Current and light that the fault leads to, and whether LED or logic output pass a limit."""
    others, output = {}, request.logic_output
    if output is not None and output.current_max is not None:
        drawn = np.asarray(values["loop.current"], dtype=float)
        others["current_max of the logic output"] = (drawn, output.current_max, "A")
    held = "limited by the LED and what drives it alone" if "R1" in fault.overrides else "limited by R1"
    return led_faults.outcome(values, request, held, others)
