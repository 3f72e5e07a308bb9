"""Light-emitting diode: carrier lifetime and the light inside, speed in its two conventions, light over current."""

from __future__ import annotations

from numpy import pi, sqrt

from opto_ckt.constants import ELEMENTARY_CHARGE, LIGHT_SPEED, PLANCK
from opto_ckt.formulas.formula import Real, source


@source("rates add; J. M. Senior, Optical Fiber Communications, Ex. 7.1; G. Keiser, same title, Ex. 4.5")
def carrier_lifetime(*, radiative: Real, nonradiative: Real) -> Real:
    r"""Lifetime of the carriers.

    .. math:: \frac{1}{\tau} = \frac{1}{\tau_r} + \frac{1}{\tau_{nr}}

    Parameters
    ----------
    radiative : τ_r. [s]
    nonradiative : τ_nr. [s]

    Returns
    -------
    τ. [s]

    Notes
    -----
    Low injection.

    Examples
    --------
    >>> print(f"{carrier_lifetime(radiative=60e-9, nonradiative=100e-9) * 1e9:.1f} ns")
    37.5 ns
    """
    return radiative * nonradiative / (radiative + nonradiative)


@source("G. Keiser, Optical Fiber Communications, Ex. 4.5; J. M. Senior, Ex. 7.1")
def internal_power(*, lifetime: Real, radiative: Real, wavelength: Real, current: Real) -> Real:
    r"""Light made inside the chip.

    .. math:: P_{int} = \frac{\tau}{\tau_r}\,\frac{h c}{q \lambda}\,I

    Parameters
    ----------
    lifetime : τ. [s]
    radiative : τ_r; τ/τ_r is the internal quantum efficiency. [s]
    wavelength : λ. [m]
    current : I. [A]

    Returns
    -------
    P_int. [W]

    Notes
    -----
    Low injection; little of it leaves a planar chip, see `planar_extraction`.

    Examples
    --------
    >>> power = internal_power(lifetime=37.5e-9, radiative=60e-9, wavelength=0.87e-6, current=40e-3)
    >>> print(f"{power * 1e3:.1f} mW")
    35.6 mW
    """
    return lifetime / radiative * PLANCK * LIGHT_SPEED / (ELEMENTARY_CHARGE * wavelength) * current


@source("J. M. Senior, Optical Fiber Communications, Ex. 7.2")
def planar_extraction(*, transmission: Real, index: Real, outside: Real) -> Real:
    r"""Share of the light inside that leaves a planar chip.

    .. math:: \eta = \frac{F n_a^2}{4 n_s^2}

    Parameters
    ----------
    transmission : F of the surface. [1]
    index : n_s of the semiconductor. [1]
    outside : n_a of what is around it. [1]

    Returns
    -------
    η. [1]

    Notes
    -----
    No dome, no mirror: today's chips give far more, and the sheet's power counts.

    Examples
    --------
    >>> print(f"{planar_extraction(transmission=0.68, index=3.6, outside=1.0):.3f}")
    0.013
    """
    return transmission * outside**2 / (4 * index**2)


@source("Fresnel loss at normal incidence in it; G. Keiser, Optical Fiber Communications, Ex. 4.6")
def planar_efficiency(*, index: Real) -> Real:
    r"""External over internal quantum efficiency of a planar chip in air.

    .. math:: \eta = \frac{1}{n (n + 1)^2}

    Parameters
    ----------
    index : n of the semiconductor. [1]

    Returns
    -------
    η. [1]

    Notes
    -----
    No dome, no mirror.

    Examples
    --------
    >>> print(f"{planar_efficiency(index=3.5) * 100:.2f} %")
    1.41 %
    """
    return 1 / (index * (index + 1) ** 2)


@source("derived: photocurrent at 0.707 of its low-frequency value, one pole")
def electrical_bandwidth(*, lifetime: Real) -> Real:
    r"""Frequency at which the photocurrent's power has halved.

    .. math:: f_e = \frac{1}{2\pi\tau}

    Parameters
    ----------
    lifetime : τ. [s]

    Returns
    -------
    f_e. [Hz]

    Notes
    -----
    √3 below `optical_bandwidth`. Books that put √2 there take the factor of a Gaussian response: for 5 ns they print
    39.0 MHz, the pole says 31.8 MHz.

    Examples
    --------
    >>> print(f"{electrical_bandwidth(lifetime=5e-9) / 1e6:.1f} MHz")
    31.8 MHz
    """
    return 1 / (2 * pi * lifetime)


