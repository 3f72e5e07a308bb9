"""Average power of a laser held by its monitor: set resistor, loop, droop, start."""

from __future__ import annotations

from collections.abc import Callable

import numpy as np
from numpy import exp, log, pi
from numpy.typing import NDArray

from opto_ckt.formulas.formula import Real, source

Lanes = NDArray[np.float64]


@source("Ohm's law: the monitor's current through the set resistor makes the reference's voltage")
def set_resistance(*, reference: Real, monitor_responsivity: Real, power: Real) -> Real:
    r"""Resistance that sets the power.

    .. math:: R = \frac{V}{\rho P}

    Parameters
    ----------
    reference : V that the loop keeps across R. [V]
    monitor_responsivity : ρ, monitor current over power at the plane of P. [A/W]
    power : P. [W]

    Returns
    -------
    R; the least fixed part where ρ and P are largest, the most in all where they are smallest. [Ω]

    Notes
    -----
    No current mirror; dark current apart.
    """
    return reference / (monitor_responsivity * power)


@source("derived: integrator; H. Kolimbiris, Fiber Optics Communications, Ex. 6.7, whose printed answer is a misprint")
def power_loop_bandwidth(
    *, monitor_responsivity: Real, slope: Real, transfer: Real, resistance: Real, capacitance: Real
) -> Real:
    r"""Crossover of an integrator that controls the power of a laser.

    .. math:: f_c = \frac{\eta \rho G}{2\pi C R}

    Parameters
    ----------
    monitor_responsivity : ρ. [A/W]
    slope : η of the laser at its junction temperature. [W/A]
    transfer : G, laser current over the integrator's output, times the monitor's resistor. [1]
    resistance : R of the integrator. [Ω]
    capacitance : C of the integrator. [F]

    Returns
    -------
    f_c; the time constant is its inverse over 2π. [Hz]

    Notes
    -----
    Above threshold; below it η is next to nothing, and the integrator runs at a steady rate.

    Examples
    --------
    >>> f = power_loop_bandwidth(
    ...     monitor_responsivity=0.4, slope=0.025, transfer=1.0, resistance=80e3, capacitance=40e-12)
    >>> print(f"{f:.1f} Hz")
    497.4 Hz
    """
    return monitor_responsivity * slope * transfer / (2 * pi * capacitance * resistance)


@source("derived: the integrator's crossover solved for C")
def integration_capacitance(*, gain: Real, resistance: Real, bandwidth: Real) -> Real:
    r"""Capacitor of the integrator for a wanted crossover.

    .. math:: C = \frac{g}{2\pi R f_c}

    Parameters
    ----------
    gain : g = η ρ G, what a change of the integrator's output comes back as. [1]
    resistance : R of the integrator. [Ω]
    bandwidth : f_c. [Hz]

    Returns
    -------
    C. [F]

    Notes
    -----
    Trimmed, ρ times the set resistor is the reference over the power: the spread of ρ drops out of g.
    """
    return gain / (2 * pi * resistance * bandwidth)


@source("definition; Maxim, MAX3869 data sheet p. 10: 16 µs for 10 kHz")
def crossover_of(*, time_constant: Real) -> Real:
    r"""Crossover of a loop with one time constant.

    .. math:: f = \frac{1}{2\pi\tau}

    Parameters
    ----------
    time_constant : τ. [s]

    Returns
    -------
    f. [Hz]

    Notes
    -----
    One pole.
    """
    return 1 / (2 * pi * time_constant)


@source("derived: pole of the set resistor")
def monitor_pole(*, resistance: Real, capacitance: Real) -> Real:
    r"""Pole of the monitor diode on its resistor.

    .. math:: f = \frac{1}{2\pi R C}

    Parameters
    ----------
    resistance : R, fixed part and trimmer, at its most. [Ω]
    capacitance : C of the monitor and what hangs on its node. [F]

    Returns
    -------
    f, to lie four times above the loop's crossover or more. [Hz]

    Notes
    -----
    The laser's own response lies far above.
    """
    return 1 / (2 * pi * resistance * capacitance)


@source("derived: one time constant; common practice keeps 2π f t far below 1")
def loop_droop(*, bandwidth: Real, duration: Real) -> Real:
    r"""How far the loop takes a run of equal bits for a change of the average.

    .. math:: d = 1 - \exp(-2\pi f_c t)

    Parameters
    ----------
    bandwidth : f_c. [Hz]
    duration : t of the run. [s]

    Returns
    -------
    d, of the average, half of peak to peak. [1]

    Notes
    -----
    The run starts from balance.
    """
    return 1 - exp(-2 * pi * bandwidth * duration)


@source("derived: the droop solved for the crossover")
def bandwidth_for_droop(*, droop: Real, duration: Real) -> Real:
    r"""Largest crossover for a droop.

    .. math:: f_c = \frac{-\ln(1 - d)}{2\pi t}

    Parameters
    ----------
    droop : d of the average. [1]
    duration : t of the longest run of equal bits. [s]

    Returns
    -------
    f_c. [Hz]

    Notes
    -----
    The run starts from balance.
    """
    return -log(1 - droop) / (2 * pi * duration)


def startup(
    *,
    soft_start: Lanes,
    integration: Lanes,
    gain: Lanes,
    threshold: Lanes,
    fraction: float,
) -> NDArray[np.float64]:
    """Time [s] from none to a fraction of the power: set level by an RC, integrator, a laser dark below threshold.

    With the end value of the set level as unit: it rises as 1 - exp(-t/`soft_start`) on the integrator's + input, whose
    output follows it and integrates the error over `integration` [s]. Until the output passes `threshold` there is no
    light; from there on the light rises by `gain` times what the output rises. Solved exactly for each lane by halving.
    """
    soft, unit, loop, onset = np.broadcast_arrays(*(np.asarray(each, dtype=float) for each in (
        soft_start, integration, gain, threshold)))  # fmt: skip

    def output_in_the_dark(t: Lanes) -> Lanes:
        level = -np.expm1(-t / soft)
        return np.asarray(level + (t - soft * level) / unit)

    begun = _halved(lambda t: np.asarray(output_in_the_dark(t) >= onset), soft + unit * (onset + 1))
    rate = loop / unit
    near = np.where(np.abs(rate * soft - 1) < 1e-6, soft * (1 + 1e-5), soft)
    forced = (loop / near - rate) / (rate - 1 / near)
    rest = np.exp(-begun / near)

    def light(after: Lanes) -> Lanes:
        """Answer of p' = g l' + (g/T)(l - p) with l = 1 - exp(-t/τ), from p = 0 at the onset."""
        decaying = forced * rest * np.exp(-after / near)
        return np.asarray(1 + decaying - (1 + forced * rest) * np.exp(-rate * after))

    longest = 40 * (near + 1 / rate)
    late = _halved(lambda t: np.asarray(light(t) >= fraction), longest)
    return np.asarray(begun + late)


def _halved(reached: Callable[[Lanes], NDArray[np.bool_]], longest: Lanes) -> Lanes:
    """Where a condition begins to hold, by halving what lies between nothing and the longest."""
    low, high = 0.0 * np.asarray(longest), np.asarray(longest, dtype=float)
    for _ in range(60):
        middle = (low + high) / 2
        there = reached(middle)
        low, high = np.where(there, low, middle), np.where(there, middle, high)
    return high
