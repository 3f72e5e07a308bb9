"""Leakage of a diode over temperature: dark current, shunt resistance."""

from __future__ import annotations

from numpy import log

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


@source("common practice of data sheets: a doubling per fixed step of temperature")
def dark_current(*, dark_current: Real, temperature: Real, reference_temperature: Real, doubling: Real) -> Real:
    r"""Dark current at a temperature; the bias current of a FET input follows the same law.

    .. math:: I_d(T) = I_d(T_0)\, 2^{(T - T_0)/\Delta T}

    Parameters
    ----------
    dark_current : I_d at T_0. [A]
    temperature : T. [K]
    reference_temperature : T_0. [K]
    doubling : ΔT, rise of temperature that doubles it. [K]

    Returns
    -------
    I_d at T. [A]

    Notes
    -----
    Some tens of kelvin around T_0.
    """
    return dark_current * 2.0 ** ((temperature - reference_temperature) / doubling)


@source("Analog Devices, AD795 p. 13, AD549 p. 15: the shunt resistance halves where the dark current doubles")
def shunt_resistance(*, shunt_resistance: Real, temperature: Real, reference_temperature: Real, halving: Real) -> Real:
    r"""Shunt resistance of a diode at a temperature.

    .. math:: R_{sh}(T) = R_{sh}(T_0)\, 2^{-(T - T_0)/\Delta T}

    Parameters
    ----------
    shunt_resistance : R_sh at T_0. [Ω]
    temperature : T. [K]
    reference_temperature : T_0. [K]
    halving : ΔT, rise of temperature that halves it. [K]

    Returns
    -------
    R_sh at T. [Ω]

    Notes
    -----
    Some tens of kelvin around T_0.
    """
    return shunt_resistance * 2.0 ** ((reference_temperature - temperature) / halving)


@source("derived: slope of I_0 (exp(qV/(nkT)) - 1) at no voltage")
def unbiased_shunt(*, saturation_current: Real, emission: Real, temperature: Real) -> Real:
    r"""Resistance that a junction itself is at no bias.

    .. math:: R_{sh} = \frac{n k T}{q I_0}

    Parameters
    ----------
    saturation_current : I_0 of the junction, without surface leakage. [A]
    emission : n, 1 for diffusion and 2 for generation. [1]
    temperature : T. [K]

    Returns
    -------
    R_sh; beside it lies what leaks along the surface. [Ω]

    Notes
    -----
    Within some millivolts of zero; I_0 at the temperature.

    Examples
    --------
    >>> print(f"{unbiased_shunt(saturation_current=25.7e-12, emission=1.0, temperature=298.15) / 1e9:.2f} GΩ")
    1.00 GΩ
    """
    return emission * BOLTZMANN * temperature / (ELEMENTARY_CHARGE * saturation_current)


@source("derived: dark current ∝ exp(-E_g/(2kT)), generation in the depleted layer")
def generation_doubling(*, band_gap: Real, temperature: Real) -> Real:
    r"""Rise of temperature that doubles the dark current of a reverse-biased diode.

    .. math:: \Delta T = 2 k T^2 \ln 2/E_g

    Parameters
    ----------
    band_gap : E_g. [J]
    temperature : T. [K]

    Returns
    -------
    ΔT. [K]

    Notes
    -----
    No surface leakage; for silicon it is the usual 10 K.

    Examples
    --------
    >>> from opto_ckt.constants import ELEMENTARY_CHARGE
    >>> print(f"{generation_doubling(band_gap=1.12 * ELEMENTARY_CHARGE, temperature=300.0):.1f} K")
    9.6 K
    """
    doubling: Real = 2 * BOLTZMANN * temperature**2 * log(2.0) / band_gap
    return doubling


@source("derived: dark current ∝ exp(-E_g/(kT)), diffusion")
def diffusion_doubling(*, band_gap: Real, temperature: Real) -> Real:
    r"""Rise of temperature that doubles the dark current, and halves the shunt resistance, near zero bias.

    .. math:: \Delta T = k T^2 \ln 2/E_g

    Parameters
    ----------
    band_gap : E_g. [J]
    temperature : T. [K]

    Returns
    -------
    ΔT. [K]

    Notes
    -----
    No surface leakage; half of `generation_doubling`.
    """
    doubling: Real = BOLTZMANN * temperature**2 * log(2.0) / band_gap
    return doubling
