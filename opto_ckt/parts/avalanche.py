"""Avalanche gain of a photodiode at any bias and temperature, through the points that its sheet lists."""

from __future__ import annotations

from typing import Any

import numpy as np

from opto_ckt.constants import ROOM_TEMPERATURE
from opto_ckt.formulas.avalanche import excess_noise_factor, excess_noise_power_law
from opto_ckt.formulas.formula import Real
from opto_ckt.parts.curve import along
from opto_ckt.parts.photodiode import PhotodiodeData

UNITY = 1e-6  #: a listed gain of 1 is taken to be above it by this share, so that its logarithm exists


def is_avalanche(data: PhotodiodeData) -> bool:
    """Whether the record states an avalanche gain."""
    return data.gain is not None or data.gain_points is not None


def gain_follows(data: PhotodiodeData) -> bool:
    """Whether the record tells how the gain changes with the bias: a curve, or one point and the breakdown voltage."""
    return data.gain_points is not None or (data.gain is not None and data.breakdown_voltage is not None)


def gain_at(data: PhotodiodeData, reverse_bias: Real, temperature: Real) -> Any:
    """Avalanche gain at a reverse bias [V] and a temperature [K]; infinite from breakdown on, 1 without an avalanche.

    Between listed points ln(1 - 1/M) is linear in ln V: the empirical law M = 1/(1 - (V/V_B)^n) of S. L. Miller, 1955,
    through any two of them. The curve moves along the bias with the temperature coefficient of the breakdown voltage.
    """
    if not gain_follows(data):
        return np.ones(np.broadcast_shapes(np.shape(reverse_bias), np.shape(temperature)))[()]
    shift = _per_kelvin(data) * (np.asarray(temperature) - data.gain_temperature)
    bias = np.maximum(np.asarray(reverse_bias, dtype=float) - shift, 1e-3)
    at, values = _law(data)
    share = np.exp(along(np.log(bias), at=at, values=values))
    with np.errstate(divide="ignore"):
        return np.where(share < 1, 1 / (1 - np.minimum(share, 1.0)), np.inf)[()]


def bias_for_gain(data: PhotodiodeData, gain: float, temperature: float = ROOM_TEMPERATURE) -> float:
    """Reverse bias [V] that gives a gain at a temperature [K]: the inverse of `gain_at`."""
    at, values = _law(data)
    wanted = float(np.log1p(-1 / max(gain, 1 + UNITY)))
    bias = float(np.exp(along(wanted, at=values, values=at)))
    return bias + _per_kelvin(data) * (temperature - data.gain_temperature)


def breakdown(data: PhotodiodeData, temperature: float) -> float:
    """Reverse bias at which the gain has no bound: that of the sheet or where its curve leads, the lesser. [V]"""
    shift = _per_kelvin(data) * (temperature - data.gain_temperature)
    ends = [float("inf")]
    if data.breakdown_voltage is not None:
        ends.append(data.breakdown_voltage.low)
    if data.gain_points is not None:
        at, values = _law(data)
        ends.append(float(np.exp(along(0.0, at=values, values=at))))
    return min(ends) + shift


def excess_noise(data: PhotodiodeData, gain: Real) -> Any:
    """Excess noise factor at a gain: McIntyre's law or the power law, as the record states; 2 - 1/M where neither."""
    if data.excess_noise_exponent is not None:
        return excess_noise_power_law(gain=gain, exponent=data.excess_noise_exponent)
    return excess_noise_factor(gain=gain, ionisation_ratio=data.ionisation_ratio or 0.0)


def _per_kelvin(data: PhotodiodeData) -> float:
    return 0.0 if data.breakdown_temperature is None else data.breakdown_temperature.nominal


def _law(data: PhotodiodeData) -> tuple[list[float], list[float]]:
    """Logarithms of bias and of 1 - 1/M at the listed points, both rising."""
    if data.gain_points is not None:
        points = [(point.bias, point.gain.nominal) for point in data.gain_points]
    elif data.gain is not None and data.gain_bias is not None and data.breakdown_voltage is not None:
        points = [(data.gain_bias, data.gain.nominal), (data.breakdown_voltage.nominal, np.inf)]
    else:
        raise ValueError("the record does not tell how the gain changes with the bias")
    return (
        [float(np.log(bias)) for bias, _ in points],
        [float(np.log1p(-1 / max(gain, 1 + UNITY))) for _, gain in points],
    )
