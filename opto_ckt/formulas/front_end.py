"""Around the summing node: what adds to the capacitance, what steers the light's current, what offsets the output."""

from __future__ import annotations

from numpy import exp, pi

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


@source("derived: the + input at ground; each capacitance once")
def input_capacitance(
    *, diode: Real, common: Real, differential: Real, board: Real
) -> Real:
    r"""Capacitance from the summing node to ground.

    .. math:: C_i = C_d + C_{cm} + C_{diff} + C_b

    Parameters
    ----------
    diode : C_d at the actual bias, package included. [F]
    common : C_cm of the inverting input. [F]
    differential : C_diff between the inputs. [F]
    board : C_b of pads and tracks. [F]

    Returns
    -------
    C_i, without C_f. [F]

    Notes
    -----
    Op amp with its + input at signal ground.

    Examples
    --------
    >>> c = input_capacitance(diode=20e-12, common=0.4e-12, differential=2.6e-12, board=0.3e-12)
    >>> print(f"{c * 1e12:.1f} pF")
    23.3 pF
    """
    return diode + common + differential + board


@source("Analog Devices, AD795 p. 13, AD549 p. 15; the dark current added")
def output_offset(
    *,
    offset_voltage: Real,
    bias_current: Real,
    dark_current: Real,
    feedback_resistance: Real,
    shunt_resistance: Real,
) -> Real:
    r"""Output voltage in the dark, all errors with one sign.

    .. math:: V = (1 + R_f/R_{sh}) V_{os} + R_f (I_b + I_d)

    Parameters
    ----------
    offset_voltage : V_os of the op amp. [V]
    bias_current : I_b of the inverting input at temperature. [A]
    dark_current : I_d at temperature. [A]
    feedback_resistance : R_f. [Ω]
    shunt_resistance : R_sh at temperature. [Ω]

    Returns
    -------
    V. [V]

    Notes
    -----
    All three grow with temperature: take the hot end.

    Examples
    --------
    >>> v = output_offset(
    ...     offset_voltage=0.25e-3, bias_current=1e-12, dark_current=0.0, feedback_resistance=1e9, shunt_resistance=1e9)
    >>> print(f"{v * 1e3:.2f} mV")
    1.50 mV
    """
    gain = 1 + feedback_resistance / shunt_resistance
    return gain * offset_voltage + feedback_resistance * (bias_current + dark_current)


@source("derived: integrator of time constant τ around R_f, injecting through R_inj; ngspice agrees")
def servo_corner(*, feedback_resistance: Real, injection_resistance: Real, time_constant: Real) -> Real:
    r"""High-pass corner of a loop that takes the steady light away.

    .. math:: f = \frac{R_f}{2\pi R_{inj} \tau}

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    injection_resistance : R_inj, integrator to summing node. [Ω]
    time_constant : τ of the integrator. [s]

    Returns
    -------
    f. [Hz]

    Notes
    -----
    f much below the bandwidth of the stage.
    """
    return feedback_resistance / (2 * pi * injection_resistance * time_constant)


@source("Ohm's law: the integrator at its limit")
def injection_resistance(*, headroom: Real, current: Real) -> Real:
    r"""Largest resistance through which a servo takes a wanted steady current away.

    .. math:: R_{inj} = V/I

    Parameters
    ----------
    headroom : V from the level to the integrator's limit. [V]
    current : I, steady. [A]

    Returns
    -------
    R_inj; its thermal noise current adds to that of the feedback. [Ω]

    Notes
    -----
    Summing node at the level.
    """
    return headroom / current


@source("derived: `servo_corner` solved for the time constant")
def servo_time_constant(*, feedback_resistance: Real, injection_resistance: Real, corner: Real) -> Real:
    r"""Time constant of the integrator that puts the high-pass corner where it is wanted.

    .. math:: \tau = \frac{R_f}{2\pi R_{inj} f}

    Parameters
    ----------
    feedback_resistance : R_f. [Ω]
    injection_resistance : R_inj, integrator to summing node. [Ω]
    corner : f of the high-pass. [Hz]

    Returns
    -------
    τ. [s]

    Notes
    -----
    f much below the bandwidth of the stage.
    """
    return feedback_resistance / (2 * pi * injection_resistance * corner)


@source("derived: a follower of gain A drives the far end of the diode; common practice, from memory")
def bootstrapped_capacitance(
    *, diode: Real, gate_drain: Real, gate_source: Real, follower_gain: Real
) -> Real:
    r"""Capacitance left at the summing node by a bootstrapped diode.

    .. math:: C = (C_d + C_{gs})(1 - A) + C_{gd}

    Parameters
    ----------
    diode : C_d at its bias. [F]
    gate_drain : C_gd of the follower. [F]
    gate_source : C_gs of the follower. [F]
    follower_gain : A = g_m R_S/(1 + g_m R_S). [V/V]

    Returns
    -------
    C. [F]

    Notes
    -----
    Follower much faster than the stage; its noise drives C_d.
    """
    return (diode + gate_source) * (1 - follower_gain) + gate_drain


@source("derived: emitter resistance kT/(qI) against the diode; common practice, from memory")
def cascode_current(*, capacitance: Real, bandwidth: Real, temperature: Real) -> Real:
    r"""Emitter current of a common-base input that sets a wanted input pole.

    .. math:: I = 2\pi f C\, kT/q

    Parameters
    ----------
    capacitance : C, diode and emitter. [F]
    bandwidth : f of the input pole. [Hz]
    temperature : T. [K]

    Returns
    -------
    I, photocurrent included. [A]

    Notes
    -----
    Poor below some microamperes, where base resistance and current gain spoil it.
    """
    return 2 * pi * bandwidth * capacitance * BOLTZMANN * temperature / ELEMENTARY_CHARGE


@source("derived: a step through one high-pass; H. Johnson, newsletter 7-09, has the linear form")
def droop(*, corner: Real, duration: Real) -> Real:
    r"""Fraction of the level lost by the end of a run of equal bits.

    .. math:: d = 1 - \exp(-2\pi f_L t)

    Parameters
    ----------
    corner : f_L of the high-pass. [Hz]
    duration : t, run length over bit rate. [s]

    Returns
    -------
    d, of the level above the average. [1]

    Notes
    -----
    One high-pass.
    """
    return 1 - exp(-2 * pi * corner * duration)
