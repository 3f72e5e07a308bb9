"""Speed of a detector: depletion, transit of carriers, capacitance against load, and how bandwidths combine."""

from __future__ import annotations

from numpy import exp, log, pi, sqrt

from opto_ckt.constants import ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


@source("J. Wilson & J. F. B. Hawkes, Optoelectronics, Ex. 7.6 with the built-in voltage left out")
def depletion_width(*, permittivity: Real, voltage: Real, doping: Real) -> Real:
    r"""Width of the depleted layer of a one-sided abrupt junction.

    .. math:: W = \sqrt{2 \epsilon V/(q N_d)}

    Parameters
    ----------
    permittivity : ε of the material. [F/m]
    voltage : V, reverse bias plus built-in voltage. [V]
    doping : N_d of the lightly doped side. [1/m³]

    Returns
    -------
    W. [m]

    Notes
    -----
    W below the thickness of the layer.
    """
    return sqrt(2 * permittivity * voltage / (ELEMENTARY_CHARGE * doping))


@source("parallel plates; J. M. Senior, Optical Fiber Communications, Ex. 8.4")
def depleted_capacitance(*, permittivity: Real, area: Real, width: Real) -> Real:
    r"""Capacitance of a fully depleted layer.

    .. math:: C = \epsilon A/W

    Parameters
    ----------
    permittivity : ε of the material. [F/m]
    area : A. [m²]
    width : W of the layer. [m]

    Returns
    -------
    C, without the package. [F]

    Notes
    -----
    W small beside the size of A; no change with bias.
    """
    return permittivity * area / width


@source("absorption along the path of the light; J. Wilson & J. F. B. Hawkes, Optoelectronics, Ex. 7.6")
def absorbed_share(*, absorption: Real, width: Real) -> Real:
    r"""Share of the light entering a layer that is absorbed in it.

    .. math:: f = 1 - e^{-\alpha W}

    Parameters
    ----------
    absorption : α of the material at the wavelength. [1/m]
    width : W of the layer. [m]

    Returns
    -------
    f. [1]

    Notes
    -----
    Light straight through once, no reflection from behind.

    Examples
    --------
    >>> print(f"{absorbed_share(absorption=1e5, width=5.09e-6):.3f}")
    0.399
    """
    share: Real = 1 - exp(-absorption * width)
    return share


@source("definition; J. M. Senior, Optical Fiber Communications, Ex. 8.4")
def transit_time(*, velocity: Real, width: Real) -> Real:
    r"""Time that carriers take across the depleted layer.

    .. math:: t = W/v

    Parameters
    ----------
    velocity : v, drift velocity. [m/s]
    width : W of the depleted layer. [m]

    Returns
    -------
    t, the longest. [s]

    Notes
    -----
    Uniform velocity.

    Examples
    --------
    >>> print(f"{transit_time(velocity=1e5, width=20e-6) * 1e12:.0f} ps")
    200 ps
    """
    return width / velocity


@source("derived: half power of a rectangular pulse of current as long as the transit, sinc(f W/v)")
def transit_frequency(*, velocity: Real, width: Real) -> Real:
    r"""Half-power bandwidth that the transit of the carriers leaves.

    .. math:: f_{tr} = 0.443\, v/W

    Parameters
    ----------
    velocity : v, drift velocity. [m/s]
    width : W of the depleted layer. [m]

    Returns
    -------
    f_tr. [Hz]

    Notes
    -----
    Uniform velocity, carriers from one edge.
    """
    return 0.44294647068945237 * velocity / width


@source("J. M. Senior, Optical Fiber Communications, Ex. 8.5: 2.78 times below the rectangular pulse")
def cautious_transit_frequency(*, velocity: Real, width: Real) -> Real:
    r"""Bandwidth left by the transit of the carriers, taken as a time constant W/v.

    .. math:: f_{tr} = v/(2 \pi W)

    Parameters
    ----------
    velocity : v, drift velocity. [m/s]
    width : W of the depleted layer. [m]

    Returns
    -------
    f_tr. [Hz]

    Notes
    -----
    On the safe side; `transit_frequency` is the half-power point.
    """
    return velocity / (2 * pi * width)


@source("one pole; G. Keiser, Optical Fiber Communications, Ex. 6.7")
def corner_frequency(*, resistance: Real, capacitance: Real) -> Real:
    r"""Half-power frequency of a resistance across a capacitance.

    .. math:: f = \frac{1}{2 \pi R C}

    Parameters
    ----------
    resistance : R. [Ω]
    capacitance : C. [F]

    Returns
    -------
    f. [Hz]

    Notes
    -----
    One pole: load and diode, series resistance and diode, feedback resistor and its own body.

    Examples
    --------
    >>> print(f"{corner_frequency(resistance=50.0, capacitance=7e-12) / 1e6:.0f} MHz")
    455 MHz
    """
    return 1 / (2 * pi * resistance * capacitance)


@source("common practice: squares of the reciprocals add; exact for Gaussian responses only")
def combined_bandwidth(*, first: Real, second: Real) -> Real:
    r"""Bandwidth of two limits in a row.

    .. math:: f = (f_1^{-2} + f_2^{-2})^{-1/2}

    Parameters
    ----------
    first : f_1. [Hz]
    second : f_2. [Hz]

    Returns
    -------
    f. [Hz]

    Notes
    -----
    Within about 10 % for smooth low-passes.
    """
    return (first**-2 + second**-2) ** -0.5


@source("derived: one pole, 10 % to 90 %; usually rounded to 0.35/f")
def rise_time(*, bandwidth: Real) -> Real:
    r"""Rise time, 10 % to 90 %, of one dominant pole.

    .. math:: t_r = \frac{\ln 9}{2 \pi f_{3dB}}

    Parameters
    ----------
    bandwidth : f_3dB. [Hz]

    Returns
    -------
    t_r. [s]

    Notes
    -----
    One pole.

    Examples
    --------
    >>> print(f"{rise_time(bandwidth=1.0):.2f}")
    0.35
    """
    rise: Real = log(9.0) / (2 * pi * bandwidth)
    return rise


@source("derived: one pole, 10 % to 90 %; H. Kolimbiris, Fiber Optics Communications, Ex. 3.3, rounds it to 0.35/t")
def bandwidth_of_rise_time(*, rise_time: Real) -> Real:
    r"""Half-power frequency of one dominant pole from its rise time.

    .. math:: f_{3dB} = \frac{\ln 9}{2 \pi t_r}

    Parameters
    ----------
    rise_time : t_r, 10 % to 90 %. [s]

    Returns
    -------
    f_3dB. [Hz]

    Notes
    -----
    One pole.

    Examples
    --------
    >>> print(f"{bandwidth_of_rise_time(rise_time=10e-9) / 1e6:.0f} MHz")
    35 MHz
    """
    bandwidth: Real = log(9.0) / (2 * pi * rise_time)
    return bandwidth


@source("J. Wilson & J. F. B. Hawkes, Optoelectronics, Ex. 7.8")
def diffusion_time(*, depth: Real, diffusivity: Real) -> Real:
    r"""Time that carriers from undepleted material take to diffuse in: the slow tail of a pulse.

    .. math:: t = x^2/(2 D)

    Parameters
    ----------
    depth : x to the depleted layer. [m]
    diffusivity : D. [m²/s]

    Returns
    -------
    t. [s]

    Notes
    -----
    Minority carriers, no field.
    """
    return depth**2 / (2 * diffusivity)
