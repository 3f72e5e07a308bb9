"""How quickly injected carriers vanish in the active layer of a light-emitting diode, at little and at much drive."""

from __future__ import annotations

from numpy import sqrt

from opto_ckt.constants import ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


@source("T. P. Pearsall, Photonics Essentials, Ex. 6.6")
def recombination_rate(*, coefficient: Real, doping: Real, nonradiative: Real) -> Real:
    r"""Rate at which carriers vanish in a doped layer, few carriers being injected.

    .. math:: \frac{1}{\tau} = B n + \frac{1}{\tau_{nr}}

    Parameters
    ----------
    coefficient : B. [m³/s]
    doping : n. [1/m³]
    nonradiative : τ_nr. [s]

    Returns
    -------
    1/τ. [1/s]

    Notes
    -----
    The same book takes 1/(πτ) as bandwidth, a third convention beside those of `led.electrical_bandwidth` and
    `led.optical_bandwidth`.

    Examples
    --------
    >>> print(f"{recombination_rate(coefficient=8e-17, doping=5e24, nonradiative=2e-9):.2e}")
    9.00e+08
    """
    return coefficient * doping + 1 / nonradiative


@source("T. P. Pearsall, Photonics Essentials, ch. 6; no worked example at hand")
def driven_recombination_rate(*, coefficient: Real, current_density: Real, thickness: Real) -> Real:
    r"""Rate at which carriers vanish where far more of them are injected than the doping gives.

    .. math:: \frac{1}{\tau} = \sqrt{\frac{B J}{3 q d}}

    Parameters
    ----------
    coefficient : B. [m³/s]
    current_density : J through the layer. [A/m²]
    thickness : d of the layer. [m]

    Returns
    -------
    1/τ. [1/s]

    Notes
    -----
    Speed grows as the root of the drive. The 3 is the book's; J = q d B n² with 1/τ = B n has none and is √3 quicker.

    Examples
    --------
    >>> rate = driven_recombination_rate(coefficient=1e-16, current_density=1e7, thickness=0.2e-6)
    >>> print(f"{1 / rate * 1e9:.2f} ns")
    9.80 ns
    """
    return sqrt(coefficient * current_density / (3 * ELEMENTARY_CHARGE * thickness))
