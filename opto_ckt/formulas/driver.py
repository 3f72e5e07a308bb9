"""Resistors, headroom and heat of LED and laser drivers."""

from __future__ import annotations

from numpy import sqrt

from opto_ckt.constants import BOLTZMANN
from opto_ckt.formulas.formula import Real, source


@source("Ohm's law; Hewlett-Packard HFBR-1402C data sheet p. 11")
def series_resistance(*, supply: Real, switch_drop: Real, forward_voltage: Real, current: Real) -> Real:
    r"""Resistance in series with a diode that sets its current.

    .. math:: R = \frac{V_S - V_{sw} - V_F(I)}{I}

    Parameters
    ----------
    supply : V_S; the highest, for the largest current. [V]
    switch_drop : V_sw of switch or gate at I. [V]
    forward_voltage : V_F at I; the lowest, for the largest current. [V]
    current : I. [A]

    Returns
    -------
    R in all, the switch's own resistance taken off it. [Ω]

    Notes
    -----
    V_F belongs to I: it is not one figure for all currents.

    Examples
    --------
    >>> r = series_resistance(supply=5.0, switch_drop=0.0, forward_voltage=1.5, current=15e-3)
    >>> print(f"{r:.0f} Ω")
    233 Ω
    """
    return (supply - switch_drop - forward_voltage) / current


@source("Ohm's law; A. Malvino & D. Bates, Electronic Principles, Ex. 5-13")
def series_current(*, supply: Real, switch_drop: Real, forward_voltage: Real, resistance: Real) -> Real:
    r"""Current that a series resistance sets.

    .. math:: I = \frac{V_S - V_{sw} - V_F}{R}

    Parameters
    ----------
    supply : V_S. [V]
    switch_drop : V_sw of switch or gate. [V]
    forward_voltage : V_F at I. [V]
    resistance : R. [Ω]

    Returns
    -------
    I. [A]

    Notes
    -----
    V_F known; `opto_ckt.formulas.diode.current_at_voltage`, R added to R_s, finds both.
    """
    return (supply - switch_drop - forward_voltage) / resistance


@source("T. L. Floyd, Electronic Devices, Ex. 4.9; a forced gain below h_FE is common practice")
def base_resistance(*, drive: Real, base_emitter_voltage: Real, collector_current: Real, forced_gain: Real) -> Real:
    r"""Largest base resistance that saturates a switching transistor.

    .. math:: R_B = \frac{(V - V_{BE}) \beta}{I_C}

    Parameters
    ----------
    drive : V, high level of the gate. [V]
    base_emitter_voltage : V_BE. [V]
    collector_current : I_C. [A]
    forced_gain : β; 10 to 20 for a sure switch. [1]

    Returns
    -------
    R_B, the gate's resistance included. [Ω]

    Notes
    -----
    No base-emitter resistor.
    """
    return (drive - base_emitter_voltage) * forced_gain / collector_current


@source("op amp holding the sense voltage; R. F. Coughlin & F. F. Driscoll, Ex. 5.5")
def sense_resistance(*, reference: Real, current: Real) -> Real:
    r"""Sense resistance of a voltage-controlled current source.

    .. math:: R_S = V/I

    Parameters
    ----------
    reference : V at the op amp's input. [V]
    current : I wanted. [A]

    Returns
    -------
    R_S. [Ω]

    Notes
    -----
    Exact for a MOSFET; a bipolar transistor delivers less by 1/(1 + h_FE).
    """
    return reference / current


@source("op amp holding the sense voltage; R. F. Coughlin & F. F. Driscoll, Ex. 5.5")
def sensed_current(*, reference: Real, sense_resistance: Real, offset_voltage: Real) -> Real:
    r"""Current of a voltage-controlled current source.

    .. math:: I = (V + V_{os})/R_S

    Parameters
    ----------
    reference : V at the op amp's input. [V]
    sense_resistance : R_S. [Ω]
    offset_voltage : V_os of the op amp, with its sign. [V]

    Returns
    -------
    I. [A]

    Notes
    -----
    Inside the compliance range.
    """
    return (reference + offset_voltage) / sense_resistance


@source("derived: voltages around the loop")
def compliance(*, supply: Real, current: Real, series_resistance: Real, reverse_drop: Real, margin: Real) -> Real:
    r"""Voltage left for the laser or LED.

    .. math:: V = V_S - I R - V_{rev} - V_m

    Parameters
    ----------
    supply : V_S, the lowest. [V]
    current : I, the largest. [A]
    series_resistance : R, sum of sense, fail-safe, on-resistance and inductor. [Ω]
    reverse_drop : V_rev of a series protection diode, or 0. [V]
    margin : V_m that keeps the loop in control. [V]

    Returns
    -------
    V, to be no less than the forward voltage at its worst temperature. [V]

    Notes
    -----
    Direct current.
    """
    return supply - current * series_resistance - reverse_drop - margin


@source("derived: the pass transistor fully on must not pass more than the limit")
def fail_safe_resistance(*, supply: Real, forward_voltage: Real, current_limit: Real, on_resistance: Real) -> Real:
    r"""Series resistance that keeps a laser safe when its pass transistor is hard on.

    .. math:: R = \frac{V_S - V_{LD}}{I_{max}} - R_{on}

    Parameters
    ----------
    supply : V_S, the highest. [V]
    forward_voltage : V_LD of the laser, the lowest. [V]
    current_limit : I_max that the laser stands. [A]
    on_resistance : R_on of transistor and sense resistor, the lowest. [Ω]

    Returns
    -------
    R, the least that will do; not above zero: none is needed. [Ω]

    Notes
    -----
    V_LD taken at I_max.
    """
    return (supply - forward_voltage) / current_limit - on_resistance


@source("derived: what laser and resistors leave of the supply, times the current")
def pass_power(*, supply: Real, forward_voltage: Real, current: Real, series_resistance: Real) -> Real:
    r"""Heat in the pass transistor.

    .. math:: P = I (V_S - V_{LD} - I R)

    Parameters
    ----------
    supply : V_S, the highest. [V]
    forward_voltage : V_LD, the lowest; 0 for a shorted laser. [V]
    current : I. [A]
    series_resistance : R, sense and other series resistors. [Ω]

    Returns
    -------
    P. [W]

    Notes
    -----
    Direct current.
    """
    return current * (supply - forward_voltage - current * series_resistance)


@source("derived: independent sources add in power; reference noise apart")
def output_current_noise(*, voltage_noise: Real, sense_resistance: Real, temperature: Real) -> Real:
    r"""Current noise density of a voltage-controlled current source.

    .. math:: i = \sqrt{\frac{e_n^2}{R_S^2} + \frac{4kT}{R_S}}

    Parameters
    ----------
    voltage_noise : e_n of op amp and reference. [V/√Hz]
    sense_resistance : R_S. [Ω]
    temperature : T. [K]

    Returns
    -------
    i. [A/√Hz]

    Notes
    -----
    Below the bandwidth of the loop.
    """
    return sqrt((voltage_noise / sense_resistance) ** 2 + 4 * BOLTZMANN * temperature / sense_resistance)
