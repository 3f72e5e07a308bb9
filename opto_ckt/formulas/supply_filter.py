"""Filter in a supply: inductor, capacitor, and a resistor across the inductor that damps them."""

from __future__ import annotations

from numpy import pi, sqrt

from opto_ckt.formulas.formula import Real, source


@source("definition: resonance of L and C")
def filter_corner(*, inductance: Real, capacitance: Real) -> Real:
    r"""Frequency above which a supply filter holds ripple back.

    .. math:: f_0 = \frac{1}{2\pi\sqrt{L C}}

    Parameters
    ----------
    inductance : L in series. [H]
    capacitance : C across what is supplied. [F]

    Returns
    -------
    f_0. [Hz]

    Notes
    -----
    Source of low impedance; light load.

    Examples
    --------
    >>> print(f"{filter_corner(inductance=10e-6, capacitance=10e-6) / 1e3:.1f} kHz")
    15.9 kHz
    """
    return 1 / (2 * pi * sqrt(inductance * capacitance))


@source("derived: denominator 1 + s L/R + s² L C")
def damping_resistance(*, inductance: Real, capacitance: Real, damping: Real) -> Real:
    r"""Largest resistance across the inductor of a supply filter that damps it.

    .. math:: R = \frac{1}{2\zeta}\sqrt{\frac{L}{C}}

    Parameters
    ----------
    inductance : L, the least. [H]
    capacitance : C, the most. [F]
    damping : ζ; 0.7 leaves hardly any overshoot. [1]

    Returns
    -------
    R across L. [Ω]

    Notes
    -----
    Winding resistance and load damp further. Above R/(2πL) the filter falls with one pole only.

    Examples
    --------
    >>> print(f"{damping_resistance(inductance=10e-6, capacitance=10e-6, damping=0.7):.3f} Ω")
    0.714 Ω
    """
    return sqrt(inductance / capacitance) / (2 * damping)
