"""Loop of a transimpedance stage: noise gain, crossover, phase margin.

The loop of a single-pole op amp, with ω_c = 2π GBW and C_t = C_i + C_f:

    T(s) = (ω_c/s) (1 + s R_f C_f)/(1 + s R_f C_t)
"""

from __future__ import annotations

from numpy import arctan, degrees, pi, sqrt

from opto_ckt.formulas.formula import Real, source


@source("derived: 1 + Z_f/Z_i far above both corners")
def noise_gain_plateau(*, input_capacitance: Real, feedback_capacitance: Real) -> Real:
    r"""Noise gain above the feedback pole.

    .. math:: 1 + C_i/C_f

    Parameters
    ----------
    input_capacitance : C_i at the summing node, without C_f. [F]
    feedback_capacitance : C_f in all. [F]

    Returns
    -------
    The noise gain. [V/V]

    Notes
    -----
    Between 1/(2π R_f C_f) and GBW C_f/(C_i + C_f).
    """
    return 1 + input_capacitance / feedback_capacitance


@source("derived: |1 + Z_f/Z_i|, in quadrature; S. Franco, Ex. 7.11 has the same corners")
def noise_gain(
    *, frequency: Real, feedback_resistance: Real, input_capacitance: Real, feedback_capacitance: Real
) -> Real:
    r"""Gain from the input voltage noise to the output, while the loop gain is high.

    .. math:: \sqrt{\frac{1 + (2\pi f R_f (C_i + C_f))^2}{1 + (2\pi f R_f C_f)^2}}

    Parameters
    ----------
    frequency : f. [Hz]
    feedback_resistance : R_f. [Ω]
    input_capacitance : C_i at the summing node, without C_f. [F]
    feedback_capacitance : C_f in all. [F]

    Returns
    -------
    Magnitude of the noise gain. [V/V]

    Notes
    -----
    Below the loop crossover; shunt resistance much above R_f.
    """
    w = 2 * pi * frequency * feedback_resistance
    return sqrt((1 + (w * (input_capacitance + feedback_capacitance)) ** 2) / (1 + (w * feedback_capacitance) ** 2))


@source("derived: |T| = 1, single-pole op amp, exact")
def crossover(
    *, feedback_resistance: Real, input_capacitance: Real, feedback_capacitance: Real, gain_bandwidth: Real
) -> Real:
    r"""Frequency at which the loop gain has fallen to one.

    .. math:: f_x = \frac{1}{2\pi R_f C_t} \sqrt{\tfrac12\left(a^2 - 1 + \sqrt{(a^2 - 1)^2 + 4 t^2}\right)}, \quad
              a = \omega_c R_f C_f, \quad t = \omega_c R_f C_t, \quad C_t = C_i + C_f

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    input_capacitance : C_i at the summing node, without C_f. [F]
    feedback_capacitance : C_f in all. [F]
    gain_bandwidth : GBW; ω_c = 2π GBW. [Hz]

    Returns
    -------
    f_x. [Hz]

    Notes
    -----
    One op-amp pole; further poles far above f_x.
    """
    w = 2 * pi * gain_bandwidth * feedback_resistance
    a2 = (w * feedback_capacitance) ** 2 - 1
    wide = feedback_resistance * (input_capacitance + feedback_capacitance)
    return sqrt((a2 + sqrt(a2**2 + 4 * (2 * pi * gain_bandwidth * wide) ** 2)) / 2) / (2 * pi * wide)


@source("derived: phase of T where |T| = 1, single-pole op amp, exact")
def phase_margin_tangent(
    *, crossover: Real, feedback_resistance: Real, input_capacitance: Real, feedback_capacitance: Real
) -> Real:
    r"""Tangent of the phase margin at a known crossover.

    .. math:: \tan\varphi = \frac{1 + (2\pi f_x R_f)^2 C_f (C_i + C_f)}{2\pi f_x R_f C_i}

    Parameters
    ----------
    crossover : f_x, where the loop gain is one. [Hz]
    feedback_resistance : R_f. [Ω]
    input_capacitance : C_i at the summing node, without C_f. [F]
    feedback_capacitance : C_f in all. [F]

    Returns
    -------
    tan φ, of φ between 0 and 90°. [1]

    Notes
    -----
    One op-amp pole; a further pole at f_2 takes arctan(f_x/f_2) off, a delay t_d takes 360° f_x t_d off.
    """
    w = 2 * pi * crossover * feedback_resistance
    return (1 + w**2 * feedback_capacitance * (input_capacitance + feedback_capacitance)) / (w * input_capacitance)


def phase_margin(
    *,
    feedback_resistance: Real,
    input_capacitance: Real,
    feedback_capacitance: Real,
    gain_bandwidth: Real,
) -> Real:
    """Phase margin in degrees of the single-pole loop; see `crossover` and `phase_margin_tangent`.

    >>> margin = phase_margin(
    ...     feedback_resistance=1e3, input_capacitance=49e-12, feedback_capacitance=8e-12, gain_bandwidth=130e6)
    >>> print(f"{margin:.2f}°")
    56.68°
    """
    f = crossover(
        feedback_resistance=feedback_resistance,
        input_capacitance=input_capacitance,
        feedback_capacitance=feedback_capacitance,
        gain_bandwidth=gain_bandwidth,
    )
    tangent = phase_margin_tangent(
        crossover=f,
        feedback_resistance=feedback_resistance,
        input_capacitance=input_capacitance,
        feedback_capacitance=feedback_capacitance,
    )
    return degrees(arctan(tangent))


@source("derived: |T| = 1 of the loop T = (1 + s/(Q ω_0))/(s/ω_0)²")
def alignment_crossover_ratio(*, quality: Real) -> Real:
    r"""Loop crossover over natural frequency, input capacitance much above feedback capacitance.

    .. math:: f_x/f_0 = \sqrt{\tfrac12 (r + \sqrt{r^2 + 4})}, \quad r = 1/Q^2

    Parameters
    ----------
    quality : Q of the closed loop. [1]

    Returns
    -------
    f_x/f_0. [1]

    Notes
    -----
    Limit C_i ≫ C_f of a single-pole op amp; `crossover` is exact.
    """
    r = quality**-2
    return sqrt((r + sqrt(r**2 + 4)) / 2)


@source("derived: phase of the loop T = (1 + s/(Q ω_0))/(s/ω_0)² where |T| = 1")
def alignment_margin_tangent(*, quality: Real) -> Real:
    r"""Tangent of the phase margin that belongs to a quality factor, input capacitance much above feedback capacitance.

    .. math:: \tan\varphi = \sqrt{\tfrac12 (r^2 + \sqrt{r^4 + 4 r^2})}, \quad r = 1/Q^2

    Parameters
    ----------
    quality : Q of the closed loop. [1]

    Returns
    -------
    tan φ. [1]

    Notes
    -----
    Limit C_i ≫ C_f of a single-pole op amp; `phase_margin` is exact.
    """
    r = quality**-2
    return sqrt((r**2 + sqrt(r**4 + 4 * r**2)) / 2)


def alignment_margin(*, quality: Real) -> Real:
    """Phase margin in degrees that belongs to a quality factor; see `alignment_margin_tangent`.

    >>> print(f"{alignment_margin(quality=0.5**0.5):.1f}° {alignment_margin(quality=1.0):.1f}°")
    65.5° 51.8°
    """
    return degrees(arctan(alignment_margin_tangent(quality=quality)))
