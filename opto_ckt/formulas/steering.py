"""A laser whose current is steered on and off: its bias, the coupling network, lead inductance and headroom."""

from __future__ import annotations

from numpy import exp, log, sqrt

from opto_ckt.formulas.formula import Real, source


@source("derived: the zero level lies P_0/η above the threshold; Maxim, HFAN-2.2.0, warns of mark densities")
def direct_bias(*, threshold: Real, zero_power: Real, slope: Real) -> Real:
    r"""Bias of a laser that is driven without a coupling capacitor.

    .. math:: I_B = I_{th} + P_0/\eta

    Parameters
    ----------
    threshold : I_th at the junction's temperature. [A]
    zero_power : P_0. [W]
    slope : η there. [W/A]

    Returns
    -------
    I_B, to which the modulation adds. [A]

    Notes
    -----
    Above threshold.
    """
    return threshold + zero_power / slope


@source("derived: the average current flows through the bias, the modulation goes either way about it")
def coupled_bias(*, threshold: Real, average_power: Real, slope: Real) -> Real:
    r"""Bias of a laser that is driven through a coupling capacitor.

    .. math:: I_B = I_{th} + P_{av}/\eta

    Parameters
    ----------
    threshold : I_th at the junction's temperature. [A]
    average_power : P_av. [W]
    slope : η there. [W/A]

    Returns
    -------
    I_B: half the modulation more than `direct_bias` at a mark density of one half. [A]

    Notes
    -----
    Above threshold.
    """
    return threshold + average_power / slope


@source("derived: one pole; Maxim, MAX3869 data sheet p. 10, has the time constant of 7.8 runs for 12 %")
def bias_inductance(*, resistance: Real, duration: Real, droop: Real) -> Real:
    r"""Inductance that feeds the bias and lets a run of equal bits droop by a wanted share.

    .. math:: L = \frac{R\,t}{-\ln(1 - d)}

    Parameters
    ----------
    resistance : R, laser and damping resistor. [Ω]
    duration : t of the longest run. [s]
    droop : d of the level's distance from the average: half of that, peak to peak. [1]

    Returns
    -------
    L. [H]

    Notes
    -----
    The coupling capacitor droops as well: see `coupling_for_no_ringing` and `coupled_droop`.

    Examples
    --------
    >>> print(f"{bias_inductance(resistance=25.0, duration=40e-9, droop=0.12) * 1e6:.2f} µH")
    7.82 µH
    """
    return resistance * duration / -log(1 - droop)


@source("derived: damping of 1 of s²LC/(s²LC + sRC + 1); Maxim, MAX3869 data sheet p. 10, rounds it up")
def coupling_for_no_ringing(*, inductance: Real, resistance: Real) -> Real:
    r"""Least coupling capacitor that does not ring with the bias inductor.

    .. math:: C = \frac{4 L}{R^2}

    Parameters
    ----------
    inductance : L that feeds the bias. [H]
    resistance : R, laser and damping resistor. [Ω]

    Returns
    -------
    C. [F]

    Notes
    -----
    Inductor and capacitor are one network: neither is chosen alone.

    Examples
    --------
    >>> print(f"{coupling_for_no_ringing(inductance=7.8e-6, resistance=25.0) * 1e9:.0f} nF")
    50 nF
    """
    return 4 * inductance / resistance**2


@source("derived: step response of s²LC/(s²LC + sRC + 1), two real poles; ngspice agrees")
def coupled_droop(*, inductance: Real, coupling_capacitance: Real, resistance: Real, duration: Real) -> Real:
    r"""Droop of a run of equal bits through coupling capacitor and bias inductor together.

    .. math:: d = 1 - \frac{p_1 e^{-p_1 t} - p_2 e^{-p_2 t}}{p_1 - p_2},
        \quad p_{1,2} = \frac{R}{2L}\left(1 \pm \sqrt{1 - \frac{4L}{R^2 C}}\right)

    Parameters
    ----------
    inductance : L that feeds the bias. [H]
    coupling_capacitance : C, above `coupling_for_no_ringing`. [F]
    resistance : R, laser and damping resistor. [Ω]
    duration : t of the longest run. [s]

    Returns
    -------
    d of the level's distance from the average. [1]

    Notes
    -----
    Two real poles.

    Examples
    --------
    >>> values = {"inductance": 7.8e-6, "coupling_capacitance": 56e-9, "resistance": 25.0}
    >>> droop = coupled_droop(**values, duration=40e-9)
    >>> print(f"{droop * 100:.1f} %")
    12.2 %
    """
    middle = resistance / (2 * inductance)
    apart = middle * sqrt(1 - 4 * inductance / (resistance**2 * coupling_capacitance))
    quick, slow = middle + apart, middle - apart
    return 1 - (quick * exp(-quick * duration) - slow * exp(-slow * duration)) / (quick - slow)


@source("current division; Microchip, SY84782U application note, section 7.2")
def pull_up_share(*, pull_up: Real, load: Real) -> Real:
    r"""Share of the modulation that reaches a laser beside a pull-up.

    .. math:: s = \frac{R_p}{R_p + R_L}

    Parameters
    ----------
    pull_up : R_p, its impedance at the frequencies of the signal. [Ω]
    load : R_L, damping resistor and laser. [Ω]

    Returns
    -------
    s. [1]

    Notes
    -----
    Capacitances apart.

    Examples
    --------
    >>> print(f"{pull_up_share(pull_up=50.0, load=25.0):.4f}")
    0.6667
    """
    return pull_up / (pull_up + load)


@source("V = L dI/dt; Microchip, SY84782U application note, section 7.1")
def lead_voltage(*, inductance: Real, swing: Real, edge: Real) -> Real:
    r"""Voltage that an edge leaves across the leads of a laser.

    .. math:: V = L\,\frac{\Delta I}{t}

    Parameters
    ----------
    inductance : L of the leads. [H]
    swing : ΔI in the time t: six tenths of the modulation from 20 % to 80 %. [A]
    edge : t. [s]

    Returns
    -------
    V. [V]

    Notes
    -----
    A straight edge.

    Examples
    --------
    >>> print(f"{lead_voltage(inductance=1e-9, swing=42e-3, edge=80e-12):.3f} V")
    0.525 V
    """
    return inductance * swing / edge


@source("voltages around the loop; Microchip, SY84782U application note, section 7.1")
def largest_damping(*, supply: Real, laser: Real, driver: Real, modulation: Real) -> Real:
    r"""Largest damping resistor that leaves the driver the voltage that it needs.

    .. math:: R = \frac{V_{CC} - V_{LD} - V_{drv}}{I_{mod}}

    Parameters
    ----------
    supply : V_CC at its least. [V]
    laser : V_LD at the one level, at its most. [V]
    driver : V_drv that the steering stage needs. [V]
    modulation : I_mod. [A]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    Direct coupling; `lead_voltage` comes off the supply besides.

    Examples
    --------
    >>> print(f"{largest_damping(supply=3.0, laser=1.6, driver=0.6, modulation=70e-3):.1f} Ω")
    11.4 Ω
    """
    return (supply - laser - driver) / modulation
