"""Figures as they are printed: value with unit, share, decibels beside."""

from __future__ import annotations

from math import inf

from opto_ckt.figures import FIGURES, Figure
from opto_ckt.units import dbm, percent, write

SHARES = frozenset({"current_error", "overshoot", "droop"})
"""Pure ratios that the trade states in percent."""


def figure_text(name: str, value: float) -> str:
    """One value of a figure, as a reader expects it.

    >>> figure_text("bandwidth", 9.312e6), figure_text("overshoot", 0.043), figure_text("junction_temperature", 351.15)
    ('9.31 MHz', '4.3 %', '78 °C')
    """
    return percent(value) if name in SHARES else write(value, FIGURES[name].unit)


def decibel_text(name: str, value: float) -> str:
    """The same value in decibels, for the figures that are stated both ways; empty for the others.

    >>> decibel_text("sensitivity", 1e-6), decibel_text("extinction_ratio", 10.0), decibel_text("bandwidth", 1e6)
    ('-30.0 dBm', '10.0 dB', '')
    """
    figure: Figure = FIGURES[name]
    if figure.decibel is None or not 0 < value < inf:
        return ""
    if figure.unit == "W":
        return dbm(value)
    return dbm(value * 1e-3).removesuffix("m")
