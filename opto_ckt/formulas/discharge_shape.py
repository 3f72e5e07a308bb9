"""Shape of a discharge at any damping, times over √(LC) and currents over U √(C/L); solved where it has to be."""

from __future__ import annotations

from collections.abc import Callable
from typing import NamedTuple

import numpy as np
from numpy.typing import NDArray

from opto_ckt.formulas.formula import Real

Array = NDArray[np.float64]

CRITICAL = 1e-9  #: distance from ζ = 1 that is kept, where the equations would be 0/0
HALVINGS = 60  #: of an interval in the search for a crossing
FAR = 40.0  #: time constants of the slower exponential after which nothing is left of an overdamped discharge


class Crossings(NamedTuple):
    """When the current rises and falls through a level, in √(LC)."""

    rising: Array
    falling: Array


def current(*, damping: Real, time: Real) -> Array:
    """Current over U √(C/L) at a time over √(LC): e^(-ζx) sin(√(1 - ζ²) x)/√(1 - ζ²); the switch closes at 0."""
    zeta, root = _roots(damping)
    slow, fast = root - zeta, -root - zeta
    x = np.asarray(time, dtype=float)
    return np.asarray(((np.exp(slow * x) - np.exp(fast * x)) / (2 * root)).real)


def voltage_left(*, damping: Real, time: Real) -> Array:
    """Voltage of the capacitor less that of the diode, over what it was at the start, at a time over √(LC)."""
    zeta, root = _roots(damping)
    slow, fast = root - zeta, -root - zeta
    x = np.asarray(time, dtype=float)
    even, odd = (np.exp(slow * x) + np.exp(fast * x)) / 2, (np.exp(slow * x) - np.exp(fast * x)) / (2 * root)
    return np.asarray((even + zeta * odd).real)


def peak_time(*, damping: Real) -> Array:
    """When the current is greatest, over √(LC): arccos ζ/√(1 - ζ²)."""
    zeta, root = _roots(damping)
    return np.asarray((np.arccosh(zeta + 0j) / root).real)


def peak(*, damping: Real) -> Array:
    """Greatest current over U √(C/L): e^(-ζ x) at the time of the peak."""
    return np.asarray(np.exp(-np.asarray(damping, dtype=float) * peak_time(damping=damping)))


def end_time(*, damping: Real) -> Array:
    """When the current is back at zero, over √(LC); overdamped, when nothing is left of it."""
    zeta, root = _roots(damping)
    swinging = np.maximum(np.sqrt(np.maximum(1 - zeta**2, 0.0)), CRITICAL)
    return np.where(zeta < 1, np.minimum(np.pi / swinging, FAR * 2 * zeta + np.pi), FAR * (zeta + root.real) + np.pi)


def crossings(*, damping: Real, level: Real) -> Crossings:
    """When the current passes a share of its peak, upward and downward; found by halving, exact to rounding."""
    zeta = np.asarray(damping, dtype=float)
    wanted = np.asarray(level, dtype=float) * peak(damping=zeta)
    top, end = peak_time(damping=zeta), end_time(damping=zeta)
    return Crossings(
        rising=_crossing(zeta, wanted, np.zeros_like(top), top),
        falling=_crossing(zeta, wanted, end, top),
    )


def width(*, damping: Real) -> Array:
    """Width at half of the peak over √(LC), 2π/3 undamped."""
    found = crossings(damping=damping, level=0.5)
    return np.asarray(found.falling - found.rising)


def rise_time(*, damping: Real) -> Array:
    """From 10 % to 90 % of the peak, over √(LC)."""
    low, high = (crossings(damping=damping, level=level).rising for level in (0.1, 0.9))
    return np.asarray(high - low)


def end_voltage(*, damping: Real) -> Array:
    """Voltage left when the current is back at zero, the other way round, over what it was; 0 overdamped."""
    zeta = np.asarray(damping, dtype=float)
    swing = np.sqrt(np.maximum(1 - zeta**2, CRITICAL**2))
    return np.where(zeta < 1, np.exp(-np.pi * zeta / swing), 0.0)


def damping_for(*, share: float) -> float:
    """Damping at which peak over width is a share of I L/(U t_w); undamped that is 3/2π, and it falls.

    Parameters
    ----------
    share : I L/(U t_w) of the current and the width that are wanted. [1]
    """

    def excess(zeta: float) -> bool:
        return float(peak(damping=zeta) / width(damping=zeta)) > share

    return _grown(excess)


def damping_at(*, peak_share: float) -> float:
    """Damping at which the peak is a share of U √(C/L).

    Parameters
    ----------
    peak_share : peak over U √(C/L), below 1. [1]
    """

    def excess(zeta: float) -> bool:
        return float(peak(damping=zeta)) > peak_share

    return _grown(excess)


def damping_of(*, product: float) -> float:
    """Damping of a given loop whose capacitor is chosen by the width: ζ k(ζ) = R t_w/(2 L).

    Parameters
    ----------
    product : R t_w/(2 L) of the loop. [1]
    """

    def lacking(zeta: float) -> bool:
        return zeta * float(width(damping=zeta)) < product

    return _grown(lacking)


def _grown(more: Callable[[float], bool]) -> float:
    """Where a condition that holds at little damping ceases to hold."""
    low, high = 0.0, 0.1
    while more(high) and high < 1e3:
        low, high = high, 2 * high
    for _ in range(HALVINGS):
        middle = (low + high) / 2
        low, high = (middle, high) if more(middle) else (low, middle)
    return (low + high) / 2


def _roots(damping: Real) -> tuple[Array, NDArray[np.complex128]]:
    """Damping, kept off 1, and √(ζ² - 1)."""
    zeta = np.asarray(damping, dtype=float)
    zeta = np.where(np.abs(zeta - 1) < CRITICAL, 1 + CRITICAL, zeta)
    return zeta, np.sqrt(zeta**2 - 1 + 0j)


def _crossing(zeta: Array, wanted: Array, below: Array, above: Array) -> Array:
    """Where the current passes a level between a time at which it is below and one at which it is above."""
    for _ in range(HALVINGS):
        middle = (below + above) / 2
        over = current(damping=zeta, time=middle) >= wanted
        below, above = np.where(over, below, middle), np.where(over, middle, above)
    return (below + above) / 2
