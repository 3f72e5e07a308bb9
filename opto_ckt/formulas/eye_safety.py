"""Light that an eye may meet beside what Class 1 allows: advice by published limits, never a classification.

Limits of IEC 60825-1 for a small source that shines for 100 s and longer, as transcriptions and makers' papers state
them; the standard itself was not at hand. Of two editions the stricter figure is the default.
"""

from __future__ import annotations

import numpy as np
from numpy import exp, pi
from numpy.typing import NDArray

from opto_ckt.formulas.formula import Real, source

SHORTEST, LONGEST = 400e-9, 4000e-9  #: between which limits are known here [m]
INFRARED = 1400e-9  #: from here on the cornea takes the light [m]
BASE = 3.9e-4  #: limit from 500 to 700 nm [W]
BLUE = 3.9e-5  #: below 450 nm [W]
CORNEA = 10e-3  #: beyond 1400 nm [W]
PUPIL, NARROW = 7e-3, 3.5e-3  #: apertures, up to 1400 nm and beyond [m]
NAKED, LOUPE = 100e-3, 70e-3  #: distances, of an eye and of an eye behind a magnifier, kept for fibre ends [m]


def red_factor(wavelength: Real) -> NDArray[np.float64]:
    """C4, by which the limit grows in the near infrared, for a wavelength [m]; 1 below 700 nm, 5 from 1050 nm on."""
    nanometres = np.clip(np.asarray(wavelength) * 1e9, 700.0, 1050.0)
    return np.asarray(np.minimum(10 ** (0.002 * (nanometres - 700.0)), 5.0))


def infrared_factor(*, wavelength: Real, edition_2014: bool = False) -> NDArray[np.float64]:
    """C7, by which the limit grows from 1150 to 1400 nm, for a wavelength [m].

    Up to 1200 nm 10^(0.018 (λ - 1150)), then 8; the 2014 edition adds 10^(0.04 (λ - 1250)) from 1250 nm on, where other
    limits than the retina's take over.

    >>> print(f"{infrared_factor(wavelength=1310e-9):.0f} {infrared_factor(wavelength=1310e-9, edition_2014=True):.1f}")
    8 259.2
    """
    nanometres = np.asarray(wavelength) * 1e9
    rising = 10 ** (0.018 * (np.clip(nanometres, 1150.0, 1200.0) - 1150.0))
    early = np.where(nanometres < 1200.0, rising, 8.0)
    if not edition_2014:
        return np.asarray(early)
    return np.asarray(np.where(nanometres > 1250.0, 8.0 + 10 ** (0.04 * (nanometres - 1250.0)), early))


def class_1_limit(wavelength: Real) -> NDArray[np.float64]:
    """Power through the aperture that Class 1 allows at a wavelength [m], the stricter of two editions. [W]

    Raises
    ------
    ValueError : the wavelength lies beyond what limits are known for.

    Examples
    --------
    >>> [f"{float(class_1_limit(nm * 1e-9)) * 1e3:.3f}" for nm in (450, 650, 850, 905, 1310, 1550)]
    ['0.039', '0.390', '0.778', '1.002', '15.600', '10.000']
    """
    metres = np.asarray(wavelength, dtype=float)
    if np.any((metres < SHORTEST) | (metres > LONGEST)):
        raise ValueError("limits are known from 400 nm to 4000 nm")
    nanometres = metres * 1e9
    blue = BLUE * 10 ** (0.02 * np.clip(nanometres - 450.0, 0.0, 50.0))
    retina = BASE * red_factor(metres) * infrared_factor(wavelength=metres)
    return np.asarray(np.where(metres < 500e-9, blue, np.where(metres < INFRARED, retina, CORNEA)))


@source("P. Kolesar & J. Ehrgott, IEEE 802.3ae, March 2000")
def multimode_spot(*, distance: Real, numerical_aperture: Real) -> Real:
    r"""Diameter that holds 63 % of the light from a multimode fibre.

    .. math:: d_{63} = \frac{2 r\,NA}{1.7}

    Parameters
    ----------
    distance : r from the fibre's end. [m]
    numerical_aperture : NA, to 5 % of the intensity. [1]

    Returns
    -------
    d_63. [m]

    Notes
    -----
    Far from the end; a Gaussian stands for the beam.

    Examples
    --------
    >>> print(f"{multimode_spot(distance=14e-3, numerical_aperture=0.2) * 1e3:.3f} mm")
    3.294 mm
    """
    return 2 * distance * numerical_aperture / 1.7


@source("far field of the mode, from memory; ADVA, FSP 3000 C hardware guide R1.1 p. 347, agrees")
def single_mode_spot(*, distance: Real, wavelength: Real, mode_field_diameter: Real) -> Real:
    r"""Diameter that holds 63 % of the light from a single-mode fibre.

    .. math:: d_{63} = \frac{2\sqrt2\,r \lambda}{\pi\,MFD}

    Parameters
    ----------
    distance : r from the fibre's end. [m]
    wavelength : λ. [m]
    mode_field_diameter : MFD. [m]

    Returns
    -------
    d_63. [m]

    Notes
    -----
    Far from the end.

    Examples
    --------
    >>> spot = single_mode_spot(distance=0.1, wavelength=1550e-9, mode_field_diameter=11e-6)
    >>> print(f"{spot * 1e3:.2f} mm")
    12.69 mm
    """
    return 2 * 2**0.5 * distance * wavelength / (pi * mode_field_diameter)


@source("definition of d_63 of a Gaussian beam")
def share_through(*, aperture: Real, spot: Real) -> Real:
    r"""Share of a beam that enters an aperture in its middle.

    .. math:: \eta = 1 - e^{-(d_a/d_{63})^2}

    Parameters
    ----------
    aperture : d_a. [m]
    spot : d_63 there. [m]

    Returns
    -------
    η. [1]

    Notes
    -----
    A Gaussian beam.

    Examples
    --------
    >>> print(f"{share_through(aperture=7e-3, spot=3.294118e-3):.3f}")
    0.989
    """
    return 1 - exp(-((aperture / spot) ** 2))


@source("derived: cone of a surface that shines by the cosine")
def lambertian_share(*, aperture: Real, distance: Real) -> Real:
    r"""Share of a small Lambertian surface's light that enters an aperture on its axis.

    .. math:: \eta = \frac{d_a^2}{d_a^2 + 4 r^2}

    Parameters
    ----------
    aperture : d_a. [m]
    distance : r of the aperture. [m]

    Returns
    -------
    η. [1]

    Notes
    -----
    Light into one half space; a lens makes it a beam, of which more enters.

    Examples
    --------
    >>> print(f"{lambertian_share(aperture=7e-3, distance=100e-3) * 1e3:.2f} per mille")
    1.22 per mille
    """
    return aperture**2 / (aperture**2 + 4 * distance**2)
