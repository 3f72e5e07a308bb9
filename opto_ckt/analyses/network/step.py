"""Rise time and overshoot of a step response, found on a grid of time and refined on the exact exponentials."""

from __future__ import annotations

from collections.abc import Callable
from math import ceil

import numpy as np

from opto_ckt.analyses.network.lanes import Array, Lanes
from opto_ckt.analyses.network.modes import Modes
from opto_ckt.analyses.network.scan import first_of, refine

POINTS_A_DECADE = 40
EARLIEST, LATEST = 0.02, 40.0
"""Ends of the grid, in units of the shortest and of the longest time constant."""

TOGETHER = 256  #: lanes looked at together

Measure = Callable[[Modes, Array, Array, Array], Array]


def rise_time(modes: Modes, reference: Array | None) -> Array:
    """Time from 10 % to 90 % of the reference level (the final value if None), in scaled time; nan if not reached."""
    return _measured(_rise, modes, reference)


def overshoot(modes: Modes, reference: Array | None) -> Array:
    """Largest excess over the reference level (the final value if None), as a part of it."""
    return _measured(_excess, modes, reference)


def _measured(measure: Measure, modes: Modes, reference: Array | None) -> Array:
    lanes = len(modes.constant)
    result = np.zeros(lanes)
    if not len(modes.poles):
        return result
    for start in range(0, lanes, TOGETHER):
        part = slice(start, start + TOGETHER)
        some = modes.lanes(part)
        time = _grid(some)
        response = some.response(time)
        level = some.constant
        if reference is not None:
            highest = np.argmax(np.abs(response), axis=0)
            level = np.copysign(reference[part], response[highest, np.arange(len(level))])
        with np.errstate(divide="ignore", invalid="ignore"):
            result[part] = measure(some, time, response / level, level)
    return result


def _grid(modes: Modes) -> Array:
    """Times that cover every mode of each lane, shape (points, lanes)."""
    with np.errstate(divide="ignore", invalid="ignore"):
        earliest = EARLIEST / np.nanmax(np.abs(modes.poles), axis=0, initial=1e-30)
        slowness = np.where(np.isnan(modes.poles), -np.inf, modes.poles.real)
        latest = LATEST / np.clip(np.abs(slowness.max(axis=0)), 1e-12, 1e12)
    decades = np.log10(np.maximum(latest / earliest, 10.0))
    count = ceil(POINTS_A_DECADE * float(decades.max())) + 1
    return np.asarray(earliest * 10 ** (np.linspace(0, 1, count)[:, None] * decades))


def _rise(modes: Modes, time: Array, relative: Array, level: Array) -> Array:
    return _reached(modes, time, relative, level, 0.9) - _reached(modes, time, relative, level, 0.1)


def _reached(modes: Modes, time: Array, relative: Array, level: Array, part: float) -> Array:
    """When a part of the level is first reached; zero where it is there from the start."""
    index, found = first_of(relative >= part)
    lanes = np.arange(len(level))
    low = np.where(index > 0, time[index - 1, lanes], time[0] * 1e-6)

    def missing(at: Array, active: Lanes) -> tuple[Array, Array]:
        some = modes.lanes(active)
        return part - some.response(at) / level[active], -some.response(at, 1) / level[active]

    high = time[index, lanes]
    at = refine(missing, low, high, (low + high) / 2)
    at = np.where(modes.response(np.zeros_like(level)) / level >= part, 0.0, at)
    return np.where(found, at, np.nan)


def _excess(modes: Modes, time: Array, relative: Array, level: Array) -> Array:
    index = np.argmax(relative, axis=0)
    lanes = np.arange(len(level))
    largest = relative[index, lanes]
    inner = np.flatnonzero((index > 0) & (index < len(time) - 1) & (largest > 1 + 1e-9))
    if len(inner):
        some, own, near = modes.lanes(inner), level[inner], index[inner]

        def slope(at: Array, active: Lanes) -> tuple[Array, Array]:
            part = some.lanes(active)
            return part.response(at, 1) / own[active], part.response(at, 2) / own[active]

        at = refine(slope, time[near - 1, inner], time[near + 1, inner], time[near, inner], closeness=1e-6)
        largest[inner] = some.response(at) / own
    return np.where(largest > 1 + 1e-9, largest - 1, np.where(np.isnan(largest), np.nan, 0.0))
