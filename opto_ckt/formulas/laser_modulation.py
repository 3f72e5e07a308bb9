"""Data on a laser whose average power is held: runs of equal bits, modulation current, extinction ratio."""

from __future__ import annotations

from opto_ckt.formulas.formula import Real, source


@source("definition; Maxim, MAX3761/MAX3762 data sheet p. 8: 72 bits at 622 Mbit/s last 116 ns")
def run_duration(*, run_length: Real, bit_rate: Real) -> Real:
    r"""How long a run of equal bits lasts.

    .. math:: t = N/B

    Parameters
    ----------
    run_length : N. [1]
    bit_rate : B. [1/s]

    Returns
    -------
    t. [s]

    Notes
    -----
    No coding overhead.
    """
    return run_length / bit_rate


@source("definition: P_av = m P_1 + (1 - m) P_0, P_1 - P_0 = η I")
def modulation_for_extinction(*, power: Real, extinction_ratio: Real, mark_density: Real, slope: Real) -> Real:
    r"""Modulation current, peak to peak, for an extinction ratio.

    .. math:: I = \frac{P (r - 1)}{\eta (1 + m (r - 1))}

    Parameters
    ----------
    power : P, average. [W]
    extinction_ratio : r = P_1/P_0, a ratio and not decibels. [W/W]
    mark_density : m, share of ones. [1]
    slope : η. [W/A]

    Returns
    -------
    I. [A]

    Notes
    -----
    Both levels above threshold; for m = 1/2 it is 2 P (r - 1)/(η (r + 1)).
    """
    return power * (extinction_ratio - 1) / (slope * (1 + mark_density * (extinction_ratio - 1)))


@source("derived: the loop keeps P, the modulation its current; definition P_av = m P_1 + (1 - m) P_0")
def extinction_ratio(*, power: Real, modulation_current: Real, mark_density: Real, slope: Real) -> Real:
    r"""Extinction ratio of a laser at steady average power and steady modulation current.

    .. math:: r = \frac{P + (1 - m) \eta I}{P - m \eta I}

    Parameters
    ----------
    power : P, average. [W]
    modulation_current : I, peak to peak. [A]
    mark_density : m, share of ones. [1]
    slope : η at the junction temperature. [W/A]

    Returns
    -------
    r, a ratio; without bound, then negative, where the zero level goes below threshold. [W/W]

    Notes
    -----
    Both levels above threshold.
    """
    swing = slope * modulation_current
    return (power + (1 - mark_density) * swing) / (power - mark_density * swing)
