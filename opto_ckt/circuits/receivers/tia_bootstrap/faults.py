"""What happens to the bootstrapped stage when a joint opens, a part shorts or a supply is missing."""

from __future__ import annotations

import numpy as np

from opto_ckt.analyses import response
from opto_ckt.circuit import Fault, FaultOutcome
from opto_ckt.circuits.receivers.detector import POLARITY
from opto_ckt.circuits.receivers.feedback import faults as feedback
from opto_ckt.circuits.receivers.tia_bootstrap import follower, structure
from opto_ckt.circuits.receivers.tia_bootstrap.remarks import evaluated
from opto_ckt.limits import Lanes, Values
from opto_ckt.request import BootstrapRequest
from opto_ckt.topology import OPEN, SHORT
from opto_ckt.units import write

UNBOOTSTRAPPED = ("R4 open", "C4 open", "R5 short")
COUPLED = "C4 short"
GONE = 1e-15  #: capacitance of an open joint [F]


def faults(request: BootstrapRequest) -> tuple[Fault, ...]:
    """Those of the stage; the follower without current, its coupling open or shorted, the detector's feed shorted."""
    return (
        *feedback.faults(request),
        Fault("R4 open", {"R4": OPEN}),
        Fault("C4 open", {"C4": GONE}),
        Fault("R5 short", {"R5": SHORT}),
        Fault(COUPLED, {"C4": SHORT}),
    )


def outcome(fault: Fault, values: Values, request: BootstrapRequest) -> FaultOutcome:
    """Of the stage as of any; of the follower what it leaves of the bootstrap, and where the detector is pulled to."""
    if fault.case in UNBOOTSTRAPPED:
        return _unbootstrapped(values, request)
    if fault.case == COUPLED:
        return _coupled(values, request)
    return feedback.outcome(fault, {**values, "R10": values.get("R10", 0.0) + values["R5"]}, request)


def _unbootstrapped(values: Values, request: BootstrapRequest) -> FaultOutcome:
    """The detector's capacitance in full: nothing is harmed, but the response is another."""
    found = evaluated(structure.topology(request), values)
    least, most = float(np.min(response.bandwidth(found))), float(np.max(response.peaking(found)))
    whole = float(np.max(values["D1.capacitance"] + np.asarray(values["J1.control_source_capacitance"])))
    return FaultOutcome(
        f"no bootstrap, up to {write(whole, 'F')} in full: bandwidth down to {write(least, 'Hz')},"
        f" peaking up to {write(most, 'dB')}",
        True,
    )


def _coupled(values: Values, request: BootstrapRequest) -> FaultOutcome:
    """The detector hangs on the source of J1 instead of its supply."""
    sign = POLARITY[request.detector.output] * follower.POLARITY[request.follower.kind]
    reverse = np.asarray(-sign * values["J1.reverse"])
    if np.max(reverse) > 0:
        return FaultOutcome(
            f"D1 is left with {_span(reverse)} of reverse bias, from the source of J1; its capacitance grows", True
        )
    current = float(np.max(values["J1.drain_current"]))
    said = f"J1 drives D1 forward, up to {write(current, 'A')} into the summing node; the output goes to its limit"
    limit = request.detector.photocurrent_max
    if limit is None or current <= limit:
        return FaultOutcome(said, True)
    return FaultOutcome(f"{said}, beyond the {write(limit, 'A')} that D1 stands", False)


def _span(voltage: Lanes) -> str:
    ends = dict.fromkeys(write(float(end), "V", 2) for end in (np.min(voltage), np.max(voltage)))
    return " … ".join(ends)
