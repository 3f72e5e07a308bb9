"""Avalanche photodiode: gain, excess noise and the gain that serves best."""

from __future__ import annotations

from numpy import sqrt

from opto_ckt.constants import BOLTZMANN, ELEMENTARY_CHARGE
from opto_ckt.formulas.formula import Real, source


@source("R. J. McIntyre 1966, form as in D. K. Mynbaev & L. L. Scheiner, Ex. 11.3.3")
def excess_noise_factor(*, gain: Real, ionisation_ratio: Real) -> Real:
    r"""Excess noise factor of a multiplied current.

    .. math:: F = k M + (1 - k)(2 - 1/M)

    Parameters
    ----------
    gain : M, mean avalanche gain. [1]
    ionisation_ratio : k, of the slower to the faster carrier, 0 to 1. [1]

    Returns
    -------
    F. [1]

    Notes
    -----
    Uniform field, the faster carrier injected; from memory k is 0.02 to 0.05 for Si, 0.4 to 0.7 for InGaAs.

    Examples
    --------
    >>> print(f"{excess_noise_factor(gain=20.0, ionisation_ratio=0.03):.2f}")
    2.49
    """
    return ionisation_ratio * gain + (1 - ionisation_ratio) * (2 - 1 / gain)


@source("empirical; J. M. Senior, Optical Fiber Communications, Ex. 9.6 with x = 0.3 for silicon")
def excess_noise_power_law(*, gain: Real, exponent: Real) -> Real:
    r"""Excess noise factor by the power law.

    .. math:: F = M^x

    Parameters
    ----------
    gain : M. [1]
    exponent : x, about 0.3 Si, 0.7 InGaAs, 1 Ge. [1]

    Returns
    -------
    F. [1]

    Notes
    -----
    Around the gain at which x was found.
    """
    return gain**exponent


@source("derived: shot noise of the primary current multiplied, and of the surface leakage not")
def multiplied_shot_noise(*, primary_current: Real, surface_current: Real, gain: Real, excess_noise: Real) -> Real:
    r"""Shot noise density behind an avalanche.

    .. math:: \sqrt{2 q I M^2 F + 2 q I_s}

    Parameters
    ----------
    primary_current : I, photocurrent and bulk dark current before the gain. [A]
    surface_current : I_s, leakage that is not multiplied. [A]
    gain : M. [1]
    excess_noise : F. [1]

    Returns
    -------
    Density at the output of the diode. [A/√Hz]

    Notes
    -----
    Below the gain-bandwidth limit of the diode.
    """
    return sqrt(2 * ELEMENTARY_CHARGE * (primary_current * gain**2 * excess_noise + surface_current))


@source("definition; J. M. Senior, Optical Fiber Communications, Ex. 8.7")
def avalanche_gain(*, current: Real, responsivity: Real, power: Real) -> Real:
    r"""Gain from the current at a known power.

    .. math:: M = I/(R P)

    Parameters
    ----------
    current : I, multiplied photocurrent. [A]
    responsivity : R without gain. [A/W]
    power : P. [W]

    Returns
    -------
    M. [1]

    Notes
    -----
    Dark current taken off beforehand.
    """
    return current / (responsivity * power)


@source("G. P. Agrawal, Fiber-Optic Communication Systems, 4.5, from memory; the minimum verified numerically")
def optimum_gain(*, thermal_noise: Real, quality: Real, bandwidth: Real, ionisation_ratio: Real) -> Real:
    r"""Gain that needs the least optical power for a wanted error ratio.

    .. math:: M = \sqrt{\frac{\sigma_T/(q Q B) + k - 1}{k}}

    Parameters
    ----------
    thermal_noise : σ_T, rms current of everything but the shot noise. [A]
    quality : Q of the decision, 7.03 for an error ratio of 1e-12. [1]
    bandwidth : B of the noise. [Hz]
    ionisation_ratio : k above 0. [1]

    Returns
    -------
    M. [1]

    Notes
    -----
    No dark current, dark zeros; with either the best gain is lower.
    """
    return sqrt((thermal_noise / (ELEMENTARY_CHARGE * quality * bandwidth) + ionisation_ratio - 1) / ionisation_ratio)


@source("derived: least of 2q I M^x + i²/M²; J. M. Senior, Optical Fiber Communications, Ex. 9.6, with 4kT F_n/R_L")
def optimum_gain_in_noise(*, current_noise: Real, current: Real, exponent: Real) -> Real:
    r"""Gain at which the signal stands highest above the noise of any amplifier.

    .. math:: M = \left(\frac{i^2}{x q I}\right)^{1/(2 + x)}

    Parameters
    ----------
    current_noise : i of all that follows the detector, referred to its current. [A/√Hz]
    current : I, primary photocurrent and multiplied dark current. [A]
    exponent : x of the excess noise F = M^x. [1]

    Returns
    -------
    M. [1]

    Notes
    -----
    Below 1 the diode is better without its gain.

    Examples
    --------
    >>> gain = optimum_gain_in_noise(current_noise=1e-12, current=1e-8, exponent=0.3)
    >>> print(f"{gain:.1f}")
    27.7
    """
    return (current_noise**2 / (exponent * ELEMENTARY_CHARGE * current)) ** (1 / (2 + exponent))


@source("J. M. Senior, Optical Fiber Communications, Ex. 9.6: best signal-to-noise ratio into a load resistor")
def optimum_gain_into_load(
    *, temperature: Real, noise_factor: Real, load_resistance: Real, current: Real, exponent: Real
) -> Real:
    r"""Gain at which the signal stands highest above the noise of a load resistor and its amplifier.

    .. math:: M = \left(\frac{4 k T F_n}{x q R_L I}\right)^{1/(2 + x)}

    Parameters
    ----------
    temperature : T. [K]
    noise_factor : F_n of the amplifier, a power ratio. [1]
    load_resistance : R_L. [Ω]
    current : I, primary photocurrent and multiplied dark current. [A]
    exponent : x of the excess noise F = M^x. [1]

    Returns
    -------
    M. [1]

    Notes
    -----
    White noise only.
    """
    shot = exponent * ELEMENTARY_CHARGE * load_resistance * current
    return (4 * BOLTZMANN * temperature * noise_factor / shot) ** (1 / (2 + exponent))