@source("light at half its low-frequency value, one pole; J. M. Senior, Optical Fiber Communications, Ex. 7.7")
def optical_bandwidth(*, lifetime: Real) -> Real:
    r"""Frequency at which the modulated light has halved.

    .. math:: f_o = \frac{\sqrt 3}{2\pi\tau}

    Parameters
    ----------
    lifetime : τ. [s]

    Returns
    -------
    f_o. [Hz]

    Notes
    -----
    The photocurrent has fallen by 6 dB there.

    Examples
    --------
    >>> print(f"{optical_bandwidth(lifetime=5e-9) / 1e6:.1f} MHz")
    55.1 MHz
    """
    return 3**0.5 / (2 * pi * lifetime)


@source("one pole; S. B. Gupta & A. Goel, Optical Communication Systems, Ex. 6.8")
def modulated_power(*, power: Real, frequency: Real, lifetime: Real) -> Real:
    r"""Amplitude of the light at a frequency.

    .. math:: P(f) = \frac{P_0}{\sqrt{1 + (2\pi f\tau)^2}}

    Parameters
    ----------
    power : P_0 at low frequency. [W]
    frequency : f. [Hz]
    lifetime : τ. [s]

    Returns
    -------
    P(f). [W]

    Notes
    -----
    The pole of drive resistance and junction capacitance apart.

    Examples
    --------
    >>> print(f"{modulated_power(power=200e-6, frequency=10e6, lifetime=10e-9) * 1e6:.1f} µW")
    169.3 µW
    """
    return power / sqrt(1 + (2 * pi * frequency * lifetime) ** 2)


@source("derived: smooth and monotone through two points of the sheet")
def saturation_current(*, current: Real, power: Real, larger_current: Real, larger_power: Real) -> Real:
    r"""Constant of the roll-off :math:`P = \eta I/(1 + I/I_s)` from two points.

    .. math:: I_s = \frac{I_2 - I_1 r}{r - 1}, \quad r = \frac{P_1 I_2}{P_2 I_1}

    Parameters
    ----------
    current : I_1. [A]
    power : P_1. [W]
    larger_current : I_2. [A]
    larger_power : P_2. [W]

    Returns
    -------
    I_s, infinite where the points lie on a straight line through zero. [A]

    Notes
    -----
    Light that falls behind the current, r above 1.

    Examples
    --------
    >>> print(f"{saturation_current(current=50e-3, power=0.909, larger_current=100e-3, larger_power=1.667):.2f} A")
    0.50 A
    """
    ratio = power * larger_current / (larger_power * current)
    return (larger_current - current * ratio) / (ratio - 1)


@source("derived: Fourier series of P = η I/(1 + I/I_s) under a cosine, exact; a numerical transform agrees")
def second_harmonic(*, amplitude: Real, bias_current: Real, saturation_current: Real) -> Real:
    r"""Second harmonic of the light over its fundamental.

    .. math:: HD_2 = \frac{a - \sqrt{a^2 - \Delta I^2}}{\Delta I} \approx \frac{\Delta I}{2 a},
        \quad a = I_s + I_Q

    Parameters
    ----------
    amplitude : ΔI of a cosine. [A]
    bias_current : I_Q. [A]
    saturation_current : I_s of the roll-off. [A]

    Returns
    -------
    Ratio of the amplitudes of optical power; 20 log of it in electrical decibels. [1]

    Notes
    -----
    Static; the third harmonic is its square, each further one smaller by the same factor.

    Examples
    --------
    >>> print(f"{second_harmonic(amplitude=20e-3, bias_current=50e-3, saturation_current=0.5):.5f}")
    0.01819
    """
    reach = saturation_current + bias_current
    return (reach - sqrt(reach**2 - amplitude**2)) / amplitude


@source("derived: fundamental over mean of the same series, exact")
def optical_index(*, amplitude: Real, bias_current: Real, saturation_current: Real) -> Real:
    r"""Peak of the light's fundamental over its mean.

    .. math:: m_o = \frac{2 (a - s)}{m x\,(s - 1)},
        \quad x = \frac{I_Q}{I_s}, \ m = \frac{\Delta I}{I_Q}, \ a = 1 + x, \ s = \sqrt{a^2 - m^2 x^2}

    Parameters
    ----------
    amplitude : ΔI of a cosine. [A]
    bias_current : I_Q. [A]
    saturation_current : I_s of the roll-off. [A]

    Returns
    -------
    m_o; about m/(1 + x). [1]

    Notes
    -----
    Static; without roll-off it is the index of the current.

    Examples
    --------
    >>> print(f"{optical_index(amplitude=20e-3, bias_current=50e-3, saturation_current=0.5):.4f}")
    0.3664
    """
    whole, swing = 1 + bias_current / saturation_current, amplitude / saturation_current
    root = sqrt(whole**2 - swing**2)
    return 2 * (whole - root) / (swing * (root - 1))
