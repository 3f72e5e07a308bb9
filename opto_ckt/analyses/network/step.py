"""Rise time and overshoot of a step response, found on a grid of time and refined on the exact exponentials."""

from __future__ import annotations

from math import ceil

import numpy as np

from opto_ckt.analyses.network.lanes import Array, Lanes
from opto_ckt.analyses.network.modes import Modes
from opto_ckt.analyses.network.scan import first_of, refine

POINTS_A_DECADE = 24
EARLIEST, LATEST = 0.02, 40.0
"""Ends of the grid, in units of the shortest and of the longest time constant."""

QUICK, FAINT = 1e-3, 1e-5
"""Share of the largest residue below which a mode does not set the first time of the grid, or the last."""

TOGETHER = 256  #: lanes looked at together


def shape(modes: Modes, reference: Array | None = None) -> tuple[Array, Array]:
    """Rise time and overshoot of each lane.

    Parameters
    ----------
    reference : level that counts as 100 %; the final value if None.

    Returns
    -------
    Time from 10 % to 90 % in scaled time, nan if not reached; largest excess over the level, as a part of it.
    """
    lanes = len(modes.constant)
    rise, excess = np.zeros(lanes), np.zeros(lanes)
    if not len(modes.poles):
        return rise, excess
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
            rise[part] = _rise(some, time, response / level, level)
            excess[part] = _excess(some, time, response / level, level)
    return rise, excess


def _grid(modes: Modes) -> Array:
    """Times that cover every mode of each lane that is heard, shape (points, lanes)."""
    share = np.abs(modes.residues) / np.maximum(np.abs(modes.residues).max(axis=0), 1e-300)
    size = np.abs(modes.poles)
    with np.errstate(divide="ignore", invalid="ignore"):
        earliest = EARLIEST / np.nanmax(np.where(share > QUICK, size, np.nan), axis=0, initial=1e-30)
        slowness = np.where((share > FAINT) & ~np.isnan(size), modes.poles.real, -np.inf)
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
