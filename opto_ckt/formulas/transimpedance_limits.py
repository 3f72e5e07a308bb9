"""What a transimpedance stage asks of its parts: the relations of `transimpedance` solved for GBW, R_f, C_i and C_f."""

from __future__ import annotations

from numpy import pi, sqrt

from opto_ckt.formulas.formula import Real, source


@source("derived: single-pole op amp, exact; 2π R_f C f_3dB² of the data sheets is its limit at Q = 1/√2, C_i ≫ C_f")
def required_gain_bandwidth(
    *, feedback_resistance: Real, input_capacitance: Real, bandwidth: Real, quality: Real
) -> Real:
    r"""Gain-bandwidth product that gives a wanted bandwidth at a wanted Q, C_f set for that Q.

    .. math:: GBW = \frac{f_{3dB} Q}{k(Q)} u, \quad u = \frac{1 + p + \sqrt{(1 + p)^2 - 4 Q^2}}{2 Q^2}, \quad
              p = \frac{2\pi f_{3dB} R_f C_i Q}{k(Q)}

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    input_capacitance : C_i at the summing node, without C_f. [F]
    bandwidth : f_3dB wanted. [Hz]
    quality : Q wanted. [1]

    Returns
    -------
    GBW; the feedback capacitance that goes with it is that of `feedback_capacitance`. [Hz]

    Notes
    -----
    1 + p ≥ 2Q; k(Q) is `opto_ckt.formulas.second_order.bandwidth_ratio`.
    """
    b = 1 - 1 / (2 * quality**2)
    f = bandwidth * quality / sqrt(b + sqrt(b**2 + 1))
    p = 2 * pi * f * feedback_resistance * input_capacitance
    return f * (1 + p + sqrt((1 + p) ** 2 - 4 * quality**2)) / (2 * quality**2)


@source("derived: |D(j2πf)|² = 2 solved for GBW, single-pole op amp, exact")
def required_gain_bandwidth_at_capacitance(
    *, feedback_resistance: Real, input_capacitance: Real, feedback_capacitance: Real, bandwidth: Real
) -> Real:
    r"""Least gain-bandwidth product that gives a wanted bandwidth when C_f is already fixed.

    .. math:: GBW = \frac{f_{3dB} (1 + c^2)}{a + \sqrt{a^2 + (1 + c^2)(1 - b^2)}}, \quad
              a, b, c = 2\pi f_{3dB} R_f \cdot (C_i, C_f, C_i + C_f)

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    input_capacitance : C_i at the summing node, without C_f. [F]
    feedback_capacitance : C_f in all, strays included. [F]
    bandwidth : f_3dB wanted. [Hz]

    Returns
    -------
    GBW. [Hz]

    Notes
    -----
    2π f_3dB R_f C_f < 1, else hardly any op amp reaches f_3dB.
    """
    w = 2 * pi * bandwidth * feedback_resistance
    a, b, c = w * input_capacitance, w * feedback_capacitance, w * (input_capacitance + feedback_capacitance)
    return bandwidth * (1 + c**2) / (a + sqrt(a**2 + (1 + c**2) * (1 - b**2)))


@source("derived: single-pole op amp, exact; GBW/(2π C f_3dB²) of the data sheets is its limit at Q = 1/√2, C_i ≫ C_f")
def largest_feedback_resistance(
    *, input_capacitance: Real, gain_bandwidth: Real, bandwidth: Real, quality: Real
) -> Real:
    r"""Largest feedback resistance at which a wanted bandwidth and Q can both be had.

    .. math:: R_f = \frac{Q^2 u^2 - u + 1}{\omega_c C_i}, \quad u = \frac{k(Q)\, GBW}{Q f_{3dB}}

    Parameters
    ----------
    input_capacitance : C_i at the summing node, without C_f. [F]
    gain_bandwidth : GBW; ω_c = 2π GBW. [Hz]
    bandwidth : f_3dB wanted. [Hz]
    quality : Q wanted. [1]

    Returns
    -------
    R_f; the feedback capacitance that goes with it is that of `feedback_capacitance`. [Ω]

    Notes
    -----
    u ≥ 1, so that C_f is not negative.
    """
    b = 1 - 1 / (2 * quality**2)
    u = sqrt(b + sqrt(b**2 + 1)) * gain_bandwidth / (quality * bandwidth)
    return (quality**2 * u**2 - u + 1) / (2 * pi * gain_bandwidth * input_capacitance)


@source("derived: single-pole op amp, exact")
def largest_input_capacitance(
    *, feedback_resistance: Real, gain_bandwidth: Real, bandwidth: Real, quality: Real
) -> Real:
    r"""Largest input capacitance at which a wanted bandwidth and Q can both be had.

    .. math:: C_i = \frac{Q^2 u^2 - u + 1}{\omega_c R_f}, \quad u = \frac{k(Q)\, GBW}{Q f_{3dB}}

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    gain_bandwidth : GBW; ω_c = 2π GBW. [Hz]
    bandwidth : f_3dB wanted. [Hz]
    quality : Q wanted. [1]

    Returns
    -------
    C_i at the summing node, without C_f. [F]

    Notes
    -----
    u ≥ 1, so that C_f is not negative.
    """
    b = 1 - 1 / (2 * quality**2)
    u = sqrt(b + sqrt(b**2 + 1)) * gain_bandwidth / (quality * bandwidth)
    return (quality**2 * u**2 - u + 1) / (2 * pi * gain_bandwidth * feedback_resistance)


@source("Texas Instruments, OPA657 SBOS197E p. 12: 1 + C_i/C_f at least the minimum stable gain")
def largest_feedback_capacitance(*, input_capacitance: Real, minimum_stable_gain: Real) -> Real:
    r"""Largest feedback capacitance that a decompensated op amp stands.

    .. math:: C_f = C_i/(G_{min} - 1)

    Parameters
    ----------
    input_capacitance : C_i at the summing node, without C_f. [F]
    minimum_stable_gain : G_min above 1. [V/V]

    Returns
    -------
    C_f in all; the noise gain 1 + C_i/C_f is then G_min. [F]

    Notes
    -----
    An op amp stable at unity gain has no such limit.
    """
    return input_capacitance / (minimum_stable_gain - 1)
