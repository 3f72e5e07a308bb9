"""Diode law of an LED, laser or rectifier: voltage, current, dynamic resistance, and the law from data-sheet points."""

from __future__ import annotations

from collections.abc import Sequence
from typing import NamedTuple

import numpy as np
from numpy import log
from numpy.typing import NDArray

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


class DiodeLaw(NamedTuple):
    """Constants of V = n V_T ln(1 + I/I_s) + I R_s, and how far they miss the points that they came from."""

    emission: float  #: n [1]
    saturation_current: float  #: I_s [A]
    series_resistance: float  #: R_s [Ω]
    misfit: float  #: largest error of the voltage at the points [V]


@source("diode law of W. Shockley with series resistance")
def forward_voltage(
    *, current: Real, saturation_current: Real, emission: Real, series_resistance: Real, temperature: Real
) -> Real:
    r"""Forward voltage of a diode.

    .. math:: V = n \frac{kT}{q} \ln\left(1 + \frac{I}{I_s}\right) + I R_s

    Parameters
    ----------
    current : I. [A]
    saturation_current : I_s at T. [A]
    emission : n, 1 to 2.5. [1]
    series_resistance : R_s. [Ω]
    temperature : T. [K]

    Returns
    -------
    V. [V]

    Notes
    -----
    I_s itself grows steeply with temperature; see `voltage_drift`.
    """
    return (
        emission * BOLTZMANN * temperature / ELEMENTARY_CHARGE * log(1 + current / saturation_current)
        + current * series_resistance
    )


@source("derived: dV/dI of the diode law")
def dynamic_resistance(
    *, current: Real, saturation_current: Real, emission: Real, series_resistance: Real, temperature: Real
) -> Real:
    r"""Small-signal resistance of a diode.

    .. math:: r_d = \frac{n k T}{q (I + I_s)} + R_s

    Parameters
    ----------
    current : I. [A]
    saturation_current : I_s at T. [A]
    emission : n. [1]
    series_resistance : R_s. [Ω]
    temperature : T. [K]

    Returns
    -------
    r_d. [Ω]

    Notes
    -----
    A laser above threshold has R_s alone.
    """
    return (
        emission * BOLTZMANN * temperature / (ELEMENTARY_CHARGE * (current + saturation_current)) + series_resistance
    )


@source("derived from the diode law at constant current, I_s ∝ T³ exp(-E_g/(kT)), n = 1; from memory")
def voltage_drift(*, junction_voltage: Real, band_gap: Real, temperature: Real) -> Real:
    r"""Change of forward voltage with temperature at constant current.

    .. math:: \frac{dV}{dT} = \frac{V_j - E_g/q - 3kT/q}{T}

    Parameters
    ----------
    junction_voltage : V_j = V_F - I R_s. [V]
    band_gap : E_g. [J]
    temperature : T. [K]

    Returns
    -------
    dV/dT, about -1 to -2 mV/K. [V/K]

    Notes
    -----
    The data sheet's figure, where there is one, is better.
    """
    return (junction_voltage - (band_gap + 3 * BOLTZMANN * temperature) / ELEMENTARY_CHARGE) / temperature


def lambert(logarithm: Real) -> NDArray[np.float64]:
    """W of an argument given by its natural logarithm: the w with w + ln w = logarithm.

    Halley's steps on ln w, so that neither a huge nor a tiny argument leaves the range of numbers.

    >>> print(f"{lambert(0.0):.12f}")
    0.567143290410
    """
    target = np.asarray(logarithm, dtype=np.float64)
    # e^u + u = target, with u = ln w
    start = np.where(target > 1, np.log(np.maximum(target, 1.0)), target - np.exp(np.minimum(target, 0.0)))
    u = np.where(target > 1, start, np.maximum(target - 1, start))
    for _ in range(8):
        power = np.exp(u)
        error = power + u - target
        slope = power + 1
        u = u - 2 * error * slope / (2 * slope**2 - error * power)
    return np.asarray(np.exp(u))


