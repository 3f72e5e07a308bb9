"""Photodiode: materials, responsivity, junction capacitance, dark noise limits."""

from __future__ import annotations

from collections.abc import Mapping
from dataclasses import dataclass
from types import MappingProxyType

from numpy import sqrt

from opto_ckt.constants import ELEMENTARY_CHARGE, LIGHT_SPEED, PLANCK
from opto_ckt.formulas.formula import Real, source


@dataclass(frozen=True)
class Material:
    """A detector material; its band gap bounds the wavelengths that it sees."""

    band_gap: float  #: at room temperature [J]
    source: str


def _material(electron_volts: float, told_by: str) -> Material:
    return Material(band_gap=electron_volts * ELEMENTARY_CHARGE, source=told_by)


MATERIALS: Mapping[str, Material] = MappingProxyType(
    {
        "Si": _material(1.12, "from memory; gives the doubling of dark current per 10 K that data sheets state"),
        "Ge": _material(0.66, "from memory"),
        "InGaAs": _material(0.75, "lattice-matched to InP, from memory; G. Keiser, Ex. 6.4 uses 0.73 eV"),
        "extended InGaAs": _material(0.48, "cut-off near 2.6 µm, from memory; other compositions differ"),
        "GaAs": _material(1.42, "S. Kumar & M. J. Deen, Fiber Optic Communications, Ex. 5.2"),
        "InP": _material(1.34, "from memory"),
        "GaP": _material(2.26, "from memory"),
        "GaN": _material(3.4, "from memory"),
    }
)  #: band gaps by material


@source("definition")
def photon_energy(*, wavelength: Real) -> Real:
    r"""Energy of one photon.

    .. math:: E = h c/\lambda

    Parameters
    ----------
    wavelength : λ in vacuum. [m]

    Returns
    -------
    E. [J]

    Notes
    -----
    Exact.
    """
    return PLANCK * LIGHT_SPEED / wavelength


@source("definition: η electrons a photon; J. M. Senior, Optical Fiber Communications, Ex. 8.1")
def responsivity(*, quantum_efficiency: Real, wavelength: Real) -> Real:
    r"""Photocurrent over optical power.

    .. math:: R = \eta q \lambda/(h c)

    Parameters
    ----------
    quantum_efficiency : η. [1]
    wavelength : λ in vacuum, below the cut-off of the material. [m]

    Returns
    -------
    R. [A/W]

    Notes
    -----
    Low injection, no gain; beyond `cutoff_wavelength` there is hardly any photocurrent.

    Examples
    --------
    >>> print(f"{responsivity(quantum_efficiency=0.4, wavelength=0.85e-6):.3f} A/W")
    0.274 A/W
    """
    return quantum_efficiency * ELEMENTARY_CHARGE * wavelength / (PLANCK * LIGHT_SPEED)


@source("A. Fresnel, light straight onto the surface; S. C. Gupta, Ex. 5.30, has bare silicon")
def surface_reflection(*, index: Real, outside_index: Real) -> Real:
    r"""Share of the light that a bare surface throws back.

    .. math:: \left(\frac{n - n_0}{n + n_0}\right)^2

    Parameters
    ----------
    index : n of the detector. [1]
    outside_index : n_0 of what is before it, 1 for air. [1]

    Returns
    -------
    The share; responsivity of a bare surface is lower by as much. [1]

    Notes
    -----
    No coating, n real.

    Examples
    --------
    >>> print(f"{surface_reflection(index=3.5, outside_index=1.0):.2f}")
    0.31
    """
    return ((index - outside_index) / (index + outside_index)) ** 2


@source("definition: photon energy equals band gap; G. Keiser, Optical Fiber Communications, Ex. 6.4")
def cutoff_wavelength(*, band_gap: Real) -> Real:
    r"""Longest wavelength that a material detects.

    .. math:: \lambda_c = h c/E_g

    Parameters
    ----------
    band_gap : E_g. [J]

    Returns
    -------
    λ_c in vacuum. [m]

    Notes
    -----
    The gap narrows, and λ_c grows, with temperature.

    Examples
    --------
    >>> print(f"{cutoff_wavelength(band_gap=MATERIALS['GaAs'].band_gap) * 1e9:.0f} nm")
    873 nm
    """
    return PLANCK * LIGHT_SPEED / band_gap


@source("junction law, from memory; SPICE uses the same")
def junction_capacitance(
    *, zero_bias_capacitance: Real, reverse_bias: Real, built_in_voltage: Real, grading: Real
) -> Real:
    r"""Capacitance of a junction under reverse bias.

    .. math:: C_j = C_{j0} \left(1 + V_R/V_{bi}\right)^{-m}

    Parameters
    ----------
    zero_bias_capacitance : C_j0. [F]
    reverse_bias : V_R, not negative. [V]
    built_in_voltage : V_bi. [V]
    grading : m, 1/2 abrupt, 1/3 linearly graded. [1]

    Returns
    -------
    C_j, without the package. [F]

    Notes
    -----
    Until the depleted layer fills the device; then C_j stays.
    """
    return zero_bias_capacitance * (1 + reverse_bias / built_in_voltage) ** -grading


@source("junction law solved for its value without bias, from memory")
def zero_bias_capacitance(*, capacitance: Real, reverse_bias: Real, built_in_voltage: Real, grading: Real) -> Real:
    r"""Capacitance of a junction without bias from its capacitance at one bias.

    .. math:: C_{j0} = C_j \left(1 + V_R/V_{bi}\right)^m

    Parameters
    ----------
    capacitance : C_j at V_R. [F]
    reverse_bias : V_R, not negative. [V]
    built_in_voltage : V_bi. [V]
    grading : m. [1]

    Returns
    -------
    C_j0. [F]

    Notes
    -----
    Only for a diode that V_R does not fully deplete.
    """
    return capacitance * (1 + reverse_bias / built_in_voltage) ** grading


@source("J. M. Senior, Optical Fiber Communications, Ex. 8.6: shot noise of the dark current alone")
def dark_nep(*, dark_current: Real, responsivity: Real) -> Real:
    r"""Noise equivalent power of a diode in front of a noiseless amplifier.

    .. math:: NEP = \sqrt{2 q I_d}/R

    Parameters
    ----------
    dark_current : I_d. [A]
    responsivity : R. [A/W]

    Returns
    -------
    NEP. [W/√Hz]

    Notes
    -----
    No light, no shunt resistance.
    """
    return sqrt(2 * ELEMENTARY_CHARGE * dark_current) / responsivity


@source("definition; J. M. Senior, Optical Fiber Communications, Ex. 8.6")
def detectivity(*, area: Real, noise_equivalent_power: Real) -> Real:
    r"""Specific detectivity D*.

    .. math:: D^* = \sqrt{A}/NEP

    Parameters
    ----------
    area : A of the detector. [m²]
    noise_equivalent_power : NEP. [W/√Hz]

    Returns
    -------
    D*; 100 times as much in the usual cm. [m√Hz/W]

    Notes
    -----
    Noise that grows with the root of the area.
    """
    return sqrt(area) / noise_equivalent_power
