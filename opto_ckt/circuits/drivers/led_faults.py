"""What a fault of an LED driver leads to, told in one sentence."""

from __future__ import annotations

from collections.abc import Mapping

import numpy as np

from opto_ckt.circuit import Fault, FaultOutcome
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import LedDriverRequest
from opto_ckt.units import write

SWEEP = 41  #: supplies tried between none and the highest
DARK = 1e-6  #: currents below are none [A]
BEYOND_HOTTEST = 25.0  #: of an over-temperature, above the hottest asked for [K]


def supply_faults(request: LedDriverRequest) -> list[Fault]:
    """A supply that comes, goes and sags, and temperatures at and beyond the ends."""
    supply, temperature = request.conditions.supply, request.conditions.temperature
    sweep = np.linspace(0.0, supply.positive * (1 + supply.tolerance), SWEEP)[:, None]
    return [
        Fault("slow power-down", {"supply.positive": sweep[::-1]}),
        Fault("brown-out", {"supply.positive": sweep}),
        Fault("cold start after a warm set-up", {"temperature": temperature.low}),
        Fault("25 K above the hottest asked for", {"temperature": temperature.high + BEYOND_HOTTEST}),
    ]


def outcome(
    values: Values, request: LedDriverRequest, held: str, others: Mapping[str, tuple[Lanes, float, str]]
) -> FaultOutcome:
    """Current and light reached, what limits them, and every limit that is passed.

    Parameters
    ----------
    held : what limits the current, in words.
    others : what else has a limit: name of the limit -> what is reached, the limit, its unit.
    """
    data = request.source
    current, power, junction = np.broadcast_arrays(
        *(
            np.asarray(values[f"D1.{name}"], dtype=float)
            for name in ("current", "emitted_power", "junction_temperature")
        )
    )
    limits: dict[str, tuple[Lanes, float, str]] = {
        "current_max of the LED": (current, data.current_max, "A"),
        "junction_max of the LED": (junction, data.junction_max, "°C"),
        **others,
    }
    beyond = [
        f"{write(most, unit)} is above {name}, {write(limit, unit)}"
        for name, (reached, limit, unit) in limits.items()
        if (most := float(np.max(reached))) > limit * (1 + 1e-9)
    ]
    most = float(np.max(current))
    text = "no current through the LED"
    if most > DARK:
        text = f"LED current {write(most, 'A')}, {write(float(np.max(power)), 'W')} of light"
        text += f", {held}" if held else ""
    if beyond:
        text += ": " + "; ".join(beyond)
    return FaultOutcome(text, not beyond)
