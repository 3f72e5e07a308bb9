"""What no receiver can do for a request, said with the key that asks for it."""

from __future__ import annotations

from opto_ckt.circuit import Refusal
from opto_ckt.circuits.receivers import avalanche
from opto_ckt.circuits.receivers.detector import bias_reach, midband
from opto_ckt.parts.avalanche import gain_follows
from opto_ckt.request import ReceiverRequest
from opto_ckt.units import write

WITHOUT_DC = ("low_cutoff", "droop")
"""Figures that have a meaning where DC does not pass."""

OF_DATA = ("sensitivity", "dynamic_range", "eye_opening", "eye_penalty", "photons_per_bit")
"""Figures that have a meaning for bits only."""


def refused(request: ReceiverRequest) -> tuple[Refusal, ...]:
    """A detector beyond its limits; figures of data for an analog signal, of an area or a cut-off that is not there."""
    found = [*avalanche.refused(request), *_overdriven(request)]
    if request.signal.bit_rate is None:
        found += [
            Refusal(("require", name), "has a meaning for a bit rate only; this signal has a band")
            for name in OF_DATA
            if name in request.require
        ]
    if midband(request) is None:
        found += [
            Refusal(("require", name), "has a meaning where DC does not pass; fit ac_coupling or servo under [blocks]")
            for name in WITHOUT_DC
            if name in request.require
        ]
    if request.detector.area is None and "detectivity" in request.require:
        found.append(Refusal(("require", "detectivity"), "needs area under [detector]"))
    return tuple(found)


def _overdriven(request: ReceiverRequest) -> list[Refusal]:
    """A bias whose tolerance passes the detector's limit; light that makes more current than the detector stands."""
    detector, found = request.detector, []
    reach, limit = bias_reach(request, 1), detector.reverse_voltage_max
    if reach > limit and not gain_follows(detector):
        found.append(
            Refusal(
                ("detector", "reverse_bias"),
                f"{write(detector.resting_bias, 'V')} may reach {write(reach, 'V')} within the tolerance of its supply,"
                f" reverse_voltage_max is {write(limit, 'V')}; at most"
                f" {write(detector.resting_bias * limit / reach, 'V')}, or a closer tolerance",
            )
        )
    return found if (overlit := avalanche.overlit(request)) is None else [*found, overlit]
