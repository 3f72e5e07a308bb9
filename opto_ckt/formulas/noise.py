"""Noise densities of a receiver, referred to its input."""

from __future__ import annotations

from numpy import exp, log, pi, sqrt

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


@source("J. B. Johnson, H. Nyquist 1928")
def thermal_current_noise(*, resistance: Real, temperature: Real) -> Real:
    r"""Current noise density of a resistance.

    .. math:: i = \sqrt{4 k T/R}

    Parameters
    ----------
    resistance : R. [Ω]
    temperature : T. [K]

    Returns
    -------
    i. [A/√Hz]

    Notes
    -----
    hf ≪ kT.
    """
    return sqrt(4 * BOLTZMANN * temperature / resistance)


@source("J. B. Johnson, H. Nyquist 1928")
def thermal_voltage_noise(*, resistance: Real, temperature: Real) -> Real:
    r"""Voltage noise density of a resistance.

    .. math:: e = \sqrt{4 k T R}

    Parameters
    ----------
    resistance : R. [Ω]
    temperature : T. [K]

    Returns
    -------
    e. [V/√Hz]

    Notes
    -----
    hf ≪ kT.

    Examples
    --------
    >>> print(f"{thermal_voltage_noise(resistance=50.0, temperature=300.0) * 1e9:.4f} nV/√Hz")
    0.9102 nV/√Hz
    """
    return sqrt(4 * BOLTZMANN * temperature * resistance)


@source("W. Schottky 1918")
def shot_noise(*, current: Real) -> Real:
    r"""Current noise density of carriers that cross a junction one by one.

    .. math:: i = \sqrt{2 q I}

    Parameters
    ----------
    current : I, photocurrent and dark current. [A]

    Returns
    -------
    i. [A/√Hz]

    Notes
    -----
    No avalanche; `opto_ckt.formulas.avalanche.multiplied_shot_noise` has one.
    """
    return sqrt(2 * ELEMENTARY_CHARGE * current)


@source("derived: voltage noise across the capacitance of the summing node")
def capacitance_current_noise(*, voltage_noise: Real, capacitance: Real, frequency: Real) -> Real:
    r"""Current noise density that voltage noise drives through the input capacitance.

    .. math:: i = 2 \pi f C e_n

    Parameters
    ----------
    voltage_noise : e_n. [V/√Hz]
    capacitance : C = C_i + C_f. [F]
    frequency : f. [Hz]

    Returns
    -------
    i. [A/√Hz]

    Notes
    -----
    Series resistance of the diode much below the reactance.
    """
    return 2 * pi * frequency * capacitance * voltage_noise


@source("derived: independent sources add in power")
def input_noise(
    *,
    current: Real,
    feedback_resistance: Real,
    shunt_resistance: Real,
    temperature: Real,
    current_noise: Real,
    voltage_noise: Real,
    voltage_noise_corner: Real,
    capacitance: Real,
    frequency: Real,
) -> Real:
    r"""Input current noise density of a transimpedance stage.

    .. math:: i^2 = 2qI + \frac{4kT}{R_f} + \frac{4kT}{R_{sh}} + i_n^2 + e_n^2 \left(1 + \frac{f_c}{f}\right)
              \left(\left(\frac1{R_f} + \frac1{R_{sh}}\right)^2 + (2\pi f C)^2\right)

    Parameters
    ----------
    current : I, photocurrent and dark current. [A]
    feedback_resistance : R_f. [Ω]
    shunt_resistance : R_sh. [Ω]
    temperature : T. [K]
    current_noise : i_n of the op amp. [A/√Hz]
    voltage_noise : e_n of the op amp, flat region. [V/√Hz]
    voltage_noise_corner : f_c, where 1/f noise equals the flat region. [Hz]
    capacitance : C = C_i + C_f. [F]
    frequency : f. [Hz]

    Returns
    -------
    i. [A/√Hz]

    Notes
    -----
    Diode without avalanche and series resistance.
    """
    thermal = 4 * BOLTZMANN * temperature * (1 / feedback_resistance + 1 / shunt_resistance)
    admittance = (1 / feedback_resistance + 1 / shunt_resistance) ** 2 + (2 * pi * frequency * capacitance) ** 2
    amplifier = current_noise**2 + voltage_noise**2 * (1 + voltage_noise_corner / frequency) * admittance
    return sqrt(2 * ELEMENTARY_CHARGE * current + thermal + amplifier)


@source("noise index: µV rms a decade of frequency for each V of drop; IEC 60115-1, unit from memory")
def excess_noise(*, index: Real, voltage: Real, frequency: Real) -> Real:
    r"""Excess 1/f voltage noise density of a resistor that carries dc.

    .. math:: e = \frac{V\, 10^{-6}\, 10^{NI/20}}{\sqrt{f \ln 10}}

    Parameters
    ----------
    index : NI, in dB above 1 µV/V. [dB]
    voltage : V across the resistor. [V]
    frequency : f. [Hz]

    Returns
    -------
    e. [V/√Hz]

    Notes
    -----
    Thick film; thin film lies far lower.

    Examples
    --------
    >>> print(f"{excess_noise(index=46.0, voltage=0.06, frequency=1.0) * 1e6:.1f} µV/√Hz")
    7.9 µV/√Hz
    """
    density: Real = voltage * 1e-6 * exp(index * log(10.0) / 20) / sqrt(frequency * log(10.0))
    return density
