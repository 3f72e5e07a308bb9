"""Load, faults and advice of the switched stage, beside those of a plain one."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Fault, Stress
from opto_ckt.circuits.receivers.detector import one_level
from opto_ckt.circuits.receivers.feedback import faults as plain_faults
from opto_ckt.circuits.receivers.feedback import loads
from opto_ckt.circuits.receivers.feedback import remarks as plain_remarks
from opto_ckt.circuits.receivers.tia_switched.operation import conducts
from opto_ckt.circuits.receivers.tia_switched.structure import Branch, branches
from opto_ckt.limits import Limits, Values
from opto_ckt.request import SwitchedRequest
from opto_ckt.units import write

BACK = 0.7  #: of a range's light at which the range below is taken again, so that it does not hunt; common practice


def stresses(values: Values, request: SwitchedRequest) -> tuple[Stress, ...]:
    """As of a plain stage; each branch carries what its share of the output drives through it."""
    most = one_level(values, request) + values["D1.ambient_current"] + values["D1.dark_current"]
    output = most * values["feedback_resistance"]
    found = [
        Stress("R1", voltage=output, power=output**2 / values["R1"], current=output / values["R1"]),
        Stress("C1", voltage=output),
        *loads.around(values, request),
    ]
    for branch in branches(request):
        resistance = values[branch.resistor]
        across = np.where(conducts(values, branch), output, 0.0)
        found += [
            Stress(branch.resistor, voltage=output, power=across**2 / resistance, current=across / resistance),
            Stress(branch.capacitor, voltage=output),
            Stress(branch.switch, voltage=output, current=across / resistance),
        ]
    return tuple(found)


def faults(request: SwitchedRequest) -> tuple[Fault, ...]:
    """As of a plain stage; each contact stuck open in its range, or closed in the one below."""
    most = request.signal.power.high
    found = list(plain_faults.faults(request))
    for branch in branches(request):
        light = request.gain_ranges[branch.place].power
        others = {other.closed: 0.0 for other in branches(request)}
        stuck = {**others, branch.closed: 1.0, f"{branch.switch}.works": 0.0, "signal.power": min(light, most)}
        found.append(Fault(f"{branch.switch} stuck open, {write(light, 'W')}", stuck))
    return tuple(found)


def remarks(values: Values, limits: Limits, request: SwitchedRequest) -> tuple[str, ...]:
    """What each range is, when to change, and what the open contacts leak."""
    found = [_range(values, request, None), *(_range(values, request, branch) for branch in branches(request))]
    found.append(
        "the contacts sit at the output's end of each branch, where their capacitance to ground meets a low impedance;"
        " an output step of some settling times follows each change, blank it"
    )
    return (*found, *plain_remarks.remarks(values, limits, request))


def _range(values: Values, request: SwitchedRequest, branch: Branch | None) -> str:
    place = 0 if branch is None else branch.place
    light = request.gain_ranges[place].power
    used = np.isclose(values["range.light"], light)
    total = float(np.median(np.asarray(values["feedback_resistance"])[used]))
    contact = f"{branch.switch} closed" if branch else "all contacts open"
    below = "" if branch is None else f"; back below {write(BACK * request.gain_ranges[place - 1].power, 'W')}"
    return f"range {place + 1}, {contact}: up to {write(light, 'W')}, {write(total, 'Ω')} of feedback{below}"
