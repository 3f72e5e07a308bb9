"""What is read off simulated curves: crossings, margins, integrals, rise times."""

from __future__ import annotations

from typing import Any, NamedTuple

import numpy as np
from numpy.typing import NDArray

Curve = NDArray[Any]


def falls_to(frequency: Curve, magnitude: Curve, level: float) -> float:
    """Frequency at which a magnitude first falls through a level, linear in dB over log f; nan where it does not."""
    below = np.flatnonzero((magnitude[:-1] >= level) & (magnitude[1:] < level))
    if not len(below):
        return float("nan")
    index = int(below[0])
    return float(np.exp(_crossing(np.log(frequency), np.log(magnitude), float(np.log(level)), index)))


def phase_margin_of(frequency: Curve, loop: Curve) -> tuple[float, float]:
    """Last crossover of |T| = 1 [Hz] and the angle between T and -1 there [°]."""
    magnitude = np.abs(loop)
    below = np.flatnonzero((magnitude[:-1] >= 1) & (magnitude[1:] < 1))
    if not len(below):
        return float("nan"), float("nan")
    index = int(below[-1])
    at = _crossing(np.log(frequency), np.log(magnitude), 0.0, index)
    phase = np.unwrap(np.angle(loop))
    angle = float(np.interp(at, np.log(frequency[index : index + 2]), phase[index : index + 2]))
    return float(np.exp(at)), (180 + np.degrees(angle) + 180) % 360 - 180


def integrated(frequency: Curve, density: Curve, low: float, high: float) -> float:
    """Root of the integral of a squared density over a band, each interval a power law."""
    inside = (frequency > low) & (frequency < high)
    edges = np.exp(np.interp(np.log([low, high]), np.log(frequency), np.log(density)))
    f = np.concatenate([[low], frequency[inside], [high]])
    power = np.concatenate([[edges[0]], density[inside], [edges[1]]]) ** 2
    slope = np.log(power[1:] / power[:-1]) / np.log(f[1:] / f[:-1]) + 1
    start, ratio = power[:-1] * f[:-1], np.log(f[1:] / f[:-1])
    steep = np.abs(slope) > 1e-9
    safe = np.where(steep, slope, 1.0)
    pieces = np.where(steep, start * np.expm1(safe * ratio) / safe, start * ratio)
    return float(np.sqrt(pieces.sum()))


def rises_to(frequency: Curve, magnitude: Curve, level: float) -> float:
    """Frequency at which a magnitude first rises through a level, linear in dB over log f; nan where it does not."""
    return falls_to(frequency, 1 / magnitude, 1 / level)


def rise_time_of(time: Curve, answer: Curve, height: float | None = None) -> float:
    """10-90 % of the step from the first value to the last, or by a height in its direction. [s]"""
    far = answer[np.argmax(np.abs(answer - answer[0]))] - answer[0]
    share = (answer - answer[0]) / (answer[-1] - answer[0] if height is None else np.copysign(height, far))
    return _first_time(time, share, 0.9) - _first_time(time, share, 0.1)


class Pulse(NamedTuple):
    """What is read off one pulse."""

    peak: float  #: in the unit of the answer
    width: float  #: at half of the peak [s]
    rise_time: float  #: 10-90 % of the peak [s]


def pulse_of(time: Curve, answer: Curve) -> Pulse:
    """The first pulse of an answer that rests at zero; its peak by a parabola through the highest points."""
    top = int(np.argmax(answer))
    curve = np.polyfit(time[top - 2 : top + 3] - time[top], answer[top - 2 : top + 3], 2)
    peak = float(curve[2] - curve[1] ** 2 / (4 * curve[0]))
    rising = {share: _last_rise(time[: top + 1], answer[: top + 1] / peak, share) for share in (0.1, 0.5, 0.9)}
    after = answer[top:] / peak
    falling = float(_crossing(time[top:], after, 0.5, int(np.argmax(after < 0.5)) - 1))
    return Pulse(peak, falling - rising[0.5], rising[0.9] - rising[0.1])


def _last_rise(time: Curve, share: Curve, level: float) -> float:
    """When a curve that ends above a level last rises through it."""
    return float(_crossing(time, share, level, int(np.flatnonzero(share < level)[-1])))


def _first_time(time: Curve, share: Curve, level: float) -> float:
    above = int(np.argmax(share >= level))
    return float(_crossing(time, share, level, above - 1)) if above else float(time[0])


def _crossing(x: Curve, y: Curve, level: float, index: int) -> float:
    """Where the straight line from one point to the next reaches a level."""
    share = (level - y[index]) / (y[index + 1] - y[index])
    return float(x[index] + share * (x[index + 1] - x[index]))
