"""What the parts of the linear LED driver must stand, and how warm they get."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Heat, Stress
from opto_ckt.circuits.drivers.warmth import resistor_load, transistor_temperature
from opto_ckt.limits import Values
from opto_ckt.request import LedLinearRequest


def stresses(values: Values, request: LedLinearRequest) -> tuple[Stress, ...]:
    """Resistors and transistor at the crest, or with Q1 hard on where that is worse; capacitors at the supply."""
    supply, span = values["supply.positive"], values["supply.span"]
    most = np.maximum(values["peak_current"], values["hard_on_current"])
    reference, control = np.asarray(values["node.ref"]), values["Q1.control_current"]
    divider, feed = reference / (values["R2"] + values["R3"]), supply - values["node.ref"]
    found = [
        resistor_load("R1", most + control, values),
        resistor_load("R7", most, values),
        resistor_load("R2", divider, values),
        resistor_load("R3", divider, values),
        Stress("R6", power=feed**2 / values["R6"], voltage=feed, current=feed / values["R6"]),
        Stress("R5", voltage=supply, power=control**2 * values["R5"]),
        Stress("R4", voltage=supply),
        Stress("R9", voltage=reference),
        Stress("Q1", power=values["Q1.power"], voltage=supply, current=most),
        Stress("D1", power=values["D1.heat"], voltage=values["D1.forward_voltage"], current=values["peak_current"]),
        Stress("U1", power=values["U1.power"], voltage=span, current=control),
        Stress("U2", power=values["U2.current"] * reference, voltage=reference, current=values["U2.current"]),
        Stress("C1", voltage=span),
        Stress("C2", voltage=reference),
        Stress("C8", voltage=supply),
        Stress("C9", voltage=np.abs(values["supply.negative"])),
    ]
    return tuple(stress for stress in found if stress.ref[0] not in "RC" or stress.ref in values)


def heat(values: Values, request: LedLinearRequest) -> tuple[Heat, ...]:
    """Junctions of LED, pass transistor, and of the op amp where its sheet has one."""
    found = [
        Heat("D1", values["D1.heat"], values["D1.junction_temperature"], request.source.junction_max),
        Heat("Q1", values["Q1.power"], transistor_temperature(values), request.transistor.junction_max),
    ]
    amplifier = request.amplifier
    if amplifier.junction_to_ambient is not None:
        warm = values["temperature"] + values["U1.power"] * amplifier.junction_to_ambient.high
        found.append(Heat("U1", values["U1.power"], warm, amplifier.junction_max))
    return tuple(found)
