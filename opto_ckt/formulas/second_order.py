"""The two-pole low-pass that a closed loop makes: what its Q means in bandwidth, peak, overshoot and noise."""

from __future__ import annotations

from numpy import exp, log, pi, sqrt

from opto_ckt.formulas.formula import Real, source

BUTTERWORTH = 0.5**0.5  #: Q of the flattest response [1]
BESSEL = 3**-0.5  #: Q of the flattest delay [1]
CRITICAL = 0.5  #: Q of two equal real poles [1]


@source("derived: half-power point of 1/(1 + s/(Q ω_0) + s²/ω_0²), exact")
def bandwidth_ratio(*, quality: Real) -> Real:
    r"""Half-power bandwidth over natural frequency.

    .. math:: k = \sqrt{b + \sqrt{b^2 + 1}}, \quad b = 1 - 1/(2 Q^2)

    Parameters
    ----------
    quality : Q. [1]

    Returns
    -------
    k = f_3dB/f_0. [1]

    Notes
    -----
    Two poles, no zero; any Q above zero.

    Examples
    --------
    >>> print(f"{bandwidth_ratio(quality=1.0):.3f} {bandwidth_ratio(quality=BESSEL):.3f}")
    1.272 0.786
    """
    b = 1 - 1 / (2 * quality**2)
    return sqrt(b + sqrt(b**2 + 1))


@source("derived: half-power point of 1/(1 + s/(Q ω_0) + s²/ω_0²), exact")
def bandwidth(*, natural_frequency: Real, quality: Real) -> Real:
    r"""Half-power bandwidth of a two-pole low-pass.

    .. math:: f_{3dB} = f_0 \sqrt{b + \sqrt{b^2 + 1}}, \quad b = 1 - 1/(2 Q^2)

    Parameters
    ----------
    natural_frequency : f_0. [Hz]
    quality : Q. [1]

    Returns
    -------
    f_3dB, where the electrical power has halved. [Hz]

    Notes
    -----
    Two poles, no zero.
    """
    b = 1 - 1 / (2 * quality**2)
    return natural_frequency * sqrt(b + sqrt(b**2 + 1))


@source("derived: largest magnitude of 1/(1 + s/(Q ω_0) + s²/ω_0²), exact")
def peaking(*, quality: Real) -> Real:
    r"""Peak of the response above its value at dc.

    .. math:: 20 \log_{10} \frac{Q^2}{\sqrt{Q^2 - 1/4}}

    Parameters
    ----------
    quality : Q, at least 1/√2. [1]

    Returns
    -------
    The peak, re dc. [dB]

    Notes
    -----
    Below Q = 1/√2 there is no peak and the expression has no meaning.

    Examples
    --------
    >>> print(f"{peaking(quality=1.0):.2f} dB")
    1.25 dB
    """
    decibels: Real = 20 / log(10.0) * log(quality**2 / sqrt(quality**2 - 0.25))
    return decibels


@source("derived: inverse of the peak of a two-pole low-pass, exact")
def quality_for_peaking(*, peaking: Real) -> Real:
    r"""Quality factor that gives a wanted peak.

    .. math:: Q = \sqrt{\tfrac12 (p^2 + p \sqrt{p^2 - 1})}, \quad p = 10^{peak/20}

    Parameters
    ----------
    peaking : peak re dc, at least 0. [dB]

    Returns
    -------
    Q, from 1/√2 at 0 dB upward. [1]

    Notes
    -----
    Two poles, no zero.

    Examples
    --------
    >>> print(f"{quality_for_peaking(peaking=1.24939):.4f}")
    1.0000
    """
    p: Real = exp(peaking * log(10.0) / 20)
    return sqrt((p**2 + p * sqrt(p**2 - 1)) / 2)


@source("derived: first maximum of the step response of two complex poles, exact")
def overshoot(*, quality: Real) -> Real:
    r"""Overshoot of the step response.

    .. math:: \exp(-\pi \zeta/\sqrt{1 - \zeta^2}), \quad \zeta = 1/(2Q)

    Parameters
    ----------
    quality : Q above 1/2. [1]

    Returns
    -------
    Overshoot as a fraction of the step. [1]

    Notes
    -----
    At Q ≤ 1/2 the poles are real and there is none.

    Examples
    --------
    >>> print(f"{overshoot(quality=BUTTERWORTH):.1%}")
    4.3%
    """
    return exp(-pi / sqrt(4 * quality**2 - 1))


@source("derived: inverse of the overshoot of two complex poles, exact")
def quality_for_overshoot(*, overshoot: Real) -> Real:
    r"""Quality factor that gives a wanted overshoot.

    .. math:: Q = \tfrac12 \sqrt{1 + (\pi/\ln x)^2}

    Parameters
    ----------
    overshoot : x, fraction of the step, between 0 and 1. [1]

    Returns
    -------
    Q above 1/2. [1]

    Notes
    -----
    Two poles, no zero.
    """
    return sqrt(1 + (pi / log(overshoot)) ** 2) / 2


@source("derived: integral of the squared response of two poles, exact")
def noise_bandwidth(*, natural_frequency: Real, quality: Real) -> Real:
    r"""Width of the ideal filter that passes the same white noise.

    .. math:: B_n = \tfrac{\pi}{2} Q f_0

    Parameters
    ----------
    natural_frequency : f_0. [Hz]
    quality : Q. [1]

    Returns
    -------
    B_n. [Hz]

    Notes
    -----
    White noise ahead of the two poles.

    Examples
    --------
    >>> print(f"{noise_bandwidth(natural_frequency=1.0, quality=BUTTERWORTH):.2f} f_3dB")
    1.11 f_3dB
    """
    return pi * quality * natural_frequency / 2


@source("derived: integral of f² times the squared response of two poles, exact")
def square_noise_bandwidth(*, natural_frequency: Real, quality: Real) -> Real:
    r"""Width of the ideal filter that passes the same noise of a density rising as f².

    .. math:: B_{n2} = (3 \pi Q/2)^{1/3} f_0

    Parameters
    ----------
    natural_frequency : f_0. [Hz]
    quality : Q. [1]

    Returns
    -------
    B_n2: the integrated noise is density(1 Hz) · B_n2³/3. [Hz]

    Notes
    -----
    Noise e_n·2πfC ahead of the two poles.
    """
    return natural_frequency * (3 * pi * quality / 2) ** (1 / 3)
