"""Photodiode into a load resistor: how large it may be, and the equaliser that undoes its integration."""

from __future__ import annotations

from numpy import pi, sqrt

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


@source("derived: one pole; G. Keiser, Optical Fiber Communications, Ex. 6.7")
def load_for_bandwidth(*, capacitance: Real, bandwidth: Real) -> Real:
    r"""Largest load resistance for a wanted bandwidth.

    .. math:: R = \frac{1}{2\pi C f}

    Parameters
    ----------
    capacitance : C of diode, amplifier and board. [F]
    bandwidth : f of the input pole. [Hz]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    Amplifier far faster than f, series resistance of the diode far below R.
    """
    return 1 / (2 * pi * capacitance * bandwidth)


@source("Ohm's law")
def load_for_swing(*, swing: Real, current: Real) -> Real:
    r"""Largest load resistance whose drop stays within a swing.

    .. math:: R = V/I

    Parameters
    ----------
    swing : V that amplifier and bias allow. [V]
    current : I, a one with ambient light and dark current. [A]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    Runs long against the time constant: the current reaches its final value.
    """
    return swing / current


@source("derived: zero of the equaliser on the pole of the input; J. M. Senior, Optical Fiber Communications, Ex. 9.8")
def equaliser_capacitance(*, load_resistance: Real, input_capacitance: Real, shunt: Real, gain: Real) -> Real:
    r"""Capacitor of a non-inverting amplifier whose zero lies on the pole of its source.

    .. math:: C = \frac{R_1 C_i}{G R_s}

    Parameters
    ----------
    load_resistance : R_1. [Ω]
    input_capacitance : C_i across it. [F]
    shunt : R_s in series with C, inverting input to ground. [Ω]
    gain : G at high frequencies, 1 at DC. [V/V]

    Returns
    -------
    C. [F]

    Notes
    -----
    Zero at 1/(2π G R_s C), pole at 1/(2π R_s C).
    """
    return load_resistance * input_capacitance / (gain * shunt)


@source("derived: the pole of the input moved up to the pole of the equaliser")
def equaliser_gain(*, load_resistance: Real, input_capacitance: Real, corner: Real) -> Real:
    r"""Lift that an equaliser needs at high frequencies.

    .. math:: G = 2\pi R_1 C_i f

    Parameters
    ----------
    load_resistance : R_1. [Ω]
    input_capacitance : C_i across it. [F]
    corner : f that the pole is moved up to. [Hz]

    Returns
    -------
    G over the gain at DC. [V/V]

    Notes
    -----
    The range of light shrinks by as much against a receiver that needs no equaliser.
    """
    return 2 * pi * load_resistance * input_capacitance * corner


@source("G. Keiser, Optical Fiber Communications, Ex. 6.7: thermal and shot noise of a load; the amplifier's added")
def load_noise(
    *, load_resistance: Real, current: Real, temperature: Real, voltage_noise: Real, current_noise: Real,
    capacitance: Real, frequency: Real,
) -> Real:  # fmt: skip
    r"""Noise current density at the diode, of load, light and amplifier.

    .. math:: i = \sqrt{\frac{4kT}{R} + 2qI + i_n^2 + e_n^2\left(R^{-2} + (2\pi f C)^2\right)}

    Parameters
    ----------
    load_resistance : R. [Ω]
    current : I, photocurrent and dark current. [A]
    temperature : T. [K]
    voltage_noise : e_n of the amplifier. [V/√Hz]
    current_noise : i_n of its input. [A/√Hz]
    capacitance : C across R. [F]
    frequency : f. [Hz]

    Returns
    -------
    i. [A/√Hz]

    Notes
    -----
    The equaliser lifts signal and noise alike: it does not change i.
    """
    thermal = 4 * BOLTZMANN * temperature / load_resistance + 2 * ELEMENTARY_CHARGE * current
    loaded = voltage_noise**2 * (load_resistance**-2 + (2 * pi * frequency * capacitance) ** 2)
    return sqrt(thermal + current_noise**2 + loaded)
