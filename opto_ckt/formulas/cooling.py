"""A laser's case held at a temperature: what a cooler moves, and where the wavelength goes."""

from __future__ import annotations

from opto_ckt.formulas.formula import Real, source


@source("derived: heat in equals heat out at a case of constant temperature; thermal Ohm's law")
def cooler_load(*, power: Real, air_temperature: Real, case_temperature: Real, case_to_air: Real) -> Real:
    r"""Heat that a cooler has to move out of a case.

    .. math:: Q = P + \frac{T_a - T_c}{R}

    Parameters
    ----------
    power : P, heat of the laser, light that leaves taken off. [W]
    air_temperature : T_a around the case. [K]
    case_temperature : T_c, held. [K]
    case_to_air : R past the cooler: wires, fibre, still air. [K/W]

    Returns
    -------
    Q; negative: the case has to be warmed. [W]

    Notes
    -----
    Steady state; what the cooler itself turns into heat leaves on its warm side, on top of Q.

    Examples
    --------
    >>> load = cooler_load(power=40e-3, air_temperature=333.15, case_temperature=298.15, case_to_air=100.0)
    >>> print(f"{load * 1e3:.0f} mW")
    390 mW
    """
    return power + (air_temperature - case_temperature) / case_to_air


@source("common practice: a straight line; J. M. Jassim et al. and makers' sheets state its slope")
def wavelength_shift(*, coefficient: Real, junction_temperature: Real, reference_temperature: Real) -> Real:
    r"""How far the wavelength of a source moves as its junction warms.

    .. math:: \Delta\lambda = \frac{d\lambda}{dT} (T - T_r)

    Parameters
    ----------
    coefficient : dλ/dT. [m/K]
    junction_temperature : T. [K]
    reference_temperature : T_r, at which the sheet states the wavelength. [K]

    Returns
    -------
    Δλ. [m]

    Notes
    -----
    Jumps from mode to mode apart.

    Examples
    --------
    >>> shift = wavelength_shift(coefficient=0.1e-9, junction_temperature=348.15, reference_temperature=298.15)
    >>> print(f"{shift * 1e9:.1f} nm")
    5.0 nm
    """
    return coefficient * (junction_temperature - reference_temperature)
