"""Noise integrated over everything that passes: exact rms at the output of a single-pole transimpedance stage.

With natural frequency f_0 and quality Q of the closed loop, white current noise sees the bandwidth π Q f_0/2.
"""

from __future__ import annotations

from numpy import log, pi, sqrt

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


@source("derived: ∫ of 4kT R_f over two poles, exact")
def thermal_output(
    *, feedback_resistance: Real, temperature: Real, natural_frequency: Real, quality: Real
) -> Real:
    r"""Output noise of the feedback resistance.

    .. math:: E = \sqrt{4 k T R_f \cdot \tfrac{\pi}{2} Q f_0}

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    temperature : T. [K]
    natural_frequency : f_0. [Hz]
    quality : Q. [1]

    Returns
    -------
    E, rms over all frequencies. [V]

    Notes
    -----
    Single-pole op amp, no filter behind.
    """
    return sqrt(2 * pi * BOLTZMANN * temperature * feedback_resistance * quality * natural_frequency)


@source("derived: ∫ of 2qI over two poles, exact")
def shot_output(*, current: Real, feedback_resistance: Real, natural_frequency: Real, quality: Real) -> Real:
    r"""Output noise of the shot noise of a current.

    .. math:: E = R_f \sqrt{2 q I \cdot \tfrac{\pi}{2} Q f_0}

    Parameters
    ----------
    current : I, photocurrent and dark current. [A]
    feedback_resistance : R_f. [Ω]
    natural_frequency : f_0. [Hz]
    quality : Q. [1]

    Returns
    -------
    E, rms over all frequencies. [V]

    Notes
    -----
    Single-pole op amp, no filter behind.
    """
    return feedback_resistance * sqrt(pi * ELEMENTARY_CHARGE * current * quality * natural_frequency)


@source("derived: ∫ of i_n² over two poles, exact")
def current_output(
    *, current_noise: Real, feedback_resistance: Real, natural_frequency: Real, quality: Real
) -> Real:
    r"""Output noise of the op amp's current noise.

    .. math:: E = i_n R_f \sqrt{\tfrac{\pi}{2} Q f_0}

    Parameters
    ----------
    current_noise : i_n, white. [A/√Hz]
    feedback_resistance : R_f. [Ω]
    natural_frequency : f_0. [Hz]
    quality : Q. [1]

    Returns
    -------
    E, rms over all frequencies. [V]

    Notes
    -----
    Single-pole op amp, no filter behind.
    """
    return current_noise * feedback_resistance * sqrt(pi * quality * natural_frequency / 2)


@source("derived: ∫ of e_n²|1 + s R_f C_t|² over two poles, exact")
def voltage_output(
    *,
    voltage_noise: Real,
    feedback_resistance: Real,
    total_capacitance: Real,
    gain_bandwidth: Real,
    natural_frequency: Real,
    quality: Real,
) -> Real:
    r"""Output noise of the op amp's voltage noise, the plateau up to the last roll-off included.

    .. math:: E = e_n \sqrt{\tfrac{\pi}{2} Q f_0 (1 + 2\pi GBW R_f C_t)}

    Parameters
    ----------
    voltage_noise : e_n, white. [V/√Hz]
    feedback_resistance : R_f. [Ω]
    total_capacitance : C_t = C_i + C_f. [F]
    gain_bandwidth : GBW. [Hz]
    natural_frequency : f_0. [Hz]
    quality : Q. [1]

    Returns
    -------
    E, rms over all frequencies. [V]

    Notes
    -----
    Single-pole op amp, no filter behind; 1/f noise is extra.
    """
    rise = 1 + 2 * pi * gain_bandwidth * feedback_resistance * total_capacitance
    return voltage_noise * sqrt(pi * quality * natural_frequency * rise / 2)


@source("derived: ∫ of e²(1 + f_c/f); S. Franco, Ex. 7.1")
def flicker_and_white(*, density: Real, corner: Real, low: Real, high: Real) -> Real:
    r"""Rms of white and 1/f noise between two frequencies.

    .. math:: E = e \sqrt{f_c \ln(f_H/f_L) + f_H - f_L}

    Parameters
    ----------
    density : e, flat region. [V/√Hz]
    corner : f_c, where 1/f noise equals the flat region. [Hz]
    low : f_L above 0. [Hz]
    high : f_H. [Hz]

    Returns
    -------
    E, rms; amperes from a current density. [V]

    Notes
    -----
    Ideal band edges.

    Examples
    --------
    >>> print(f"{flicker_and_white(density=20e-9, corner=200.0, low=20.0, high=20e3) * 1e6:.2f} µV")
    2.92 µV
    """
    return density * sqrt(corner * log(high / low) + high - low)


@source("derived: white noise through an ideal filter")
def rms_in_band(*, density: Real, bandwidth: Real) -> Real:
    r"""Rms of white noise over a noise bandwidth.

    .. math:: I = i \sqrt{B_n}

    Parameters
    ----------
    density : i. [A/√Hz]
    bandwidth : B_n, noise bandwidth. [Hz]

    Returns
    -------
    I, rms; volts from a voltage density. [A]

    Notes
    -----
    One pole has B_n = 1.571 f_3dB, two flat poles 1.111 f_3dB.
    """
    return density * sqrt(bandwidth)
