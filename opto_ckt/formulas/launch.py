"""Light from a source into a fibre: Lambertian emitters, overfilled cores, misaligned modes, reflections."""

from __future__ import annotations

from numpy import exp, log, pi

from opto_ckt.formulas.formula import Real, source


@source("J. M. Senior, Optical Fiber Communications, Ex. 7.3")
def lambertian_coupling(*, numerical_aperture: Real) -> Real:
    r"""Share of a Lambertian emitter's light that a step-index fibre takes.

    .. math:: \eta = NA^2

    Parameters
    ----------
    numerical_aperture : NA. [1]

    Returns
    -------
    η; half of it for a graded index. [1]

    Notes
    -----
    The emitter against the core and no larger than it; reflection apart.

    Examples
    --------
    >>> print(f"{lambertian_coupling(numerical_aperture=0.2):.2f}")
    0.04
    """
    return numerical_aperture**2


@source("derived: the square of the local aperture, NA² (1 - (r/a)^α), averaged over the emitter; half for α = 2")
def graded_coupling(*, numerical_aperture: Real, emitter: Real, core: Real, profile: Real) -> Real:
    r"""Share of a Lambertian emitter's light that a graded-index fibre takes.

    .. math:: \eta = NA^2 \left(1 - \frac{2}{\alpha + 2} \left(\frac{r_s}{a}\right)^\alpha\right)

    Parameters
    ----------
    numerical_aperture : NA on the axis. [1]
    emitter : r_s, radius or diameter, not above a. [m]
    core : a, likewise. [m]
    profile : α of the index; 2 is a parabola, a large one a step. [1]

    Returns
    -------
    η. [1]

    Notes
    -----
    The emitter against the core and in its middle; reflection apart.

    Examples
    --------
    >>> print(f"{graded_coupling(numerical_aperture=0.2, emitter=50e-6, core=50e-6, profile=2.0):.2f}")
    0.02
    """
    return numerical_aperture**2 * (1 - 2 / (profile + 2) * (emitter / core) ** profile)


@source("J. M. Senior, Optical Fiber Communications, Ex. 7.4")
def radiance_coupling(*, radiance: Real, area: Real, numerical_aperture: Real, reflection: Real) -> Real:
    r"""Power in a step-index fibre from a surface of known radiance.

    .. math:: P = \pi (1 - r) A R\,NA^2

    Parameters
    ----------
    radiance : R, power by area and solid angle. [W/m²]
    area : A, the smaller of emitter and core. [m²]
    numerical_aperture : NA. [1]
    reflection : r at the fibre's face. [1]

    Returns
    -------
    P. [W]

    Notes
    -----
    A Lambertian surface against the core.

    Examples
    --------
    >>> power = radiance_coupling(radiance=30e4, area=1.9635e-9, numerical_aperture=0.15, reflection=0.01)
    >>> print(f"{power * 1e6:.1f} µW")
    41.2 µW
    """
    return pi * (1 - reflection) * area * radiance * numerical_aperture**2


@source("G. Keiser, Optical Fiber Communications, Ex. 5.2: the core sees its share of the emitter")
def overfilled_share(*, core: Real, emitter: Real) -> Real:
    r"""Share of the light that starts within the core of a fibre smaller than the emitter.

    .. math:: \eta = (a/r_s)^2

    Parameters
    ----------
    core : a, radius or diameter. [m]
    emitter : r_s, likewise. [m]

    Returns
    -------
    η, to be multiplied by the coupling of a small emitter. [1]

    Notes
    -----
    Emitter larger than core.
    """
    return (core / emitter) ** 2


@source("Fresnel at normal incidence; G. Keiser, Optical Fiber Communications, Ex. 5.3")
def fresnel_reflection(*, index: Real, other: Real) -> Real:
    r"""Share of the light that a boundary throws back.

    .. math:: R = \left(\frac{n_1 - n_2}{n_1 + n_2}\right)^2

    Parameters
    ----------
    index : n_1. [1]
    other : n_2. [1]

    Returns
    -------
    R. [1]

    Notes
    -----
    Normal incidence.

    Examples
    --------
    >>> print(f"{fresnel_reflection(index=3.6, other=1.48):.3f}")
    0.174
    """
    return ((index - other) / (index + other)) ** 2


@source("derived: overlap of two Gaussian modes in one direction across; the product of two is that of a mode")
def mismatch_coupling(*, mode_radius: Real, other_radius: Real) -> Real:
    r"""Share of the light that passes, by one direction across, between modes of unlike width.

    .. math:: \eta = \frac{2 w_1 w_2}{w_1^2 + w_2^2}

    Parameters
    ----------
    mode_radius : w_1, to 1/e² of the intensity. [m]
    other_radius : w_2, likewise. [m]

    Returns
    -------
    η; of round modes its square passes, of others the product of both directions. [1]

    Notes
    -----
    Flat wavefronts, no gap, offset or tilt.

    Examples
    --------
    >>> print(f"{mismatch_coupling(mode_radius=4.6e-6, other_radius=5.2e-6) ** 2:.3f}")
    0.985
    """
    return 2 * mode_radius * other_radius / (mode_radius**2 + other_radius**2)


