"""What a modulation of the laser asks of its bias, refused where a zero level would go below threshold."""

from __future__ import annotations

import numpy as np

from opto_ckt.circuit import Bench
from opto_ckt.circuits.drivers.laser_power.given import tracking_error
from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.errors import InfeasibleError
from opto_ckt.formulas import laser_modulation
from opto_ckt.request import LaserPowerRequest
from opto_ckt.units import percent, write


def least_power(request: LaserPowerRequest, bench: Bench) -> float:
    """The least that a trimmed unit gives at the plane asked for: tracking error and drift take from it. [W]"""
    asked = 0.0 if request.signal.power is None else request.signal.power.nominal
    return asked * 10 ** (-tracking_error(request) / 10) * (1 - bench.high("U2.drift") - bench.high("set.drift"))


def refuse_dark_zero(request: LaserPowerRequest, bench: Bench) -> None:
    """The slope rises in the cold: the same modulation current then reaches further down.

    Raises
    ------
    InfeasibleError : the extinction ratio asked for would need a bias below threshold.
    """
    signal, data = request.signal, request.source
    if signal.extinction_ratio is None or signal.power is None:
        return
    power, density = signal.power.nominal, signal.mark_density
    least = least_power(request, bench)
    room = float(data.slope_at(ROOM_TEMPERATURE))
    current = float(
        laser_modulation.modulation_for_extinction(
            power=power, extinction_ratio=signal.extinction_ratio, mark_density=density, slope=room
        )
    )
    ends = [bench.low("temperature"), bench.high("temperature")]
    slopes = [float(data.slope_at(end)) for end in ends]
    steep, at = max(zip(slopes, ends, strict=True))
    if least > density * steep * current:
        return
    swing = least / (density * steep) * room
    most = (power + (1 - density) * swing) / (power - density * swing)
    raise InfeasibleError(
        f"an extinction ratio of {signal.extinction_ratio:.3g}, {10 * np.log10(signal.extinction_ratio):.3g} dB, set at"
        f" 25 °C by {write(current, 'A')} of modulation, takes the zero level below threshold at {write(at, '°C')},"
        f" where the slope is {percent(steep / room - 1)} higher, and the power down to {write(least, 'W')}",
        [
            f"signal.extinction_ratio ≤ {10 * np.log10(most * 0.999):.2f} dB",
            "a modulation current that follows the temperature",
            "less tracking error",
        ],
    )


def refuse_strained_monitor(request: LaserPowerRequest, bench: Bench) -> None:
    """In the dark the whole supply lies across the monitor.

    Raises
    ------
    InfeasibleError : it does not stand that.
    """
    limit, supply = request.source.monitor_reverse_max, bench.high("supply.positive")
    if limit is not None and supply > limit:
        raise InfeasibleError(
            f"in the dark the supply of up to {write(supply, 'V')} lies across the monitor, which stands"
            f" {write(limit, 'V')}",
            [
                f"conditions.supply.positive ≤ {write(bench.nominal('supply.positive') * limit / supply, 'V')}",
                f"a laser with source.monitor_reverse_max ≥ {write(supply, 'V')}",
            ],
        )
