"""Coupling through a capacitor: where it may cut off, and what the sag of long runs costs."""

from __future__ import annotations

from numpy import log, pi

from opto_ckt.formulas.formula import Real, source


@source("derived: droop d = 1 - exp(-2π f_L t) solved for f_L; H. Johnson, newsletter 7-09, has the linear form")
def corner_for_droop(*, droop: Real, duration: Real) -> Real:
    r"""High-pass corner at which a run of equal bits sags by a wanted share.

    .. math:: f_L = \frac{-\ln(1 - d)}{2\pi t}

    Parameters
    ----------
    droop : d, of the level above the average, below 1. [1]
    duration : t, run length over bit rate. [s]

    Returns
    -------
    f_L. [Hz]

    Notes
    -----
    One high-pass.

    Examples
    --------
    >>> print(f"{corner_for_droop(droop=0.05, duration=72 / 10e6):.0f} Hz")
    1134 Hz
    """
    return -log(1 - droop) / (2 * pi * duration)


@source("derived: the level left of a run, 1 - d, against a threshold that does not move")
def droop_penalty(*, droop: Real) -> Real:
    r"""Light to add because runs sag towards a fixed threshold.

    .. math:: -10 \log_{10}(1 - d)

    Parameters
    ----------
    droop : d, of the level above the average, below 1. [1]

    Returns
    -------
    The penalty, optical. [dB]

    Notes
    -----
    Noise the same on ones and zeros.

    Examples
    --------
    >>> print(f"{droop_penalty(droop=0.05):.2f} dB")
    0.22 dB
    """
    decibels: Real = -10 / log(10.0) * log(1 - droop)
    return decibels


@source("one pole")
def coupling_capacitance(*, resistance: Real, cutoff: Real) -> Real:
    r"""Capacitor that couples a signal down to a frequency.

    .. math:: C = \frac{1}{2\pi R f}

    Parameters
    ----------
    resistance : R, all that is in series with it. [Ω]
    cutoff : f at which half the power is lost. [Hz]

    Returns
    -------
    C. [F]

    Notes
    -----
    One coupling alone; several add their losses.

    Examples
    --------
    >>> print(f"{coupling_capacitance(resistance=1e3, cutoff=15.9155) * 1e6:.2f} µF")
    10.00 µF
    """
    return 1 / (2 * pi * resistance * cutoff)
