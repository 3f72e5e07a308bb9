"""Op-amp transimpedance stage: exact sizing relations of the single-pole op amp.

Every relation comes from one denominator, with ω_c = 2π GBW, C_t = C_i + C_f, g = 1 + R_f/R_sh:

    D(s) = 1 + g/A_0 + s (R_f C_f + g/ω_c + R_f C_t/A_0) + s² R_f C_t/ω_c

C_i is everything from the summing node to ground, C_f everything across R_f, strays included.
"""

from __future__ import annotations

from numpy import pi, sqrt

from opto_ckt.formulas.formula import Real, source


@source("definition: largest swing at the largest current")
def feedback_resistance(*, swing: Real, current: Real) -> Real:
    r"""Feedback resistance that turns a current into a swing.

    .. math:: R_f = V/I

    Parameters
    ----------
    swing : V, change of the output. [V]
    current : I, change of the photocurrent. [A]

    Returns
    -------
    R_f. [Ω]

    Notes
    -----
    Open-loop gain much above 1.
    """
    return swing / current


@source("derived: single-pole op amp of infinite dc gain, exact")
def natural_frequency(
    *, feedback_resistance: Real, input_capacitance: Real, feedback_capacitance: Real, gain_bandwidth: Real
) -> Real:
    r"""Natural frequency f_0 of the closed loop.

    .. math:: f_0 = \sqrt{\frac{GBW}{2\pi R_f (C_i + C_f)}}

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    input_capacitance : C_i at the summing node, without C_f. [F]
    feedback_capacitance : C_f in all. [F]
    gain_bandwidth : GBW. [Hz]

    Returns
    -------
    f_0. [Hz]

    Notes
    -----
    One op-amp pole; further poles far above the loop crossover.
    """
    return sqrt(gain_bandwidth / (2 * pi * feedback_resistance * (input_capacitance + feedback_capacitance)))


@source("derived: single-pole op amp of infinite dc gain, exact")
def quality_factor(
    *, feedback_resistance: Real, input_capacitance: Real, feedback_capacitance: Real, gain_bandwidth: Real
) -> Real:
    r"""Quality factor Q of the closed loop.

    .. math:: Q = \frac{\sqrt{\omega_c R_f (C_i + C_f)}}{1 + \omega_c R_f C_f}

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    input_capacitance : C_i at the summing node, without C_f. [F]
    feedback_capacitance : C_f in all. [F]
    gain_bandwidth : GBW; ω_c = 2π GBW. [Hz]

    Returns
    -------
    Q. [1]

    Notes
    -----
    One op-amp pole; further poles far above the loop crossover.
    """
    w = 2 * pi * gain_bandwidth * feedback_resistance
    return sqrt(w * (input_capacitance + feedback_capacitance)) / (1 + w * feedback_capacitance)


@source("derived: single-pole op amp, exact; the usual √(C_i/(2π R_f GBW)) is its intercept, Q = 1")
def feedback_capacitance(
    *, feedback_resistance: Real, input_capacitance: Real, gain_bandwidth: Real, quality: Real
) -> Real:
    r"""Total feedback capacitance for a wanted Q of the closed loop.

    .. math:: C_f = \frac{u - 1}{\omega_c R_f}, \quad
              u = \tfrac12\left(Q^{-2} + \sqrt{Q^{-4} + 4 (\omega_c R_f C_i - 1) Q^{-2}}\right)

    Parameters
    ----------
    feedback_resistance : R_f, summing node to output. [Ω]
    input_capacitance : C_i at the summing node, without C_f. [F]
    gain_bandwidth : GBW of the op amp; ω_c = 2π GBW. [Hz]
    quality : Q; 1/√2 is maximally flat. [1]

    Returns
    -------
    C_f, the stray capacitance across R_f included. [F]

    Notes
    -----
    C_f is not negative for ω_c R_f C_i ≥ Q²; the second pole lies far above crossover.

    Examples
    --------
    >>> c_f = feedback_capacitance(
    ...     feedback_resistance=100e3, input_capacitance=23.3e-12, gain_bandwidth=230e6, quality=0.5**0.5)
    >>> f"{c_f * 1e12:.2f} pF"
    '0.57 pF'
    """
    w = 2 * pi * gain_bandwidth * feedback_resistance
    u = (quality**-2 + sqrt(quality**-4 + 4 * (w * input_capacitance - 1) * quality**-2)) / 2
    return (u - 1) / w


