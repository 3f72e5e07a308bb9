"""Networks in place of one feedback resistor or capacitor: tees, dividers, filters inside the loop, shaping."""

from __future__ import annotations

from numpy import pi, sqrt

from opto_ckt.formulas.formula import Real, source


@source("derived, exact; Texas Instruments THS4601 SLOS388B p. 18 prints R_1 (1 + R_2/R_3)")
def tee_resistance(*, first: Real, second: Real, shunt: Real) -> Real:
    r"""Feedback resistance that a resistive tee is equal to.

    .. math:: R = R_1 + R_2 + R_1 R_2/R_3

    Parameters
    ----------
    first : R_1 at the summing node. [Ω]
    second : R_2 at the output. [Ω]
    shunt : R_3 from their joint to ground. [Ω]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    The thermal noise stays that of R_1; offset and e_n gain 1 + R_2/R_3.

    Examples
    --------
    >>> print(f"{tee_resistance(first=36e6, second=26.5e3, shunt=1e3) / 1e6:.2f} MΩ")
    990.03 MΩ
    """
    return first + second + first * second / shunt


@source("derived, exact; Texas Instruments THS4601 SLOS388B p. 18 leaves C_1 out of the sum")
def tee_capacitance(*, first: Real, second: Real, shunt: Real) -> Real:
    r"""Feedback capacitance that a capacitive tee is equal to.

    .. math:: C = \frac{C_1 C_2}{C_1 + C_2 + C_3}

    Parameters
    ----------
    first : C_1 at the summing node. [F]
    second : C_2 at the output. [F]
    shunt : C_3 from their joint to ground. [F]

    Returns
    -------
    C. [F]

    Notes
    -----
    Nearly C_1 is added from the summing node to ground.
    """
    return first * second / (first + second + shunt)


@source("Ohm's law: two ways beside each other")
def branch_resistance(*, total: Real, first: Real, contact: Real) -> Real:
    r"""Resistance that, behind a contact and beside another resistor, makes a wanted one.

    .. math:: R_b = \frac{R\,R_1}{R_1 - R} - R_{on}

    Parameters
    ----------
    total : R wanted in all. [Ω]
    first : R_1 that is always there, above R. [Ω]
    contact : R_on of the closed contact. [Ω]

    Returns
    -------
    R_b. [Ω]

    Notes
    -----
    Exact.
    """
    return total * first / (first - total) - contact


@source("derived for R_A ≪ R_f; Texas Instruments LM6211 SNOSAH2C p. 20")
def tapped_capacitance(*, wanted: Real, upper: Real, lower: Real) -> Real:
    r"""Capacitor to fit at a divider on the output so that it acts as a smaller one.

    .. math:: C = C_f (1 + R_B/R_A)

    Parameters
    ----------
    wanted : C_f, its effect as feedback capacitance. [F]
    upper : R_B, output to tap. [Ω]
    lower : R_A, tap to ground. [Ω]

    Returns
    -------
    C from the tap to the summing node. [F]

    Notes
    -----
    R_A in parallel with R_B much below the reactance of C at the bandwidth.
    """
    return wanted * (1 + upper / lower)


@source("derived, exact middle term; Texas Instruments OPA380 SBOS291G p. 13 eq. 4")
def inner_filter_frequency(
    *, feedback_resistance: Real, feedback_capacitance: Real, filter_resistance: Real, filter_capacitance: Real
) -> Real:
    r"""Natural frequency of a stage with a filter R_x, C_x inside the feedback capacitor.

    .. math:: f_0 = \frac{1}{2\pi \sqrt{R_f R_x C_f C_x}}

    Parameters
    ----------
    feedback_resistance : R_f, around the filter. [Ω]
    feedback_capacitance : C_f, around the op amp alone. [F]
    filter_resistance : R_x at the op amp's output. [Ω]
    filter_capacitance : C_x to ground. [F]

    Returns
    -------
    f_0. [Hz]

    Notes
    -----
    Op amp much faster than f_0, R_x ≪ R_f.
    """
    return 1 / (2 * pi * sqrt(feedback_resistance * feedback_capacitance * filter_resistance * filter_capacitance))


@source("derived, exact middle term; R_f C_f = 2 R_x C_x is flat: Texas Instruments OPA380 SBOS291G p. 13 eq. 5")
def inner_filter_quality(
    *, feedback_resistance: Real, feedback_capacitance: Real, filter_resistance: Real, filter_capacitance: Real
) -> Real:
    r"""Q of a stage with a filter R_x, C_x inside the feedback capacitor.

    .. math:: Q = \frac{\sqrt{R_f R_x C_f C_x}}{C_f (R_f + R_x)}

    Parameters
    ----------
    feedback_resistance : R_f, around the filter. [Ω]
    feedback_capacitance : C_f, around the op amp alone. [F]
    filter_resistance : R_x at the op amp's output. [Ω]
    filter_capacitance : C_x to ground. [F]

    Returns
    -------
    Q. [1]

    Notes
    -----
    Op amp much faster than f_0, R_x ≪ R_f.
    """
    root = sqrt(feedback_resistance * feedback_capacitance * filter_resistance * filter_capacitance)
    return root / (feedback_capacitance * (feedback_resistance + filter_resistance))


@source("Texas Instruments, OPA657 SBOS197E p. 12: flat response of an inverting stage")
def shaped_corner(*, gain_bandwidth: Real, low_gain: Real, high_gain: Real) -> Real:
    r"""Frequency Z_0 at which the rising noise gain of an inverting stage would leave the gain 1.

    .. math:: Z_0 = \frac{GBW}{G_1^2} \left(1 - \frac{G_1}{G_2} - \sqrt{1 - 2 \frac{G_1}{G_2}}\right)

    Parameters
    ----------
    gain_bandwidth : GBW. [Hz]
    low_gain : G_1 = 1 + R_f/R_i, noise gain at low frequency. [V/V]
    high_gain : G_2 = 1 + C_s/C_f, noise gain at crossover, at least 2 G_1. [V/V]

    Returns
    -------
    Z_0; the bandwidth is √(Z_0 GBW). [Hz]

    Notes
    -----
    Decompensated op amp with C_s to ground at the inverting input.
    """
    ratio = low_gain / high_gain
    return gain_bandwidth / low_gain**2 * (1 - ratio - sqrt(1 - 2 * ratio))


@source("Texas Instruments, OPA657 SBOS197E p. 12: flat response of an inverting stage")
def shaping_feedback_capacitance(*, feedback_resistance: Real, corner: Real, high_gain: Real) -> Real:
    r"""Feedback capacitance that goes with `shaped_corner`; C_s = (G_2 - 1) C_f goes to ground.

    .. math:: C_f = \frac{1}{2\pi R_f Z_0 G_2}

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    corner : Z_0. [Hz]
    high_gain : G_2 = 1 + C_s/C_f. [V/V]

    Returns
    -------
    C_f in all. [F]

    Notes
    -----
    Input capacitance of the op amp counts in C_s.
    """
    return 1 / (2 * pi * feedback_resistance * corner * high_gain)
