"""Gain behind a transimpedance stage: how much is left for it, and what it costs in bandwidth."""

from __future__ import annotations

from opto_ckt.formulas.formula import Real, source


@source("definition: the gains of stages in a row multiply")
def gain_for_transimpedance(*, transimpedance: Real, first: Real) -> Real:
    r"""Voltage gain that a second stage has to add.

    .. math:: G = Z_t/Z_1

    Parameters
    ----------
    transimpedance : Z_t wanted of both stages. [Ω]
    first : Z_1 of the first. [Ω]

    Returns
    -------
    G. [V/V]

    Notes
    -----
    No load between the stages. All gain in the first stage is quieter (Analog Devices, MS-2624); the second one
    buys bandwidth.
    """
    return transimpedance / first


@source("ideal non-inverting amplifier")
def upper_feedback_resistance(*, gain: Real, lower: Real) -> Real:
    r"""Resistance from the output to the inverting input of a non-inverting amplifier.

    .. math:: R = (G - 1) R_l

    Parameters
    ----------
    gain : G. [V/V]
    lower : R_l, inverting input to ground. [Ω]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    Open-loop gain far above G.
    """
    return (gain - 1) * lower


@source("gain-bandwidth product of a single-pole op amp")
def second_stage_bandwidth(*, gain_bandwidth: Real, transimpedance: Real, first: Real) -> Real:
    r"""Bandwidth of a second stage that adds what the first leaves of a transimpedance.

    .. math:: f_2 = GBW\, Z_1/Z_t

    Parameters
    ----------
    gain_bandwidth : GBW of the second op amp. [Hz]
    transimpedance : Z_t wanted of both stages. [Ω]
    first : Z_1 of the first. [Ω]

    Returns
    -------
    f_2. [Hz]

    Notes
    -----
    Non-inverting, one pole.
    """
    return gain_bandwidth * first / transimpedance
