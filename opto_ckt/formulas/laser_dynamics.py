"""Laser diode in motion: relaxation, damping, bandwidth, turn-on delay, intensity noise, distortion."""

from __future__ import annotations

from numpy import log, pi, sqrt

from opto_ckt.constants import ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


@source("L. A. Coldren & S. W. Corzine, Diode Lasers and Photonic Integrated Circuits, ch. 5, from memory")
def relaxation_frequency(
    *, stated_frequency: Real, stated_current: Real, current: Real, threshold: Real
) -> Real:
    r"""Relaxation frequency at a current, from the data sheet's at another.

    .. math:: f_r(I) = f_r(I_0) \sqrt{\frac{I - I_{th}}{I_0 - I_{th}}}

    Parameters
    ----------
    stated_frequency : f_r at I_0. [Hz]
    stated_current : I_0. [A]
    current : I above threshold. [A]
    threshold : I_th. [A]

    Returns
    -------
    f_r at I. [Hz]

    Notes
    -----
    Small signal, junction temperature the same.
    """
    return stated_frequency * sqrt((current - threshold) / (stated_current - threshold))


@source("R. Olshansky et al. 1987; L. A. Coldren & S. W. Corzine, ch. 5, from memory")
def damping_rate(*, relaxation_frequency: Real, damping_factor: Real, lifetime: Real) -> Real:
    r"""Damping rate of the relaxation.

    .. math:: \gamma = K f_r^2 + 1/\tau

    Parameters
    ----------
    relaxation_frequency : f_r. [Hz]
    damping_factor : K for f_r, not ω_r: the two differ by (2π)². [s]
    lifetime : τ of the carriers. [s]

    Returns
    -------
    γ. [1/s]

    Notes
    -----
    Small signal.
    """
    return damping_factor * relaxation_frequency**2 + 1 / lifetime


@source("derived: |H(f)| of f_r²/(f_r² - f² + j f γ/2π)")
def modulation_response(*, frequency: Real, relaxation_frequency: Real, damping_rate: Real) -> Real:
    r"""Magnitude of the response of optical power to current.

    .. math:: |H| = \frac{f_r^2}{\sqrt{(f_r^2 - f^2)^2 + (f \gamma/2\pi)^2}}

    Parameters
    ----------
    frequency : f. [Hz]
    relaxation_frequency : f_r. [Hz]
    damping_rate : γ. [1/s]

    Returns
    -------
    Re its value at low frequency. [1]

    Notes
    -----
    Intrinsic: parasitics multiply it.

    Examples
    --------
    >>> print(f"{modulation_response(frequency=4e9, relaxation_frequency=4e9, damping_rate=8e9):.4f}")
    3.1416
    """
    resonance = relaxation_frequency**2 - frequency**2
    return relaxation_frequency**2 / sqrt(resonance**2 + (frequency * damping_rate / (2 * pi)) ** 2)


@source("derived: Q of the two poles, ω_r/γ")
def relaxation_quality(*, relaxation_frequency: Real, damping_rate: Real) -> Real:
    r"""Quality factor of the relaxation; bandwidth, peak and overshoot are those of `second_order`.

    .. math:: Q = 2\pi f_r/\gamma

    Parameters
    ----------
    relaxation_frequency : f_r. [Hz]
    damping_rate : γ. [1/s]

    Returns
    -------
    Q. [1]

    Notes
    -----
    Intrinsic response.
    """
    return 2 * pi * relaxation_frequency / damping_rate


@source("L. A. Coldren & S. W. Corzine, ch. 5, from memory")
def largest_bandwidth(*, damping_factor: Real) -> Real:
    r"""Bandwidth beyond which damping wins, whatever the current.

    .. math:: f = 2\pi\sqrt2/K

    Parameters
    ----------
    damping_factor : K for γ = K f_r². [s]

    Returns
    -------
    f. [Hz]

    Notes
    -----
    1/τ left out; K defined with ω_r² gives 0.225/K.

    Examples
    --------
    >>> print(f"{largest_bandwidth(damping_factor=0.32e-9) / 1e9:.1f} GHz")
    27.8 GHz
    """
    limit: Real = 2 * pi * sqrt(2.0) / damping_factor
    return limit


@source("T. P. Pearsall, Photonics Essentials, eq. 8.8")
def turn_on_delay(*, lifetime: Real, low_current: Real, high_current: Real, threshold: Real) -> Real:
    r"""Delay between a step of current and the onset of lasing.

    .. math:: t = \tau \ln\frac{I_2 - I_1}{I_2 - I_{th}}

    Parameters
    ----------
    lifetime : τ of the carriers. [s]
    low_current : I_1 below threshold. [A]
    high_current : I_2 above threshold. [A]
    threshold : I_th. [A]

    Returns
    -------
    t; the light reaches half its value another 0.1 ns later. [s]

    Notes
    -----
    I_1 < I_th < I_2; with I_1 ≥ I_th there is no delay.
    """
    return lifetime * log((high_current - low_current) / (high_current - threshold))


@source("definition; J. C. Palais, Fiber Optic Communications, Ex. 11.10")
def intensity_noise(*, power: Real, relative_intensity_noise: Real, bandwidth: Real) -> Real:
    r"""Rms fluctuation of the optical power.

    .. math:: \delta P = P \sqrt{RIN\, B}

    Parameters
    ----------
    power : P, mean. [W]
    relative_intensity_noise : RIN as a ratio, 10^(dB/10). [1/Hz]
    bandwidth : B. [Hz]

    Returns
    -------
    δP. [W]

    Notes
    -----
    White below the relaxation frequency.
    """
    return power * sqrt(relative_intensity_noise * bandwidth)


@source("derived: shot noise of the detected light")
def intensity_noise_floor(*, photocurrent: Real) -> Real:
    r"""Relative intensity noise that shot noise looks like.

    .. math:: RIN = 2q/I

    Parameters
    ----------
    photocurrent : I of the detected light. [A]

    Returns
    -------
    RIN as a ratio. [1/Hz]

    Notes
    -----
    What is measured below this is shot noise.
    """
    return 2 * ELEMENTARY_CHARGE / photocurrent


@source("derived: Taylor expansion of P(I), exercise in G. Keiser ch. 4")
def second_harmonic(*, curvature: Real, slope: Real, amplitude: Real) -> Real:
    r"""Second harmonic of the optical power over its fundamental.

    .. math:: HD_2 = \frac{P''\, i}{4 P'}

    Parameters
    ----------
    curvature : P''. [W/A²]
    slope : P'. [W/A]
    amplitude : i of the current's cosine. [A]

    Returns
    -------
    The ratio, optical; its square is the electrical power ratio. [1]

    Notes
    -----
    Static, small i.
    """
    return curvature * amplitude / (4 * slope)
