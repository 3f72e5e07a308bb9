"""A capacitor discharged once into a diode: peak, width, rise of the current; charging, bleeding, the switch's gate."""

from __future__ import annotations

from numpy import arctan, exp, log, pi, sqrt

from opto_ckt.formulas.formula import Real, source


@source("definition: series resistance, inductance and capacitance")
def damping_ratio(*, resistance: Real, inductance: Real, capacitance: Real) -> Real:
    r"""Damping of a discharge.

    .. math:: \zeta = \frac{R}{2} \sqrt{\frac{C}{L}}

    Parameters
    ----------
    resistance : R of the whole loop, the diode's series resistance in it. [Ω]
    inductance : L of the whole loop. [H]
    capacitance : C. [F]

    Returns
    -------
    ζ; from 1 upward the capacitor does not swing through zero. [1]

    Notes
    -----
    While the diode conducts; its turn-on voltage comes off the voltage and does not damp.
    """
    return resistance / 2 * sqrt(capacitance / inductance)


@source("derived: half a period of an undamped discharge")
def undamped_peak(*, voltage: Real, inductance: Real, capacitance: Real) -> Real:
    r"""Peak current of a discharge without damping, more than any damping leaves of it.

    .. math:: I = U \sqrt{C/L}

    Parameters
    ----------
    voltage : U, of the charged capacitor less the diode's turn-on voltage. [V]
    inductance : L of the whole loop. [H]
    capacitance : C. [F]

    Returns
    -------
    I. [A]

    Notes
    -----
    The switch closes at once.
    """
    return voltage * sqrt(capacitance / inductance)


@source("derived: greatest value of i = U/(ω_d L) e^(-αt) sin ω_d t, α = R/2L, ω_d² = 1/LC - α²; checked by simulation")
def damped_peak(*, voltage: Real, resistance: Real, inductance: Real, capacitance: Real) -> Real:
    r"""Peak current of a damped discharge.

    .. math:: I = U \sqrt{C/L}\; e^{-\alpha t_p}, \quad t_p = \frac{1}{\omega_d} \arctan\frac{\omega_d}{\alpha}

    Parameters
    ----------
    voltage : U, of the charged capacitor less the diode's turn-on voltage. [V]
    resistance : R of the whole loop, the diode's series resistance in it. [Ω]
    inductance : L of the whole loop. [H]
    capacitance : C. [F]

    Returns
    -------
    I at t_p. [A]

    Notes
    -----
    ζ below 1; `opto_ckt.formulas.discharge_shape.peak` holds on either side of it. The switch closes at once.

    Examples
    --------
    >>> peak = damped_peak(voltage=90.0, resistance=1.0, inductance=10e-9, capacitance=4e-9)
    >>> print(f"{peak:.1f} A of {undamped_peak(voltage=90.0, inductance=10e-9, capacitance=4e-9):.1f} A")
    37.5 A of 56.9 A
    """
    damping = resistance / (2 * inductance)
    swing = sqrt(1 / (inductance * capacitance) - damping**2)
    return voltage * sqrt(capacitance / inductance) * exp(-damping / swing * arctan(swing / damping))


@source("derived: sin rises through 1/2 at π/6 and falls through it at 5π/6")
def pulse_width(*, inductance: Real, capacitance: Real) -> Real:
    r"""Width of the current at half its peak, undamped.

    .. math:: t_w = \frac{2\pi}{3} \sqrt{LC}

    Parameters
    ----------
    inductance : L of the whole loop. [H]
    capacitance : C. [F]

    Returns
    -------
    t_w. [s]

    Notes
    -----
    Damping widens the pulse: by 0.3 % at ζ = 0.15, 2.5 % at 0.4, 17 % at 1; exact:
    `opto_ckt.formulas.discharge_shape.width`.

    Examples
    --------
    >>> print(f"{pulse_width(inductance=10e-9, capacitance=4e-9) * 1e9:.1f} ns")
    13.2 ns
    """
    return 2 * pi / 3 * sqrt(inductance * capacitance)


