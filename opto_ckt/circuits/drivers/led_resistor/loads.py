"""What the parts of the LED behind a resistor must stand, and how warm they get."""

from __future__ import annotations

from opto_ckt.circuit import Heat, Stress
from opto_ckt.circuits.drivers.led_resistor.structure import feed_of
from opto_ckt.limits import Values
from opto_ckt.request import LedDriverRequest


def stresses(values: Values, request: LedDriverRequest) -> tuple[Stress, ...]:
    """Resistor and LED at the current that flows; the logic output at that current."""
    current = values["loop.current"]
    found = [
        Stress("R1", power=current**2 * values["R1"], voltage=current * values["R1"], current=current),
        Stress("D1", power=values["D1.heat"], voltage=values["D1.forward_voltage"], current=values["D1.current"]),
    ]
    if feed_of(request) != "rail":
        found.append(Stress("U1", power=current**2 * values["U1.resistance"], current=current))
    return tuple(found)


def heat(values: Values, request: LedDriverRequest) -> tuple[Heat, ...]:
    """Junction of the LED."""
    return (Heat("D1", values["D1.heat"], values["D1.junction_temperature"], request.source.junction_max),)
