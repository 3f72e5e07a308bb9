"""What the parts of the constant-current laser driver must stand."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Stress
from opto_ckt.circuits.drivers.side import side_of
from opto_ckt.circuits.drivers.warmth import resistor_load, supply_drop
from opto_ckt.limits import Values
from opto_ckt.request import LaserDriverRequest


def stresses(values: Values, request: LaserDriverRequest) -> tuple[Stress, ...]:
    """Resistors and transistor with Q1 hard on, where that is worse; capacitors at the whole supply."""
    supply, span = values["supply.positive"], values["supply.span"]
    current = np.maximum(values["Q1.drain_current"], values["hard_on_current"])
    sensed = current + values["Q1.control_current"]
    reference = np.abs(values["node.ref"] - (0.0 if side_of(request) == "low" else values["node.rail"]))
    divider = reference / (values["R2"] + values["R3"])
    feed = values["node.rail"] - reference
    found = [
        resistor_load("R1", sensed, values),
        resistor_load("R7", current, values),
        resistor_load("R2", divider, values),
        resistor_load("R3", divider, values),
        Stress("R6", power=feed**2 / values["R6"], voltage=feed, current=feed / values["R6"]),
        Stress("R8", power=supply_drop(values) ** 2 / values["R8"], voltage=supply_drop(values)),
        Stress("R5", voltage=supply, power=values["Q1.control_current"] ** 2 * values["R5"]),
        Stress("R4", voltage=supply),
        Stress("R9", voltage=values["node.rail"] * 0.0 + reference),
        Stress("Q1", power=values["Q1.power"], voltage=supply, current=current),
        Stress("D1", power=values["D1.heat"], voltage=values["D1.forward_voltage"], current=values["D1.current"]),
        Stress("U1", power=values["U1.power"], voltage=span, current=values["Q1.control_current"]),
        Stress("U2", power=values["U2.current"] * reference, voltage=reference, current=values["U2.current"]),
        Stress("L1", current=values["supply.current"]),
        Stress("C1", voltage=span),
        Stress("C2", voltage=reference),
        *(Stress(ref, voltage=supply) for ref in ("C3", "C8", "R11", "R12", "Q2", "Q3")),
        Stress("C9", voltage=np.abs(values["supply.negative"])),
        Stress("D2", voltage=supply),
    ]
    return tuple(stress for stress in found if stress.ref[0] not in "RC" or stress.ref in values)
