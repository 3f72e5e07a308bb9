"""Approximate relations as data sheets print them: for comparison and as starting points, never as results."""

from __future__ import annotations

from numpy import pi, sqrt

from opto_ckt.constants import BOLTZMANN
from opto_ckt.formulas.formula import Real, source


@source("rule of thumb of data sheets: Texas Instruments LMH6611 SNOSB00K p. 32; Analog Devices AD8065 p. 24")
def intercept_capacitance(*, feedback_resistance: Real, input_capacitance: Real, gain_bandwidth: Real) -> Real:
    r"""Feedback capacitance whose pole lies where the rising noise gain meets the open-loop gain.

    .. math:: C_f = \sqrt{\frac{C}{2\pi R_f GBW}}

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    input_capacitance : C at the summing node. [F]
    gain_bandwidth : GBW. [Hz]

    Returns
    -------
    C_f; it is called the 45° rule, yet gives Q = 1, a margin of 51.8° and a peak of 1.25 dB. [F]

    Notes
    -----
    C_i ≫ C_f; `opto_ckt.formulas.transimpedance.feedback_capacitance` is exact.

    Examples
    --------
    >>> c_f = intercept_capacitance(feedback_resistance=1e3, input_capacitance=24e-12, gain_bandwidth=130e6)
    >>> print(f"{c_f * 1e12:.2f} pF")
    5.42 pF
    """
    return sqrt(input_capacitance / (2 * pi * feedback_resistance * gain_bandwidth))


@source("rule of thumb of data sheets: Texas Instruments THS4631 SLOS451B p. 10, LM6211 SNOSAH2C p. 20")
def quadratic_capacitance(*, feedback_resistance: Real, input_capacitance: Real, gain_bandwidth: Real) -> Real:
    r"""Feedback capacitance that counts itself among what loads the summing node.

    .. math:: C_f = \frac{a + \sqrt{a^2 + 4 a C}}{2}, \quad a = \frac{1}{\pi R_f GBW}

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    input_capacitance : C at the summing node. [F]
    gain_bandwidth : GBW. [Hz]

    Returns
    -------
    C_f; called maximally flat, yet overdamped: Q is 0.574 at 2π GBW R_f C = 5, 0.692 at 1000. [F]

    Notes
    -----
    C_i ≫ C_f; `opto_ckt.formulas.transimpedance.feedback_capacitance` is exact.

    Examples
    --------
    >>> c_f = quadratic_capacitance(feedback_resistance=100e3, input_capacitance=23.3e-12, gain_bandwidth=230e6)
    >>> print(f"{c_f * 1e12:.3f} pF")
    0.575 pF
    """
    a = 1 / (pi * feedback_resistance * gain_bandwidth)
    return (a + sqrt(a**2 + 4 * a * input_capacitance)) / 2


@source("rule of thumb of data sheets: Texas Instruments LMH6611 SNOSB00K p. 32, OPA656 SBOS196I 8.2.2")
def intercept_frequency(*, feedback_resistance: Real, input_capacitance: Real, gain_bandwidth: Real) -> Real:
    r"""Frequency at which the rising noise gain meets the open-loop gain.

    .. math:: f = \sqrt{\frac{GBW}{2\pi R_f C}}

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    input_capacitance : C at the summing node. [F]
    gain_bandwidth : GBW. [Hz]

    Returns
    -------
    f; the bandwidth if the response is maximally flat, 1.27 times less than it if Q = 1. [Hz]

    Notes
    -----
    C_i ≫ C_f.
    """
    return sqrt(gain_bandwidth / (2 * pi * feedback_resistance * input_capacitance))


@source("rule of thumb of data sheets: Texas Instruments OPA656 SBOS196I 8.2.2, OPA657 SBOS197E p. 11, OPA847")
def flat_feedback_pole(*, feedback_resistance: Real, input_capacitance: Real, gain_bandwidth: Real) -> Real:
    r"""Frequency of the feedback pole 1/(2π R_f C_f) for a maximally flat response.

    .. math:: f_p = \sqrt{\frac{GBW}{4\pi R_f C}}

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    input_capacitance : C at the summing node. [F]
    gain_bandwidth : GBW. [Hz]

    Returns
    -------
    f_p; it is not the bandwidth, which is √2 higher. [Hz]

    Notes
    -----
    C_i ≫ C_f.
    """
    return sqrt(gain_bandwidth / (4 * pi * feedback_resistance * input_capacitance))


@source("rule of thumb of data sheets: Texas Instruments OPA656 SBOS196G p. 11, OPA657, OPA846, OPA847")
def band_limited_input_noise(
    *,
    voltage_noise: Real,
    current_noise: Real,
    feedback_resistance: Real,
    input_capacitance: Real,
    band: Real,
    temperature: Real,
) -> Real:
    r"""Mean input current noise density over a band with an ideal edge.

    .. math:: \sqrt{i_n^2 + \frac{4kT}{R_f} + \left(\frac{e_n}{R_f}\right)^2 + \frac{(2\pi F C e_n)^2}{3}}

    Parameters
    ----------
    voltage_noise : e_n, white. [V/√Hz]
    current_noise : i_n, white. [A/√Hz]
    feedback_resistance : R_f. [Ω]
    input_capacitance : C at the summing node. [F]
    band : F, upper edge of the band. [Hz]
    temperature : T. [K]

    Returns
    -------
    The mean density. [A/√Hz]

    Notes
    -----
    Ideal edge below the feedback pole only; over the amplifier's own bandwidth it reads low, see
    `opto_ckt.formulas.output_noise`.
    """
    johnson = 4 * BOLTZMANN * temperature / feedback_resistance
    rising = (2 * pi * band * input_capacitance * voltage_noise) ** 2 / 3
    return sqrt(current_noise**2 + johnson + (voltage_noise / feedback_resistance) ** 2 + rising)


@source("rule of thumb: P. C. D. Hobbs, Building Electro-Optical Systems, 18.4.3, factor 2; the expression from memory")
def comfortable_gain_bandwidth(*, feedback_resistance: Real, input_capacitance: Real, bandwidth: Real) -> Real:
    r"""Gain-bandwidth product with a margin of two over the least that a flat response needs.

    .. math:: GBW = 4\pi R_f C f_{3dB}^2

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    input_capacitance : C at the summing node. [F]
    bandwidth : f_3dB. [Hz]

    Returns
    -------
    GBW; above five times as much only noise is gained. [Hz]

    Notes
    -----
    C_i ≫ C_f.
    """
    return 4 * pi * feedback_resistance * input_capacitance * bandwidth**2
