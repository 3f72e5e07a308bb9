"""What no receiver can do for a request, said with the key that asks for it."""

from __future__ import annotations

from opto_ckt.circuit import Refusal
from opto_ckt.circuits.receivers import avalanche
from opto_ckt.circuits.receivers.detector import midband
from opto_ckt.request import ReceiverRequest

WITHOUT_DC = ("low_cutoff", "droop")
"""Figures that have a meaning where DC does not pass."""

OF_DATA = ("sensitivity", "dynamic_range", "eye_opening", "eye_penalty", "photons_per_bit")
"""Figures that have a meaning for bits only."""


def refused(request: ReceiverRequest) -> tuple[Refusal, ...]:
    """A gain beyond breakdown; figures of data for an analog signal, of an area or a cut-off that is not there."""
    found = list(avalanche.refused(request))
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