def current_at_voltage(
    *, voltage: Real, saturation_current: Real, emission: Real, series_resistance: Real, temperature: Real
) -> Real:
    """Current [A] of a diode at a voltage: the exact inverse of `forward_voltage`, series resistance above zero.

    A resistor in series with the diode is added to its series resistance. With n V_T = v,
    I = (v/R_s) W((I_s R_s/v) exp((V + I_s R_s)/v)) - I_s, then one Newton step that mends the difference near zero.

    >>> law = dict(saturation_current=1e-18, emission=2.0, series_resistance=2.0, temperature=298.15)
    >>> print(f"{current_at_voltage(voltage=forward_voltage(current=20e-3, **law), **law) * 1e3:.6f} mA")
    20.000000 mA
    """
    scale = emission * BOLTZMANN * temperature / ELEMENTARY_CHARGE
    drop = saturation_current * series_resistance
    w = lambert(np.log(drop / scale) + (voltage + drop) / scale)
    current = np.maximum(w * scale / series_resistance - saturation_current, -0.999999 * saturation_current)
    ratio = np.log1p(current / saturation_current)
    error = scale * ratio + current * series_resistance - voltage
    ratio = ratio - error / (scale + (current + saturation_current) * series_resistance)
    exact: Real = (saturation_current * np.expm1(ratio))[()]
    return exact


def fit(*, currents: Sequence[float], voltages: Sequence[float], temperature: float) -> DiodeLaw:
    """Diode law through data-sheet points; exact for three, least squares for more.

    An emission coefficient below 1 or a negative series resistance, which rounded points can give, is held at its
    bound and the rest fitted again: `misfit` tells the price. With two points n = 2, with one R_s = 0 besides
    (common practice).

    Raises
    ------
    ValueError
        If the points are none, unequal in number, not positive, or the voltage does not rise with current.

    Examples
    --------
    >>> law = fit(currents=[15e-3, 30e-3, 48e-3], voltages=[1.50, 1.55, 1.62], temperature=298.15)
    >>> print(f"{law.emission:.2f} {law.series_resistance:.2f} Ω {law.misfit * 1e3:.1f} mV")
    1.00 2.75 Ω 5.8 mV
    """
    current, voltage = np.asarray(currents, dtype=np.float64), np.asarray(voltages, dtype=np.float64)
    if current.size == 0 or current.shape != voltage.shape or np.any(current <= 0) or np.any(voltage <= 0):
        raise ValueError("expected as many voltages as currents, at least one, all above zero")
    order = np.argsort(current)
    if np.any(np.diff(current[order]) <= 0) or np.any(np.diff(voltage[order]) <= 0):
        raise ValueError("expected points whose voltage rises with current")
    thermal = BOLTZMANN * temperature / ELEMENTARY_CHARGE
    emission, series = (None if current.size > 2 else 2.0), (None if current.size > 1 else 0.0)
    law = _fit(current, voltage, thermal, emission, series)
    if law.emission < 1:
        emission, law = 1.0, _fit(current, voltage, thermal, 1.0, series)
    if law.series_resistance < 0:
        law = _fit(current, voltage, thermal, None if emission == 2.0 else emission, 0.0)
        law = law if law.emission >= 1 else _fit(current, voltage, thermal, 1.0, 0.0)
    return law


def _fit(
    current: NDArray[np.float64],
    voltage: NDArray[np.float64],
    thermal: float,
    emission: float | None,
    series: float | None,
) -> DiodeLaw:
    """Least squares of V = n V_T (ln(I + I_s) - ln I_s) + I R_s, linear in n, n ln I_s and R_s once I_s is near."""
    n, offset, resistance, saturation = emission or 2.0, 0.0, series or 0.0, 0.0
    for _ in range(4):
        logarithm = thermal * np.log(current + saturation)
        columns = [np.full_like(current, -thermal)]
        rest = voltage.copy()
        if emission is None:
            columns.append(logarithm)
        else:
            rest = rest - emission * logarithm
        if series is None:
            columns.append(current)
        else:
            rest = rest - series * current
        found = iter(np.linalg.lstsq(np.column_stack(columns), rest, rcond=None)[0])
        offset = float(next(found))
        n = float(next(found)) if emission is None else emission
        resistance = float(next(found)) if series is None else series
        saturation = float(np.exp(offset / n)) if n > 0 else 0.0
    error = n * (thermal * np.log(current + saturation)) - thermal * offset + resistance * current - voltage
    return DiodeLaw(n, saturation, resistance, float(np.max(np.abs(error))))
