"""Noise of a laser's light that its current brings in, as relative intensity noise beside the laser's own."""

from __future__ import annotations

from numpy import sqrt

from opto_ckt.constants import BOLTZMANN
from opto_ckt.formulas.formula import Real, source


@source("derived: light follows the current by the slope; relative intensity noise by its definition")
def driven_intensity_noise(*, current_noise: Real, slope: Real, power: Real) -> Real:
    r"""Relative intensity noise that a noisy current gives the light of a laser.

    .. math:: RIN = \left(\frac{\eta\, i_n}{P}\right)^2

    Parameters
    ----------
    current_noise : i_n through the laser. [A/√Hz]
    slope : η at the junction temperature, at the plane of P. [W/A]
    power : P, mean. [W]

    Returns
    -------
    RIN as a ratio; 10 log of it in dB/Hz. [1/Hz]

    Notes
    -----
    Above threshold, well below the relaxation frequency, faster than the junction warms.

    Examples
    --------
    >>> rin = driven_intensity_noise(current_noise=1e-9, slope=0.06, power=1.2e-3)
    >>> print(f"{rin:.2e} 1/Hz")
    2.50e-15 1/Hz
    """
    return (slope * current_noise / power) ** 2


@source("derived: the loop holds the sense voltage, and the resistor's own noise with it")
def sensed_current_noise(*, sensed_density: Real, sense_resistance: Real, temperature: Real) -> Real:
    r"""Current noise of a current source by the noise of its sense voltage.

    .. math:: i = \sqrt{\frac{S_v}{R_S^2} + \frac{4kT}{R_S}}

    Parameters
    ----------
    sensed_density : S_v across R_S, without the noise of R_S itself. [V²/Hz]
    sense_resistance : R_S. [Ω]
    temperature : T. [K]

    Returns
    -------
    i. [A/√Hz]

    Notes
    -----
    Well below the bandwidth of the loop.
    """
    return sqrt(sensed_density / sense_resistance**2 + 4 * BOLTZMANN * temperature / sense_resistance)
