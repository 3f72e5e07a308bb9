"""What a designer ought to be told about an LED behind its resistor, people's eyes first."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuits.drivers.led import law_of, safety, unstated
from opto_ckt.circuits.drivers.led_resistor.structure import feed_of
from opto_ckt.limits import Limits, Values
from opto_ckt.request import LedDriverRequest
from opto_ckt.units import percent, write

LOOSE = 0.3  #: spread of the current, high over low less one, from which on a regulated driver is advised
MISFIT = 0.02  #: of the forward voltage, from which on the diode law is said to miss the sheet's points


def remarks(values: Values, limits: Limits, request: LedDriverRequest) -> tuple[str, ...]:
    """Cautions for people and LED, then advice that depends on the values."""
    found = [*safety(request, float(np.max(values["D1.emitted_power"]))), *unstated(request)]
    current = np.asarray(values["D1.current"], dtype=float)
    spread = float(np.max(current) / np.min(current)) - 1
    if spread > LOOSE:
        found.append(
            f"the current spreads by {percent(spread)} from corner to corner, with supply and forward voltage: a"
            " higher supply with a larger R1, or a regulated driver, holds it"
        )
    limit = write(request.source.reverse_voltage_max, "V")
    found.append(f"the LED takes {limit} the wrong way round: a supply reversed destroys it")
    points = request.source.forward
    if len(points) == 1:
        found.append("one forward voltage is given: its change with current is that of a diode law with n = 2")
    law = law_of(request.source)
    if law.misfit > MISFIT * float(points[-1].voltage.nominal):
        found.append(f"a diode law misses the forward points by {write(law.misfit, 'V')}: look at them again")
    if feed_of(request) != "rail" and request.logic_output is not None and request.logic_output.current_max is None:
        found.append("the sheet of the logic output gives no current_max: see that it bears the LED's current")
    return tuple(found)
