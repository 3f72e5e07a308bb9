"""Scan of lanes over frequency, and exact refinement of what the scan brackets."""

from __future__ import annotations

from collections.abc import Callable
from math import log10, pi

import numpy as np
from numpy.typing import NDArray

from opto_ckt.analyses.network.lanes import EVERY_LANE, Array, Lanes

POINTS_A_DECADE = 10
LOWEST, HIGHEST = 1e-6, 1e13
"""Frequencies past which a network of lumped parts means nothing. [Hz]"""

Mask = NDArray[np.bool_]
Index = NDArray[np.intp]
Derivative = Callable[[Array, Index | slice], tuple[Array, Array]]
"""Value and slope at a point of each of the lanes given."""


def scan_points(extent: tuple[float, float], frequency_scale: float) -> Array:
    """Squares x of scaled ω, evenly spaced in their logarithm, from below the lowest root to above the last."""
    low = max(extent[0] / 5, 2 * pi * LOWEST / frequency_scale)
    high = max(min(extent[1] * 5, 2 * pi * HIGHEST / frequency_scale), 10 * low)
    count = int((log10(high) - log10(low)) * POINTS_A_DECADE) + 2
    return np.logspace(2 * log10(low), 2 * log10(high), count)


def falls(above: Mask) -> Mask:
    """Where a lane goes from above at a scan point to below at the next."""
    return np.asarray(above[:-1] & ~above[1:])


def first_of(changes: Mask) -> tuple[Index, Mask]:
    """Index of the first change of each lane, and whether there is one."""
    position, lane = np.nonzero(changes)
    index = np.full(changes.shape[1], -1, dtype=np.intp)
    index[lane[::-1]] = position[::-1]
    return np.maximum(index, 0), index >= 0


def last_of(changes: Mask) -> tuple[Index, Mask]:
    """Index of the last change of each lane, and whether there is one."""
    position, lane = np.nonzero(changes)
    index = np.full(changes.shape[1], -1, dtype=np.intp)
    index[lane] = position
    return np.maximum(index, 0), index >= 0


def every(changes: Mask) -> tuple[Index, Lanes]:
    """Every change as its index and its lane; the lanes as a slice where each has just one."""
    position, lane = np.nonzero(changes)
    lanes = changes.shape[1]
    if len(lane) == lanes:
        index = np.full(lanes, -1, dtype=np.intp)
        index[lane] = position
        if index.min(initial=0) >= 0:
            return index, EVERY_LANE
    return position, lane


def value_and_slope(polynomial: Array, at: Array) -> tuple[Array, Array]:
    """A polynomial and its derivative at one point of each lane."""
    value = polynomial[-1].copy()
    slope = np.zeros_like(value)
    for row in polynomial[-2::-1]:
        slope *= at
        slope += value
        value *= at
        value += row
    return value, slope


def refine(function: Derivative, low: Array, high: Array, closeness: float = 1e-7) -> Array:
    """Root of a function that falls through zero between low and high, by Newton steps kept inside the bracket.

    A step that would leave the bracket is replaced by its geometric mean. Lanes leave the iteration once a step is
    smaller than `closeness` of the root, which leaves an error of about its square.
    """
    low, high = low.copy(), high.copy()
    at = np.sqrt(low * high)
    root = at
    active: Index | slice = slice(None)
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        for _ in range(100):
            value, slope = function(at, active)
            positive = value > 0
            np.copyto(low, at, where=positive)
            np.copyto(high, at, where=~positive)
            after = at - value / slope
            inside = (after >= low) & (after <= high)
            if not inside.all():
                after = np.where(inside, after, np.sqrt(low * high))
            moving = np.abs(after - at) > closeness * after
            at = after
            if isinstance(active, slice):
                root = after
            else:
                root[active] = after
            count = np.count_nonzero(moving)
            if not count:
                break
            if count < len(moving) / 2:
                active = np.flatnonzero(moving) if isinstance(active, slice) else active[moving]
                at, low, high = at[moving], low[moving], high[moving]
    return root


def crossing(polynomial: Array, points: Array, index: Index) -> Array:
    """Where a polynomial in x goes from positive to negative between a scan point and the next, lane by lane."""

    def function(at: Array, lanes: Index | slice) -> tuple[Array, Array]:
        return value_and_slope(polynomial[:, lanes], at)

    return refine(function, points[index], points[index + 1])
