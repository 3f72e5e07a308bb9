"""What the sheet of a bought transimpedance amplifier states, turned into what a network needs."""

from __future__ import annotations

from numpy import pi, sqrt

from opto_ckt.formulas.formula import Real, source


@source("derived: white noise over two poles with Q = 1/√2, noise bandwidth π/(2√2) f")
def density_from_rms(*, noise: Real, bandwidth: Real) -> Real:
    r"""Noise current density from an rms current stated for the amplifier's own band.

    .. math:: i = I \Big/ \sqrt{\frac{\pi}{2\sqrt 2} f}

    Parameters
    ----------
    noise : I, rms at the input. [A]
    bandwidth : f, half power. [Hz]

    Returns
    -------
    i. [A/√Hz]

    Notes
    -----
    White; two poles, maximally flat.
    """
    density: Real = noise / sqrt(pi / (2 * sqrt(2.0)) * bandwidth)
    return density


@source("definition: ones less zeros over the average, marks and spaces equally many")
def peak_to_peak_factor(*, extinction_ratio: Real) -> Real:
    r"""Swing of the power over its average.

    .. math:: 2 \frac{r - 1}{r + 1}

    Parameters
    ----------
    extinction_ratio : r = P_1/P_0. [W/W]

    Returns
    -------
    Peak to peak over average. [W/W]

    Notes
    -----
    Mark density 1/2.
    """
    return 2 * (extinction_ratio - 1) / (extinction_ratio + 1)