@source("derived: far field of a Gaussian mode")
def waist_of_divergence(*, wavelength: Real, divergence: Real) -> Real:
    r"""Radius of a laser's mode at its facet from the width of its far field.

    .. math:: w = \frac{\lambda \sqrt{2 \ln 2}}{\pi \theta}

    Parameters
    ----------
    wavelength : λ. [m]
    divergence : θ in radians, full width at half of the intensity. [1]

    Returns
    -------
    w, to 1/e² of the intensity. [m]

    Notes
    -----
    Small angles; above some 40° the mode is narrower than this tells.
    """
    waist: Real = wavelength * (2 * log(2.0)) ** 0.5 / (pi * divergence)
    return waist


@source("derived: a lobe cos^L integrated over the cone that the fibre accepts")
def lobe_coupling(*, numerical_aperture: Real, exponent: Real) -> Real:
    r"""Share of a round lobe's light that lies within a fibre's aperture.

    .. math:: \eta = 1 - (1 - NA^2)^{(L+1)/2}

    Parameters
    ----------
    numerical_aperture : NA of a step index. [1]
    exponent : L of the lobe; 1 is a Lambertian surface. [1]

    Returns
    -------
    η; NA² for a Lambertian surface. [1]

    Notes
    -----
    The source against the core and within it; reflection apart.
    """
    return 1 - (1 - numerical_aperture**2) ** ((exponent + 1) / 2)


@source("Gaussian modes; G. Keiser, Optical Fiber Communications, Ex. 5.5")
def offset_coupling(*, offset: Real, mode_radius: Real) -> Real:
    r"""Share of the light that passes between two single-mode fibres set off sideways.

    .. math:: \eta = e^{-(d/W)^2}

    Parameters
    ----------
    offset : d. [m]
    mode_radius : W, half the mode-field diameter. [m]

    Returns
    -------
    η. [1]

    Notes
    -----
    Equal modes, no gap.
    """
    return exp(-((offset / mode_radius) ** 2))


@source("Gaussian modes; G. Keiser, Optical Fiber Communications, Ex. 5.6")
def tilt_coupling(*, tilt: Real, mode_radius: Real, index: Real, wavelength: Real) -> Real:
    r"""Share of the light that passes between two single-mode fibres at an angle.

    .. math:: \eta = e^{-(\pi n W \theta/\lambda)^2}

    Parameters
    ----------
    tilt : θ, in radians. [1]
    mode_radius : W, half the mode-field diameter. [m]
    index : n of what lies between. [1]
    wavelength : λ. [m]

    Returns
    -------
    η. [1]

    Notes
    -----
    Small angles, equal modes, no gap.
    """
    return exp(-((pi * index * mode_radius * tilt / wavelength) ** 2))


@source("D. Marcuse's fit, quoted in G. Keiser, Optical Fiber Communications, Ex. 5.5")
def mode_radius(*, core_radius: Real, normalised_frequency: Real) -> Real:
    r"""Radius of the mode of a single-mode fibre.

    .. math:: W = a\,(0.65 + 1.619 V^{-3/2} + 2.879 V^{-6})

    Parameters
    ----------
    core_radius : a. [m]
    normalised_frequency : V, 1.2 to 2.4. [1]

    Returns
    -------
    W. [m]

    Notes
    -----
    Step index; the fit holds to about a hundredth.

    Examples
    --------
    >>> print(f"{mode_radius(core_radius=4.5e-6, normalised_frequency=2.4) * 1e6:.2f} µm")
    4.95 µm
    """
    v = normalised_frequency
    return core_radius * (0.65 + 1.619 / v**1.5 + 2.879 / v**6)


@source("definition of the lobe cos^L; G. Keiser, Optical Fiber Communications, Ex. 5.1")
def lobe_exponent(*, cosine: Real) -> Real:
    r"""Exponent of a lobe that falls as a power of the cosine.

    .. math:: L = -\frac{\ln 2}{\ln \cos\theta_h}

    Parameters
    ----------
    cosine : of θ_h, from the axis to half the intensity. [1]

    Returns
    -------
    L; 1 for a Lambertian surface. [1]

    Notes
    -----
    θ_h between nothing and a right angle.
    """
    exponent: Real = -log(2.0) / log(cosine)
    return exponent


@source("common practice: light goes as the area of the core and the square of the aperture")
def launch_ratio(*, core: Real, numerical_aperture: Real, other_core: Real, other_aperture: Real) -> Real:
    r"""Light that one multimode fibre takes over that of another, from the same large source.

    .. math:: k = \left(\frac{d_2\,NA_2}{d_1\,NA_1}\right)^2

    Parameters
    ----------
    core : d_1. [m]
    numerical_aperture : NA_1. [1]
    other_core : d_2. [m]
    other_aperture : NA_2. [1]

    Returns
    -------
    k. [1]

    Notes
    -----
    Both cores smaller than the source's image: beyond it the law promises too much.
    """
    return (other_core * other_aperture / (core * numerical_aperture)) ** 2
