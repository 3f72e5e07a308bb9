"""Resistor and capacitor between the bias supply and the detector: droop, ripple, discharge."""

from __future__ import annotations

from numpy import log, pi

from opto_ckt.formulas.formula import Real, source


@source("Ohm's law")
def resistance_for_droop(*, droop: Real, current: Real) -> Real:
    r"""Largest series resistance for a wanted droop of the bias.

    .. math:: R = \Delta V/I

    Parameters
    ----------
    droop : ΔV, most the bias may fall. [V]
    current : I, most that the detector draws on average. [A]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    Nothing else draws from the filter.
    """
    return droop / current


@source("derived: current through C_d of the ripple that one RC low-pass leaves, far above its corner")
def ripple_current(*, ripple: Real, capacitance: Real, corner: Real) -> Real:
    r"""Current that the ripple of the bias supply drives through the detector's capacitance.

    .. math:: i = 2\pi C_d V f_c

    Parameters
    ----------
    ripple : V of the supply. [V]
    capacitance : C_d of the detector. [F]
    corner : f_c of the filter. [Hz]

    Returns
    -------
    i, whatever the frequency: it grows with it, and the filter falls with it. [A]

    Notes
    -----
    Ripple far above f_c, C_d far below the filter's capacitor.
    """
    return 2 * pi * capacitance * ripple * corner


@source("derived: `ripple_current` solved for the corner")
def corner_for_ripple(*, current: Real, ripple: Real, capacitance: Real) -> Real:
    r"""Corner of the bias filter that leaves a wanted ripple current.

    .. math:: f_c = \frac{i}{2\pi C_d V}

    Parameters
    ----------
    current : i allowed. [A]
    ripple : V of the supply. [V]
    capacitance : C_d of the detector. [F]

    Returns
    -------
    f_c. [Hz]

    Notes
    -----
    Ripple far above f_c.
    """
    return current / (2 * pi * capacitance * ripple)


@source("derived: exp(-t/RC) down to the voltage that may be touched")
def bleed_resistance(*, capacitance: Real, voltage: Real, safe: Real, duration: Real) -> Real:
    r"""Resistance across a capacitor that discharges it in time.

    .. math:: R = \frac{t}{C \ln(V/V_s)}

    Parameters
    ----------
    capacitance : C at the upper end of its tolerance. [F]
    voltage : V at switch-off. [V]
    safe : V_s, below V. [V]
    duration : t. [s]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    The supply is off, nothing else discharges.
    """
    return duration / (capacitance * log(voltage / safe))
