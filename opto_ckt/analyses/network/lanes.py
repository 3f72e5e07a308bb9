"""Polynomials on lanes: arrays of coefficients, lowest order first along the first axis, one column a lane."""

from __future__ import annotations

from collections.abc import Iterator
from typing import Any

import numpy as np
from numpy.typing import NDArray

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]
Index = NDArray[np.intp]
Lanes = slice | Index

EVERY_LANE = slice(None)


def trimmed(coefficients: Array) -> Array:
    """Without leading rows that are zero in every lane; one row at least."""
    order = len(coefficients)
    while order > 1 and not coefficients[order - 1].any():
        order -= 1
    return coefficients[:order]


def by_order(coefficients: Array) -> Iterator[tuple[int, int, Lanes]]:
    """Lowest and highest order that is not zero, and the lanes where it is so; a lane of zeros is in no group."""
    top = len(coefficients) - 1
    if coefficients[0].all() and coefficients[top].all():
        yield 0, top, EVERY_LANE
        return
    present = coefficients != 0
    low = np.argmax(present, axis=0)
    high = top - np.argmax(present[::-1], axis=0)
    for code in sorted(set(np.where(present.any(axis=0), low * (top + 1) + high, -1).tolist())):
        if code >= 0:
            first, last = divmod(code, top + 1)
            yield first, last, np.flatnonzero(present.any(axis=0) & (low == first) & (high == last))


def horner(coefficients: Array, at: Any) -> Any:
    """Value of a polynomial at real or complex points that broadcast against the lanes."""
    value = coefficients[-1] + np.zeros_like(at)
    for row in coefficients[-2::-1]:
        value *= at
        value += row
    return value


def over_points(polynomial: Array, points: Array, weight: Array | float = 1.0) -> Array:
    """Values of a polynomial times a weight at every point, for every lane; shape (points, lanes).

    Where a wild lane leaves the range of numbers it holds inf or nan.
    """
    with np.errstate(over="ignore", invalid="ignore"):
        powers = np.vander(points, len(polynomial), increasing=True)
        return np.asarray((powers.T * weight).T @ polynomial)


def difference(left: Array, right: Array) -> Array:
    """left - right, of whatever orders."""
    result = np.zeros((max(len(left), len(right)), left.shape[1]))
    result[: len(left)] = left
    result[: len(right)] -= right
    return result


def root_extent(coefficients: Array) -> tuple[float, float]:
    """Magnitudes between which the roots (zero and infinity apart) lie, over all lanes, to within the order or so.

    First and last slope of the Newton polygon of each lane: all roots lie between half the one and twice the other.
    """
    smallest, largest = np.inf, 0.0
    for low, high, lanes in by_order(coefficients):
        own = np.abs(coefficients[low : high + 1, lanes])
        if np.isnan(own[0]).any():
            own = own[:, ~np.isnan(own[0])]
        with np.errstate(divide="ignore"):
            for step in range(1, high - low + 1):
                smallest = min(smallest, float((own[0] / own[step]).min(initial=np.inf)) ** (1 / step))
                largest = max(largest, float((own[-1 - step] / own[-1]).max(initial=0.0)) ** (1 / step))
    return smallest / 2, largest * 2