@source("derived: |D(j2πf)|² = 2 solved for C_f, single-pole op amp, exact")
def feedback_capacitance_for_bandwidth(
    *, feedback_resistance: Real, input_capacitance: Real, gain_bandwidth: Real, bandwidth: Real
) -> Real:
    r"""Largest total feedback capacitance that still keeps a wanted half-power bandwidth.

    .. math:: C_f = \frac{\sqrt{2 y (1 + n^2) - n^2 (1 + y^2) + n^{-2}} - n^2 y}{(1 + n^2)\, \omega_c R_f}, \quad
              n = \frac{f_{3dB}}{GBW}, \quad y = \omega_c R_f C_i

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    input_capacitance : C_i at the summing node, without C_f. [F]
    gain_bandwidth : GBW; ω_c = 2π GBW. [Hz]
    bandwidth : f_3dB to keep. [Hz]

    Returns
    -------
    C_f; with any more the bandwidth falls below f_3dB. [F]

    Notes
    -----
    A negative radicand or result says that no capacitance, or none without a negative one, reaches f_3dB.
    """
    w = 2 * pi * gain_bandwidth * feedback_resistance
    n2 = (bandwidth / gain_bandwidth) ** 2
    y = w * input_capacitance
    return (sqrt(2 * y * (1 + n2) - n2 * (1 + y**2) + 1 / n2) - n2 * y) / ((1 + n2) * w)


@source("derived: single-pole op amp of finite dc gain with a shunt at its input, exact")
def dc_transimpedance(*, feedback_resistance: Real, shunt_resistance: Real, open_loop_gain: Real) -> Real:
    r"""Transimpedance at dc of an op amp of finite gain.

    .. math:: Z_0 = \frac{R_f}{1 + (1 + R_f/R_{sh})/A_0}

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    shunt_resistance : R_sh from the summing node to ground. [Ω]
    open_loop_gain : A_0 at dc. [V/V]

    Returns
    -------
    Magnitude of the output voltage over the input current. [Ω]

    Notes
    -----
    Output resistance of the op amp much below R_f.
    """
    return feedback_resistance / (1 + (1 + feedback_resistance / shunt_resistance) / open_loop_gain)


@source("derived: single-pole op amp of finite dc gain with a shunt at its input, exact")
def natural_frequency_at_finite_gain(
    *,
    feedback_resistance: Real,
    input_capacitance: Real,
    feedback_capacitance: Real,
    gain_bandwidth: Real,
    shunt_resistance: Real,
    open_loop_gain: Real,
) -> Real:
    r"""Natural frequency f_0 with the dc gain and the shunt resistance counted.

    .. math:: f_0 = \frac{1}{2\pi} \sqrt{\frac{\omega_c (1 + g/A_0)}{R_f (C_i + C_f)}}, \quad g = 1 + R_f/R_{sh}

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    input_capacitance : C_i at the summing node, without C_f. [F]
    feedback_capacitance : C_f in all. [F]
    gain_bandwidth : GBW; ω_c = 2π GBW. [Hz]
    shunt_resistance : R_sh from the summing node to ground. [Ω]
    open_loop_gain : A_0 at dc. [V/V]

    Returns
    -------
    f_0. [Hz]

    Notes
    -----
    One op-amp pole at GBW/A_0.
    """
    d0 = 1 + (1 + feedback_resistance / shunt_resistance) / open_loop_gain
    return sqrt(d0 * gain_bandwidth / (2 * pi * feedback_resistance * (input_capacitance + feedback_capacitance)))


@source("derived: single-pole op amp of finite dc gain with a shunt at its input, exact")
def quality_factor_at_finite_gain(
    *,
    feedback_resistance: Real,
    input_capacitance: Real,
    feedback_capacitance: Real,
    gain_bandwidth: Real,
    shunt_resistance: Real,
    open_loop_gain: Real,
) -> Real:
    r"""Quality factor Q with the dc gain and the shunt resistance counted.

    .. math:: Q = \frac{\sqrt{(1 + g/A_0)\, \omega_c R_f C_t}}{\omega_c R_f C_f + g + \omega_c R_f C_t/A_0}, \quad
              g = 1 + R_f/R_{sh}, \quad C_t = C_i + C_f

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    input_capacitance : C_i at the summing node, without C_f. [F]
    feedback_capacitance : C_f in all. [F]
    gain_bandwidth : GBW; ω_c = 2π GBW. [Hz]
    shunt_resistance : R_sh from the summing node to ground. [Ω]
    open_loop_gain : A_0 at dc. [V/V]

    Returns
    -------
    Q. [1]

    Notes
    -----
    One op-amp pole at GBW/A_0.
    """
    w = 2 * pi * gain_bandwidth * feedback_resistance
    g = 1 + feedback_resistance / shunt_resistance
    wide = w * (input_capacitance + feedback_capacitance)
    return sqrt((1 + g / open_loop_gain) * wide) / (w * feedback_capacitance + g + wide / open_loop_gain)
