"""A saturated transistor as the switch of a source: its base drive, its charge, the network that speeds the light."""

from __future__ import annotations

from numpy import log

from opto_ckt.formulas.formula import Real, source


@source("charge control of a saturated bipolar transistor, from memory")
def storage_delay(*, time_constant: Real, drive: Real, removal: Real, edge: Real) -> Real:
    r"""Time that a saturated transistor goes on conducting after its base drive has gone.

    .. math:: t_s = \tau_s \ln\frac{I_{B1} + I_{B2}}{I_{BS} + I_{B2}}

    Parameters
    ----------
    time_constant : τ_s. [s]
    drive : I_B1 while it was on. [A]
    removal : I_B2 drawn out of the base. [A]
    edge : I_BS that would just saturate it, I_C/h_FE. [A]

    Returns
    -------
    t_s. [s]

    Notes
    -----
    Saturated, I_B1 above I_BS.
    """
    return time_constant * log((drive + removal) / (edge + removal))


@source("derived: the charge of a capacitance at a steady current")
def charging_delay(*, capacitance: Real, forward_voltage: Real, resting_voltage: Real, current: Real) -> Real:
    r"""Time that the drive takes to charge the junction before any light comes; a pre-bias shortens it.

    .. math:: t_d = \frac{C_j (V_F - V_{pre})}{I}

    Parameters
    ----------
    capacitance : C_j. [F]
    forward_voltage : V_F, lit. [V]
    resting_voltage : V_pre over the LED while off, 0 without a pre-bias. [V]
    current : I of the drive. [A]

    Returns
    -------
    t_d. [s]

    Notes
    -----
    Long where the drive falls as the LED's voltage rises: I is that of the lit LED.

    Examples
    --------
    >>> delay = charging_delay(capacitance=60e-12, forward_voltage=1.6, resting_voltage=0.0, current=40e-3)
    >>> print(f"{delay * 1e9:.1f} ns")
    2.4 ns
    """
    return capacitance * (forward_voltage - resting_voltage) / current


@source("the charge that the base holds, from memory: C ΔV ≥ I_B τ_s")
def storage_capacitance(*, base_current: Real, time_constant: Real, swing: Real) -> Real:
    r"""Speed-up capacitor across the base resistor that carries the stored charge away.

    .. math:: C = \frac{I_B \tau_s}{\Delta V}

    Parameters
    ----------
    base_current : I_B. [A]
    time_constant : τ_s. [s]
    swing : ΔV over the base resistor while on. [V]

    Returns
    -------
    C. [F]

    Notes
    -----
    It must recover before the next edge: `recovery_frequency`.
    """
    return base_current * time_constant / swing


@source("D. A. Bell, Solid State Pulse Circuits, Ex. 4.4: a tenth lost in the turn-on time")
def generous_speed_up(*, turn_on: Real, source_resistance: Real) -> Real:
    r"""Speed-up capacitor that loses a tenth of its push while the transistor turns on.

    .. math:: C = \frac{t_{on}}{0.1 R_s}

    Parameters
    ----------
    turn_on : t_on. [s]
    source_resistance : R_s that drives the base resistor. [Ω]

    Returns
    -------
    C. [F]

    Notes
    -----
    Ten times `lean_speed_up`: two printed rules for the same part.

    Examples
    --------
    >>> print(f"{generous_speed_up(turn_on=70e-9, source_resistance=600.0) * 1e12:.0f} pF")
    1167 pF
    """
    return turn_on / (0.1 * source_resistance)


@source("D. A. Bell, Electronic Devices and Circuits, Ex. 8.8: one time constant")
def lean_speed_up(*, turn_on: Real, source_resistance: Real) -> Real:
    r"""Speed-up capacitor that charges by one time constant while the transistor turns on.

    .. math:: C = \frac{t_{on}}{R_s}

    Parameters
    ----------
    turn_on : t_on. [s]
    source_resistance : R_s that drives the base resistor. [Ω]

    Returns
    -------
    C. [F]

    Notes
    -----
    A tenth of `generous_speed_up`.

    Examples
    --------
    >>> print(f"{lean_speed_up(turn_on=100e-9, source_resistance=600.0) * 1e12:.0f} pF")
    167 pF
    """
    return turn_on / source_resistance


@source("D. A. Bell, Solid State Pulse Circuits, Ex. 4.4: nine tenths recovered in each half period")
def recovery_frequency(*, base_resistance: Real, capacitance: Real) -> Real:
    r"""Frequency up to which a speed-up capacitor recovers through its base resistor.

    .. math:: f = \frac{1}{2 \cdot 2.3\, R_B C}

    Parameters
    ----------
    base_resistance : R_B. [Ω]
    capacitance : C. [F]

    Returns
    -------
    f. [Hz]

    Notes
    -----
    2.3 = ln 10.

    Examples
    --------
    >>> print(f"{recovery_frequency(base_resistance=5.6e3, capacitance=1166.667e-12) / 1e3:.1f} kHz")
    33.3 kHz
    """
    return 1 / (2 * 2.3 * base_resistance * capacitance)


