"""Small-signal figures of transistors at a current other than the data sheet's."""

from __future__ import annotations

from numpy import pi, sqrt

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


@source("square law of a MOSFET or JFET in saturation, g_m ∝ √I; common practice")
def square_law_transconductance(*, transconductance: Real, stated_current: Real, current: Real) -> Real:
    r"""Transconductance of a field-effect transistor at a current, from the data sheet's at another.

    .. math:: g_m(I) = g_m(I_0) \sqrt{I/I_0}

    Parameters
    ----------
    transconductance : g_m at I_0. [A/V]
    stated_current : I_0. [A]
    current : I. [A]

    Returns
    -------
    g_m at I. [A/V]

    Notes
    -----
    Too high below weak inversion, where g_m is at most qI/(kT).
    """
    return transconductance * sqrt(current / stated_current)


@source("exponential law of a bipolar transistor")
def bipolar_transconductance(*, current: Real, temperature: Real) -> Real:
    r"""Transconductance of a bipolar transistor.

    .. math:: g_m = q I/(k T)

    Parameters
    ----------
    current : I of the collector. [A]
    temperature : T. [K]

    Returns
    -------
    g_m. [A/V]

    Notes
    -----
    Emitter resistance left out; the upper bound of every transistor.
    """
    return ELEMENTARY_CHARGE * current / (BOLTZMANN * temperature)


@source("square law of a MOSFET in saturation; common practice")
def gate_source_voltage(
    *, threshold_voltage: Real, transconductance: Real, stated_current: Real, current: Real
) -> Real:
    r"""Gate-source voltage that a current needs.

    .. math:: V_{GS} = V_{th} + \frac{2 \sqrt{I I_0}}{g_m(I_0)}

    Parameters
    ----------
    threshold_voltage : V_th. [V]
    transconductance : g_m at I_0. [A/V]
    stated_current : I_0. [A]
    current : I. [A]

    Returns
    -------
    V_GS. [V]

    Notes
    -----
    Saturation, source resistance left out.
    """
    return threshold_voltage + 2 * sqrt(current * stated_current) / transconductance


@source("derived: g_m R/(1 + g_m R)")
def follower_gain(*, transconductance: Real, load_resistance: Real) -> Real:
    r"""Gain of a source or emitter follower.

    .. math:: A = \frac{g_m R}{1 + g_m R}

    Parameters
    ----------
    transconductance : g_m. [A/V]
    load_resistance : R at the source. [Ω]

    Returns
    -------
    A. [V/V]

    Notes
    -----
    Low frequency, no body effect.
    """
    return transconductance * load_resistance / (1 + transconductance * load_resistance)


@source("derived: the source follows the gate, so C_gs appears divided")
def follower_input_capacitance(
    *, gate_source: Real, gate_drain: Real, transconductance: Real, load_resistance: Real
) -> Real:
    r"""Input capacitance of a source follower.

    .. math:: C = C_{gd} + \frac{C_{gs}}{1 + g_m R}

    Parameters
    ----------
    gate_source : C_gs. [F]
    gate_drain : C_gd. [F]
    transconductance : g_m. [A/V]
    load_resistance : R at the source. [Ω]

    Returns
    -------
    C. [F]

    Notes
    -----
    Well below g_m/(2π C_gs).
    """
    return gate_drain + gate_source / (1 + transconductance * load_resistance)


@source("definition: transit of the base and the two junctions")
def base_emitter_capacitance(*, transconductance: Real, transition_frequency: Real, collector: Real) -> Real:
    r"""Capacitance from base to emitter of a bipolar transistor.

    .. math:: C_\pi = \frac{g_m}{2\pi f_T} - C_\mu

    Parameters
    ----------
    transconductance : g_m at the current. [A/V]
    transition_frequency : f_T, taken to hold at that current. [Hz]
    collector : C_μ from base to collector. [F]

    Returns
    -------
    C_π. [F]

    Notes
    -----
    Below the fall of f_T at small currents.
    """
    return transconductance / (2 * pi * transition_frequency) - collector
