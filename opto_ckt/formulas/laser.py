"""Laser diode at rest: power, current, voltage, monitor current."""

from __future__ import annotations

from opto_ckt.constants import ELEMENTARY_CHARGE, LIGHT_SPEED, PLANCK
from opto_ckt.formulas.formula import Real, source


@source("straight line above threshold")
def optical_power(*, current: Real, threshold: Real, slope: Real) -> Real:
    r"""Optical power of a laser above threshold.

    .. math:: P = \eta (I - I_{th})

    Parameters
    ----------
    current : I, not below I_th. [A]
    threshold : I_th at the junction temperature. [A]
    slope : η at the junction temperature and the wanted plane. [W/A]

    Returns
    -------
    P at the plane of η. [W]

    Notes
    -----
    Above threshold, below roll-over.
    """
    return slope * (current - threshold)


@source("straight line above threshold")
def current_for_power(*, power: Real, threshold: Real, slope: Real) -> Real:
    r"""Current of a laser for an optical power.

    .. math:: I = I_{th} + P/\eta

    Parameters
    ----------
    power : P at the plane of η. [W]
    threshold : I_th at the junction temperature. [A]
    slope : η at the junction temperature. [W/A]

    Returns
    -------
    I. [A]

    Notes
    -----
    Above threshold, below roll-over.
    """
    return threshold + power / slope


@source("common practice: the junction clamps above threshold")
def forward_voltage(*, turn_on_voltage: Real, current: Real, series_resistance: Real) -> Real:
    r"""Forward voltage of a laser above threshold.

    .. math:: V = V_g + I R_s

    Parameters
    ----------
    turn_on_voltage : V_g. [V]
    current : I. [A]
    series_resistance : R_s. [Ω]

    Returns
    -------
    V. [V]

    Notes
    -----
    Above threshold.
    """
    return turn_on_voltage + current * series_resistance


@source("definition")
def monitor_current(*, power: Real, monitor_responsivity: Real) -> Real:
    r"""Current of the monitor diode.

    .. math:: I_m = \rho P

    Parameters
    ----------
    power : P at the plane of ρ. [W]
    monitor_responsivity : ρ, monitor current over output power. [A/W]

    Returns
    -------
    I_m, dark current apart. [A]

    Notes
    -----
    Tracking error apart.
    """
    return monitor_responsivity * power


@source("G. Keiser, Optical Fiber Communications, from memory")
def differential_efficiency(*, slope: Real, wavelength: Real) -> Real:
    r"""Photons out for electrons in, above threshold.

    .. math:: \eta_d = \frac{q \lambda}{h c} \frac{dP}{dI}

    Parameters
    ----------
    slope : dP/dI at the facet. [W/A]
    wavelength : λ. [m]

    Returns
    -------
    η_d of that facet; above 1 the data are wrong. [1]

    Notes
    -----
    One facet.
    """
    return slope * ELEMENTARY_CHARGE * wavelength / (PLANCK * LIGHT_SPEED)
