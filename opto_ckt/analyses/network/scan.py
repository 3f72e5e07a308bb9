"""Scan of lanes over frequency, and exact refinement of what the scan brackets."""

from __future__ import annotations

from collections.abc import Callable
from math import log10, pi

import numpy as np
from numpy.typing import NDArray

from opto_ckt.analyses.network.lanes import EVERY_LANE, Array, Index, Lanes

POINTS_A_DECADE = 10
MARGIN = 2.0  #: how far past the extent of the roots the scan goes, itself a factor of 2 or more past the roots
LOWEST, HIGHEST = 1e-6, 1e13
"""Frequencies past which a network of lumped parts means nothing. [Hz]"""

STEPS = 5
"""Newton steps before a lane is bracketed."""

Mask = NDArray[np.bool_]
Derivative = Callable[[Array, Lanes], tuple[Array, Array]]
"""Value and slope at a point of each of the lanes given."""


def scan_points(extent: tuple[float, float], frequency_scale: float) -> Array:
    """Squares x of scaled ω, evenly spaced in their logarithm, from below the lowest root to above the last."""
    low = max(extent[0] / MARGIN, 2 * pi * LOWEST / frequency_scale)
    high = max(min(extent[1] * MARGIN, 2 * pi * HIGHEST / frequency_scale), 10 * low)
    count = int((log10(high) - log10(low)) * POINTS_A_DECADE) + 2
    return np.logspace(2 * log10(low), 2 * log10(high), count)


def falls(above: Mask) -> Mask:
    """Where a lane goes from above at a scan point to below at the next."""
    return np.asarray(above[:-1] & ~above[1:])


def first_of(changes: Mask) -> tuple[Index, Mask]:
    """Index of the first change of each lane (the last row where there is none), and whether there is one."""
    rank = np.arange(len(changes), 0, -1, dtype=np.uint8 if len(changes) < 256 else np.uint16)
    highest = (changes * rank[:, None]).max(axis=0, initial=0).astype(np.intp)
    return np.minimum(len(changes) - highest, len(changes) - 1), highest > 0


def last_of(changes: Mask) -> tuple[Index, Mask]:
    """Index of the last change of each lane (the first row where there is none), and whether there is one."""
    index, found = first_of(changes[::-1])
    return len(changes) - 1 - index, found


def every(changes: Mask) -> tuple[Index, Lanes]:
    """Every change as its index and its lane; the lanes as a slice where each has just one."""
    number = np.add.reduce(changes.view(np.uint8), axis=0, dtype=np.uint16)
    if (number == 1).all():
        return first_of(changes)[0], EVERY_LANE
    position, lane = np.nonzero(changes)
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


def refine(function: Derivative, low: Array, high: Array, start: Array, closeness: float = 1e-7) -> Array:
    """Root of a function that falls through zero between low and high.

    A few Newton steps for all lanes; those whose last step is not below `closeness` of the root (which leaves an
    error of about its square) are bracketed.
    """
    at = start
    with np.errstate(divide="ignore", invalid="ignore", over="ignore"):
        for _ in range(STEPS):
            value, slope = function(at, EVERY_LANE)
            value /= slope
            at = at - value
            np.maximum(at, low, out=at)
            np.minimum(at, high, out=at)
            far = np.abs(value) > closeness * at
            if not far.any():
                return at
        far |= np.isnan(value)
        lanes = np.flatnonzero(far)
        at[lanes] = _bracketed(function, low[lanes], high[lanes], lanes, closeness)
    return at


def _bracketed(function: Derivative, low: Array, high: Array, lanes: Index, closeness: float) -> Array:
    """The same by Newton steps that are replaced by the geometric mean of the bracket where they would leave it."""
    at = np.sqrt(low * high)
    for _ in range(100):
        value, slope = function(at, lanes)
        positive = value > 0
        low, high = np.where(positive, at, low), np.where(positive, high, at)
        after = at - value / slope
        after = np.where((after >= low) & (after <= high), after, np.sqrt(low * high))
        moving = np.abs(after - at) > closeness * after
        at = after
        if not moving.any():
            break
    return at


def crossing(polynomial: Array, points: Array, index: Index) -> Array:
    """Where a polynomial in x goes from positive to negative between a scan point and the next, lane by lane."""

    def function(at: Array, lanes: Lanes) -> tuple[Array, Array]:
        return value_and_slope(polynomial[:, lanes], at)

    low, high = points[index], points[index + 1]
    return refine(function, low, high, np.sqrt(low * high))
