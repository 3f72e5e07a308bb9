"""Two transistors with shunt feedback: current for the least noise, gain, poles, what limits the feedback."""

from __future__ import annotations

from numpy import pi, sqrt

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


@source("derived: base shot 2qI_C/β against collector shot 2qI_C (2πfC/g_m)², over a band to f; from memory √3")
def quietest_current(*, capacitance: Real, bandwidth: Real, current_gain: Real, temperature: Real) -> Real:
    r"""Collector current of an input transistor that leaves the least noise in a band from DC.

    .. math:: I_C = 2\pi C f\, \frac{kT}{q} \sqrt{\beta/3}

    Parameters
    ----------
    capacitance : C of the input node. [F]
    bandwidth : f, top of the band. [Hz]
    current_gain : β. [1]
    temperature : T. [K]

    Returns
    -------
    I_C. [A]

    Notes
    -----
    C taken not to change with I_C; noise of the base resistance apart.
    """
    return 2 * pi * capacitance * bandwidth * BOLTZMANN * temperature / ELEMENTARY_CHARGE * sqrt(current_gain / 3)


@source("Ohm's law: what the levels of the two transistors leave of the supply")
def collector_resistance(*, supply: Real, level: Real, current: Real) -> Real:
    r"""Collector resistance for a wanted current.

    .. math:: R = (V - V_c)/I

    Parameters
    ----------
    supply : V. [V]
    level : V_c of the collector at rest. [V]
    current : I through R. [A]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    Base current of the follower in I.
    """
    return (supply - level) / current


@source(
    "E. Säckinger, Analysis and Design of Transimpedance Amplifiers, from memory; the loop's unity at the pole of C1"
)
def largest_feedback(*, gain: Real, pole: Real, capacitance: Real, bandwidth: Real) -> Real:
    r"""Largest feedback resistance around an amplifier of one pole for a wanted bandwidth, maximally flat.

    .. math:: R = \frac{A f_A}{2\pi C B^2}

    Parameters
    ----------
    gain : A of the amplifier at DC. [V/V]
    pole : f_A of the amplifier. [Hz]
    capacitance : C of the input node. [F]
    bandwidth : B. [Hz]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    One pole, the transimpedance limit; what the second transistor adds comes off.
    """
    return gain * pole / (2 * pi * capacitance * bandwidth**2)