@source("derived: the exact width of a discharge, t_w = k √(LC), turned round")
def storage_capacitance(*, width: Real, inductance: Real, width_ratio: Real) -> Real:
    r"""Capacitance that gives a pulse its width.

    .. math:: C = \frac{1}{L} \left(\frac{t_w}{k}\right)^2

    Parameters
    ----------
    width : t_w at half of the peak. [s]
    inductance : L of the whole loop. [H]
    width_ratio : k = t_w/√(LC) at the damping there is; 2π/3 undamped. [1]

    Returns
    -------
    C. [F]

    Notes
    -----
    `opto_ckt.formulas.discharge_shape.width` gives k.
    """
    return (width / width_ratio) ** 2 / inductance


@source("definition of the damping ratio, turned round")
def loop_resistance(*, damping: Real, inductance: Real, capacitance: Real) -> Real:
    r"""Resistance of the loop at a damping.

    .. math:: R = 2 \zeta \sqrt{L/C}

    Parameters
    ----------
    damping : ζ. [1]
    inductance : L of the whole loop. [H]
    capacitance : C. [F]

    Returns
    -------
    R of the whole loop. [Ω]

    Notes
    -----
    Diode, switch, capacitor and tracks have their share of it.
    """
    return 2 * damping * sqrt(inductance / capacitance)


@source("law of induction; package inductances: PicoLAS application note on laser-diode inductance (2023)")
def inductive_rise_time(*, inductance: Real, current: Real, voltage: Real) -> Real:
    r"""Least time in which a voltage brings a current through an inductance to its peak.

    .. math:: t = \frac{L I}{U}

    Parameters
    ----------
    inductance : L of the whole loop. [H]
    current : I. [A]
    voltage : U across it. [V]

    Returns
    -------
    t from zero to I; a floor, for the voltage falls meanwhile. [s]

    Notes
    -----
    No resistance, a large capacitor.

    Examples
    --------
    >>> print(f"{inductive_rise_time(inductance=11e-9, current=50.0, voltage=100.0) * 1e9:.1f} ns")
    5.5 ns
    """
    return inductance * current / voltage


@source("common practice: five time constants between two pulses")
def charging_resistance(*, capacitance: Real, repetition_rate: Real) -> Real:
    r"""Largest resistance that charges a capacitor anew between two pulses.

    .. math:: R = \frac{1}{5 f C}

    Parameters
    ----------
    capacitance : C. [F]
    repetition_rate : f. [Hz]

    Returns
    -------
    R, to the supply. [Ω]

    Notes
    -----
    Within 0.7 % of the supply, a discharge to nothing before.
    """
    return 1 / (5 * repetition_rate * capacitance)


@source("common practice: five time constants between two pulses")
def repetition_limit(*, capacitance: Real, resistance: Real) -> Real:
    r"""Rate up to which a capacitor is charged anew between two pulses.

    .. math:: f = \frac{1}{5 R C}

    Parameters
    ----------
    capacitance : C. [F]
    resistance : R, to the supply. [Ω]

    Returns
    -------
    f. [Hz]

    Notes
    -----
    Beyond it pulses go on, weaker.
    """
    return 1 / (5 * resistance * capacitance)


@source("derived: charging through a resistor")
def charged_voltage(*, supply: Real, resistance: Real, capacitance: Real, repetition_rate: Real) -> Real:
    r"""Voltage that a capacitor is charged to between two pulses.

    .. math:: V = V_S \left(1 - e^{-1/(f R C)}\right)

    Parameters
    ----------
    supply : V_S, behind the divider of charging and bleed resistors. [V]
    resistance : R, those two side by side. [Ω]
    capacitance : C. [F]
    repetition_rate : f. [Hz]

    Returns
    -------
    V. [V]

    Notes
    -----
    The pulse before left nothing in the capacitor.
    """
    return supply * (1 - exp(-1 / (repetition_rate * resistance * capacitance)))


