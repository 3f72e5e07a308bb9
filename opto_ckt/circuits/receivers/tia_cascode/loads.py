"""Load and heat of the parts of the cascode stage."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Heat, Stress
from opto_ckt.circuits.receivers.feedback import loads
from opto_ckt.circuits.receivers.tia_cascode.operation import return_rail
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import CascodeRequest


def stresses(values: Values, request: CascodeRequest) -> tuple[Stress, ...]:
    """What the bias currents leave of each other goes through R1 besides the light; each bias current its resistor."""
    through_r1 = loads.most_current(values, request) + np.abs(values["unbalanced_current"])
    emitter = values["Q1.emitter_current"] + loads.most_current(values, request)
    drop = np.abs(return_rail(values, request) - values["input_level"])
    across = values["Q1.base_emitter"]
    return (
        _resistor("R1", through_r1, values),
        Stress("C1", voltage=through_r1 * values["R1"]),
        Stress("Q1", power=emitter * across, voltage=across, current=emitter),
        _resistor("R4", values["Q1.emitter_current"], values),
        _resistor("R5", drop / values["R5"], values),
        *loads.around(values, request),
    )


def _resistor(ref: str, current: float | Lanes, values: Values) -> Stress:
    return Stress(ref, power=current**2 * values[ref], voltage=current * values[ref], current=current)


def heat(values: Values, request: CascodeRequest) -> tuple[Heat, ...]:
    """The op amp where its sheet says what it is heated by, and Q1."""
    power = values["Q1.drain_current"] * values["Q1.base_emitter"]
    name = "Q1.junction_to_ambient" if "Q1.junction_to_ambient" in values else "Q1.junction_to_case"
    hot = values["temperature"] + power * values[name]
    return (*loads.heat(values, request), Heat("Q1", power, hot, request.transistor.junction_max))
