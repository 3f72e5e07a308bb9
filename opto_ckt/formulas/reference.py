"""Reference levels: dividers, and the slow rise that spares a laser at switch-on."""

from __future__ import annotations

from numpy import log, pi

from opto_ckt.formulas.formula import Real, source


@source("Ohm's law")
def divided_voltage(*, voltage: Real, upper: Real, lower: Real) -> Real:
    r"""Unloaded output of a divider.

    .. math:: V_o = V \frac{R_2}{R_1 + R_2}

    Parameters
    ----------
    voltage : V. [V]
    upper : R_1, from V to the tap. [Ω]
    lower : R_2, from the tap to ground. [Ω]

    Returns
    -------
    V_o. [V]

    Notes
    -----
    No load.
    """
    return voltage * lower / (upper + lower)


@source("Ohm's law")
def lower_resistance(*, voltage: Real, tap_voltage: Real, upper: Real) -> Real:
    r"""Lower resistance of a divider for a wanted output.

    .. math:: R_2 = R_1 \frac{V_o}{V - V_o}

    Parameters
    ----------
    voltage : V. [V]
    tap_voltage : V_o wanted, below V. [V]
    upper : R_1. [Ω]

    Returns
    -------
    R_2. [Ω]

    Notes
    -----
    No load.
    """
    return upper * tap_voltage / (voltage - tap_voltage)


@source("Ohm's law")
def upper_resistance(*, voltage: Real, tap_voltage: Real, lower: Real) -> Real:
    r"""Upper resistance of a divider for a wanted output.

    .. math:: R_1 = R_2 \left(\frac{V}{V_o} - 1\right)

    Parameters
    ----------
    voltage : V. [V]
    tap_voltage : V_o wanted, below V. [V]
    lower : R_2. [Ω]

    Returns
    -------
    R_1. [Ω]

    Notes
    -----
    No load.
    """
    return lower * (voltage / tap_voltage - 1)


@source("Ohm's law")
def parallel_resistance(*, first: Real, second: Real) -> Real:
    r"""Two resistances side by side: the source resistance of a divider.

    .. math:: R = \frac{R_1 R_2}{R_1 + R_2}

    Parameters
    ----------
    first : R_1. [Ω]
    second : R_2. [Ω]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    Linear resistors.
    """
    return first * second / (first + second)


@source("derived: one time constant, exact; 3 R C is the usual rounding for 95 %")
def soft_start_time(*, resistance: Real, capacitance: Real, fraction: Real) -> Real:
    r"""Time until a filtered reference has risen to a fraction of its end value.

    .. math:: t = -R C \ln(1 - x)

    Parameters
    ----------
    resistance : R seen by the capacitor. [Ω]
    capacitance : C. [F]
    fraction : x below 1. [1]

    Returns
    -------
    t. [s]

    Notes
    -----
    The loop follows without winding up.

    Examples
    --------
    >>> print(f"{soft_start_time(resistance=10e3, capacitance=1e-6, fraction=0.95) * 1e3:.1f} ms")
    30.0 ms
    """
    return -resistance * capacitance * log(1 - fraction)


@source("derived: one time constant, exact")
def soft_start_capacitance(*, resistance: Real, duration: Real, fraction: Real) -> Real:
    r"""Capacitance that makes a reference rise to a fraction in a given time.

    .. math:: C = \frac{-t}{R \ln(1 - x)}

    Parameters
    ----------
    resistance : R seen by the capacitor. [Ω]
    duration : t. [s]
    fraction : x below 1. [1]

    Returns
    -------
    C. [F]

    Notes
    -----
    The loop follows without winding up.
    """
    return -duration / (resistance * log(1 - fraction))


@source("definition: half-power corner of R and C")
def filter_capacitance(*, resistance: Real, corner: Real) -> Real:
    r"""Capacitor that puts the corner of an RC low-pass where it is wanted.

    .. math:: C = \frac{1}{2\pi R f}

    Parameters
    ----------
    resistance : R that the capacitor sees. [Ω]
    corner : f at which the response is 3 dB down. [Hz]

    Returns
    -------
    C. [F]

    Notes
    -----
    One pole, no load.

    Examples
    --------
    >>> print(f"{filter_capacitance(resistance=1e3, corner=22.7364e6) * 1e12:.2f} pF")
    7.00 pF
    """
    return 1 / (2 * pi * resistance * corner)
