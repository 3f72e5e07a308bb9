"""What the parts of the power-controlled laser driver must stand, and how warm they get."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Heat, Stress
from opto_ckt.circuits.drivers.side import side_of
from opto_ckt.circuits.drivers.warmth import heat as source_heat
from opto_ckt.circuits.drivers.warmth import resistor_load, supply_drop
from opto_ckt.limits import Values
from opto_ckt.request import LaserPowerRequest


def stresses(values: Values, request: LaserPowerRequest) -> tuple[Stress, ...]:
    """Resistors and transistor with Q1 hard on, where that is worse; capacitors and inputs at the whole supply."""
    supply, rail, span = values["supply.positive"], values["node.rail"], values["supply.span"]
    current = np.maximum(values["Q1.drain_current"], values["hard_on_current"])
    near = 0.0 if side_of(request) == "low" else rail
    reference, watched = np.abs(values["node.ref"] - near), np.abs(values["node.mon"] - near)
    divider = rail / (values["R2"] + values["R3"])
    shorted, least = rail - reference, values["R14"]
    found = [
        resistor_load("R1", current + values["Q1.control_current"], values),
        resistor_load("R7", current, values),
        resistor_load("R2", divider, values),
        resistor_load("R3", divider, values),
        Stress("R6", power=shorted**2 / values["R6"], voltage=shorted, current=shorted / values["R6"]),
        Stress("R8", power=supply_drop(values) ** 2 / values["R8"], voltage=supply_drop(values)),
        Stress("R5", voltage=supply, power=values["Q1.control_current"] ** 2 * values["R5"]),
        Stress("R14", power=rail**2 / least, voltage=rail, current=rail / least),
        Stress("R16", power=rail**2 / values["R16"], voltage=rail),
        Stress("RV1", power=watched**2 / (values["R14"] + values["RV1.setting"]), voltage=watched,
               current=watched / (values["R14"] + values["RV1.setting"])),
        *(Stress(ref, voltage=rail + 0.0 * supply) for ref in ("R4", "R9", "R10", "R13", "R15")),
        Stress("Q1", power=values["Q1.power"], voltage=supply, current=current),
        Stress("D1", power=values["D1.heat"], voltage=values["D1.forward_voltage"], current=values["D1.current"]),
        Stress("U1", power=values["U1.power"], voltage=span, current=values["Q1.control_current"]),
        Stress("U2", power=values["U2.current"] * reference, voltage=reference, current=values["U2.current"]),
        Stress("U3", power=values["U3.power"], voltage=span, current=divider),
        Stress("L1", current=values["supply.current"]),
        *(Stress(ref, voltage=span) for ref in ("C1", "C4")),
        Stress("C2", voltage=reference),
        *(Stress(ref, voltage=supply) for ref in ("C3", "C8", "R11", "R12", "Q2", "Q3")),
        Stress("D2", voltage=supply),
    ]  # fmt: skip
    return tuple(stress for stress in found if stress.ref[0] not in "RC" or stress.ref in values)


def heat(values: Values, request: LaserPowerRequest) -> tuple[Heat, ...]:
    """Laser, pass transistor and op amp as in any driver, the integrator besides."""
    found, amplifier = source_heat(values, request), request.amplifier
    if amplifier.junction_to_ambient is None:
        return found
    warm = values["temperature"] + values["U3.power"] * amplifier.junction_to_ambient.high
    return (*found, Heat("U3", values["U3.power"], warm, amplifier.junction_max))
