"""A transistor in common base between detector and amplifier: its bias, the pole at its emitter."""

from __future__ import annotations

from numpy import log, pi

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


@source("exponential law of a bipolar transistor; a coefficient of -2 mV/K is common practice for silicon")
def base_emitter_voltage(
    *,
    base_emitter_voltage: Real,
    stated_current: Real,
    current: Real,
    temperature: Real,
    reference_temperature: Real,
    coefficient: Real,
) -> Real:
    r"""Base-emitter voltage at a current and a temperature, from the one of the data sheet.

    .. math:: V_{BE} = V_0 + c (T - T_0) + \frac{kT}{q} \ln\frac{I}{I_0}

    Parameters
    ----------
    base_emitter_voltage : V_0 at I_0 and T_0. [V]
    stated_current : I_0. [A]
    current : I of the emitter. [A]
    temperature : T. [K]
    reference_temperature : T_0. [K]
    coefficient : c at a constant current. [V/K]

    Returns
    -------
    V_BE. [V]

    Notes
    -----
    A few decades of current; ohmic drops left out.
    """
    thermal: Real = BOLTZMANN * temperature / ELEMENTARY_CHARGE
    drift = coefficient * (temperature - reference_temperature)
    return base_emitter_voltage + drift + thermal * log(current / stated_current)


@source("derived: Ohm's law across the resistor that carries I")
def emitter_resistance(*, pull: Real, base_emitter_voltage: Real, current: Real) -> Real:
    r"""Resistance from the emitter to a rail for a wanted bias current.

    .. math:: R = \frac{E - V_{BE}}{I}

    Parameters
    ----------
    pull : E, from the base to the rail, counted the way the current flows. [V]
    base_emitter_voltage : V_BE. [V]
    current : I of the emitter. [A]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    No light.
    """
    return (pull - base_emitter_voltage) / current


@source("derived: Ohm's law; the collector carries β/(β + 1) of the emitter's current")
def return_resistance(*, voltage: Real, current_gain: Real, current: Real) -> Real:
    r"""Resistance from the other rail that supplies the collector's bias current.

    .. math:: R = \frac{V (\beta + 1)}{\beta I}

    Parameters
    ----------
    voltage : V, from the rail to the collector. [V]
    current_gain : β. [1]
    current : I of the emitter. [A]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    No light; what is not balanced flows through the feedback.
    """
    return voltage * (current_gain + 1) / (current_gain * current)


@source("derived: emitter resistance kT/(qI) with the capacitance at the emitter; common practice, from memory")
def input_pole(*, current: Real, capacitance: Real, temperature: Real) -> Real:
    r"""Pole at the emitter of a transistor in common base.

    .. math:: f = \frac{q I}{2 \pi k T C}

    Parameters
    ----------
    current : I of the emitter, photocurrent included. [A]
    capacitance : C, detector, board and base-emitter together. [F]
    temperature : T. [K]

    Returns
    -------
    f. [Hz]

    Notes
    -----
    Base at signal ground, base resistance much below kT/(qI).
    """
    return ELEMENTARY_CHARGE * current / (2 * pi * BOLTZMANN * temperature * capacitance)


@source("derived: the charge of the base, g_m/(2π f_T), grows with the current that the pole asks for")
def emitter_capacitance(*, capacitance: Real, bandwidth: Real, transition_frequency: Real) -> Real:
    r"""Capacitance at the emitter with that of the transistor at the current that makes a wanted pole.

    .. math:: C = \frac{C_0}{1 - f/f_T}

    Parameters
    ----------
    capacitance : C_0, of detector and board. [F]
    bandwidth : f of the pole. [Hz]
    transition_frequency : f_T. [Hz]

    Returns
    -------
    C. [F]

    Notes
    -----
    f below f_T.
    """
    return capacitance / (1 - bandwidth / transition_frequency)
