"""Noise of an evaluated network: densities at a frequency, totals in closed form or over a band; one entry a lane."""

from __future__ import annotations

from collections.abc import Sequence
from math import inf, pi

import numpy as np
from numpy.typing import NDArray

from opto_ckt.analyses.network import Evaluation
from opto_ckt.analyses.network.lanes import horner
from opto_ckt.analyses.network.quadrature import Density, band_integrals, panel_edges
from opto_ckt.analyses.network.scan import LOWEST
from opto_ckt.analyses.response import transfer_at

Array = NDArray[np.float64]
Band = tuple[float, float]

FLICKER_FROM = 10.0
"""Lowest frequency counted in 1/f noise where no band is given: it has no finite total. Common practice. [Hz]"""

BEYOND = 1e2
"""How far past the last root of D the 1/f noise is followed; what is left out is below 1e-4 of its highest density."""


def output_density(evaluation: Evaluation, frequency: Array | float) -> Array:
    """Power density of the output noise. [V²/Hz]

    Parameters
    ----------
    frequency : any shape that broadcasts against the lanes. [Hz]
    """
    return _density(evaluation, *evaluation.noise, frequency)


def density_by_generator(evaluation: Evaluation, frequency: Array | float) -> dict[str, Array]:
    """Power density of the output noise that each generator makes, by its label. [V²/Hz]"""
    generators = evaluation.generators
    result: dict[str, Array] = {}
    for label, white, corner in zip(generators.labels, generators.white, generators.corners, strict=True):
        own = _density(evaluation, white, white * corner, frequency)
        result[label] = result[label] + own if label in result else own
    return result


def signal_density(evaluation: Evaluation, frequency: Array | float) -> Array:
    """Output noise referred to the input signal; of an optical input in watts, the square of its NEP. [unit²/Hz]"""
    gain = transfer_at(evaluation, frequency)
    with np.errstate(divide="ignore", invalid="ignore"):
        return np.asarray(output_density(evaluation, frequency) / np.abs(gain) ** 2)


def input_density(evaluation: Evaluation, frequency: Array | float) -> Array:
    """Output noise referred to the current of the input source. [A²/Hz]"""
    return np.asarray(signal_density(evaluation, frequency) * evaluation.gain**2)


def output_rms(evaluation: Evaluation, band: Band | None = None, flicker_from: float = FLICKER_FROM) -> Array:
    """Root-mean-square noise at the output. [V]

    Parameters
    ----------
    band : lowest and highest frequency; None for all frequencies, where white noise is a closed form. [Hz]
    flicker_from : where 1/f noise begins to count if no band is given. [Hz]

    Returns
    -------
    nan where the network is unstable, infinite where white noise reaches the output at all frequencies.

    Raises
    ------
    ValueError : the band is empty or does not begin above zero.

    Notes
    -----
    Closed form to rounding; bands and 1/f noise to about 1e-6.
    """
    (power,) = _powers(evaluation, [evaluation.noise], band, flicker_from)
    return _root(evaluation, power)


def rms_by_generator(
    evaluation: Evaluation, band: Band | None = None, flicker_from: float = FLICKER_FROM
) -> dict[str, Array]:
    """Root-mean-square output noise that each generator makes, by its label; as `output_rms` otherwise. [V]"""
    generators = evaluation.generators
    pairs = zip(generators.white, generators.corners, strict=True)
    parts = [(white, white * corner) for white, corner in pairs]
    total: dict[str, Array] = {}
    for label, power in zip(generators.labels, _powers(evaluation, parts, band, flicker_from), strict=True):
        total[label] = total[label] + power if label in total else power
    return {label: _root(evaluation, power) for label, power in total.items()}


def _density(evaluation: Evaluation, white: Array, flicker: Array, frequency: Array | float) -> Array:
    frequency = np.asarray(frequency, dtype=float)
    frequency = np.broadcast_to(frequency, np.broadcast_shapes(frequency.shape, (evaluation.lanes,)))
    x = (2 * pi / evaluation.frequency_scale * frequency) ** 2
    with np.errstate(divide="ignore", invalid="ignore"):
        above = horner(white, x)
        if flicker.any():
            above = above + horner(flicker, x) / frequency
        return np.asarray(above / horner(evaluation.denominator_power, x))


def _root(evaluation: Evaluation, power: Array) -> Array:
    return np.where(evaluation.stable, np.sqrt(np.where(evaluation.stable, power, 0.0)), np.nan)


def _powers(
    evaluation: Evaluation, parts: Sequence[tuple[Array, Array]], band: Band | None, flicker_from: float
) -> Array:
    """Integral over f of (white + flicker/f)/|D|² for each pair of polynomials; shape (pairs, lanes). [V²]"""
    hertz = evaluation.frequency_scale / (2 * pi)
    low, high = _scaled(evaluation, band or (flicker_from, inf))
    if band is not None:
        edges = panel_edges(low, high, evaluation.extent)
        densities = [Density(white * hertz, flicker if flicker.any() else None) for white, flicker in parts]
        return band_integrals(densities, evaluation.denominator_power, edges) if parts else np.zeros((0, 1))
    power = np.array([_moment_sum(evaluation.moments, white) for white, _ in parts]) * hertz
    flickering = [index for index, (_, flicker) in enumerate(parts) if flicker.any()]
    if flickering:
        edges = panel_edges(low, max(evaluation.extent[1], low) * BEYOND, evaluation.extent, decades=1.5)
        densities = [Density(None, parts[index][1]) for index in flickering]
        beside = np.where(np.isfinite(power[flickering]), power[flickering], 0.0)
        power[flickering] += band_integrals(densities, evaluation.denominator_power, edges, beside)
    return power


def _moment_sum(moments: Array, power: Array) -> Array:
    """Σ c_k M_k; infinite where c has an order for which there is no finite moment."""
    known = len(moments)
    with np.errstate(invalid="ignore"):
        terms = power[:known] * moments[: len(power)]
    if np.isinf(moments).any():
        terms = np.where(power[:known] == 0, 0.0, terms)
    total = terms.sum(axis=0)
    return np.where(power[known:].any(axis=0), inf, total) if len(power) > known else np.asarray(total)


def _scaled(evaluation: Evaluation, band: Band) -> Band:
    low, high = band
    if not LOWEST <= low < high:
        raise ValueError(f"a noise band runs upwards from {LOWEST:g} Hz at least, got {low:g} … {high:g} Hz")
    scale = 2 * pi / evaluation.frequency_scale
    return low * scale, high * scale
