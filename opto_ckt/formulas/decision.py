"""Deciding bits in noise: error ratio, Q, extinction, sensitivity, and the spectra that Personick's integrals weigh."""

from __future__ import annotations

import math
from statistics import NormalDist

import numpy as np
from numpy import log, pi, sqrt

from opto_ckt.constants import ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


def error_ratio(*, quality: Real) -> Real:
    """Bit error ratio erfc(Q/√2)/2 of a decision of quality Q in Gaussian noise.

    >>> print(f"{error_ratio(quality=6.0):.3e}")
    9.866e-10
    """
    half: Real = np.vectorize(lambda q: math.erfc(q / math.sqrt(2)) / 2, otypes=[float])(quality)[()]
    return half


def quality_for_error_ratio(*, error_ratio: Real) -> Real:
    """Q of the decision that a bit error ratio between 0 and 1 needs in Gaussian noise: the inverse of `error_ratio`.

    >>> print(f"{quality_for_error_ratio(error_ratio=1e-12):.4f}")
    7.0345
    """
    normal = NormalDist()
    quality: Real = np.vectorize(lambda ratio: -normal.inv_cdf(ratio), otypes=[float])(error_ratio)[()]
    return quality


@source("Poisson law: a mark without a photon is taken for a space; J. M. Senior, Ex. 9.1, asks for one mark in 1/BER")
def photons_for_error_ratio(*, error_ratio: Real) -> Real:
    r"""Photons that a mark must hold on average where nothing but their number is uncertain: the quantum limit.

    .. math:: N = -\ln(2 B)

    Parameters
    ----------
    error_ratio : B, below one half. [1]

    Returns
    -------
    N of a mark, each photon counted; half of it on average over marks and spaces. [1]

    Notes
    -----
    Dark zeros, no dark current, quantum efficiency 1; textbooks that count errors of marks alone print -ln B.

    Examples
    --------
    >>> print(f"{photons_for_error_ratio(error_ratio=1e-9):.2f}")
    20.03
    """
    photons: Real = -log(2 * error_ratio)
    return photons


@source("S. D. Personick, 1973; the integrals are those of `personick_integrals`")
def noise_at_bit_rate(
    *,
    white_noise: Real,
    voltage_noise: Real,
    capacitance: Real,
    bit_rate: Real,
    second_integral: Real,
    third_integral: Real,
) -> Real:
    r"""Rms noise of a front end behind the filter that shapes its pulses, as a current of the detector.

    .. math:: \sqrt{i^2 I_2 B + (2\pi C e_n)^2 I_3 B^3}

    Parameters
    ----------
    white_noise : i, all white densities together: thermal, shot, i_n, e_n/R_f. [A/√Hz]
    voltage_noise : e_n of the amplifier, white. [V/√Hz]
    capacitance : C of diode, amplifier and board. [F]
    bit_rate : B. [Hz]
    second_integral : I_2. [1]
    third_integral : I_3. [1]

    Returns
    -------
    The rms current. [A]

    Notes
    -----
    Shot noise taken as constant over the bit.

    Examples
    --------
    >>> noise = noise_at_bit_rate(white_noise=1e-12, voltage_noise=5e-9, capacitance=10e-12, bit_rate=10e6,
    ...     second_integral=0.5638, third_integral=0.0868)
    >>> print(f"{noise * 1e9:.2f} nA")
    3.77 nA
    """
    rising = 2 * pi * capacitance * voltage_noise
    return sqrt(white_noise**2 * second_integral * bit_rate + rising**2 * third_integral * bit_rate**3)


@source("definition, marks and spaces equally many")
def modulation_amplitude(*, average_power: Real, extinction_ratio: Real) -> Real:
    r"""Optical modulation amplitude.

    .. math:: P_1 - P_0 = 2 P \frac{r - 1}{r + 1}

    Parameters
    ----------
    average_power : P. [W]
    extinction_ratio : r = P_1/P_0, a ratio and not decibels. [W/W]

    Returns
    -------
    P_1 - P_0. [W]

    Notes
    -----
    Mark density 1/2.

    Examples
    --------
    >>> print(f"{modulation_amplitude(average_power=1e-3, extinction_ratio=6.6) * 1e3:.3f} mW")
    1.474 mW
    """
    return 2 * average_power * (extinction_ratio - 1) / (extinction_ratio + 1)


