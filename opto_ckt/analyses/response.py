"""Response of an evaluated network to frequency and to a step; every function gives one entry a lane."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from opto_ckt.analyses.network import Evaluation, step
from opto_ckt.analyses.network.lanes import Index, Lanes, difference
from opto_ckt.analyses.network.scan import crossing, falls, first_of, last_of, refine, value_and_slope

Array = NDArray[np.float64]
ROUNDING = 1e-8  #: a gain that passes its reference by less is not a peak
Complex = NDArray[np.complex128]


def transfer_at(evaluation: Evaluation, frequency: Array | float) -> Complex:
    """Output voltage for an input signal of 1. [V per unit of input]

    Parameters
    ----------
    frequency : one value, one a lane, or any shape that broadcasts against the lanes, such as (m, 1). [Hz]
    """
    return evaluation.ratio_at(evaluation.numerator, evaluation.denominator, frequency)


def rival_at(evaluation: Evaluation, frequency: Array | float) -> Complex:
    """Output voltage for a signal of 1 through the other input, as `transfer_at`. [V per unit of input]

    Raises
    ------
    ValueError : the network names no other input.
    """
    if evaluation.rival_numerator is None:
        raise ValueError("the network names no other input")
    return evaluation.ratio_at(evaluation.rival_numerator, evaluation.denominator, frequency)


def dc_gain(evaluation: Evaluation) -> Array:
    """Gain at DC with its sign. [V per unit of input]"""
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray(evaluation.numerator[0] / evaluation.denominator[0])


def midband_gain(evaluation: Evaluation) -> Array:
    """Largest magnitude of the gain at the points of the scan, a reference for AC-coupled networks. [V per unit]"""
    return np.asarray(np.sqrt(evaluation.scanned_response.max(axis=0)))


def bandwidth(evaluation: Evaluation, reference: Array | float | None = None) -> Array:
    """Frequency at which the gain first falls through 3 dB below its reference, electrically. [Hz]

    Parameters
    ----------
    reference : magnitude of the gain to refer to; DC if None. [V per unit of input]

    Returns
    -------
    Infinite where the gain stays above; nan where it never comes up to it and where the network is unstable.
    """
    polynomial, above = _above_half(evaluation, reference)
    index, found = first_of(falls(above))
    x = crossing(polynomial, evaluation.scan, index)
    result = np.where(found, evaluation.frequency(x), np.where(above[-1], np.inf, np.nan))
    return np.where(evaluation.stable, result, np.nan)


def low_cutoff(evaluation: Evaluation, reference: Array | float) -> Array:
    """Last frequency below the bandwidth at which the gain rises through 3 dB below its reference; 0 without. [Hz]"""
    polynomial, above = _above_half(evaluation, reference)
    fall, falling = first_of(falls(above))
    fall = np.where(falling, fall, len(above))
    rises = falls(~above) & (np.arange(len(above) - 1)[:, None] < fall)
    index, found = last_of(rises)
    x = crossing(-polynomial, evaluation.scan, index)
    return np.where(evaluation.stable, np.where(found, evaluation.frequency(x), 0.0), np.nan)


def peak(evaluation: Evaluation, reference: Array | float | None = None) -> tuple[Array, Array]:
    """Height of the largest gain above its reference, and where it lies. [dB, Hz]

    Returns
    -------
    Height 0 and frequency nan where the gain nowhere passes its reference; nan where the network is unstable.
    """
    power = _reference_power(evaluation, reference)
    scanned = evaluation.scanned_response
    top = scanned.max(axis=0)
    height, frequency = np.zeros(evaluation.lanes), np.full(evaluation.lanes, np.nan)
    lanes = np.flatnonzero(top > power * (1 + ROUNDING))
    if len(lanes):
        index = first_of(scanned == top)[0][lanes]
        x, highest = evaluation.scan[index], top[lanes]
        inner = np.flatnonzero((index > 0) & (index < len(scanned) - 1))
        if len(inner):
            x[inner], highest[inner] = _highest(evaluation, lanes[inner], index[inner])
        height[lanes] = 10 * np.log10(highest / power[lanes])
        frequency[lanes] = evaluation.frequency(x)
    unstable = ~evaluation.stable
    height[unstable] = frequency[unstable] = np.nan
    return height, frequency


def peaking(evaluation: Evaluation, reference: Array | float | None = None) -> Array:
    """Height of the largest gain above its reference; 0 where there is none. [dB]"""
    return peak(evaluation, reference)[0]


def poles(evaluation: Evaluation) -> Complex:
    """Poles of each lane; shape (order, lanes), nan past a lane's own order. [rad/s]"""
    return np.asarray(evaluation.scaled_poles * evaluation.frequency_scale)


def quality_factor(evaluation: Evaluation) -> Array:
    """Largest Q of a complex pair of poles, 0.5 where all poles are real; nan where the network is unstable. [1]"""
    scaled = evaluation.scaled_poles
    with np.errstate(divide="ignore", invalid="ignore"):
        quality = np.abs(scaled) / (-2 * scaled.real)
    quality = np.where(np.isnan(quality) | (scaled.imag == 0), 0.5, quality)
    return np.where(evaluation.stable, quality.max(axis=0, initial=0.5), np.nan)


