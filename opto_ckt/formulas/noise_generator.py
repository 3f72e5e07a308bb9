"""Noise sources built of what every circuit simulator has: a resistor, a diode, a pair of diodes."""

from __future__ import annotations

from numpy import sqrt

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


@source("derived: 4kT R = e²; verified in ngspice 39 and spice3f5")
def resistance_for_voltage_noise(*, voltage_noise: Real, temperature: Real) -> Real:
    r"""Resistance whose thermal voltage noise equals a density.

    .. math:: R = \frac{e^2}{4 k T}

    Parameters
    ----------
    voltage_noise : e. [V/√Hz]
    temperature : T of the simulation. [K]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    Unloaded.

    Examples
    --------
    >>> print(f"{resistance_for_voltage_noise(voltage_noise=5e-9, temperature=300.15):.1f} Ω")
    1508.2 Ω
    """
    return voltage_noise**2 / (4 * BOLTZMANN * temperature)


@source("derived: 4kT/R = i²")
def resistance_for_current_noise(*, current_noise: Real, temperature: Real) -> Real:
    r"""Resistance whose thermal current noise equals a density.

    .. math:: R = \frac{4 k T}{i^2}

    Parameters
    ----------
    current_noise : i. [A/√Hz]
    temperature : T of the simulation. [K]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    Shorted, the current sensed.
    """
    return 4 * BOLTZMANN * temperature / current_noise**2


@source("derived: 4kT/R = 2qI; verified in ngspice 39 and spice3f5")
def resistance_for_shot_noise(*, current: Real, temperature: Real) -> Real:
    r"""Resistance whose thermal current noise equals the shot noise of a current.

    .. math:: R = \frac{2 k T}{q I}

    Parameters
    ----------
    current : I. [A]
    temperature : T of the simulation. [K]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    Shorted, the current sensed.

    Examples
    --------
    >>> print(f"{resistance_for_shot_noise(current=1e-6, temperature=300.15):.1f} Ω")
    51729.9 Ω
    """
    return 2 * BOLTZMANN * temperature / (ELEMENTARY_CHARGE * current)


@source("derived: KF I/f = 2qI at the corner, AF = 1; verified in ngspice 39")
def flicker_coefficient(*, corner: Real) -> Real:
    r"""Flicker coefficient KF of a diode for a 1/f corner.

    .. math:: KF = 2 q f_c

    Parameters
    ----------
    corner : f_c, where 1/f noise equals shot noise. [Hz]

    Returns
    -------
    KF with AF = 1. [A]

    Notes
    -----
    Any current: both noises are proportional to it.
    """
    return 2 * ELEMENTARY_CHARGE * corner


@source("derived: shot noise 2qI into V_T/I, twice in power; verified in ngspice 39")
def diode_pair_noise(*, current: Real, temperature: Real) -> Real:
    r"""White voltage noise density between two equal diodes fed by equal currents.

    .. math:: e = \frac{kT}{q} \sqrt{\frac{4q}{I}}

    Parameters
    ----------
    current : I in each diode. [A]
    temperature : T of the simulation. [K]

    Returns
    -------
    e; the dc of the two cancels. [V/√Hz]

    Notes
    -----
    Emission coefficient 1, no series resistance.

    Examples
    --------
    >>> print(f"{diode_pair_noise(current=10e-6, temperature=300.15) * 1e9:.3f} nV/√Hz")
    6.548 nV/√Hz
    """
    return BOLTZMANN * temperature / ELEMENTARY_CHARGE * sqrt(4 * ELEMENTARY_CHARGE / current)