@source("derived; G. P. Agrawal, Fiber-Optic Communication Systems, 4.6, from memory")
def extinction_penalty(*, extinction_ratio: Real) -> Real:
    r"""Average power to add because the zeros are not dark.

    .. math:: 10 \log_{10}\frac{r + 1}{r - 1}

    Parameters
    ----------
    extinction_ratio : r = P_1/P_0. [W/W]

    Returns
    -------
    The penalty, optical. [dB]

    Notes
    -----
    Noise the same on ones and zeros.
    """
    decibels: Real = 10 / log(10.0) * log((extinction_ratio + 1) / (extinction_ratio - 1))
    return decibels


@source("R. Ramaswami, K. Sivarajan & G. Sasaki, Optical Networks, 5.3")
def extinction_penalty_at_peak_power(*, extinction_ratio: Real) -> Real:
    r"""Peak power to add because the zeros are not dark.

    .. math:: 10 \log_{10}\frac{r}{r - 1}

    Parameters
    ----------
    extinction_ratio : r = P_1/P_0. [W/W]

    Returns
    -------
    The penalty, optical. [dB]

    Notes
    -----
    Noise the same on ones and zeros.
    """
    decibels: Real = 10 / log(10.0) * log(extinction_ratio / (extinction_ratio - 1))
    return decibels


@source("derived; G. P. Agrawal, Fiber-Optic Communication Systems, 3rd ed., eq. 4.5.17 is its limit of dark zeros")
def sensitivity(
    *,
    quality: Real,
    responsivity: Real,
    thermal_noise: Real,
    bandwidth: Real,
    extinction_ratio: Real,
    gain: Real,
    excess_noise: Real,
) -> Real:
    r"""Least average optical power for a wanted Q, with the shot noise of the light and finite extinction.

    .. math:: P = \frac{Q \epsilon}{R}\left(s \epsilon + \sqrt{s^2 (\epsilon^2 - 1) + (\sigma/M)^2}\right), \quad
              \epsilon = \frac{r + 1}{r - 1}, \quad s = q F Q B

    Parameters
    ----------
    quality : Q of the decision. [1]
    responsivity : R without gain. [A/W]
    thermal_noise : σ, rms current of all that does not depend on the light, behind the gain. [A]
    bandwidth : B, noise bandwidth. [Hz]
    extinction_ratio : r = P_1/P_0. [W/W]
    gain : M of an avalanche diode, else 1. [1]
    excess_noise : F of an avalanche diode, else 1. [1]

    Returns
    -------
    P. [W]

    Notes
    -----
    Best threshold, no intersymbol interference; dark current goes into σ as 2q M² F I B.
    """
    e = (extinction_ratio + 1) / (extinction_ratio - 1)
    s = ELEMENTARY_CHARGE * excess_noise * quality * bandwidth
    return quality * e / responsivity * (s * e + sqrt(s**2 * (e**2 - 1) + (thermal_noise / gain) ** 2))


@source("Maxim MAX3793 p. 9")
def overload_power(*, overload_current: Real, responsivity: Real) -> Real:
    r"""Average power at which the ones reach the overload current of an amplifier.

    .. math:: P = \frac{I}{2R}

    Parameters
    ----------
    overload_current : I. [A]
    responsivity : R, gain included. [A/W]

    Returns
    -------
    P. [W]

    Notes
    -----
    High extinction, mark density 1/2.
    """
    return overload_current / (2 * responsivity)


def personick_integrals(*, rolloff: float, duty: float) -> tuple[float, float]:
    """I_2 and I_3 of a rectangular pulse, `duty` of the bit long, shaped into a raised cosine of a roll-off 0 to 1.

    Noise of density i² + a²f² leaves i² I_2 B + a² I_3 B³ behind the shaping filter, B the bit rate.
    S. D. Personick 1973; the usual I_2 = 0.562 is 0.3 % below the integral.

    >>> print("{:.4f} {:.4f}".format(*personick_integrals(rolloff=1.0, duty=1.0)))
    0.5638 0.0868
    """
    nodes, weights = np.polynomial.legendre.leggauss(64)
    edge = (1 - rolloff) / 2
    flat = edge * (nodes + 1) / 2
    slope = edge + rolloff * (nodes + 1) / 2
    y = np.concatenate([flat, slope])
    w = np.concatenate([weights * edge / 2, weights * rolloff / 2])
    falling = (1 + np.cos(np.pi * (nodes + 1) / 2)) / 2
    shaping = (np.concatenate([np.ones_like(flat), falling]) / np.sinc(duty * y)) ** 2
    return float(w @ shaping), float(w @ (y**2 * shaping))
