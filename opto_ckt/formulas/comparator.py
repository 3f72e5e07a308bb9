"""Around a comparator: threshold for the fewest errors, hysteresis, what both cost."""

from __future__ import annotations

from numpy import log

from opto_ckt.formulas.formula import Real, source


@source(
    "derived: equal error ratios on both sides of the threshold; G. P. Agrawal, Fiber-Optic Communication Systems, 4.5"
)
def best_threshold(*, one: Real, zero: Real, one_noise: Real, zero_noise: Real) -> Real:
    r"""Threshold at which ones and zeros are mistaken equally often.

    .. math:: V = \frac{\sigma_0 V_1 + \sigma_1 V_0}{\sigma_0 + \sigma_1}

    Parameters
    ----------
    one : V_1, level of a one. [V]
    zero : V_0, level of a zero. [V]
    one_noise : σ_1, rms on a one. [V]
    zero_noise : σ_0, rms on a zero. [V]

    Returns
    -------
    V. [V]

    Notes
    -----
    Gaussian noise, both Q well above 1; amperes give amperes.
    """
    return (zero_noise * one + one_noise * zero) / (zero_noise + one_noise)


@source("derived: divider from output to + input")
def hysteresis_resistance(*, series: Real, swing: Real, hysteresis: Real) -> Real:
    r"""Resistance from a comparator's output to its + input.

    .. math:: R_h = R_s \left(\frac{U}{V_h} - 1\right)

    Parameters
    ----------
    series : R_s, signal to + input. [Ω]
    swing : U of the output. [V]
    hysteresis : V_h wanted, from threshold to threshold, below U. [V]

    Returns
    -------
    R_h. [Ω]

    Notes
    -----
    The signal's own source resistance far below R_s.
    """
    return series * (swing / hysteresis - 1)


@source("derived: the distance from level to threshold shrinks by the error of the threshold")
def threshold_penalty(*, error: Real, distance: Real) -> Real:
    r"""Light to add because the threshold is off, or has a width.

    .. math:: -10 \log_{10}\left(1 - \frac{v}{V}\right)

    Parameters
    ----------
    error : v, offset and half of the hysteresis. [V]
    distance : V from a level to the best threshold, above v. [V]

    Returns
    -------
    The penalty, optical. [dB]

    Notes
    -----
    Noise the same on ones and zeros.
    """
    decibels: Real = -10 / log(10.0) * log(1 - error / distance)
    return decibels
