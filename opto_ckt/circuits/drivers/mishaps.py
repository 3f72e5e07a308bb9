"""What is said of a fault in any laser driver: how much current, and which part passes its limit."""

from __future__ import annotations

import numpy as np

from opto_ckt.limits import Lanes
from opto_ckt.request import LaserDriverRequest
from opto_ckt.units import write

SWEEP = 41  #: supplies tried between none and the highest
DARK = 1e-6  #: currents below are none [A]


def amount(current: float) -> str:
    """The current through the laser in words."""
    return "no current through the laser" if current <= DARK else f"laser current {write(current, 'A')}"


def beyond(current: Lanes, power: Lanes, case: Lanes, junction: Lanes, request: LaserDriverRequest) -> list[str]:
    """Every part that passes its limit, with the figures."""
    data, found = request.source, []
    for name, reached, limit, unit in (
        ("current_max of the laser", current, data.current_max, "A"),
        ("power_max of the laser", power, data.power_max, "W"),
        ("case_max of the laser", case, data.case_max, "°C"),
        ("junction_max of the transistor", junction, request.transistor.junction_max, "°C"),
    ):
        most = float(np.max(reached))
        if most > limit * (1 + 1e-9):
            found.append(f"{write(most, unit)} is above {name}, {write(limit, unit)}")
    return found
