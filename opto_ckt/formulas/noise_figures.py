"""What is read from noise densities: where one source takes over from another, NEP, signal-to-noise ratio."""

from __future__ import annotations

from numpy import log, pi, sqrt

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


@source("derived: 2πf C e_n = √(4kT/R)")
def capacitance_noise_crossover(
    *, voltage_noise: Real, capacitance: Real, resistance: Real, temperature: Real
) -> Real:
    r"""Frequency above which e_n·2πfC exceeds the thermal noise of the feedback resistance.

    .. math:: f = \frac{\sqrt{4kT/R}}{2 \pi C e_n}

    Parameters
    ----------
    voltage_noise : e_n. [V/√Hz]
    capacitance : C = C_i + C_f. [F]
    resistance : R. [Ω]
    temperature : T. [K]

    Returns
    -------
    f. [Hz]

    Notes
    -----
    e_n white there.
    """
    return sqrt(4 * BOLTZMANN * temperature / resistance) / (2 * pi * capacitance * voltage_noise)


@source("derived: 2qI = 4kT/R; P. C. D. Hobbs, Optics & Photonics News, April 2001")
def shot_equals_thermal_voltage(*, temperature: Real) -> Real:
    r"""Drop across the feedback resistance at which shot noise equals its thermal noise.

    .. math:: I R = 2kT/q

    Parameters
    ----------
    temperature : T. [K]

    Returns
    -------
    I R. [V]

    Notes
    -----
    A larger drop means that the light, not the resistor, sets the noise.

    Examples
    --------
    >>> print(f"{shot_equals_thermal_voltage(temperature=300.0) * 1e3:.1f} mV")
    51.7 mV
    """
    return 2 * BOLTZMANN * temperature / ELEMENTARY_CHARGE


@source("derived: (shot + thermal)/shot; P. C. D. Hobbs, Optics & Photonics News, April 2001")
def thermal_penalty(*, drop: Real, temperature: Real) -> Real:
    r"""Loss of signal-to-noise ratio that the feedback resistance adds to shot noise.

    .. math:: 10 \log_{10}\left(1 + \frac{2kT}{q V}\right)

    Parameters
    ----------
    drop : V = I R_f. [V]
    temperature : T. [K]

    Returns
    -------
    The loss. [dB]

    Notes
    -----
    No amplifier noise.
    """
    ratio = 1 + 2 * BOLTZMANN * temperature / (ELEMENTARY_CHARGE * drop)
    decibels: Real = 10 / log(10.0) * log(ratio)
    return decibels


@source("definition")
def noise_equivalent_power(*, current_noise: Real, responsivity: Real) -> Real:
    r"""Optical power that equals the noise: a density from a density, watts from an rms current.

    .. math:: NEP = i/R

    Parameters
    ----------
    current_noise : i at the input. [A/√Hz]
    responsivity : R at the wavelength, avalanche gain included. [A/W]

    Returns
    -------
    NEP. [W/√Hz]

    Notes
    -----
    At the frequency, or over the band, of i.
    """
    return current_noise / responsivity


@source("J. M. Senior, Optical Fiber Communications, Ex. 9.4: the amplifier makes the load's thermal noise worse")
def noise_with_amplifier(*, shot: Real, thermal: Real, noise_figure: Real) -> Real:
    r"""Shot noise and the thermal noise of a load, behind an amplifier of a noise figure.

    .. math:: \sqrt{i_s^2 + i_t^2 \cdot 10^{F_{dB}/10}}

    Parameters
    ----------
    shot : i_s, rms. [A]
    thermal : i_t of the load, rms. [A]
    noise_figure : F_dB of the amplifier, stated for that load at its temperature. [dB]

    Returns
    -------
    The rms current, referred to the detector; densities give a density. [A]

    Notes
    -----
    Shot noise is not thermal noise of the load: the figure does not raise it.

    Examples
    --------
    >>> noise = noise_with_amplifier(shot=1.44e-19**0.5, thermal=2.02e-17**0.5, noise_figure=3.0)
    >>> print(f"{signal_to_noise(signal=8.71e-8, noise=noise):.2f} dB")
    22.73 dB
    """
    return sqrt(shot**2 + thermal**2 * 10.0 ** (noise_figure / 10))


@source("definition")
def signal_to_noise(*, signal: Real, noise: Real) -> Real:
    r"""Ratio of signal power to noise power.

    .. math:: 20 \log_{10}(I/i)

    Parameters
    ----------
    signal : I. [A]
    noise : i, rms. [A]

    Returns
    -------
    The electrical ratio; half of it in optical decibels. [dB]

    Notes
    -----
    Rms over rms; a decision's Q is another thing.
    """
    decibels: Real = 20 / log(10.0) * log(signal / noise)
    return decibels
