"""Forward voltage of anything with a junction, from the points that its sheet lists."""

from __future__ import annotations

from typing import Annotated, Any

import numpy as np

from opto_ckt.formulas.formula import Real
from opto_ckt.parts.curve import forward_voltage
from opto_ckt.parts.record import Spread, Table, Unit


class ForwardPoint(Table):
    """Forward voltage at one current."""

    current: Annotated[float, Unit("A", "20 mA")]
    voltage: Annotated[Spread, Unit("V", "1.6 V")]


def voltage_through(points: tuple[ForwardPoint, ...], current: Real, position: Real = 0.0) -> Any:
    """Forward voltage [V] at a current [A] through the listed points; see `curve.forward_voltage`.

    `position` runs from -1, the least voltage that the sheet allows, through 0, the nominal one, to 1, the greatest.
    """
    at = [point.current for point in points]
    low, typ, high = (
        forward_voltage(current, at=at, values=[float(getattr(point.voltage, side)) for point in points])
        for side in ("low", "nominal", "high")
    )
    place = np.asarray(position, dtype=float)
    return typ + np.maximum(place, 0.0) * (high - typ) - np.minimum(place, 0.0) * (low - typ)
