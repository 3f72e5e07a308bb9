"""Laser diode that heats itself: runaway, and the junction temperature that agrees with its own heat."""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np

from opto_ckt.formulas.formula import Real, source

Law = Callable[[Real], Real]
"""A figure of the laser as a function of its junction temperature [K]."""


class OperatingPoint(NamedTuple):
    """Where a laser settles; nan where it does not."""

    current: Real  #: [A]
    power: Real  #: [W]
    junction_temperature: Real  #: [K]


@source("derived: d(heat)/d(junction temperature) at constant optical power, exponential laws; checked by two roads")
def runaway_factor(
    *,
    thermal_resistance: Real,
    turn_on_voltage: Real,
    series_resistance: Real,
    current: Real,
    threshold: Real,
    characteristic_temperature: Real,
    slope_temperature: Real,
) -> Real:
    r"""Loop gain of self-heating at constant optical power.

    .. math:: g = R_{th} (V_g + 2 R_s I) \left(\frac{I_{th}}{T_0} + \frac{I - I_{th}}{T_1}\right)

    Parameters
    ----------
    thermal_resistance : R_th, junction to the place of constant temperature. [K/W]
    turn_on_voltage : V_g. [V]
    series_resistance : R_s. [Ω]
    current : I. [A]
    threshold : I_th at the junction temperature. [A]
    characteristic_temperature : T_0 of the threshold. [K]
    slope_temperature : T_1 of the slope. [K]

    Returns
    -------
    g; from 1 upward the laser runs away, below 0.5 is comfortable. [1]

    Notes
    -----
    At constant current there is no runaway; g = 1 is then the peak of the power.
    """
    spread = threshold / characteristic_temperature + (current - threshold) / slope_temperature
    return thermal_resistance * (turn_on_voltage + 2 * series_resistance * current) * spread


def _heat(current: Real, power: Real, turn_on_voltage: Real, series_resistance: Real) -> Real:
    return current * (turn_on_voltage + current * series_resistance) - power


def settle_at_current(
    *,
    current: Real,
    case_temperature: Real,
    thermal_resistance: Real,
    turn_on_voltage: Real,
    series_resistance: Real,
    threshold: Law,
    slope: Law,
) -> OperatingPoint:
    """Operating point at constant current: temperature [K] against heat, halved down; a solution always exists.

    Light leaves, so the heat is I(V_g + I R_s) - P; hotter means less light and more heat, bounded by no light at all.
    """
    electrical = _heat(current, 0.0, turn_on_voltage, series_resistance)
    low = np.asarray(case_temperature + 0 * thermal_resistance * electrical, dtype=np.float64)
    high = np.asarray(case_temperature + thermal_resistance * electrical, dtype=np.float64)

    def light(temperature: Real) -> Real:
        return np.maximum(slope(temperature) * (current - threshold(temperature)), 0.0)

    for _ in range(60):
        middle = (low + high) / 2
        hotter = case_temperature + thermal_resistance * (electrical - light(middle)) > middle
        low, high = np.where(hotter, middle, low), np.where(hotter, high, middle)
    settled: Real = high[()]
    return OperatingPoint(current=current, power=light(settled), junction_temperature=settled)


def settle_at_power(
    *,
    power: Real,
    case_temperature: Real,
    thermal_resistance: Real,
    turn_on_voltage: Real,
    series_resistance: Real,
    threshold: Law,
    slope: Law,
    hottest: float = 573.15,
) -> OperatingPoint:
    """Operating point at constant optical power; nan where the laser runs away before `hottest` [K].

    The junction starts at the case and only rises, T ← T_c + R_th (I (V_g + I R_s) - P) with I = I_th(T) + P/η(T):
    the coolest solution is the one that a control loop reaches. Newton's steps approach it from below,
    for the curve is convex.
    """

    def rise(at: Real) -> Real:
        current = threshold(at) + power / slope(at)
        return case_temperature + thermal_resistance * _heat(current, power, turn_on_voltage, series_resistance) - at

    temperature = np.asarray(case_temperature + 0 * (power * thermal_resistance), dtype=np.float64)
    with np.errstate(over="ignore", invalid="ignore", divide="ignore"):
        for _ in range(200):
            error = np.asarray(rise(temperature))
            if np.all((np.abs(error) <= 1e-10) | (temperature > hottest)):
                break
            falling = (np.asarray(rise(temperature + 1e-4)) - error) / 1e-4
            step = np.where(falling < 0, error / -falling, np.inf)
            temperature = np.where(np.abs(error) > 1e-10, temperature + np.minimum(step, 50.0), temperature)
            temperature = np.minimum(temperature, hottest + 1)
        astray = np.abs(np.asarray(rise(temperature))) > 1e-6
        lost = (temperature > hottest) | astray | (slope(temperature) <= 0)
        settled: Real = np.where(lost, np.nan, temperature)[()]
        return OperatingPoint(
            current=threshold(settled) + power / slope(settled),
            power=power + 0 * settled,
            junction_temperature=settled,
        )
