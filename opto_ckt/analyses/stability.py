"""Stability of an evaluated network: the return ratio, its crossover and margins; one entry a lane."""

from __future__ import annotations

import numpy as np
from numpy.typing import NDArray

from opto_ckt.analyses.network import Evaluation
from opto_ckt.analyses.network.lanes import Lanes, difference, horner, over_points
from opto_ckt.analyses.network.scan import Mask, crossing, every, falls, last_of

Array = NDArray[np.float64]
Complex = NDArray[np.complex128]

NO_LOOP = "the network names no loop, so it has no return ratio"


def stable(evaluation: Evaluation) -> Mask:
    """Whether every pole lies in the left half-plane: the Hurwitz pivots of D are all positive."""
    return evaluation.stable


def return_ratio_at(evaluation: Evaluation, frequency: Array | float) -> Complex:
    """Return ratio T of the loop, 1 + T = D/D0; large and positive at DC under negative feedback. [1]

    Parameters
    ----------
    frequency : any shape that broadcasts against the lanes. [Hz]

    Raises
    ------
    ValueError : the network names no loop.
    """
    return evaluation.ratio_at(*_loop(evaluation), frequency)


def crossover_frequency(evaluation: Evaluation) -> Array:
    """Frequency at which |T| falls through 1 for the last time; nan where it never does. [Hz]

    Raises
    ------
    ValueError : the network names no loop.
    """
    polynomial, above = _excess(evaluation)
    index, found = last_of(falls(above))
    x = crossing(polynomial, evaluation.scan, index)
    return np.where(found, evaluation.frequency(x), np.nan)


def phase_margin(evaluation: Evaluation) -> Array:
    """Angle between T and -1 where |T| = 1, the smallest where there are several such frequencies. [°]

    Negative where the closed network is unstable (-180° if |T| never passes 1 there); infinite where it is stable and
    |T| never passes 1; nan where the values are.

    Raises
    ------
    ValueError : the network names no loop.
    """
    polynomial, above = _excess(evaluation)
    index, lanes = every(above[:-1] != above[1:])
    downward = np.where(above[:, lanes][index, np.arange(len(index))], 1.0, -1.0)
    x = crossing(polynomial[:, lanes] * downward, evaluation.scan, index)
    real, imaginary = _ratio(evaluation, x, lanes)
    margin = np.full(evaluation.lanes, np.inf)
    angle = np.degrees(np.abs(np.arctan2(imaginary, -real)))
    if isinstance(lanes, slice):
        margin = angle
    else:
        np.minimum.at(margin, lanes, angle)
    margin = np.where(evaluation.stable, margin, -np.minimum(margin, 180.0))
    return np.where(np.isnan(evaluation.denominator[0]), np.nan, margin)


def gain_margin(evaluation: Evaluation) -> Array:
    """How far |T| lies below 1 where T is real and negative, the smallest such distance. [dB]

    Infinite where T is nowhere real and negative below 1; nan where the closed network is unstable.

    Raises
    ------
    ValueError : the network names no loop.
    """
    returned, opened = _loop(evaluation)
    imaginary = difference(_product(_odd(returned), _even(opened)), _product(_even(returned), _odd(opened)))
    positive = over_points(imaginary, evaluation.scan) > 0
    index, lanes = np.nonzero(positive[:-1] != positive[1:])
    downward = np.where(positive[index, lanes], 1.0, -1.0)
    x = crossing(imaginary[:, lanes] * downward, evaluation.scan, index)
    returned, opened = (each[:, lanes] for each in _loop(evaluation))
    ratio = (horner(returned, 1j * np.sqrt(x)) / horner(opened, 1j * np.sqrt(x))).real
    distance = np.full(evaluation.lanes, np.inf)
    counts = (ratio < 0) & (ratio > -1)
    np.minimum.at(distance, lanes[counts], -20 * np.log10(-ratio[counts]))
    return np.where(evaluation.stable, distance, np.nan)


def _loop(evaluation: Evaluation) -> tuple[Array, Array]:
    if evaluation.loop_numerator is None or evaluation.loop_denominator is None:
        raise ValueError(NO_LOOP)
    return evaluation.loop_numerator, evaluation.loop_denominator


def _excess(evaluation: Evaluation) -> tuple[Array, Mask]:
    """|D - D0|² - |D0|² as a polynomial in x, and where it is positive at the scan points."""
    polynomial = evaluation.loop_excess
    if polynomial is None:
        raise ValueError(NO_LOOP)
    return polynomial, over_points(polynomial, evaluation.scan) > 0


def _ratio(evaluation: Evaluation, x: Array, lanes: Lanes) -> tuple[Array, Array]:
    """Real and imaginary part of T |D0|² at a point x of each lane."""
    returned, opened = (each[:, lanes] for each in _loop(evaluation))
    even, odd = horner(_even(returned), x), horner(_odd(returned), x)
    other_even, other_odd = horner(_even(opened), x), horner(_odd(opened), x)
    return even * other_even + x * odd * other_odd, np.sqrt(x) * (odd * other_even - even * other_odd)


def _even(polynomial: Array) -> Array:
    return _alternating(polynomial[0::2])


def _odd(polynomial: Array) -> Array:
    return _alternating(polynomial[1::2]) if len(polynomial) > 1 else np.zeros_like(polynomial)


def _alternating(part: Array) -> Array:
    return np.asarray(part * np.where(np.arange(len(part)) % 2, -1.0, 1.0)[:, None])


def _product(left: Array, right: Array) -> Array:
    result = np.zeros((max(len(left) + len(right) - 1, 1), left.shape[1]))
    for position, row in enumerate(left):
        result[position : position + len(right)] += row * right
    return result
