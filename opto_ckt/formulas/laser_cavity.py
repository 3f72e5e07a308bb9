"""Laser diode from its cavity: losses, photon lifetime, threshold, spacing of modes."""

from __future__ import annotations

from numpy import log

from opto_ckt.constants import ELEMENTARY_CHARGE, LIGHT_SPEED
from opto_ckt.formulas.formula import Real, source


@source("S. Kumar & M. J. Deen, Fiber Optic Communications, Ex. 3.11; light that leaves in one round trip")
def mirror_loss(*, length: Real, reflection: Real, other_reflection: Real) -> Real:
    r"""Loss by the mirrors, spread over the length of the cavity.

    .. math:: \alpha_m = \frac{1}{2L} \ln \frac{1}{R_1 R_2}

    Parameters
    ----------
    length : L of the cavity. [m]
    reflection : R_1 of one end, of the power. [1]
    other_reflection : R_2 of the other. [1]

    Returns
    -------
    α_m. [1/m]

    Notes
    -----
    Fabry-Perot cavity.

    Examples
    --------
    >>> print(f"{1000 + mirror_loss(length=320e-6, reflection=0.35, other_reflection=0.35):.0f} 1/m")
    4281 1/m
    """
    loss: Real = -log(reflection * other_reflection) / (2 * length)
    return loss


@source("S. Kumar & M. J. Deen, Fiber Optic Communications, Ex. 3.7")
def photon_lifetime(*, index: Real, loss: Real) -> Real:
    r"""Time that a photon stays in the cavity.

    .. math:: \tau_p = \frac{n}{c\,\alpha}

    Parameters
    ----------
    index : n, group index. [1]
    loss : α of material and mirrors. [1/m]

    Returns
    -------
    τ_p. [s]

    Notes
    -----
    Losses spread evenly over the length.
    """
    return index / (LIGHT_SPEED * loss)


@source("S. Kumar & M. J. Deen, Fiber Optic Communications, Ex. 3.11")
def threshold_density(*, transparency_density: Real, gain_slope: Real, photon_lifetime: Real) -> Real:
    r"""Carrier density at which gain covers the losses.

    .. math:: N_{th} = N_0 + \frac{1}{G_0 \tau_p}

    Parameters
    ----------
    transparency_density : N_0. [1/m³]
    gain_slope : G_0, gain in time by carrier density, confinement in it. [m³/s]
    photon_lifetime : τ_p. [s]

    Returns
    -------
    N_th. [1/m³]

    Notes
    -----
    Gain straight in the carrier density.
    """
    return transparency_density + 1 / (gain_slope * photon_lifetime)


@source("rate equations at rest; S. Kumar & M. J. Deen, Fiber Optic Communications, Ex. 3.7")
def cavity_threshold(*, volume: Real, density: Real, lifetime: Real) -> Real:
    r"""Threshold current by the carriers that it keeps up.

    .. math:: I_{th} = \frac{q V N_{th}}{\tau}

    Parameters
    ----------
    volume : V of the active layer. [m³]
    density : N_th. [1/m³]
    lifetime : τ of the carriers. [s]

    Returns
    -------
    I_th. [A]

    Notes
    -----
    All current into the active layer.
    """
    return ELEMENTARY_CHARGE * volume * density / lifetime


@source("rate equations at rest; S. Kumar & M. J. Deen, Fiber Optic Communications, Ex. 3.7")
def current_for_photons(*, threshold: Real, volume: Real, photon_density: Real, photon_lifetime: Real) -> Real:
    r"""Current that keeps up a density of photons.

    .. math:: I = I_{th} + \frac{q V S}{\tau_p}

    Parameters
    ----------
    threshold : I_th. [A]
    volume : V of the active layer. [m³]
    photon_density : S. [1/m³]
    photon_lifetime : τ_p. [s]

    Returns
    -------
    I. [A]

    Notes
    -----
    Confinement and injection of 1.
    """
    return threshold + ELEMENTARY_CHARGE * volume * photon_density / photon_lifetime


@source("G. Keiser, Optical Fiber Communications, Ex. 4.8: a whole number of half waves in the cavity")
def mode_spacing(*, wavelength: Real, index: Real, length: Real) -> Real:
    r"""Distance of neighbouring modes of a Fabry-Perot laser.

    .. math:: \Delta\lambda = \frac{\lambda^2}{2 n L}

    Parameters
    ----------
    wavelength : λ. [m]
    index : n, group index. [1]
    length : L of the cavity. [m]

    Returns
    -------
    Δλ. [m]

    Notes
    -----
    Far more than one half wave in the cavity.
    """
    return wavelength**2 / (2 * index * length)
