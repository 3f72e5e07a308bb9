"""Load, heat, faults and advice of two detectors and their amplifiers."""

from __future__ import annotations

from dataclasses import replace

import numpy as np

from opto_ckt.circuit import Fault, FaultOutcome, Heat, Stress
from opto_ckt.circuits.receivers.feedback import faults as stage_faults
from opto_ckt.circuits.receivers.feedback import loads as stage_loads
from opto_ckt.circuits.receivers.feedback import remarks as stage_remarks
from opto_ckt.circuits.receivers.tia_balanced.structure import by_outputs
from opto_ckt.limits import Limits, Values
from opto_ckt.request import OpAmpReceiverRequest
from opto_ckt.topology import SHORT
from opto_ckt.units import percent

TWICE = {"R1": "R4", "C1": "C4", "U1": "U2", "D1": "D2"}


def stresses(values: Values, request: OpAmpReceiverRequest) -> tuple[Stress, ...]:
    """As of one amplifier; what is there twice bears the same."""
    found = stage_loads.stresses(values, request)
    alike = TWICE if by_outputs(request) else {"D1": "D2"}
    return (*found, *(replace(stress, ref=alike[stress.ref]) for stress in found if stress.ref in alike))


def heat(values: Values, request: OpAmpReceiverRequest) -> tuple[Heat, ...]:
    """Each op amp."""
    found = stage_loads.heat(values, request)
    return (*found, *(replace(row, ref="U2") for row in found)) if by_outputs(request) else found


def faults(request: OpAmpReceiverRequest) -> tuple[Fault, ...]:
    """Those of one detector and amplifier, and of the second detector."""
    dark = {"D2.responsivity": 0.0, "D2.dark_current": 0.0}
    second = (Fault("second detector open", dark), Fault("second detector short", {"D2.shunt_resistance": SHORT}))
    return (*stage_faults.faults(request), *second)


def outcome(fault: Fault, values: Values, request: OpAmpReceiverRequest) -> FaultOutcome:
    """Worst where the light of the other diode is missing: then all of one passes the amplifier."""
    seen = values
    if "second detector short" in fault.case:
        seen = {**values, "D1.shunt_resistance": values["D2.shunt_resistance"]}
    return stage_faults.outcome(fault, seen, request)


def remarks(values: Values, limits: Limits, request: OpAmpReceiverRequest) -> tuple[str, ...]:
    """What light on either diode does, and what the match rests on."""
    tolerance = percent(request.preferred.resistors.tolerance)
    found = [
        "D1 has the signal, D2 steady light of the same average power; swing and overload are those of D1 alone, when"
        " the other beam is missing",
    ]
    if by_outputs(request):
        found.append(
            f"R1 and R4, C1 and C4 decide the rejection beside the diodes: {tolerance} parts of one lot, or"
            " matched ones; opposite signals on both diodes give twice the output for √2 of the noise"
        )
    else:
        found.append("the match rests on the two diodes: pick them from one lot, trim the light; R1 and C1 are common")
    spread = float(np.max(values["D1.responsivity"]) / np.min(values["D2.responsivity"]) - 1)
    found.append(f"responsivities may differ by {percent(spread, digits=2)} by their sheet")
    return (*found, *stage_remarks.remarks(values, limits, request))
