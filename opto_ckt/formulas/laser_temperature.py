"""Laser diode over temperature: laws of threshold and slope, and their constants from two measured points."""

from __future__ import annotations

from numpy import exp, log

from opto_ckt.formulas.formula import Real, source


@source("exponential law; J. M. Senior, Optical Fiber Communications, Ex. 6.7")
def threshold_current(
    *, threshold: Real, junction_temperature: Real, reference_temperature: Real, characteristic_temperature: Real
) -> Real:
    r"""Threshold of an edge emitter at a junction temperature.

    .. math:: I_{th}(T) = I_{th}(T_r) \exp\frac{T - T_r}{T_0}

    Parameters
    ----------
    threshold : I_th at T_r. [A]
    junction_temperature : T. [K]
    reference_temperature : T_r. [K]
    characteristic_temperature : T_0; 120 to 190 K for AlGaAs, 40 to 75 K for InGaAsP. [K]

    Returns
    -------
    I_th at T. [A]

    Notes
    -----
    About -20 °C to 85 °C.

    Examples
    --------
    >>> ratio = threshold_current(
    ...     threshold=1.0, junction_temperature=353.15, reference_temperature=293.15, characteristic_temperature=55.0)
    >>> print(f"{ratio:.2f}")
    2.98
    """
    return threshold * exp((junction_temperature - reference_temperature) / characteristic_temperature)


@source("Finisar, HFE4093-342 data sheet p. 4, 850 nm")
def vcsel_threshold(
    *, minimum: Real, junction_temperature: Real, minimum_temperature: Real, curvature: Real
) -> Real:
    r"""Threshold of a surface emitter: it has a minimum, and grows towards both ends.

    .. math:: I_{th}(T) = I_{min} (1 + \kappa (T - T_{min})^2)

    Parameters
    ----------
    minimum : I_min. [A]
    junction_temperature : T. [K]
    minimum_temperature : T_min. [K]
    curvature : κ; 1.1e-4 in the source. [1/K²]

    Returns
    -------
    I_th at T. [A]

    Notes
    -----
    Either end of the temperature range may be the worst.
    """
    return minimum * (1 + curvature * (junction_temperature - minimum_temperature) ** 2)


@source("derived: exponential law through two points")
def characteristic_temperature(
    *, first_threshold: Real, second_threshold: Real, first_temperature: Real, second_temperature: Real
) -> Real:
    r"""Characteristic temperature from two thresholds.

    .. math:: T_0 = \frac{T_2 - T_1}{\ln(I_2/I_1)}

    Parameters
    ----------
    first_threshold : I_1. [A]
    second_threshold : I_2. [A]
    first_temperature : T_1. [K]
    second_temperature : T_2. [K]

    Returns
    -------
    T_0. [K]

    Notes
    -----
    Junction temperatures: pulsed, or with self-heating taken off.
    """
    return (second_temperature - first_temperature) / log(second_threshold / first_threshold)


@source("exponential law, from memory")
def exponential_slope(
    *, slope: Real, junction_temperature: Real, reference_temperature: Real, slope_temperature: Real
) -> Real:
    r"""Slope efficiency at a junction temperature, exponential law.

    .. math:: \eta(T) = \eta(T_r) \exp\left(-\frac{T - T_r}{T_1}\right)

    Parameters
    ----------
    slope : η at T_r. [W/A]
    junction_temperature : T. [K]
    reference_temperature : T_r. [K]
    slope_temperature : T_1, 100 to 500 K. [K]

    Returns
    -------
    η at T. [W/A]

    Notes
    -----
    About -20 °C to 85 °C.
    """
    return slope * exp((reference_temperature - junction_temperature) / slope_temperature)


@source("Texas Instruments, ONET4211LD data sheet SLLS688A eq. 15")
def linear_slope(
    *, slope: Real, junction_temperature: Real, reference_temperature: Real, slope_coefficient: Real
) -> Real:
    r"""Slope efficiency at a junction temperature, linear law.

    .. math:: \eta(T) = \eta(T_r) (1 + \alpha (T - T_r))

    Parameters
    ----------
    slope : η at T_r. [W/A]
    junction_temperature : T. [K]
    reference_temperature : T_r. [K]
    slope_coefficient : α, mostly negative. [1/K]

    Returns
    -------
    η at T. [W/A]

    Notes
    -----
    The range that α was taken from.
    """
    return slope * (1 + slope_coefficient * (junction_temperature - reference_temperature))


@source("Texas Instruments, ONET4211LD data sheet SLLS688A eq. 16")
def slope_coefficient(
    *, first_slope: Real, second_slope: Real, first_temperature: Real, second_temperature: Real
) -> Real:
    r"""Temperature coefficient of the slope from two slopes.

    .. math:: \alpha = \frac{\eta_2 - \eta_1}{\eta_1 (T_2 - T_1)}

    Parameters
    ----------
    first_slope : η_1, the reference. [W/A]
    second_slope : η_2. [W/A]
    first_temperature : T_1. [K]
    second_temperature : T_2. [K]

    Returns
    -------
    α. [1/K]

    Notes
    -----
    Linear between the two.
    """
    return (second_slope - first_slope) / (first_slope * (second_temperature - first_temperature))
