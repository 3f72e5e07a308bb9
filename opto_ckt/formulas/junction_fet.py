"""Junction field-effect transistors: bias by the square law, noise, and the follower that bootstraps a detector."""

from __future__ import annotations

from numpy import pi, sqrt

from opto_ckt.constants import BOLTZMANN
from opto_ckt.formulas.formula import Real, source


@source("derived: square law I = I_DSS (1 - V/V_p)² with V = I R - E, solved for I")
def self_biased_current(
    *, saturation_current: Real, pinch_off_voltage: Real, source_resistance: Real, pull: Real
) -> Real:
    r"""Drain current of a JFET whose source resistance goes to a voltage beyond that of its gate.

    .. math:: I = I_{DSS} \left(\frac{2 (V_p + E)}{V_p + \sqrt{V_p^2 + 4 I_{DSS} R (V_p + E)}}\right)^2

    Parameters
    ----------
    saturation_current : I_DSS, at gate-source voltage zero. [A]
    pinch_off_voltage : V_p, its magnitude. [V]
    source_resistance : R, from the source to the far voltage. [Ω]
    pull : E, from the gate to the far voltage, counted the way the current flows. [V]

    Returns
    -------
    I. [A]

    Notes
    -----
    Saturation; beyond I_DSS the gate conducts and the law no longer holds.
    """
    over: Real = pinch_off_voltage + pull
    root = sqrt(pinch_off_voltage**2 + 4 * saturation_current * source_resistance * over)
    return saturation_current * (2 * over / (pinch_off_voltage + root)) ** 2


@source("derived: Ohm's law across the resistor that carries I, with the gate-source voltage of the square law")
def source_resistance(*, saturation_current: Real, pinch_off_voltage: Real, current: Real, pull: Real) -> Real:
    r"""Resistance at the source of a JFET for a wanted drain current.

    .. math:: R = \frac{E + V_p \left(1 - \sqrt{I/I_{DSS}}\right)}{I}

    Parameters
    ----------
    saturation_current : I_DSS. [A]
    pinch_off_voltage : V_p, its magnitude. [V]
    current : I of the drain. [A]
    pull : E, from the gate to the far end of the resistance, counted the way the current flows. [V]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    Saturation, I below I_DSS.
    """
    return (pull + pinch_off_voltage * (1 - sqrt(current / saturation_current))) / current


@source("square law of a JFET in saturation; common practice")
def gate_reverse_voltage(*, saturation_current: Real, pinch_off_voltage: Real, current: Real) -> Real:
    r"""Voltage by which the gate of a JFET is reverse biased against its source at a current.

    .. math:: V = V_p \left(1 - \sqrt{I/I_{DSS}}\right)

    Parameters
    ----------
    saturation_current : I_DSS. [A]
    pinch_off_voltage : V_p, its magnitude. [V]
    current : I of the drain. [A]

    Returns
    -------
    V; below zero the gate conducts. [V]

    Notes
    -----
    Saturation.
    """
    return pinch_off_voltage * (1 - sqrt(current / saturation_current))


@source("derived: slope of the square law")
def transconductance(*, saturation_current: Real, pinch_off_voltage: Real, current: Real) -> Real:
    r"""Transconductance of a JFET at a current.

    .. math:: g_m = \frac{2}{V_p} \sqrt{I\, I_{DSS}}

    Parameters
    ----------
    saturation_current : I_DSS. [A]
    pinch_off_voltage : V_p, its magnitude. [V]
    current : I of the drain. [A]

    Returns
    -------
    g_m. [A/V]

    Notes
    -----
    Saturation.
    """
    return 2 * sqrt(current * saturation_current) / pinch_off_voltage


@source("derived: e² = 4kTγ/g_m")
def channel_noise_factor(*, voltage_noise: Real, transconductance: Real, temperature: Real) -> Real:
    r"""Noise of a channel as a multiple of that of a conductance g_m, from the noise stated at the gate.

    .. math:: \gamma = \frac{e_n^2 g_m}{4 k T}

    Parameters
    ----------
    voltage_noise : e_n. [V/√Hz]
    transconductance : g_m. [A/V]
    temperature : T. [K]

    Returns
    -------
    γ; 2/3 for a long channel (A. van der Ziel 1962). [1]

    Notes
    -----
    White noise.
    """
    return voltage_noise**2 * transconductance / (4 * BOLTZMANN * temperature)


@source("derived: the light's current meets 1/g_m beside the load; what it drives through C_d and C_gs comes back")
def bootstrap_bandwidth(*, transconductance: Real, load_resistance: Real, diode: Real, gate_source: Real) -> Real:
    r"""Pole that a follower puts into the way of the photocurrent of the diode it bootstraps.

    .. math:: f = \frac{g_m + 1/R}{2 \pi (C_d + C_{gs})}

    Parameters
    ----------
    transconductance : g_m of the follower. [A/V]
    load_resistance : R at its source. [Ω]
    diode : C_d. [F]
    gate_source : C_gs. [F]

    Returns
    -------
    f. [Hz]

    Notes
    -----
    Summing node at rest; series resistance of the diode and coupling capacitor left out.
    """
    return (transconductance + 1 / load_resistance) / (2 * pi * (diode + gate_source))


@source("derived: the way of the photocurrent above, read backwards")
def least_transconductance(*, bandwidth: Real, load_resistance: Real, diode: Real, gate_source: Real) -> Real:
    r"""Transconductance of a follower that puts its pole in the way of the photocurrent at a frequency.

    .. math:: g_m = 2 \pi f (C_d + C_{gs}) - 1/R

    Parameters
    ----------
    bandwidth : f. [Hz]
    load_resistance : R at its source. [Ω]
    diode : C_d. [F]
    gate_source : C_gs. [F]

    Returns
    -------
    g_m. [A/V]

    Notes
    -----
    As `bootstrap_bandwidth`.
    """
    return 2 * pi * bandwidth * (diode + gate_source) - 1 / load_resistance
