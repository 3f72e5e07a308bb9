"""Forward voltage of anything with a junction, from the points that its sheet lists."""

from __future__ import annotations

from collections.abc import Iterator
from itertools import pairwise
from typing import Annotated, Any

import numpy as np

from opto_ckt.formulas.formula import Real
from opto_ckt.parts.curve import forward_voltage
from opto_ckt.parts.record import Finding, Spread, Table, Unit
from opto_ckt.units import write


class ForwardPoint(Table):
    """Forward voltage at one current."""

    current: Annotated[float, Unit("A", "20 mA")]
    voltage: Annotated[Spread, Unit("V", "1.6 V")]


def rising(forward: tuple[ForwardPoint, ...]) -> Iterator[Finding]:
    """What is wrong with points of which a larger current does not take more voltage."""
    for lower, upper in pairwise(forward):
        if upper.voltage.nominal <= lower.voltage.nominal:
            yield Finding(
                ("forward",),
                f"{write(upper.voltage.nominal, 'V')} at {write(upper.current, 'A')} is not above"
                f" {write(lower.voltage.nominal, 'V')} at {write(lower.current, 'A')}: a forward voltage rises with"
                " the current",
            )


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
