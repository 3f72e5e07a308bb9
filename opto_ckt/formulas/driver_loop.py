"""Loop of an op amp that drives a MOSFET follower and senses its source: crossover, margin, compensation.

With G = g_m R_S, a = C_gs R_S and the op amp's output resistance R_O into the gate:

    T(s) = (2π GBW/s) (G + s a)/((1 + G + s a)(1 + s R_O C_gd) + s R_O C_gs)
"""

from __future__ import annotations

import numpy as np
from numpy import pi, sqrt
from numpy.typing import NDArray

from opto_ckt.formulas.formula import Real, source


@source("derived: output resistance against the input capacitance of the follower")
def gate_pole(
    *, output_resistance: Real, gate_source: Real, gate_drain: Real, transconductance: Real, sense_resistance: Real
) -> Real:
    r"""Pole at the gate of a MOSFET follower.

    .. math:: f_g = \frac{1}{2\pi R_O (C_{gd} + C_{gs}/(1 + g_m R_S))}

    Parameters
    ----------
    output_resistance : R_O of the op amp, gate resistor included. [Ω]
    gate_source : C_gs. [F]
    gate_drain : C_gd. [F]
    transconductance : g_m at the current. [A/V]
    sense_resistance : R_S. [Ω]

    Returns
    -------
    f_g. [Hz]

    Notes
    -----
    Drain at signal ground; well below g_m/(2π C_gs).
    """
    capacitance = gate_drain + gate_source / (1 + transconductance * sense_resistance)
    return 1 / (2 * pi * output_resistance * capacitance)


@source("derived: |T| = 1 of one integrator and one pole")
def crossover_estimate(
    *, gain_bandwidth: Real, transconductance: Real, sense_resistance: Real, gate_pole: Real
) -> Real:
    r"""Crossover of the loop with the gate as its only further pole.

    .. math:: f_c = f_g \sqrt{\tfrac12\left(\sqrt{1 + 4 (f_1/f_g)^2} - 1\right)}, \quad
              f_1 = GBW \frac{g_m R_S}{1 + g_m R_S}

    Parameters
    ----------
    gain_bandwidth : GBW. [Hz]
    transconductance : g_m at the current. [A/V]
    sense_resistance : R_S. [Ω]
    gate_pole : f_g. [Hz]

    Returns
    -------
    f_c; the margin is 90° - arctan(f_c/f_g). [Hz]

    Notes
    -----
    `crossover` is exact for the model.
    """
    gain = transconductance * sense_resistance
    ratio = gain_bandwidth * gain / (1 + gain) / gate_pole
    return gate_pole * sqrt((sqrt(1 + 4 * ratio**2) - 1) / 2)


@source("derived: the inner path must take over below the pole of the load; common practice for capacitive loads")
def compensation_resistance(
    *, load_capacitance: Real, output_resistance: Real, gate_resistance: Real, compensation_capacitance: Real
) -> Real:
    r"""Least resistance from the sense node to the inverting input of a loop with an inner capacitor.

    .. math:: R_2 = \frac{C_L (R_O + R_1)}{C_1}

    Parameters
    ----------
    load_capacitance : C_L at the gate. [F]
    output_resistance : R_O of the op amp. [Ω]
    gate_resistance : R_1 from op amp to gate. [Ω]
    compensation_capacitance : C_1 from the op amp's output to its inverting input. [F]

    Returns
    -------
    R_2. [Ω]

    Notes
    -----
    The bandwidth is then about 1/(2π R_2 C_1).

    Examples
    --------
    >>> r = compensation_resistance(
    ...     load_capacitance=10e-9, output_resistance=100.0, gate_resistance=100.0, compensation_capacitance=100e-9)
    >>> print(f"{r:.0f} Ω")
    20 Ω
    """
    return load_capacitance * (output_resistance + gate_resistance) / compensation_capacitance


@source("derived: integrator R_2 C_1")
def compensation_capacitance(*, compensation_resistance: Real, bandwidth: Real) -> Real:
    r"""Capacitance from the op amp's output to its inverting input for a wanted bandwidth.

    .. math:: C_1 = \frac{1}{2\pi R_2 f}

    Parameters
    ----------
    compensation_resistance : R_2 from the sense node to the inverting input. [Ω]
    bandwidth : f of the closed loop. [Hz]

    Returns
    -------
    C_1. [F]

    Notes
    -----
    f below the crossover that the loop had without C_1.
    """
    return 1 / (2 * pi * compensation_resistance * bandwidth)


def loop_gain(
    *,
    frequency: Real,
    gain_bandwidth: Real,
    output_resistance: Real,
    gate_source: Real,
    gate_drain: Real,
    transconductance: Real,
    sense_resistance: Real,
) -> NDArray[np.complex128]:
    """T(j2πf) of the loop, drain at signal ground."""
    s = 2j * np.pi * np.asarray(frequency)
    gain = transconductance * sense_resistance
    a = gate_source * sense_resistance
    below = (1 + gain + s * a) * (1 + s * output_resistance * gate_drain) + s * output_resistance * gate_source
    return np.asarray(2 * np.pi * gain_bandwidth / s * (gain + s * a) / below)


def crossover(
    *,
    gain_bandwidth: Real,
    output_resistance: Real,
    gate_source: Real,
    gate_drain: Real,
    transconductance: Real,
    sense_resistance: Real,
) -> Real:
    """Frequency [Hz] at which |T| = 1, by halving its logarithm down to the last digits.

    |T| only falls: the poles are real and the one zero at most holds off the integrator. Nor is it above GBW/f.
    """
    top = np.log(gain_bandwidth + 0 * np.asarray(transconductance * sense_resistance * output_resistance))
    bottom = top - 30.0
    for _ in range(60):
        middle = (top + bottom) / 2
        gain = loop_gain(
            frequency=np.exp(middle),
            gain_bandwidth=gain_bandwidth,
            output_resistance=output_resistance,
            gate_source=gate_source,
            gate_drain=gate_drain,
            transconductance=transconductance,
            sense_resistance=sense_resistance,
        )
        above = np.abs(gain) > 1
        bottom, top = np.where(above, middle, bottom), np.where(above, top, middle)
    crossing: Real = np.exp(top)[()]
    return crossing


def phase_margin(
    *,
    gain_bandwidth: Real,
    output_resistance: Real,
    gate_source: Real,
    gate_drain: Real,
    transconductance: Real,
    sense_resistance: Real,
) -> Real:
    """Phase margin in degrees at `crossover`.

    >>> margin = phase_margin(
    ...     gain_bandwidth=10e6, output_resistance=100.0, gate_source=450e-12, gate_drain=50e-12,
    ...     transconductance=0.5, sense_resistance=10.0)
    >>> print(f"{margin:.1f}°")
    61.2°
    """
    frequency = crossover(
        gain_bandwidth=gain_bandwidth,
        output_resistance=output_resistance,
        gate_source=gate_source,
        gate_drain=gate_drain,
        transconductance=transconductance,
        sense_resistance=sense_resistance,
    )
    gain = loop_gain(
        frequency=frequency,
        gain_bandwidth=gain_bandwidth,
        output_resistance=output_resistance,
        gate_source=gate_source,
        gate_drain=gate_drain,
        transconductance=transconductance,
        sense_resistance=sense_resistance,
    )
    margin: Real = (180 + np.degrees(np.angle(gain)))[()]
    return margin
