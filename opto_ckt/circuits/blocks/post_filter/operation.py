"""What the filter is beside its values: losses of coils, offset of followers, loads, and what a designer is told."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Heat, Refusal, Stress
from opto_ckt.circuits.blocks.post_filter.structure import asked, table
from opto_ckt.circuits.receivers.amplifier import either_sign, warmed
from opto_ckt.limits import Lanes, Limit, Limits, Values
from opto_ckt.parts.opamp import OpAmpData
from opto_ckt.request import ReceiverRequest
from opto_ckt.units import write

COIL_QUALITY = 30.0  #: of a coil at the filter's cut-off: sets the resistance of its winding; common practice
FIRST_BYPASS = 26  #: number from which capacitors of the block are bypass
USUAL = (0.65, 0.75)  #: band of a data receiver over its bit rate; common practice
MASK = 0.75  #: of the filter through which eyes are measured, of fourth order


def _followers(request: ReceiverRequest) -> list[str]:
    wanted = asked(request)
    return [f"U2{index}" for index in range(wanted.order // 2)] if wanted.form == "active" else []


def _data(request: ReceiverRequest) -> OpAmpData:
    record: OpAmpData = getattr(request, table(request))
    return record


def given(request: ReceiverRequest) -> dict[str, Limit]:
    """Offsets of the followers with either sign."""
    return {name: limit for ref in _followers(request) for name, limit in either_sign(_data(request), ref).items()}


def bias(values: Values, request: ReceiverRequest) -> dict[str, float | Lanes]:
    """Winding resistance of the coils, bias and offset of the followers."""
    found: dict[str, float | Lanes] = {
        f"{ref}.resistance": 2 * np.pi * asked(request).cutoff * values[ref] / COIL_QUALITY
        for ref in ("L20", "L21")
        if ref in values
    }
    total: float | Lanes = 0.0
    for ref in _followers(request):
        found |= warmed(values, _data(request), ref)
        total = total + np.abs(found[f"{ref}.offset"])
    return {**found, "filter.offset": total}


def stresses(values: Values, request: ReceiverRequest) -> tuple[Stress, ...]:
    """The output at its limit across any part; resistors charge the capacitors once a period of the band."""
    volts = np.maximum(values["supply.positive"], np.abs(values["supply.negative"]))
    numbered = [f"2{number}" for number in range(10)]
    capacitors = [f"C{number}" for number in numbered if f"C{number}" in values]
    charged = sum(values[ref] for ref in capacitors if int(ref[1:]) < FIRST_BYPASS)
    power = volts**2 * asked(request).cutoff * charged
    if request.load.resistance is not None:
        power = power + (volts / request.load.resistance) ** 2 * values["R20"]
    found = [Stress(ref, voltage=volts) for ref in capacitors]
    found += [Stress(f"R{n}", voltage=volts, power=power) for n in numbered if f"R{n}" in values]
    span = values["supply.positive"] - values["supply.negative"]
    return (*found, *(Stress(ref, voltage=span) for ref in _followers(request)))


def heat(values: Values, request: ReceiverRequest) -> tuple[Heat, ...]:
    """Each follower, where its sheet says what it is heated by."""
    followers = _followers(request)
    if not followers or _data(request).junction_to_ambient is None:
        return ()
    record, span = _data(request), values["supply.positive"] - values["supply.negative"]
    resistance = 0.0 if record.junction_to_ambient is None else record.junction_to_ambient.high
    found = []
    for ref in followers:
        power = span * values[f"{ref}.quiescent_current"]
        found.append(Heat(ref, power, values["temperature"] + power * resistance, record.junction_max))
    return tuple(found)


def remarks(values: Values, limits: Limits, request: ReceiverRequest) -> tuple[str, ...]:
    """Band against bit rate, what a ladder wants of its coils, the filter that is for measuring only."""
    wanted, bit_rate = asked(request), request.signal.bit_rate
    found = []
    if bit_rate is not None:
        ratio = wanted.cutoff / bit_rate
        if not USUAL[0] <= ratio <= USUAL[1]:
            found.append(
                f"the filter's band is {ratio:.3g} times the bit rate; {USUAL[0]:g} to {USUAL[1]:g} are usual, between"
                " noise and a closing eye"
            )
        if wanted.order == 4 and wanted.response == "bessel" and abs(ratio / MASK - 1) < 0.01:
            found.append(
                "a fourth-order Bessel-Thomson low-pass at 0.75 times the bit rate is what eyes are measured through:"
                " for comparing with a mask, not because a receiver needs it"
            )
    coils = [ref for ref in ("L20", "L21") if ref in values]
    if coils:
        resonance = write(10 * wanted.cutoff, "Hz")
        found.append(
            f"{' and '.join(coils)}: self-resonance above {resonance}; winding resistance taken from a quality of"
            f" {COIL_QUALITY:g} at {write(wanted.cutoff, 'Hz')}"
        )
    return tuple(found)


def refused(request: ReceiverRequest) -> tuple[Refusal, ...]:
    """An order that the kind of filter does not have; followers without an op amp."""
    wanted, where = asked(request), ("blocks", "post_filter", "order")
    if wanted.form == "rc" and wanted.order != 1:
        return (Refusal(where, f"an rc filter is of order 1, not {wanted.order}; kind = 'active' or 'ladder'"),)
    if wanted.form == "active" and wanted.order % 2:
        return (Refusal(where, f"an active filter is made of pairs, of order 2 or 4, not {wanted.order}"),)
    if wanted.form == "ladder" and wanted.order < 2:
        return (Refusal(where, "a ladder is of order 2 at least; kind = 'rc'"),)
    if wanted.form == "active" and getattr(request, table(request)) is None:
        return (Refusal(where[:2], "an active filter needs an op amp: a table [second_amplifier]"),)
    return ()
