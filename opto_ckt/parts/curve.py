"""Curves through the few points that a data sheet lists."""

from __future__ import annotations

from collections.abc import Sequence
from typing import Any

import numpy as np

from opto_ckt.formulas.formula import Real


def between(x: Real, *, at: Sequence[float], values: Sequence[float]) -> Any:
    """Straight lines between rising points; the end value is kept beyond either end."""
    return np.interp(x, at, values)


def along(x: Real, *, at: Sequence[float], values: Sequence[float]) -> Any:
    """Straight lines between rising points; the line of the end interval goes on beyond either end."""
    if len(at) == 1:
        return np.full_like(np.asarray(x, dtype=float), values[0])[()]
    xs, ys = np.asarray(at), np.asarray(values)
    interval = np.clip(np.searchsorted(xs, x) - 1, 0, len(xs) - 2)
    slope = (ys[interval + 1] - ys[interval]) / (xs[interval + 1] - xs[interval])
    return ys[interval] + slope * (np.asarray(x) - xs[interval])


def forward_voltage(current: Real, *, at: Sequence[float], values: Sequence[float]) -> Any:
    """Forward voltage of a junction through listed points of current and voltage.

    Linear in the logarithm of the current up to the last point, beyond it linear in the current with the slope of
    the last interval (series resistance); never below zero. One point alone is kept for every current.
    """
    if len(at) == 1:
        return along(current, at=at, values=values)
    drawn = np.maximum(np.asarray(current, dtype=float), at[0] * 1e-12)
    inside = along(np.log(drawn), at=[float(np.log(entry)) for entry in at], values=values)
    beyond = along(drawn, at=at[-2:], values=values[-2:])
    return np.maximum(np.where(drawn > at[-1], beyond, inside), 0.0)[()]