def step_response(evaluation: Evaluation, times: Array | float) -> Array:
    """Output voltage after the input signal steps from 0 to 1. [V]

    Parameters
    ----------
    times : from the step on, any shape that broadcasts against the lanes, such as (m, 1). [s]

    Notes
    -----
    Exact exponentials. Repeated poles are parted by 1e-9 of the constant term of D, by which the response is off.
    """
    return evaluation.modes.response(np.asarray(times, dtype=float) * evaluation.frequency_scale)


def rise_time(evaluation: Evaluation, reference: Array | float | None = None) -> Array:
    """Time from 10 % to 90 % of the step response, each level reached for the first time. [s]

    Parameters
    ----------
    reference : magnitude of the level that counts as 100 %; the final value if None. [V per unit of input]

    Returns
    -------
    nan where 90 % is never reached and where the network is unstable.
    """
    time = _shape(evaluation, reference)[0] / evaluation.frequency_scale
    return np.where(evaluation.stable, time, np.nan)


def overshoot(evaluation: Evaluation, reference: Array | float | None = None) -> Array:
    """Largest excess of the step response over its final value, as a part of it; nan where unstable. [1]

    Parameters
    ----------
    reference : magnitude of the level to refer to; the final value if None. [V per unit of input]
    """
    excess = _shape(evaluation, reference)[1]
    return np.where(evaluation.stable, excess, np.nan)


def _shape(evaluation: Evaluation, reference: Array | float | None) -> tuple[Array, Array]:
    if reference is None:
        return evaluation.step_shape
    return step.shape(evaluation.modes, _reference(evaluation, reference))


def settling_time(evaluation: Evaluation, share: float = 1e-3) -> Array:
    """Time after which each mode of the step response is below a share of the final value; nan where unstable. [s]"""
    modes = evaluation.modes
    with np.errstate(divide="ignore", invalid="ignore"):
        times = np.log(np.abs(modes.residues) / (share * np.abs(modes.constant))) / -modes.poles.real
    slowest = np.where(np.isfinite(times), np.maximum(times, 0.0), 0.0).max(axis=0, initial=0.0)
    return np.where(evaluation.stable, slowest / evaluation.frequency_scale, np.nan)


def _reference(evaluation: Evaluation, reference: Array | float | None) -> Array | None:
    return None if reference is None else np.broadcast_to(np.asarray(reference, dtype=float), (evaluation.lanes,))


def _highest(evaluation: Evaluation, lanes: Index, index: Index) -> tuple[Array, Array]:
    """Point x and value of the maximum of |N/D|² next to a scan point, where its derivative falls through zero."""
    above, below = evaluation.numerator_power[:, lanes], evaluation.denominator_power[:, lanes]

    def slope_of_ratio(at: Array, part: Lanes) -> tuple[Array, Array]:
        n, n1, n2 = _three(above[:, part], at)
        d, d1, d2 = _three(below[:, part], at)
        return n1 * d - n * d1, n2 * d - n * d2

    points = evaluation.scan
    x = refine(slope_of_ratio, points[index - 1], points[index + 1], _summit(evaluation, lanes, index), closeness=3e-3)
    return x, value_and_slope(above, x)[0] / value_and_slope(below, x)[0]


def _summit(evaluation: Evaluation, lanes: Index, index: Index) -> Array:
    """Top of the parabola in ln x through a scan point and its neighbours."""
    scanned, points = evaluation.scanned_response, evaluation.scan
    before, here, after = (scanned[index + offset, lanes] for offset in (-1, 0, 1))
    bend = 2 * here - before - after
    shift = np.where(bend > 0, (after - before) / np.where(bend > 0, 2 * bend, 1.0), 0.0)
    return np.asarray(points[index] * (points[1] / points[0]) ** np.clip(shift, -1, 1))


def _three(polynomial: Array, at: Array) -> tuple[Array, Array, Array]:
    """A polynomial and its first two derivatives at one point of each lane."""
    value = polynomial[-1].copy()
    slope, bend = np.zeros_like(value), np.zeros_like(value)
    for row in polynomial[-2::-1]:
        bend *= at
        bend += slope
        slope *= at
        slope += value
        value *= at
        value += row
    bend *= 2
    return value, slope, bend


def _reference_power(evaluation: Evaluation, reference: Array | float | None) -> Array:
    level = _reference(evaluation, reference)
    return np.asarray((dc_gain(evaluation) if level is None else level) ** 2)


def _above_half(evaluation: Evaluation, reference: Array | float | None) -> tuple[Array, NDArray[np.bool_]]:
    """|N|² - reference²/2 |D|² as a polynomial in x, and where it is positive at the scan points."""
    half = _reference_power(evaluation, reference) / 2
    polynomial = difference(evaluation.numerator_power, half * evaluation.denominator_power)
    return polynomial, evaluation.scanned_response >= half
