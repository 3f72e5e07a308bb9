"""Where a receiver that does not pass DC may cut off."""

from __future__ import annotations

from opto_ckt.formulas.coupling import corner_for_droop
from opto_ckt.request import ReceiverRequest
from opto_ckt.request.blocks import LowCutoff
from opto_ckt.units import percent, write

DROOP = 0.05  #: where neither droop nor cut-off is asked for; common practice


def allowed(request: ReceiverRequest, asked: LowCutoff | None) -> tuple[float, str] | None:
    """Highest low cut-off and why; None where the band of an analog signal begins at DC. [Hz]"""
    signal = request.signal
    if asked is not None and asked.low_cutoff is not None:
        return asked.low_cutoff, f"cut-off at {write(asked.low_cutoff, 'Hz')}"
    if signal.bit_rate is None:
        least = signal.band.min if signal.band is not None else 0.0
        return (least, f"cut-off at {write(least, 'Hz')}, where the band begins") if least else None
    droop = DROOP if asked is None or asked.droop is None else asked.droop
    corner = float(corner_for_droop(droop=droop, duration=signal.run_length / signal.bit_rate))
    after = f"{percent(droop)} of droop after {signal.run_length} equal bits"
    return corner, f"cut-off at {write(corner, 'Hz')}: {after}"