@source("definition")
def stored_energy(*, capacitance: Real, voltage: Real) -> Real:
    r"""Energy in a capacitor.

    .. math:: E = \tfrac12 C V^2

    Parameters
    ----------
    capacitance : C. [F]
    voltage : V. [V]

    Returns
    -------
    E. [J]

    Notes
    -----
    Class 2 ceramics hold less: their capacitance falls with the voltage.
    """
    return capacitance * voltage**2 / 2


@source("derived: the stored energy, so many times a second")
def average_power(*, capacitance: Real, voltage: Real, repetition_rate: Real) -> Real:
    r"""Average power of a capacitor that is discharged again and again.

    .. math:: P = \tfrac12 f C V^2

    Parameters
    ----------
    capacitance : C. [F]
    voltage : V. [V]
    repetition_rate : f. [Hz]

    Returns
    -------
    P that the discharges take; the charging resistor turns as much into heat. [W]

    Notes
    -----
    Discharged wholly each time.
    """
    return repetition_rate * capacitance * voltage**2 / 2


@source("derived: a capacitor that a resistor discharges")
def discharge_time(*, resistance: Real, capacitance: Real, voltage: Real, safe_voltage: Real) -> Real:
    r"""Time after which a capacitor is discharged to a voltage.

    .. math:: t = R C \ln\frac{V}{V_s}

    Parameters
    ----------
    resistance : R. [Ω]
    capacitance : C. [F]
    voltage : V at the start. [V]
    safe_voltage : V_s. [V]

    Returns
    -------
    t. [s]

    Notes
    -----
    Nothing else discharges it.
    """
    return resistance * capacitance * log(voltage / safe_voltage)


@source("derived: a capacitor that a resistor discharges, turned round")
def bleed_resistance(*, duration: Real, capacitance: Real, voltage: Real, safe_voltage: Real) -> Real:
    r"""Resistance that discharges a capacitor to a voltage in a time.

    .. math:: R = \frac{t}{C \ln(V/V_s)}

    Parameters
    ----------
    duration : t. [s]
    capacitance : C of all that it discharges. [F]
    voltage : V at the start, the highest. [V]
    safe_voltage : V_s. [V]

    Returns
    -------
    R. [Ω]

    Notes
    -----
    Nothing else discharges it.
    """
    return duration / (capacitance * log(voltage / safe_voltage))


@source("derived: gate charge over gate current, the gate at its plateau; common practice")
def turn_on_time(*, gate_charge: Real, resistance: Real, drive: Real, plateau: Real) -> Real:
    r"""Time in which a driver charges a gate.

    .. math:: t = \frac{Q_g R}{V - V_{pl}}

    Parameters
    ----------
    gate_charge : Q_g, total. [C]
    resistance : R of driver and gate resistor. [Ω]
    drive : V, high level of the driver. [V]
    plateau : V_pl; the threshold voltage stands for it. [V]

    Returns
    -------
    t. [s]

    Notes
    -----
    Inductance of the gate's loop apart.
    """
    return gate_charge * resistance / (drive - plateau)


@source("derived: gate charge over gate current, the gate at its plateau, turned round; common practice")
def gate_resistance(*, duration: Real, gate_charge: Real, drive: Real, plateau: Real) -> Real:
    r"""Largest resistance through which a gate is charged in a time.

    .. math:: R = \frac{t (V - V_{pl})}{Q_g}

    Parameters
    ----------
    duration : t. [s]
    gate_charge : Q_g, total. [C]
    drive : V, high level of the driver. [V]
    plateau : V_pl; the threshold voltage stands for it. [V]

    Returns
    -------
    R of driver and gate resistor. [Ω]

    Notes
    -----
    Inductance of the gate's loop apart.
    """
    return duration * (drive - plateau) / gate_charge
