"""Distortion of an LED's light, from the points of its sheet."""

from __future__ import annotations

from typing import NamedTuple

import numpy as np

from opto_ckt.parts.led import LedData


class RollOff(NamedTuple):
    """Law P = η I/(1 + I/I_s) through a sheet's typical points."""

    saturation_current: float  #: I_s; infinite where the light is proportional to the current [A]
    misfit: float  #: largest relative error at the points [1]


def roll_off(data: LedData) -> RollOff | None:
    """The law through the points: I/P is a line over I, exact for two, least squares for more; None for one."""
    if len(data.power) < 2:
        return None
    current = np.array([point.current for point in data.power])
    power = np.array([float(point.power.nominal) for point in data.power])
    slope, start = np.polyfit(current, current / power, 1)
    fitted = current / (start + slope * current)
    saturation = np.inf if slope == 0 else float(start / slope)
    return RollOff(saturation, float(np.max(np.abs(fitted / power - 1))))