@source("D. A. Bell, Electronic Devices and Circuits, Ex. 8.8: five time constants a period")
def settled_frequency(*, source_resistance: Real, base_resistance: Real, capacitance: Real) -> Real:
    r"""Frequency up to which a speed-up capacitor settles in every period.

    .. math:: f = \frac{1}{5 C (R_s + R_B)}

    Parameters
    ----------
    source_resistance : R_s. [Ω]
    base_resistance : R_B. [Ω]
    capacitance : C. [F]

    Returns
    -------
    f. [Hz]

    Notes
    -----
    Counts the source's resistance in, unlike `recovery_frequency`.

    Examples
    --------
    >>> f = settled_frequency(source_resistance=600.0, base_resistance=4.7e3, capacitance=160e-12)
    >>> print(f"{f / 1e3:.1f} kHz")
    235.8 kHz
    """
    return 1 / (5 * capacitance * (source_resistance + base_resistance))


@source("derived: zero of the network on the pole of the LED; a frequency sweep agrees")
def peaking_capacitance(*, lifetime: Real, bypassed: Real) -> Real:
    r"""Capacitor across a part of the series resistance whose zero lies on the pole of the LED.

    .. math:: C = \tau/R_b

    Parameters
    ----------
    lifetime : τ. [s]
    bypassed : R_b that it lies across. [Ω]

    Returns
    -------
    C. [F]

    Notes
    -----
    The bandwidth grows by (R_a + R_b)/R_a, see `peaked_share`, and so does the first current of a step.

    Examples
    --------
    >>> print(f"{peaking_capacitance(lifetime=5e-9, bypassed=30.0) * 1e12:.1f} pF")
    166.7 pF
    """
    return lifetime / bypassed


@source("derived: (R_a + R_b)/R_a is the gain in bandwidth")
def peaked_share(*, resistance: Real, gain: Real) -> Real:
    r"""Part of the resistance in the LED's way that is bypassed for a gain in bandwidth.

    .. math:: R_b = R \left(1 - \frac{1}{k}\right)

    Parameters
    ----------
    resistance : R = R_a + R_b, that of switch and LED in it. [Ω]
    gain : k, bandwidth with over without; also the first current of a step over the last. [1]

    Returns
    -------
    R_b. [Ω]

    Notes
    -----
    k above 1; R_a = R/k cannot be less than switch and LED have themselves.

    Examples
    --------
    >>> print(f"{peaked_share(resistance=45.0, gain=3.0):.1f} Ω")
    30.0 Ω
    """
    return resistance * (1 - 1 / gain)


@source("from memory: carriers swept out by a reverse current")
def sweep_out_time(*, lifetime: Real, current: Real, sweep_current: Real) -> Real:
    r"""Time in which a current drawn out of an LED empties its junction.

    .. math:: t = \tau \ln\left(1 + \frac{I_F}{I_R}\right)

    Parameters
    ----------
    lifetime : τ. [s]
    current : I_F before. [A]
    sweep_current : I_R drawn out. [A]

    Returns
    -------
    t. [s]

    Notes
    -----
    Without any, the light dies with the lifetime.
    """
    return lifetime * log(1 + current / sweep_current)


@source("Kolimbiris, Fiber Optics Communications, Ex. 6.5: the network of a maker's logic-gate driver")
def gate_network_resistance(*, supply: Real, forward_voltage: Real, current: Real) -> Real:
    r"""Resistance R_Y from which a published pre-biased, peaked logic-gate network is built.

    .. math:: R_Y = \frac{V_{CC} - V_F}{I_F} + 3.2\,\frac{V_{CC} - V_F - 1.4}{I_F}

    Parameters
    ----------
    supply : V_CC. [V]
    forward_voltage : V_F. [V]
    current : I_F while lit. [A]

    Returns
    -------
    R_Y; then R_0 = (R_Y - 32)/3.2, R_1 = (R_0 + 10)/2, R_2 = R_1 - 10, C_1 = 2 ns/R_1, with the LED's 10 Ω. [Ω]

    Notes
    -----
    One family of gates and LEDs; kept as a published figure, nothing here is sized by it.

    Examples
    --------
    >>> print(f"{gate_network_resistance(supply=5.0, forward_voltage=2.0, current=120e-3) + 1e-9:.2f} Ω")
    67.67 Ω
    """
    return (supply - forward_voltage) / current + 3.2 * (supply - forward_voltage - 1.4) / current
